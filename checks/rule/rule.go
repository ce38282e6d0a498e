// Package rule is the shape of a rule: a plain value. A rule's room is
// checks/rules/<name>.
package rule

import (
	"wellposed/checks/facts"
	"wellposed/parser/diag"
)

// Phase says when a rule can run.
type Phase int

const (
	// Exact rules need the model and exact verdicts only; they run at once.
	Exact Phase = iota
	// Numeric rules need integrals; an editor runs them in the background.
	Numeric
)

// Group is the part of the rule list that a rule stands in.
type Group string

// Groups of rules.
const (
	Existence      Group = "existence of the posterior"
	Scale          Group = "dependence on the scale"
	Influence      Group = "vague yet influential"
	Mismatch       Group = "model and data"
	Identification Group = "identification"
	Design         Group = "before the data"
	Reporting      Group = "reporting"
	Reading        Group = "reading the model"
)

// Rule is one rule.
type Rule struct {
	// Name is kebab-case, shows the pattern, and reads well after "accept".
	Name string
	// Severity is the usual one; a finding may carry another.
	Severity diag.Severity
	Group    Group
	Phase    Phase
	// Brief is one sentence.
	Brief string
	// Doc is the page, Markdown, embedded from doc.md.
	Doc string
	// Sources are publications, "common practice" or "derivation".
	Sources []string
	// Check looks at the facts and returns what it has to say. It is pure: no
	// files, time, environment or other rules. It stops early when the context
	// of the facts ends.
	Check func(*facts.Facts) []diag.Finding
}
