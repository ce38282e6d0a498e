package model

import (
	"errors"
	"fmt"
	"strings"
	"unicode/utf8"
)

// Bounds within which a data file is read.
const (
	MaxTableBytes = 256 << 20
	MaxRows       = 10_000_000
	MaxColumns    = 10_000
	MaxField      = 1 << 20
	MaxCells      = 60_000_000
)

// csvError is what is wrong with a data file, at a line and a column of it
// (from 1; 0 when the whole file is meant).
type csvError struct {
	line, column int
	err          error
}

func (e *csvError) Error() string {
	if e.line == 0 {
		return e.err.Error()
	}
	return fmt.Sprintf("line %d: %v", e.line, e.err)
}

// readCSV reads RFC 4180 text into columns with their numbers. Cells are slices
// of the text, trimmed of outer blanks unless quoted.
func readCSV(text string, maxRows int) ([]*Column, error) {
	text = strings.TrimPrefix(text, "\uFEFF")
	if err := plainText(text); err != nil {
		return nil, err
	}
	s := &csvScanner{text: text, line: 1}
	header, err := s.record(nil)
	if err != nil {
		return nil, err
	}
	if len(header) == 0 || len(header) == 1 && header[0] == "" {
		return nil, &csvError{err: errors.New("the file is empty; the first line must name the columns")}
	}
	if len(header) > MaxColumns {
		return nil, &csvError{line: 1, err: fmt.Errorf("%d columns; at most %d are read", len(header), MaxColumns)}
	}
	// A row takes a byte for each of its cells, so that blank lines below a wide
	// header can't ask for more memory than the text is long.
	guess := min(strings.Count(text, "\n")+1, len(text)/len(header)+1)
	maxRows = min(maxRows, MaxCells/len(header))
	s.columns = make([]*Column, len(header))
	for j, h := range header {
		s.columns[j] = &Column{Name: h, Index: j, Numeric: true}
	}
	s.grow(guess)
	row := 0
	var lines []int32
	if guess > 0 {
		lines = make([]int32, 0, guess)
	}
	for s.at < len(text) {
		if s.blankLine(len(header)) {
			continue
		}
		line := s.line
		if row >= len(s.columns[0].Texts) {
			s.grow(2*row + 16)
		}
		n, err := s.row(row)
		switch {
		case err != nil:
			return nil, err
		case n != len(header):
			return nil, &csvError{line: line, column: min(n, len(header)), err: fmt.Errorf("%d cells where the header names %d columns", n, len(header))}
		case row >= maxRows:
			return nil, &csvError{line: line, err: fmt.Errorf("more than %d rows of %d columns; at most %d rows and %d cells are read", maxRows, len(header), MaxRows, MaxCells)}
		}
		lines = append(lines, int32(line))
		row++
	}
	for _, c := range s.columns {
		c.Texts, c.Floats, c.Lines = c.Texts[:row:row], c.Floats[:row:row], lines
		if c.Missing != nil {
			c.Missing = c.Missing[:row:row]
		}
	}
	return s.columns, nil
}

// plainText refuses zero bytes and text that is no UTF-8.
func plainText(text string) error {
	if i := strings.IndexByte(text, 0); i >= 0 {
		return &csvError{line: 1 + strings.Count(text[:i], "\n"), err: errors.New("the file holds a zero byte; it is no text")}
	}
	if utf8.ValidString(text) {
		return nil
	}
	i := 0
	for i < len(text) {
		r, n := utf8.DecodeRuneInString(text[i:])
		if r == utf8.RuneError && n == 1 {
			break
		}
		i += n
	}
	return &csvError{line: 1 + strings.Count(text[:i], "\n"), err: errors.New("the file is not UTF-8 from here on; save it as UTF-8")}
}

type csvScanner struct {
	text    string
	at      int
	line    int
	columns []*Column
}

// grow makes room for n rows in all columns.
func (s *csvScanner) grow(n int) {
	for _, c := range s.columns {
		c.Texts = append(make([]string, 0, n), c.Texts...)[:n]
		c.Floats = append(make([]float64, 0, n), c.Floats...)[:n]
		if c.Missing != nil {
			c.Missing = append(make([]bool, 0, n), c.Missing...)[:n]
		}
	}
}

// blankLine skips a line without cells. In a file of one column it is an empty
// cell, unless it is the last line.
func (s *csvScanner) blankLine(columns int) bool {
	i := s.at
	for i < len(s.text) && (s.text[i] == ' ' || s.text[i] == '\t') {
		i++
	}
	switch {
	case i >= len(s.text):
		s.at = i
		return true
	case s.text[i] != '\n' && s.text[i] != '\r':
		return false
	}
	at, line := s.at, s.line
	s.endLine(i)
	if columns > 1 || s.at >= len(s.text) {
		return true
	}
	s.at, s.line = at, line
	return false
}

