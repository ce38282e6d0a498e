// Package inducedpriorpilesatlimits reports priors that mean all or nothing on the
// scale of a probability.
package inducedpriorpilesatlimits

import (
	_ "embed"
	"fmt"

	"wellposed/checks/facts"
	"wellposed/checks/posterior"
	"wellposed/checks/rule"
	"wellposed/checks/wording"
	"wellposed/parser/diag"
	"wellposed/parser/model"
	"wellposed/parser/source"
)

//go:embed doc.md
var page string

// Rule looks at what proper priors mean for probabilities and correlations.
var Rule = &rule.Rule{
	Name: "induced-prior-piles-at-limits", Severity: diag.Warn, Group: rule.Scale, Phase: rule.Numeric,
	Brief:   "On a reported scale with limits, the prior puts most of its mass next to them, and that shows in the report.",
	Doc:     page,
	Sources: []string{"Northrup and Gerber 2018", "derivation"},
	Check:   check,
}

// near is how close to a limit mass counts as piled up, in shares of the range; piled
// is how much of it does (common practice).
const (
	near  = 0.01
	piled = 0.2
)

func check(f *facts.Facts) []diag.Finding {
	m := f.Model
	if !wording.Whole(m) {
		return nil
	}
	var found []diag.Finding
	for _, e := range scales(m) {
		if f.Context().Err() != nil {
			break
		}
		if d, ok := examine(f, e); ok {
			found = append(found, d)
		}
	}
	return found
}

// scale is an expression with two limits.
type scale struct {
	expr      model.Expr
	low, high float64
	span      source.Span
	target    string
}

// scales are the reported quantities that have two limits, and the scalar
// probabilities and correlations themselves.
func scales(m *model.Model) []scale {
	var list []scale
	seen := map[string]bool{}
	add := func(s scale) {
		if text := model.Text(s.expr); !seen[text] {
			seen[text] = true
			list = append(list, s)
		}
	}
	for _, r := range m.Reports {
		if low, high, ok := limits(r.Value); ok {
			add(scale{r.Value, low, high, r.Span, r.Name})
		}
	}
	return list
}

// limits of an expression: those of a scalar unknown's support, or of a function that
// has them.
func limits(e model.Expr) (low, high float64, ok bool) {
	switch e := e.(type) {
	case *model.LetRef:
		if e.Let != nil && e.Let.Table == nil {
			return limits(e.Let.Value)
		}
	case *model.UnknownRef:
		b := e.Unknown.Support
		if b.Low != nil && b.High != nil && (e.Unknown.Scalar() || e.Which == model.Fixed) {
			low, _ = b.Low.Float64()
			high, _ = b.High.Float64()
			return low, high, true
		}
	case *model.Call:
		switch e.Func {
		case "expit", "Phi":
			return 0, 1, true
		case "tanh":
			return -1, 1, true
		}
	case *model.Op:
		// A difference of two quantities with limits, such as two risks.
		if e.Op == "-" && len(e.Args) == 2 {
			a, b, okA := limits(e.Args[0])
			c, d, okC := limits(e.Args[1])
			return a - d, b - c, okA && okC
		}
	}
	return 0, 0, false
}

func examine(f *facts.Facts, s scale) (diag.Finding, bool) {
	m := f.Model
	declared := m.Declared()
	prior := f.PriorLaw(declared, s.expr)
	if prior.Err != nil {
		return diag.Finding{}, false
	}
	before, err := outside(prior, s)
	if err != nil || !(before.Value-before.Error > piled) {
		return diag.Finding{}, false
	}
	post := f.PosteriorLaw(declared, s.expr)
	if post.Err != nil {
		return diag.Finding{}, false
	}
	after, err := outside(post, s)
	if err != nil {
		return diag.Finding{}, false
	}
	if !moves(f, s) {
		return diag.Finding{}, false
	}
	text := model.Text(s.expr)
	d := diag.Finding{
		Rule: "induced-prior-piles-at-limits", Severity: diag.Warn, Path: m.File.Path, Span: s.span, Target: s.target,
		Headline: fmt.Sprintf("The prior puts %s of its mass within 1 %% of the limits of %s; the posterior has %s there.", diag.Percent(before.Value, before.Error, 2), text, diag.Percent(after.Value, after.Error, 2)),
		Evidence: []diag.Evidence{
			wording.Measured("prior mass within 1 % of the limits", text, before),
			wording.Measured("posterior mass within 1 % of the limits", text, after),
		},
		Notes: []string{"It goes away with a prior that is said on this scale, or whose spread does not reach the limits."},
	}
	for _, u := range model.UnknownsIn(s.expr) {
		if p := declared.PriorOf(u); p != nil {
			d.Related = append(d.Related, diag.Related{Span: p.Span, Message: "what it comes from"})
		}
	}
	return d, true
}

// outside is the mass within a hundredth of the range of its limits.
func outside(l facts.Law, s scale) (posterior.Number, error) {
	margin := near * (s.high - s.low)
	a, err := l.Below(s.low + margin)
	if err != nil {
		return a, err
	}
	b, err := l.Above(s.high - margin)
	a.Value, a.Error = a.Value+b.Value, a.Error+b.Error
	return a, err
}

// moves reports whether the pile shows in the answer: some standard choice moves the
// report by more than what matters, or there is none to compare with.
func moves(f *facts.Facts, s scale) bool {
	m := f.Model
	compared := false
	for _, r := range m.Reports {
		if r.Name != s.target {
			continue
		}
		for _, u := range model.UnknownsIn(s.expr) {
			if !u.Scalar() {
				continue
			}
			for _, alt := range wording.Choices(f, u) {
				if shift, ok := wording.ShiftOf(f, m.Declared(), alt.Analysis, r); ok {
					if wording.Matters(m, shift) {
						return true
					}
					compared = true
				}
			}
		}
	}
	return !compared
}
