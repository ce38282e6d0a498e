// Package stoppingrulechangesdefault reports Jeffreys' prior of one sampling plan
// under the likelihood of another.
package stoppingrulechangesdefault

import (
	_ "embed"
	"fmt"
	"math/big"

	"wellposed/checks/facts"
	"wellposed/checks/rule"
	"wellposed/checks/wording"
	"wellposed/parser/diag"
	"wellposed/parser/model"
)

//go:embed doc.md
var page string

// Rule looks at probabilities under inverse sampling; it is silent for a fixed
// number of trials with the prior that belongs to it.
var Rule = &rule.Rule{
	Name: "stopping-rule-changes-default", Severity: diag.Note, Group: rule.Scale, Phase: rule.Exact,
	Brief:   "The default prior by Jeffreys' rule depends on when sampling stopped.",
	Doc:     page,
	Sources: []string{"Jeffreys 1961", "Box and Tiao 1973, section 1.3", "derivation"},
	Check:   check,
}

// plan is how the trials were stopped.
type plan int

const (
	none plan = iota
	fixed
	inverse
)

func (p plan) String() string {
	return [...]string{"", "a fixed number of trials", "trials until the declared number of successes"}[p]
}

// default by Jeffreys' rule of each plan.
func (p plan) prior() string { return [...]string{"", "Beta(1/2, 1/2)", "Beta(0, 1/2)"}[p] }

func check(f *facts.Facts) []diag.Finding {
	var found []diag.Finding
	for _, p := range f.Model.Priors {
		if len(p.About) != 1 {
			continue
		}
		u := p.About[0]
		written, at := planOf(f.Model, u)
		if written == none {
			continue
		}
		byRule := p.Form == model.ByRule && p.Rule != nil && p.Rule.Name == model.Jeffreys
		belongs := none
		if p.Form == model.ByDist && plain(p, u) {
			belongs = jeffreysOf(p.Dist)
		}
		switch {
		case byRule && written == inverse:
			belongs = inverse
		case belongs == none || belongs == written:
			continue
		}
		other := fixed
		if written == fixed {
			other = inverse
		}
		headline := fmt.Sprintf("%s is Jeffreys' prior for %s; the likelihood is written for %s, whose is %s.", belongs.prior(), belongs, written, written.prior())
		if belongs == written {
			headline = fmt.Sprintf("Jeffreys gives %s because sampling stopped by %s; with %s it gives %s.", written.prior(), written, other, other.prior())
		}
		out := diag.Finding{
			Rule: "stopping-rule-changes-default", Severity: diag.Note, Path: f.Model.File.Path, Span: wording.PriorPlace(p), Target: u.Name,
			Headline: headline,
			Notes: []string{
				"The two likelihoods are proportional, so the data say the same; only the prior by rule differs, by the factor 1/sqrt(" + u.Name + ").",
				"To make it go away, state the prior itself, with the sampling plan as its reason.",
			},
			Related: []diag.Related{{Path: f.Model.File.Path, Span: at.Span, Message: "written for " + written.String()}},
			Evidence: []diag.Evidence{
				{Name: "default", About: fixed.String(), Text: fixed.prior(), How: diag.Proved, Method: "closed form"},
				{Name: "default", About: inverse.String(), Text: inverse.prior(), How: diag.Proved, Method: "closed form"},
			},
		}
		if !p.FormSpan.Empty() {
			for _, q := range []plan{written, other} {
				out.Fixes = append(out.Fixes, diag.Fix{
					Title: fmt.Sprintf("State %s (Jeffreys for %s)", q.prior(), q), Grade: grade(q, belongs), Consequence: consequence(q, belongs),
					Edits: []diag.Edit{{Path: f.Model.File.Path, Span: p.FormSpan, Text: "as " + q.prior()}},
				})
			}
		}
		found = append(found, out)
	}
	return found
}

func grade(q, now plan) diag.Grade {
	if q == now {
		return diag.Same
	}
	return diag.ChangesPosterior
}

func consequence(q, now plan) string {
	if q == now {
		return "the same prior, stated"
	}
	return "prior: " + now.prior() + " → " + q.prior()
}

func plain(p *model.Prior, u *model.Unknown) bool {
	r, ok := p.Target.(*model.UnknownRef)
	return ok && r.Unknown == u
}

// planOf reads the plan of the observations of a probability; none when it is no
// plain probability, when plans are mixed, or when the data did not stop at a
// success.
func planOf(m *model.Model, u *model.Unknown) (plan, *model.Observation) {
	found, at := none, (*model.Observation)(nil)
	for _, o := range m.Observations {
		if !wording.Touches(o, func(v *model.Unknown) bool { return v == u }) {
			continue
		}
		r, ok := o.Dist.Arg("probability").(*model.UnknownRef)
		if !ok || r.Unknown != u {
			return none, nil
		}
		this := none
		switch o.Dist.Spec.Name {
		case "Bernoulli", "Binomial":
			this = fixed
		case "geometric", "negative-Binomial":
			this = inverse
		}
		if this == none || found != none && found != this {
			return none, nil
		}
		found, at = this, o
	}
	return found, at
}

// jeffreysOf recognises the two priors.
func jeffreysOf(d *model.Dist) plan {
	if d == nil || d.Spec.Name != "Beta" {
		return none
	}
	a, b := literal(d.Arg("a")), literal(d.Arg("b"))
	half := big.NewRat(1, 2)
	switch {
	case a == nil || b == nil || b.Cmp(half) != 0:
		return none
	case a.Cmp(half) == 0:
		return fixed
	case a.Sign() == 0:
		return inverse
	}
	return none
}

func literal(e model.Expr) *big.Rat {
	switch e := e.(type) {
	case *model.Number:
		return e.Value
	case *model.Op:
		if e.Op == "/" && len(e.Args) == 2 {
			a, b := literal(e.Args[0]), literal(e.Args[1])
			if a != nil && b != nil && b.Sign() != 0 {
				return new(big.Rat).Quo(a, b)
			}
		}
	}
	return nil
}
