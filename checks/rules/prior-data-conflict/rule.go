// Package priordataconflict reports data that the prior did not expect.
package priordataconflict

import (
	_ "embed"
	"fmt"
	"math"
	"math/big"

	"wellposed/checks/facts"
	"wellposed/checks/rule"
	"wellposed/checks/wording"
	"wellposed/parser/diag"
	"wellposed/parser/model"
)

//go:embed doc.md
var page string

// Rule computes how far out the data lie under the prior.
var Rule = &rule.Rule{
	Name: "prior-data-conflict", Severity: diag.Warn, Group: rule.Influence, Phase: rule.Numeric,
	Brief:   "Under the prior, data as far out as these had little chance.",
	Doc:     page,
	Sources: []string{"Box 1980", "Evans and Moshonov 2006"},
	Check:   check,
}

// rare is the tail area below which prior and data are said to disagree
// (common practice); most bounds the counts that are summed over.
const (
	rare = 0.05
	most = 1_000_000
)

func check(f *facts.Facts) []diag.Finding {
	m := f.Model
	if !wording.Whole(m) {
		return nil
	}
	var found []diag.Finding
	for _, p := range m.Priors {
		if f.Context().Err() != nil {
			break
		}
		if p.Form != model.ByDist || p.Dist == nil || p.Dist.Spec == nil || p.Truncated != nil || !wording.OnItself(p) {
			continue
		}
		u := p.About[0]
		area, seen, t, ok := tail(m, p, u)
		if !ok || !(area < rare) {
			continue
		}
		text := diag.Figure(area, area*1e-9, 2)
		found = append(found, diag.Finding{
			Rule: "prior-data-conflict", Severity: diag.Warn, Path: m.File.Path, Span: wording.PriorPlace(p), Target: u.Name,
			Headline: fmt.Sprintf("Under the prior of %s, counts as unlikely as %s had the chance %s together.", u.Name, seen, text),
			Notes:    []string{"A very wide prior never disagrees with data, so silence is no support. It goes away when the prior's source is reviewed, or with a prior that gives up when the data contradict it."},
			Related:  []diag.Related{{Span: t.Last.Span, Message: "the data"}},
			Evidence: []diag.Evidence{{Name: "prior predictive tail area", Text: text, Value: area, Error: area * 1e-9, How: diag.Bounded, Method: "sum over counts"}},
		})
	}
	return found
}

// tail is the chance, under the prior, of totals that are no more likely than the one
// seen. Priors that pile up at an end are left out: they expect all or nothing by
// accident.
func tail(m *model.Model, p *model.Prior, u *model.Unknown) (area float64, seen string, t wording.Tally, ok bool) {
	t, ok = wording.TallyOf(m, u)
	if !ok || !t.Y.IsInt() || t.Y.Sign() < 0 || t.N.Sign() <= 0 {
		return 0, "", t, false
	}
	y, _ := t.Y.Float64()
	n, _ := t.N.Float64()
	var args []*big.Rat
	join := " of "
	switch {
	case p.Dist.Spec.Name == "Beta" && !t.Rate && t.N.IsInt() && n <= most && y <= n:
		args, ok = wording.Arguments(p.Dist, "a", "b")
		ok = ok && args[0].Cmp(half) >= 0 && args[1].Cmp(half) >= 0
	case p.Dist.Spec.Name == "Gamma" && t.Rate:
		args, ok = wording.Arguments(p.Dist, "shape", "rate")
		ok = ok && args[0].Cmp(half) >= 0 && args[1].Sign() > 0
		join = " in "
	default:
		ok = false
	}
	if !ok {
		return 0, "", t, false
	}
	a, _ := args[0].Float64()
	b, _ := args[1].Float64()
	if t.Rate {
		area, ok = unlikely(y, math.Inf(1), func(k float64) float64 { return gammaPoisson(k, n, a, b) })
	} else {
		area, ok = unlikely(y, n, func(k float64) float64 { return betaBinomial(k, n, a, b) })
	}
	return area, wording.Decimal(t.Y) + join + wording.Decimal(t.N), t, ok
}

var half = big.NewRat(1, 2)

// unlikely adds the chances of 0 … n that are no larger than that of y. An unbounded
// sum ends where its terms are beyond the last digit; not ok when that is too far.
func unlikely(y, n float64, log func(k float64) float64) (float64, bool) {
	bar, sum := log(y)+1e-9, 0.0
	for k := 0.0; k <= n; k++ {
		if k > most {
			return 0, false
		}
		l := log(k)
		if l <= bar {
			sum += math.Exp(l)
			if math.IsInf(n, 1) && k > y && math.Exp(l) < sum*1e-17 {
				break
			}
		}
	}
	return math.Min(sum, 1), true
}

// betaBinomial is the logarithm of the chance of k of n.
func betaBinomial(k, n, a, b float64) float64 {
	return choose(n, k) + beta(k+a, n-k+b) - beta(a, b)
}

// gammaPoisson is the logarithm of the chance of k events in exposure t.
func gammaPoisson(k, t, shape, rate float64) float64 {
	x, _ := math.Lgamma(shape + k)
	y, _ := math.Lgamma(shape)
	z, _ := math.Lgamma(k + 1)
	return x - y - z - shape*math.Log1p(t/rate) - k*math.Log1p(rate/t)
}

func choose(n, k float64) float64 {
	a, _ := math.Lgamma(n + 1)
	b, _ := math.Lgamma(k + 1)
	c, _ := math.Lgamma(n - k + 1)
	return a - b - c
}

func beta(a, b float64) float64 {
	x, _ := math.Lgamma(a)
	y, _ := math.Lgamma(b)
	z, _ := math.Lgamma(a + b)
	return x + y - z
}
