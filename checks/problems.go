package checks

import (
	"fmt"
	"strings"

	"wellposed/checks/config"
	"wellposed/checks/rule"
	"wellposed/parser"
	"wellposed/parser/diag"
	"wellposed/parser/model"
)

// Problems lists what reading a model and its data can report, as rules without
// a check: names that people meet in the output and can ask about.
func Problems() []*rule.Rule { return problems }

var problems = readingProblems()

func readingProblems() []*rule.Rule {
	var list []*rule.Rule
	for _, d := range parser.Rules {
		list = append(list, problem(d.Name, d.Doc))
	}
	for _, d := range model.ProblemDocs {
		if Find(d.Name) == nil { // rules have pages of their own
			list = append(list, problem(d.Name, d.Doc))
		}
	}
	for _, d := range config.Docs {
		list = append(list, problem(d.Name, d.Doc))
	}
	return append(list, problem(InternalFault, "A rule failed on this model, so its result is missing. Everything else was checked. Please report it."))
}

// problem makes the short page of a problem of reading: its first sentence is
// the brief, the rest is said below.
func problem(name, doc string) *rule.Rule {
	brief, more := doc, ""
	if i := strings.Index(doc, ". "); i >= 0 {
		brief, more = doc[:i+1], doc[i+2:]
	}
	page := fmt.Sprintf("# %s\n\n%s\n", name, brief)
	if more != "" {
		page += fmt.Sprintf("\n%s\n", more)
	}
	return &rule.Rule{Name: name, Severity: diag.Stop, Group: rule.Reading, Brief: brief, Doc: page, Sources: []string{"derivation"}}
}

// Unreadable reports whether a problem of reading means that a file could not be
// read, which has an exit code of its own.
func Unreadable(name string) bool {
	return name == parser.RuleEncoding || name == parser.RuleFile || name == model.TableUnreadable
}

// Page returns the page of a rule or of a problem of reading.
func Page(name string) (string, bool) {
	if r := Find(name); r != nil {
		return r.Doc, true
	}
	for _, p := range problems {
		if p.Name == name {
			return p.Doc, true
		}
	}
	return "", false
}

// PageNames lists all names that have a page.
func PageNames() []string {
	var names []string
	for _, r := range registry {
		names = append(names, r.Name)
	}
	for _, p := range problems {
		names = append(names, p.Name)
	}
	return names
}
