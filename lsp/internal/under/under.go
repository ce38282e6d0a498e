// Package under finds what stands at a place of a model file.
package under

import (
	"unicode"
	"unicode/utf8"

	"wellposed/parser/model"
	"wellposed/parser/source"
)

// Thing is what stands at an offset. At most one of the pointers is set; Word is
// the word there, and Symbol the named thing that it means.
type Thing struct {
	Span       source.Span
	Word       string
	Symbol     any // *model.Unknown, *model.Given, *model.Column, *model.Table, *model.Let, …
	Definition bool
	Prior      *model.Prior
	Report     *model.Report
	Conclusion *model.Conclusion
	Observed   *model.Observation
}

// At looks at an offset. A name wins over the statement it stands in, unless it
// is the target of a prior.
func At(m *model.Model, offset int) Thing {
	t := Thing{}
	t.Word, t.Span = word(m.File, offset)
	for _, use := range m.Uses {
		if use.Span.Contains(offset) {
			t.Symbol, t.Span, t.Definition = use.Symbol, use.Span, use.Definition
			break
		}
	}
	for _, p := range priors(m) {
		if p.FormSpan.Contains(offset) || p.TargetSpan.Contains(offset) {
			t.Prior, t.Span = p, p.TargetSpan.Cover(p.FormSpan)
			return t
		}
	}
	if t.Symbol != nil && !t.Definition {
		return t
	}
	for _, r := range m.Reports {
		if r.Span.Contains(offset) {
			t.Report = r
		}
	}
	for _, c := range m.Conclusions {
		if c.Span.Contains(offset) {
			t.Conclusion = c
		}
	}
	for _, o := range m.Observations {
		if o.Span.Contains(offset) {
			t.Observed = o
		}
	}
	return t
}

func priors(m *model.Model) []*model.Prior {
	list := append([]*model.Prior(nil), m.Priors...)
	for _, r := range m.Rivals {
		list = append(list, r.Priors...)
	}
	return list
}

// word is the longest run of letters, digits, underscores and inner hyphens
// around an offset.
func word(f *source.File, offset int) (string, source.Span) {
	text := f.Text
	start, end := max(0, min(offset, len(text))), max(0, min(offset, len(text)))
	for start > 0 {
		r, n := utf8.DecodeLastRuneInString(text[:start])
		if !inWord(r) {
			break
		}
		start -= n
	}
	for end < len(text) {
		r, n := utf8.DecodeRuneInString(text[end:])
		if !inWord(r) {
			break
		}
		end += n
	}
	for start < end && text[start] == '-' {
		start++
	}
	for end > start && text[end-1] == '-' {
		end--
	}
	return text[start:end], source.Span{Start: start, End: end}
}

func inWord(r rune) bool {
	return r == '_' || r == '-' || unicode.IsLetter(r) || unicode.IsDigit(r) || unicode.Is(unicode.Mn, r)
}
