package render

import (
	"encoding/xml"
	"fmt"
	"io"
	"path/filepath"
	"strings"

	"wellposed/parser/diag"
	"wellposed/parser/source"
)

type junitSuites struct {
	XMLName  xml.Name     `xml:"testsuites"`
	Name     string       `xml:"name,attr"`
	Tests    int          `xml:"tests,attr"`
	Failures int          `xml:"failures,attr"`
	Errors   int          `xml:"errors,attr"`
	Suites   []junitSuite `xml:"testsuite"`
}

type junitSuite struct {
	Name     string      `xml:"name,attr"`
	Tests    int         `xml:"tests,attr"`
	Failures int         `xml:"failures,attr"`
	Errors   int         `xml:"errors,attr"`
	Cases    []junitCase `xml:"testcase"`
}

type junitCase struct {
	Name    string        `xml:"name,attr"`
	Class   string        `xml:"classname,attr"`
	File    string        `xml:"file,attr,omitempty"`
	Line    int           `xml:"line,attr,omitempty"`
	Failure *junitProblem `xml:"failure,omitempty"`
	Error   *junitProblem `xml:"error,omitempty"`
	Out     string        `xml:"system-out,omitempty"`
}

type junitProblem struct {
	Type    string `xml:"type,attr"`
	Message string `xml:"message,attr"`
	Text    string `xml:",chardata"`
}

// writeJUnit makes a suite for each model, with a case for each rule and each
// promise. A rule fails when it has a finding at or above the level; findings
// below it are printed as the case's output.
func writeJUnit(w io.Writer, r *Report, _ Options) error {
	all := junitSuites{Name: "wellposed"}
	for _, f := range r.Files {
		path := filepath.ToSlash(f.Path)
		suite := junitSuite{Name: path}
		if f.Trouble != "" {
			suite.Cases = append(suite.Cases, junitCase{Name: "readable", Class: path, File: path,
				Error: &junitProblem{"unreadable", f.Trouble, f.Trouble}})
		}
		if f.Source != nil {
			for _, k := range r.junitRules(f) {
				suite.Cases = append(suite.Cases, r.junitCase(f, k, path))
			}
			for _, p := range f.Promises {
				c := junitCase{Name: "require " + p.Text, Class: path, File: path, Line: f.locate(p.Span, source.Characters).line, Out: p.Distance}
				if p.Outcome != "kept" {
					c.Failure = &junitProblem{"promise", p.Outcome, strings.TrimSpace(p.Outcome + ": " + p.Distance)}
				}
				suite.Cases = append(suite.Cases, c)
			}
		}
		for _, c := range suite.Cases {
			suite.Tests++
			if c.Failure != nil {
				suite.Failures++
			}
			if c.Error != nil {
				suite.Errors++
			}
		}
		all.Tests, all.Failures, all.Errors = all.Tests+suite.Tests, all.Failures+suite.Failures, all.Errors+suite.Errors
		all.Suites = append(all.Suites, suite)
	}
	if _, err := io.WriteString(w, xml.Header); err != nil {
		return err
	}
	e := xml.NewEncoder(w)
	e.Indent("", "  ")
	if err := e.Encode(all); err != nil {
		return err
	}
	_, err := io.WriteString(w, "\n")
	return err
}

// junitRules are the rules that ran, and the problems of reading that occurred.
func (r *Report) junitRules(f *File) []Rule {
	found := map[string]bool{}
	for _, d := range f.Findings {
		found[d.Rule] = true
	}
	var out []Rule
	known := map[string]bool{}
	for _, k := range r.Rules {
		known[k.Name] = true
		if !k.Reading || found[k.Name] {
			out = append(out, k)
		}
	}
	for _, d := range f.Findings {
		if !known[d.Rule] {
			known[d.Rule] = true
			out = append(out, Rule{Name: d.Rule, Brief: d.Rule})
		}
	}
	return out
}

func (r *Report) junitCase(f *File, k Rule, path string) junitCase {
	c := junitCase{Name: k.Name, Class: path, File: path}
	var failed, told []string
	var worst diag.Severity
	first := ""
	for _, d := range f.Findings {
		if d.Rule != k.Name {
			continue
		}
		p := f.locate(d.Span, source.Characters)
		line := fmt.Sprintf("%s:%d:%d: %s: %s", path, p.line, p.column, d.Severity, d.Headline)
		if d.Severity < r.Level || d.Overridden != "" {
			told = append(told, line)
			continue
		}
		if first == "" {
			first, c.Line = d.Headline, p.line
		}
		worst = max(worst, d.Severity)
		failed = append(failed, strings.Join(append([]string{line}, d.Notes...), "\n"))
	}
	if len(failed) > 0 {
		c.Failure = &junitProblem{worst.String(), first, strings.Join(failed, "\n")}
	}
	c.Out = strings.Join(told, "\n")
	return c
}