// ends says which bytes end a cell that is not quoted.
var ends = [256]bool{',': true, '\n': true, '\r': true}

// row reads one record into the columns and returns how many cells it has, those
// beyond the header's counted too. Plain numbers are converted as they are
// scanned; what is anything else goes the long way.
func (s *csvScanner) row(row int) (n int, err error) {
	text, i := s.text, s.at
	for {
		start := i
		neg := i < len(text) && text[i] == '-'
		if neg {
			i++
		}
		first, point := i, -1
		var mantissa uint64
		for ; i < len(text); i++ {
			c := text[i] - '0'
			if c > 9 {
				if text[i] != '.' || point >= 0 {
					break
				}
				point = i
				continue
			}
			mantissa = mantissa*10 + uint64(c)
		}
		digits, places := i-first, 0
		if point >= 0 {
			digits, places = digits-1, i-point-1
		}
		more := false
		if digits > 0 && digits <= 15 && (i >= len(text) || ends[text[i]]) {
			if n < len(s.columns) {
				c := s.columns[n]
				c.Texts[row] = text[start:i]
				c.Floats[row] = shortDecimal(mantissa, places, neg)
			}
		} else {
			for i < len(text) && !ends[text[i]] && text[i] != '"' {
				i++
			}
			cell := text[start:i]
			if i < len(text) && text[i] == '"' || len(cell) > MaxField {
				s.at = start
				if cell, more, err = s.field(); err != nil {
					return n, err
				}
				if n < len(s.columns) {
					s.columns[n].set(row, cell)
				}
				n++
				if !more {
					return n, nil
				}
				i = s.at
				continue
			}
			if n < len(s.columns) {
				s.columns[n].set(row, trim(cell))
			}
		}
		n++
		switch {
		case i >= len(text):
			s.at = i
			return n, nil
		case text[i] != ',':
			s.endLine(i)
			return n, nil
		}
		i++
	}
}

// record reads one record and the line end behind it.
func (s *csvScanner) record(cells []string) ([]string, error) {
	for {
		cell, more, err := s.field()
		if err != nil {
			return cells, err
		}
		cells = append(cells, cell)
		if !more {
			return cells, nil
		}
	}
}

// field reads one cell; more says that a comma followed.
func (s *csvScanner) field() (cell string, more bool, err error) {
	text, start := s.text, s.at
	i := start
	for i < len(text) && (text[i] == ' ' || text[i] == '\t') {
		i++
	}
	if i < len(text) && text[i] == '"' {
		return s.quoted(i + 1)
	}
	for i < len(text) {
		switch text[i] {
		case ',':
			s.at = i + 1
			return s.bounded(trim(text[start:i]), true)
		case '\n', '\r':
			cell = trim(text[start:i])
			s.endLine(i)
			return s.bounded(cell, false)
		}
		i++
	}
	s.at = i
	return s.bounded(trim(text[start:i]), false)
}

// quoted reads a cell in quotes; at is behind the opening one.
func (s *csvScanner) quoted(at int) (cell string, more bool, err error) {
	text, opened := s.text, s.line
	var b strings.Builder
	plain := at
	for i := at; ; i++ {
		if i >= len(text) {
			return "", false, &csvError{line: opened, err: errors.New("a quoted cell is not closed")}
		}
		if text[i] == '\n' {
			s.line++
		}
		if text[i] != '"' {
			continue
		}
		b.WriteString(text[plain:i])
		if i+1 < len(text) && text[i+1] == '"' {
			b.WriteByte('"')
			i++
			plain = i + 1
			continue
		}
		i++
		for i < len(text) && (text[i] == ' ' || text[i] == '\t') {
			i++
		}
		switch {
		case i >= len(text):
			s.at = i
			return s.bounded(b.String(), false)
		case text[i] == ',':
			s.at = i + 1
			return s.bounded(b.String(), true)
		case text[i] == '\n' || text[i] == '\r':
			s.endLine(i)
			return s.bounded(b.String(), false)
		}
		return "", false, &csvError{line: s.line, err: errors.New("text behind the closing quote of a cell")}
	}
}

func (s *csvScanner) endLine(i int) {
	if s.text[i] == '\r' && i+1 < len(s.text) && s.text[i+1] == '\n' {
		i++
	}
	s.at = i + 1
	s.line++
}

func (s *csvScanner) bounded(cell string, more bool) (string, bool, error) {
	if len(cell) > MaxField {
		return "", false, &csvError{line: s.line, err: fmt.Errorf("a cell of %d bytes; at most %d are read", len(cell), MaxField)}
	}
	return cell, more, nil
}

func trim(s string) string {
	if s == "" || s[0] > ' ' && s[len(s)-1] > ' ' {
		return s
	}
	return strings.Trim(s, " \t")
}
