package source

import (
	"sort"
	"strings"
	"unicode/utf8"

	"github.com/rivo/uniseg"
)

// File is one text and the index of its lines. It is immutable.
type File struct {
	// Path is the name shown to people, as it was given.
	Path string
	// Text is the whole content, valid UTF-8.
	Text string

	lines []int // byte offset of the start of each line
}

// Unit says what a column counts.
type Unit int

const (
	// Characters are what a reader sees: one per grapheme cluster.
	Characters Unit = iota
	// CodePoints are Unicode scalar values, as SARIF and GNU tools count.
	CodePoints
	// UTF16 are 16-bit code units, the default of the language server protocol.
	UTF16
	// Bytes are UTF-8 bytes.
	Bytes
)

// NewFile indexes the lines of text. A line ends at \n, \r\n or a lone \r.
func NewFile(path, text string) *File {
	f := &File{Path: path, Text: text, lines: []int{0}}
	for i := 0; i < len(text); i++ {
		switch text[i] {
		case '\n':
			f.lines = append(f.lines, i+1)
		case '\r':
			if i+1 < len(text) && text[i+1] == '\n' {
				i++
			}
			f.lines = append(f.lines, i+1)
		}
	}
	return f
}

// Lines is the number of lines; an empty file has one.
func (f *File) Lines() int { return len(f.lines) }

// Line returns the text of a line (from 0) without its line end, and its span.
// A line outside the file is empty.
func (f *File) Line(n int) (string, Span) {
	if n < 0 || n >= len(f.lines) {
		return "", Span{len(f.Text), len(f.Text)}
	}
	start, end := f.lines[n], len(f.Text)
	if n+1 < len(f.lines) {
		end = f.lines[n+1]
	}
	text := strings.TrimRight(f.Text[start:end], "\r\n")
	return text, Span{start, start + len(text)}
}

// Locate returns the line (from 0) of an offset and its column (from 0) in the
// given unit. An offset outside the file is moved to the nearest end.
func (f *File) Locate(offset int, unit Unit) (line, column int) {
	offset = max(0, min(offset, len(f.Text)))
	line = sort.SearchInts(f.lines, offset+1) - 1
	return line, Count(f.Text[f.lines[line]:offset], unit)
}

// Offset is the inverse of Locate: a column past the end of its line is moved
// to the line's end, and one inside a character to the character's start.
func (f *File) Offset(line, column int, unit Unit) int {
	if line < 0 {
		return 0
	}
	text, span := f.Line(line)
	return span.Start + Advance(text, column, unit)
}

// Slice returns the text of a span, cut to the file.
func (f *File) Slice(s Span) string {
	a := max(0, min(s.Start, len(f.Text)))
	b := max(a, min(s.End, len(f.Text)))
	return f.Text[a:b]
}

// Count is the length of text in the given unit.
func Count(text string, unit Unit) int {
	switch unit {
	case Bytes:
		return len(text)
	case CodePoints:
		return utf8.RuneCountInString(text)
	case UTF16:
		n := 0
		for _, r := range text {
			n++
			if r > 0xFFFF {
				n++
			}
		}
		return n
	}
	return uniseg.GraphemeClusterCount(text)
}

// Advance returns the byte offset in text after n units.
func Advance(text string, n int, unit Unit) int {
	if n <= 0 {
		return 0
	}
	switch unit {
	case Bytes:
		n = min(n, len(text))
		for n > 0 && n < len(text) && !utf8.RuneStart(text[n]) {
			n--
		}
		return n
	case Characters:
		state, rest, offset := -1, text, 0
		for n > 0 && rest != "" {
			var cluster string
			cluster, rest, _, state = uniseg.FirstGraphemeClusterInString(rest, state)
			offset += len(cluster)
			n--
		}
		return offset
	}
	for i, r := range text {
		if n <= 0 {
			return i
		}
		width := 1
		if unit == UTF16 && r > 0xFFFF {
			width = 2
		}
		if n < width {
			return i
		}
		n -= width
	}
	return len(text)
}

// Width is the number of terminal cells that text takes.
func Width(text string) int { return uniseg.StringWidth(text) }
