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

// readCSV cuts RFC 4180 text into columns of cells. Cells are slices of the
// text, trimmed of outer blanks unless quoted. It returns the header, the cells
// column by column, and the line of each row.
func readCSV(text string, maxRows int) (header []string, columns [][]string, lines []int32, err error) {
	text = strings.TrimPrefix(text, "\uFEFF")
	if i := strings.IndexByte(text, 0); i >= 0 {
		return nil, nil, nil, &csvError{line: 1 + strings.Count(text[:i], "\n"), err: errors.New("the file holds a zero byte; it is no text")}
	}
	if !utf8.ValidString(text) {
		i := 0
		for i < len(text) {
			r, n := utf8.DecodeRuneInString(text[i:])
			if r == utf8.RuneError && n == 1 {
				break
			}
			i += n
		}
		return nil, nil, nil, &csvError{line: 1 + strings.Count(text[:i], "\n"), err: errors.New("the file is not UTF-8 from here on; save it as UTF-8")}
	}
	s := &csvScanner{text: text, line: 1}
	header, err = s.record(nil)
	if err != nil {
		return nil, nil, nil, err
	}
	if len(header) == 0 || len(header) == 1 && header[0] == "" {
		return nil, nil, nil, &csvError{err: errors.New("the file is empty; the first line must name the columns")}
	}
	if len(header) > MaxColumns {
		return nil, nil, nil, &csvError{line: 1, err: fmt.Errorf("%d columns; at most %d are read", len(header), MaxColumns)}
	}
	columns = make([][]string, len(header))
	// A row takes a byte for each of its cells, so that blank lines below a wide
	// header can't ask for more memory than the text is long.
	guess := min(strings.Count(text, "\n")+1, len(text)/len(header)+1)
	if maxRows > MaxCells/len(header) {
		maxRows = MaxCells / len(header)
	}
	for j := range columns {
		columns[j] = make([]string, 0, guess)
	}
	cells := make([]string, 0, len(header))
	for s.at < len(s.text) {
		line := s.line
		cells, err = s.record(cells[:0])
		if err != nil {
			return nil, nil, nil, err
		}
		if len(cells) == 1 && cells[0] == "" && (len(header) > 1 || s.at >= len(s.text)) {
			continue // a blank line
		}
		if len(cells) != len(header) {
			return nil, nil, nil, &csvError{line: line, column: min(len(cells), len(header)), err: fmt.Errorf("%d cells where the header names %d columns", len(cells), len(header))}
		}
		if len(lines) >= maxRows {
			return nil, nil, nil, &csvError{line: line, err: fmt.Errorf("more than %d rows of %d columns; at most %d rows and %d cells are read", maxRows, len(header), MaxRows, MaxCells)}
		}
		for j, c := range cells {
			columns[j] = append(columns[j], c)
		}
		lines = append(lines, int32(line))
	}
	return header, columns, lines, nil
}

type csvScanner struct {
	text string
	at   int
	line int
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
