// Package diag is a finding as a value. Text, JSON, SARIF, editor diagnostics
// and the evidence page are made from it last, so they can't disagree.
package diag

import "wellposed/parser/source"

// Severity says how much a finding asks of the reader.
type Severity int

const (
	// Note: worth knowing.
	Note Severity = iota
	// Warn: would be questioned by a careful reviewer.
	Warn
	// Stop: ends the analysis; can't be accepted away, only overridden with a
	// reason, and then it stays listed.
	Stop
)

func (s Severity) String() string { return [...]string{"note", "warn", "stop"}[s] }

// How says how a number or a verdict was established. The words are used
// strictly.
type How string

const (
	// Proved: a theorem's conditions were checked exactly on these data, or the
	// number is a closed form.
	Proved How = "proved"
	// Bounded: verified numerical bounds.
	Bounded How = "bounded"
	// Indicated: numerical evidence only.
	Indicated How = "indicated"
	// NotDecided: neither proof nor bound was found.
	NotDecided How = "not decided"
)

// Finding is one thing that a rule has to say about one place.
type Finding struct {
	Rule     string
	Severity Severity
	// Path is the file, as it was given; Span the place in it.
	Path string
	Span source.Span
	// Target is the unknown, report or conclusion that the finding is about, as
	// `accept RULE for TARGET` names it; empty when it is about the file.
	Target string
	// Headline is one sentence that states what happens, with a number.
	Headline string
	// Notes are further sentences: the reason, and what would make it go away.
	Notes []string
	// Related are other places that matter: the likelihood, a row of data.
	Related []Related
	// Evidence are the numbers behind the headline.
	Evidence []Evidence
	// Sketch is a picture made of text, or empty. Lines end with \n.
	Sketch string
	Fixes  []Fix
	// Overridden holds the reason of an `override` that covers this finding.
	Overridden string
}

// Related is another place that a finding points to. When Path names a data
// file, Row and Column (both from 1; Row counts the header as row 1) say where
// in it; otherwise Span does.
type Related struct {
	Path        string
	Span        source.Span
	Row, Column int
	Message     string
}

// Evidence is one number with how it was established.
type Evidence struct {
	// Name is a short key that stays the same between versions: "upper 95%".
	Name string
	// About is what the number belongs to: a rival, an end of the support.
	About string
	// Text is the value as it is printed, with only the digits that hold.
	Text string
	// Value is the number, NaN when there is none.
	Value float64
	// Error bounds |Value - truth|; 0 for an exact number.
	Error float64
	How   How
	// Method in a few words: "closed form", "simulation, seed 1, 10,000 draws".
	Method string
}

// Grade says what applying a fix does to the analysis.
type Grade int

const (
	// Same: pure syntax, or provably the same distribution. May be applied in bulk.
	Same Grade = iota
	// ChangesPosterior: another analysis; asks each time and shows the consequence.
	ChangesPosterior
)

func (g Grade) String() string { return [...]string{"same", "changes the posterior"}[g] }

// Fix is an edit that would make the finding go away.
type Fix struct {
	// Title says what is done: "Use Beta(1/2, 1/2) (Jeffreys)".
	Title string
	Grade Grade
	// Consequence previews what changes: "upper 95 %: none → 0.0466".
	Consequence string
	Edits       []Edit
}

// Edit replaces the text of a span.
type Edit struct {
	Path string
	Span source.Span
	Text string
}
