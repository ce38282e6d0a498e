package checks

import (
	"fmt"
	"strings"

	"wellposed/checks/rule"
)

// Problems lists what reading a model and its data can report, as rules without
// a check: names that people meet in the output and can ask about.
func Problems() []*rule.Rule { return problems }

var problems = []*rule.Rule{}

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

// shortPage is the page of a problem of reading.
func shortPage(name, brief, happens, goesAway string) string {
	var b strings.Builder
	fmt.Fprintf(&b, "# %s\n\n%s\n", name, brief)
	if happens != "" {
		fmt.Fprintf(&b, "\n## What happens\n\n%s\n", happens)
	}
	if goesAway != "" {
		fmt.Fprintf(&b, "\n## What makes it go away\n\n%s\n", goesAway)
	}
	return b.String()
}

// Unreadable reports whether a problem of reading means that a file could not be
// read, which has an exit code of its own.
func Unreadable(name string) bool { return name == BrokenEncoding }
