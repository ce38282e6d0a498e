// Package spikeatzero reports priors that pile up at an end of the range while
// they look vague on paper.
package spikeatzero

import (
	_ "embed"
	"fmt"
	"math/big"

	"wellposed/checks/facts"
	"wellposed/checks/posterior"
	"wellposed/checks/rule"
	"wellposed/checks/wording"
	"wellposed/parser/diag"
	"wellposed/parser/model"
)

//go:embed doc.md
var page string

// Rule holds priors with a small exponent at zero against the standard choices.
var Rule = &rule.Rule{
	Name: "spike-at-zero", Severity: diag.Warn, Group: rule.Influence, Phase: rule.Numeric,
	Brief:   "A proper prior that looks vague is almost flat on the logarithm near zero, and the data do not outweigh its mass there.",
	Doc:     page,
	Sources: []string{"Gelman 2006", "derivation"},
	Check:   check,
}

// small is the exponent below which a kernel x^(a−1) is nearly 1/x at zero.
var small = big.NewRat(1, 4)

func check(f *facts.Facts) []diag.Finding {
	if !wording.Whole(f.Model) {
		return nil
	}
	var found []diag.Finding
	for _, p := range f.Model.Priors {
		if f.Context().Err() != nil {
			break
		}
		if ends := spikes(p); ends != "" {
			if d, ok := examine(f, p, ends); ok {
				found = append(found, d)
			}
		}
	}
	return found
}

// spikes names the ends at which a prior is nearly 1/x; empty for none.
func spikes(p *model.Prior) string {
	if p.Joint || len(p.About) != 1 || !p.About[0].Scalar() || p.Form != model.ByDist || p.Dist.Spec == nil {
		return ""
	}
	below := func(label string) bool {
		e := p.Dist.Arg(label)
		if e == nil {
			return false
		}
		x, err := model.EvalExact(e, 0)
		return err == nil && x.Sign() > 0 && x.Cmp(small) < 0
	}
	target := model.Text(p.Target)
	switch p.Dist.Spec.Name {
	case "Gamma":
		if below("shape") {
			return target + " = 0"
		}
	case "inverse-Gamma":
		// x^(−a−1) is nearly 1/x from the scale upwards.
		if below("shape") && below("scale") {
			return target + " = 0"
		}
	case "Beta":
		a, b := below("a"), below("b")
		switch {
		case a && b:
			return target + " = 0 and 1"
		case a:
			return target + " = 0"
		case b:
			return target + " = 1"
		}
	}
	return ""
}

// examine compares with the standard choice that moves the report least.
func examine(f *facts.Facts, p *model.Prior, ends string) (diag.Finding, bool) {
	m, u := f.Model, p.About[0]
	declared := m.Declared()
	var worst wording.Shift
	var about *model.Report
	var by wording.Alternative
	for _, r := range m.Reports {
		var least wording.Shift
		var nearest wording.Alternative
		some := false
		for _, alt := range wording.Choices(f, u) {
			if len(spikes(alt.Priors[0])) > 0 {
				continue
			}
			if s, ok := wording.ShiftOf(f, declared, alt.Analysis, r); ok && (!some || s.Sure < least.Sure) {
				least, nearest, some = s, alt, true
			}
		}
		if some && wording.Matters(m, least) && (about == nil || least.Sure > worst.Sure) {
			worst, about, by = least, r, nearest
		}
	}
	if about == nil {
		return diag.Finding{}, false
	}
	end := wording.EndText(worst, about.Intervals[worst.Interval], about.Name)
	d := diag.Finding{
		Rule: "spike-at-zero", Severity: diag.Warn, Path: m.File.Path, Span: wording.PriorPlace(p), Target: u.Name,
		Headline: fmt.Sprintf("%s piles up at %s, and with these data %s is %s; under the nearest standard choice, %s, it is %s.",
			model.DistText(p.Dist), ends, end, worst.From.Text(), wording.Called(by), worst.To.Text()),
		Related:  []diag.Related{{Span: about.Span, Message: "the report that moves"}},
		Evidence: []diag.Evidence{wording.Measured(end, "as declared", worst.From)},
		Notes:    []string{"Near zero the prior is almost 1/x: every factor of ten has the same mass, down to where nobody could tell the values apart."},
	}
	for _, alt := range wording.Choices(f, u) {
		if s, ok := wording.ShiftOf(f, declared, alt.Analysis, about); ok && spikes(alt.Priors[0]) == "" && s.End == worst.End {
			d.Evidence = append(d.Evidence, wording.Measured(end, alt.Name, s.To))
		}
	}
	d.Evidence = append(d.Evidence, masses(f, p, by)...)
	d.Sketch = decades(f, p)
	d.Notes = append(d.Notes, "It goes away with one event or more seen, with a prior that has finite density at zero, or with a source for so much mass there.")
	return d, true
}

// masses compares what lies below the lower 2.5 % point of the nearest choice.
func masses(f *facts.Facts, p *model.Prior, by wording.Alternative) []diag.Evidence {
	ref := &model.UnknownRef{Unknown: p.About[0], Which: model.Whole}
	other := f.PosteriorLaw(by.Analysis, ref)
	own := f.PosteriorLaw(f.Model.Declared(), ref)
	if other.Err != nil || own.Err != nil {
		return nil
	}
	t, err := other.Quantile(0.025)
	if err != nil || !(t.Value > 0) {
		return nil
	}
	below, err := own.Below(t.Value)
	if err != nil {
		return nil
	}
	list := []diag.Evidence{wording.Measured("posterior mass below "+diag.Figure(t.Value, t.Error, 2), "as declared, 0.025 under "+by.Name, below)}
	if prior := f.PriorLaw(f.Model.Declared(), ref); prior.Err == nil {
		if n, err := prior.Below(t.Value); err == nil {
			list = append(list, wording.Measured("prior mass below "+diag.Figure(t.Value, t.Error, 2), "as declared", n))
		}
	}
	return list
}

// decades lists where the prior's mass lies, factor of a thousand by factor of a
// thousand.
func decades(f *facts.Facts, p *model.Prior) string {
	ref := &model.UnknownRef{Unknown: p.About[0], Which: model.Whole}
	prior, post := f.PriorLaw(f.Model.Declared(), ref), f.PosteriorLaw(f.Model.Declared(), ref)
	if prior.Err != nil || post.Err != nil {
		return ""
	}
	rows := [][]string{{"below", "prior", "posterior"}}
	for _, t := range []float64{1e-12, 1e-9, 1e-6, 1e-3, 1} {
		a, errA := prior.Below(t)
		b, errB := post.Below(t)
		if errA != nil || errB != nil {
			return ""
		}
		rows = append(rows, []string{diag.Figure(t, 0, 1), share(a), share(b)})
	}
	return wording.Columns(rows)
}

func share(n posterior.Number) string { return diag.Percent(n.Value, n.Error, 3) }
