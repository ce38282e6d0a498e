// Package render turns findings into text for people and into the formats that
// other programs read. Every format is made from the same Report, so they can't
// disagree.
//
// Columns count what the reader of the format expects: characters (grapheme
// clusters) for people, in lines and in JSON; Unicode code points in SARIF and
// in the annotations of code hosts.
package render

import (
	"fmt"
	"io"
	"sort"

	"wellposed/parser/diag"
	"wellposed/parser/source"
)

// Report is what a run found.
type Report struct {
	// Version of the program, as `wellposed version` prints it.
	Version string
	// Rules are the rules that were run, in the order of the rule list, and the
	// problems of reading that can occur.
	Rules []Rule
	Files []*File
	// Level is the severity from which findings count for the exit code.
	Level diag.Severity
}

// Rule is what the formats say about a rule.
type Rule struct {
	Name     string
	Severity diag.Severity
	Group    string
	Brief    string
	// Page is Markdown.
	Page    string
	Sources []string
	// Reading is set for problems of reading the model and its data.
	Reading bool
}

// File is one model and what was found in it.
type File struct {
	// Path as it was given, with forward slashes in the formats for programs.
	Path string
	// Source is nil when the file could not be read.
	Source *source.File
	// Trouble says why the file could not be read; empty when it was.
	Trouble string
	// Statements are the spans of the model's statements, in order.
	Statements []source.Span
	Findings   []diag.Finding
	// Verdicts say for each group of unknowns whether the posterior exists.
	Verdicts []Verdict
	// Promises are the `require` statements and how they came out.
	Promises []Promise
}

// Verdict is a verdict of the existence engine as plain data.
type Verdict struct {
	Analysis    string      `json:"analysis"`
	Unknowns    []string    `json:"unknowns"`
	Status      string      `json:"status"`
	How         string      `json:"how"`
	Reason      string      `json:"reason"`
	Claim       string      `json:"claim,omitempty"`
	Theorem     string      `json:"theorem,omitempty"`
	Source      string      `json:"source,omitempty"`
	Conditions  []Condition `json:"conditions,omitempty"`
	Escape      []Escape    `json:"escape,omitempty"`
	Rows        []int       `json:"rows,omitempty"`
	Repairs     []string    `json:"repairs,omitempty"`
	Certificate any         `json:"certificate,omitempty"`
}

// Condition is a condition of a theorem and the numbers put into it.
type Condition struct {
	Text   string `json:"text"`
	Filled string `json:"filled"`
	Holds  bool   `json:"holds"`
}

// Escape is an end or direction in which the mass escapes.
type Escape struct {
	Unknown   string `json:"unknown"`
	Component string `json:"component,omitempty"`
	Toward    string `json:"toward,omitempty"`
	Step      string `json:"step,omitempty"`
}

// Promise is a `require` statement and how it came out: "kept", "broken" or
// "not shown".
type Promise struct {
	Text    string
	Span    source.Span
	Outcome string
	// Distance to the limit, with its sign, as text: "0.886 against 0.88".
	Distance string
}

// Options are for people's formats only.
type Options struct {
	// Width in terminal cells; 80 when 0.
	Width  int
	Colour bool
	// Verbose says something about clean files too.
	Verbose bool
}

// Format is one output format.
type Format struct {
	Name  string
	Brief string
	Write func(io.Writer, *Report, Options) error
}

// Formats lists the formats in the order in which help shows them.
var Formats = []Format{
	{"text", "for people", writeText},
	{"line", "one line a finding, path:line:column: severity: headline [rule]", writeLines},
	{"json", "everything, described by findings.schema.json", writeJSON},
	{"sarif", "SARIF 2.1.0, for code-review views", writeSARIF},
	{"junit", "JUnit XML, one test case for each rule and promise", writeJUnit},
	{"github", "workflow commands that annotate a pull request", writeGitHub},
	{"gitlab", "code-quality report", writeGitLab},
}

