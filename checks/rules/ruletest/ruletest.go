// Package ruletest runs the examples of a rule's page and models that carry
// their expectations.
//
// An expectation is a comment on the line where a finding starts:
//
//	prior p as Beta(0, 0)   #! posterior-does-not-exist "mass escapes to p = 0"
//
// Several stand one after the other. Every finding must be expected, and every
// expectation met.
package ruletest

import (
	"context"
	"flag"
	"fmt"
	"os"
	"regexp"
	"strings"
	"testing"

	"wellposed/checks/facts"
	"wellposed/checks/rule"
	"wellposed/parser/diag"
	"wellposed/parser/model"
	"wellposed/parser/source"
)

var update = flag.Bool("update", false, "rewrite what the pages show under flagged examples")

// Page runs the examples of a rule's doc.md, which lies beside the test. A
// flagged example must have a finding of the rule and show what it says, a clean
// one none. Examples must be readable.
func Page(t *testing.T, r *rule.Rule) {
	t.Helper()
	page := r.Doc
	shift := 0
	for _, e := range rule.Examples(r.Doc) {
		found, problems := run(r, e.Text)
		for _, p := range problems {
			t.Errorf("doc.md:%d: the example can't be read: %s: %s", e.Line, p.Rule, p.Headline)
		}
		if !e.Flagged {
			for _, d := range found {
				t.Errorf("doc.md:%d: the clean example is flagged: %s", e.Line, d.Headline)
			}
			continue
		}
		if len(found) == 0 {
			t.Errorf("doc.md:%d: the flagged example is not flagged", e.Line)
			continue
		}
		file := source.NewFile("example", e.Text)
		says := ""
		for _, d := range found {
			says += line(file, d) + "\n"
		}
		switch {
		case e.SaysAt == [2]int{}:
			t.Errorf("doc.md:%d: a flagged example needs a ```says block after it", e.Line)
		case says != e.Says && *update:
			page = page[:e.SaysAt[0]+shift] + says + page[e.SaysAt[1]+shift:]
			shift += len(says) - len(e.Says)
		case says != e.Says:
			t.Errorf("doc.md:%d: the page shows\n%sthe rule says\n%srun with -update and look at the difference", e.Line, e.Says, says)
		}
	}
	if page != r.Doc {
		if err := os.WriteFile("doc.md", []byte(page), 0o644); err != nil {
			t.Fatal(err)
		}
	}
}

// line is a finding as the pages show it: line, column, severity, headline.
func line(f *source.File, d diag.Finding) string {
	l, c := f.Locate(d.Span.Start, source.Characters)
	return fmt.Sprintf("%d:%d: %s: %s", l+1, c+1, d.Severity, d.Headline)
}

// Model runs one rule over a model that carries its expectations.
func Model(t *testing.T, r *rule.Rule, text string) []diag.Finding {
	t.Helper()
	found, problems := run(r, text)
	for _, p := range problems {
		t.Errorf("the model can't be read: %s: %s", p.Rule, p.Headline)
	}
	for _, complaint := range Compare(source.NewFile("model.bayes", text), found, r.Name) {
		t.Error(complaint)
	}
	return found
}

func run(r *rule.Rule, text string) (found, problems []diag.Finding) {
	m := model.Build(context.Background(), source.NewFile("example.bayes", text), model.Options{})
	for _, p := range m.Problems {
		if p.Rule != r.Name && p.Severity == diag.Stop {
			problems = append(problems, p)
		}
	}
	return r.Check(facts.New(context.Background(), m)), problems
}

var (
	marker      = regexp.MustCompile(`#!\s*(.*)$`)
	expectation = regexp.MustCompile(`([a-z][a-z0-9-]*)\s+"((?:[^"\\]|\\.)*)"`)
)

// Compare holds findings against the expectations in a model and returns what
// does not agree. With names given, only expectations of these rules count.
func Compare(f *source.File, found []diag.Finding, names ...string) []string {
	type wanted struct {
		line       int
		rule, part string
		met        bool
	}
	var want []*wanted
	var complaints []string
	for n := range f.Lines() {
		text, _ := f.Line(n)
		m := marker.FindStringSubmatch(text)
		if m == nil {
			continue
		}
		list := expectation.FindAllStringSubmatch(m[1], -1)
		if len(list) == 0 {
			complaints = append(complaints, fmt.Sprintf("line %d: the expectation %q can't be read", n+1, m[1]))
		}
		for _, e := range list {
			if len(names) == 0 || contains(names, e[1]) {
				want = append(want, &wanted{line: n + 1, rule: e[1], part: strings.ReplaceAll(e[2], `\"`, `"`)})
			}
		}
	}
	for _, d := range found {
		at, _ := f.Locate(d.Span.Start, source.Characters)
		expected := false
		for _, w := range want {
			if !w.met && w.line == at+1 && w.rule == d.Rule && strings.Contains(d.Headline, w.part) {
				w.met, expected = true, true
				break
			}
		}
		if !expected {
			complaints = append(complaints, fmt.Sprintf("line %d: not expected: %s: %s", at+1, d.Rule, d.Headline))
		}
	}
	for _, w := range want {
		if !w.met {
			complaints = append(complaints, fmt.Sprintf("line %d: expected but not found: %s %q", w.line, w.rule, w.part))
		}
	}
	return complaints
}

func contains(list []string, s string) bool {
	for _, x := range list {
		if x == s {
			return true
		}
	}
	return false
}
