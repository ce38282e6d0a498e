package existence

import (
	"wellposed/checks/existence/certificate"
	"wellposed/parser/diag"
	"wellposed/parser/model"
)

// Status is the answer.
type Status string

// The three answers. How it was found stands beside it.
const (
	Exists       Status = "exists"
	DoesNotExist Status = "does not exist"
	NotDecided   Status = "not decided"
)

// Code says which kind of reason a verdict has, so that a rule can pick its own.
type Code string

// Codes of reasons. A new theorem gets a code of its own only when a rule tells
// its story in other words.
const (
	ProperPrior      Code = "proper prior, bounded likelihood"
	TailOrder        Code = "order of the kernel at an end of the support"
	ZeroCount        Code = "all or none of the trials"
	Conjugate        Code = "conjugate"
	ScaleReadings    Code = "readings against the power of the scale"
	EqualReadings    Code = "readings all alike"
	Rank             Code = "rank of the design"
	Separation       Code = "separation"
	Overlap          Code = "overlap"
	SpreadAtZero     Code = "spread at zero"
	SpreadAtInfinity Code = "spread at infinity"
	Plateau          Code = "likelihood levels off"
	OneSidedLimits   Code = "nothing but limits"
	Failures         Code = "failures against the shape"
	PopulationSize   Code = "population size"
	EmptyComponent   Code = "empty component"
	NotIdentified    Code = "only a combination is seen"
	DerivedPrior     Code = "derived prior"
	NoSupport        Code = "likelihood vanishes on the prior's support"
	OutOfReach       Code = "out of reach"
)

// Verdict is the answer for one group of unknowns that hang together.
type Verdict struct {
	Status   Status
	How      diag.How
	Unknowns []*model.Unknown
	Code     Code

	// Claim is one sentence with the numbers put in: "a + y = 0 + 0 is not
	// positive, so the kernel p^(-1) has no integral at p = 0".
	Claim string
	// Theorem names the result used, Source where it is published, or
	// "derivation" for one that the package documentation derives.
	Theorem, Source string
	Conditions      []Condition
	Escape          []Escape
	// Observation and Rows are the data that decide, where a few rows do; Rows
	// index Observation.Table (or are given-vector positions).
	Observation *model.Observation
	Rows        []int
	// Repairs say what would make it go away, in the model's own names.
	Repairs []string
	// Certificate can be verified by checks/existence/verify; set for every
	// proved verdict.
	Certificate *certificate.Certificate
}

// Condition is a condition of the theorem and the numbers put into it.
type Condition struct {
	Text   string // "a + y > 0"
	Filled string // "0 + 0 > 0"
	Holds  bool
}

// Escape is an end or a direction in which the mass escapes.
type Escape struct {
	// Unknown and Component move; Toward is the end: "0", "1", "inf", "-inf" or
	// another number as text.
	Unknown   *model.Unknown
	Component int
	Toward    string
	// Step is the component's entry of a direction vector, as an exact text,
	// when several move together; empty for a single end.
	Step string
}

// Result is the verdict for a whole analysis, group by group in the order of
// the unknowns' declarations.
type Result struct {
	Analysis *model.Analysis
	Verdicts []*Verdict
}

// Overall is DoesNotExist when any group's is, else NotDecided when any is,
// else Exists; How is the weakest of those that carry it.
func (r *Result) Overall() (Status, diag.How) {
	strength := map[diag.How]int{diag.Proved: 3, diag.Bounded: 2, diag.Indicated: 1, diag.NotDecided: 0}
	status, how := Exists, diag.Proved
	for _, v := range r.Verdicts {
		switch {
		case v.Status == DoesNotExist:
			if status != DoesNotExist || strength[v.How] > strength[how] {
				how = v.How
			}
			status = DoesNotExist
		case status == DoesNotExist:
		case v.Status == NotDecided:
			if status != NotDecided || strength[v.How] < strength[how] {
				how = v.How
			}
			status = NotDecided
		case status == Exists && strength[v.How] < strength[how]:
			how = v.How
		}
	}
	return status, how
}

// Of returns the verdict of the group that an unknown belongs to, nil for none.
func (r *Result) Of(u *model.Unknown) *Verdict {
	for _, v := range r.Verdicts {
		for _, w := range v.Unknowns {
			if u == w {
				return v
			}
		}
	}
	return nil
}