// Write writes a report in the named format.
func Write(w io.Writer, format string, r *Report, o Options) error {
	for _, f := range Formats {
		if f.Name == format {
			out := &sticky{w: w}
			if err := f.Write(out, r, o); err != nil {
				return err
			}
			return out.err
		}
	}
	return fmt.Errorf("unknown format %q", format)
}

// sticky remembers the first error of a writer, so that a renderer can print
// without looking at every result.
type sticky struct {
	w   io.Writer
	err error
}

func (s *sticky) Write(p []byte) (int, error) {
	if s.err != nil {
		return 0, s.err
	}
	n, err := s.w.Write(p)
	s.err = err
	return n, err
}

// Count is the number of findings of each severity. Findings that an
// `override` covers are counted apart.
type Count struct {
	Stop, Warn, Note, Overridden int
	Files, Unreadable            int
	NotDecided, Broken           int
}

// Tally counts over a whole report.
func (r *Report) Tally() Count {
	var c Count
	for _, f := range r.Files {
		c.Files++
		if f.Trouble != "" {
			c.Unreadable++
		}
		for _, d := range f.Findings {
			switch {
			case d.Overridden != "":
				c.Overridden++
			case d.Severity == diag.Stop:
				c.Stop++
			case d.Severity == diag.Warn:
				c.Warn++
			default:
				c.Note++
			}
		}
		for _, v := range f.Verdicts {
			if v.Status == "not decided" {
				c.NotDecided++
			}
		}
		for _, p := range f.Promises {
			if p.Outcome != "kept" {
				c.Broken++
			}
		}
	}
	return c
}

// Reaches reports whether any finding that is not overridden is at or above
// the level.
func (r *Report) Reaches(level diag.Severity) bool {
	for _, f := range r.Files {
		for _, d := range f.Findings {
			if d.Overridden == "" && d.Severity >= level {
				return true
			}
		}
	}
	return false
}

// rule finds what is known about a rule; an unknown name gets itself as brief.
func (r *Report) rule(name string) Rule {
	for _, k := range r.Rules {
		if k.Name == name {
			return k
		}
	}
	return Rule{Name: name, Brief: name}
}

// statement returns the span of the statement that holds an offset, or the
// offset's line when none does.
func (f *File) statement(offset int) source.Span {
	i := sort.Search(len(f.Statements), func(i int) bool { return f.Statements[i].Start > offset }) - 1
	if i >= 0 && f.Statements[i].Contains(offset) {
		return f.Statements[i]
	}
	if f.Source == nil {
		return source.Span{}
	}
	line, _ := f.Source.Locate(offset, source.Bytes)
	_, span := f.Source.Line(line)
	return span
}

// place is a span as lines and columns, both from 1. The end is the place after
// the last character.
type place struct {
	line, column, endLine, endColumn int
}

// locate turns a span into a place; a file without text gives line 1 column 1.
func (f *File) locate(s source.Span, unit source.Unit) place {
	if f.Source == nil {
		return place{1, 1, 1, 1}
	}
	l, c := f.Source.Locate(s.Start, unit)
	el, ec := f.Source.Locate(max(s.Start, s.End), unit)
	return place{l + 1, c + 1, el + 1, ec + 1}
}

// where names a related place for people: path:line:column, or the row and
// column of a data file.
func (f *File) where(r diag.Related) string {
	path := r.Path
	if path == "" {
		path = f.Path
	}
	switch {
	case r.Row > 0 && r.Column > 0:
		return fmt.Sprintf("%s row %d, column %d", path, r.Row, r.Column)
	case r.Row > 0:
		return fmt.Sprintf("%s row %d", path, r.Row)
	case path == f.Path && f.Source != nil:
		p := f.locate(r.Span, source.Characters)
		return fmt.Sprintf("%s:%d:%d", path, p.line, p.column)
	}
	return path
}
