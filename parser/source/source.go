// Package source holds the text of one file and the places in it.
//
// Everything inside the program speaks in byte offsets; this package is the
// only one that turns an offset into a line, a character column or a UTF-16
// unit, and back.
package source

// Span is a half-open range of byte offsets, [Start, End).
type Span struct {
	Start, End int
}

// Shift returns the span moved by n bytes.
func (s Span) Shift(n int) Span { return Span{s.Start + n, s.End + n} }

// Contains reports whether the offset lies in the span or at its end.
func (s Span) Contains(offset int) bool { return s.Start <= offset && offset <= s.End }

// Empty reports whether the span has no text.
func (s Span) Empty() bool { return s.End <= s.Start }

// Cover returns the smallest span that holds both.
func (s Span) Cover(t Span) Span { return Span{min(s.Start, t.Start), max(s.End, t.End)} }
