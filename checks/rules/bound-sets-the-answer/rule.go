// Package boundsetstheanswer reports flat priors whose bounds show in the answer.
package boundsetstheanswer

import (
	_ "embed"
	"fmt"
	"math/big"
	"strings"

	"wellposed/checks/facts"
	"wellposed/checks/posterior"
	"wellposed/checks/rule"
	"wellposed/checks/wording"
	"wellposed/parser/diag"
	"wellposed/parser/model"
)

//go:embed doc.md
var page string

// Rule moves the bounds of flat priors.
var Rule = &rule.Rule{
	Name: "bound-sets-the-answer", Severity: diag.Warn, Group: rule.Influence, Phase: rule.Numeric,
	Brief:   "The bound at which a flat prior is cut off shows in a reported interval.",
	Doc:     page,
	Sources: []string{"derivation", "Gelman 2006"},
	Check:   check,
}

func check(f *facts.Facts) []diag.Finding {
	if !wording.Whole(f.Model) {
		return nil
	}
	var found []diag.Finding
	for _, p := range f.Model.Priors {
		if f.Context().Err() != nil {
			break
		}
		if b, ok := boundsOf(p); ok {
			if d, ok := examine(f, p, b); ok {
				found = append(found, d)
			}
		}
	}
	return found
}

// cut is the range of a flat prior with the ends that could be moved.
type cut struct {
	low, high            *big.Rat
	moveLow, moveHigh    bool
	outermost, innermost *big.Rat // ends of the target's own range, nil for none
	from                 string   // the target's text
}

// boundsOf reads the range of a flat prior; not ok when nothing cuts it off but
// the nature of the unknown.
func boundsOf(p *model.Prior) (cut, bool) {
	if !wording.Flat(p) || p.Joint || len(p.About) != 1 {
		return cut{}, false
	}
	if p.Form != model.ByDist || p.Dist.Spec.Name != "Uniform" || p.Truncated != nil {
		return cut{}, false
	}
	c := cut{low: exact(p.Dist.Arg("low")), high: exact(p.Dist.Arg("high")), from: model.Text(p.Target)}
	if c.low == nil || c.high == nil {
		return cut{}, false
	}
	c.innermost, c.outermost = rangeOf(p)
	c.moveLow = c.innermost == nil || c.low.Cmp(c.innermost) > 0
	c.moveHigh = c.outermost == nil || c.high.Cmp(c.outermost) < 0
	return c, c.moveLow || c.moveHigh
}

// rangeOf is the range of the target over the unknown's support.
func rangeOf(p *model.Prior) (low, high *big.Rat) {
	u := p.About[0]
	switch e := p.Target.(type) {
	case *model.UnknownRef:
		return u.Support.Low, u.Support.High
	case *model.Call:
		switch e.Func {
		case "logit", "probit", "cloglog", "atanh", "log":
			return nil, nil
		case "odds":
			return new(big.Rat), nil
		}
	}
	if u.Support.Low != nil && u.Support.Low.Sign() >= 0 {
		return new(big.Rat), nil
	}
	return nil, nil
}

// times moves the ends by a factor: away from zero where the range begins there,
// else away from the middle.
func (c cut) times(factor *big.Rat) cut {
	moved := c
	if c.innermost != nil && c.innermost.Sign() == 0 {
		if c.moveHigh {
			moved.high = new(big.Rat).Mul(c.high, factor)
		}
		if c.moveLow {
			moved.low = new(big.Rat).Quo(c.low, factor)
		}
	} else {
		middle := new(big.Rat).Add(c.low, c.high)
		middle.Quo(middle, big.NewRat(2, 1))
		stretch := func(x *big.Rat) *big.Rat {
			d := new(big.Rat).Sub(x, middle)
			return d.Add(d.Mul(d, factor), middle)
		}
		if c.moveLow {
			moved.low = stretch(c.low)
		}
		if c.moveHigh {
			moved.high = stretch(c.high)
		}
	}
	if c.innermost != nil && moved.low.Cmp(c.innermost) < 0 {
		moved.low = c.innermost
	}
	if c.outermost != nil && moved.high.Cmp(c.outermost) > 0 {
		moved.high = c.outermost
	}
	return moved
}

// text is the prior with these ends.
func (c cut) text() string {
	return c.from + " as Uniform(" + c.low.RatString() + ", " + c.high.RatString() + ")"
}

// place names the ends that move: "1,000", "−10 and 10".
func (c cut) place() string {
	var list []string
	for _, x := range []struct {
		move bool
		at   *big.Rat
	}{{c.moveLow, c.low}, {c.moveHigh, c.high}} {
		if x.move {
			v, _ := x.at.Float64()
			list = append(list, diag.Figure(v, 0, 6))
		}
	}
	for i, s := range list {
		if whole, fraction, ok := strings.Cut(s, "."); ok && !strings.Contains(s, "·") {
			if fraction = strings.TrimRight(fraction, "0"); fraction != "" {
				whole += "." + fraction
			}
			list[i] = whole
		}
	}
	return wording.List(list)
}

func exact(e model.Expr) *big.Rat {
	x, err := model.EvalExact(e, 0)
	if err != nil {
		return nil
	}
	return x
}

// examine recomputes the reports with the bounds moved outwards; moving them
// inwards is shown beside it, but could cut off what the data say.
func examine(f *facts.Facts, p *model.Prior, c cut) (diag.Finding, bool) {
	m := f.Model
	declared := m.Declared()
	wide, wideText, ok := under(f, c.times(big.NewRat(10, 1)))
	if !ok {
		return diag.Finding{}, false
	}
	var worst wording.Shift
	var about *model.Report
	for _, r := range m.Reports {
		if s, ok := wording.ShiftOf(f, declared, wide, r); ok && wording.Matters(m, s) && (about == nil || s.Sure > worst.Sure) {
			worst, about = s, r
		}
	}
	if about == nil {
		return diag.Finding{}, false
	}
	bound := "bound " + c.place() + " of"
	if c.moveLow && c.moveHigh {
		bound = "bounds " + c.place() + " of"
	}
	asked := about.Intervals[worst.Interval]
	end := wording.EndText(worst, asked, about.Name)
	verb := "sets"
	if c.moveLow && c.moveHigh {
		verb = "set"
	}
	d := diag.Finding{
		Rule: "bound-sets-the-answer", Severity: diag.Warn, Path: m.File.Path, Span: wording.PriorPlace(p), Target: p.About[0].Name,
		Related:  []diag.Related{{Span: about.Span, Message: "the report that moves"}},
		Evidence: []diag.Evidence{wording.Measured(end, "as declared", worst.From), wording.Measured(end, wideText, worst.To)},
	}
	d.Headline = fmt.Sprintf("The %s %s %s the answer: %s is %s; ten times as wide it is %s", bound, c.from, verb, end, worst.From.Text(), worst.To.Text())
	rows := [][]string{{"bounds", end}}
	narrow := c.times(big.NewRat(1, 10))
	if a, text, ok := under(f, narrow); ok {
		if s := f.Posterior(a, about); s.Err == nil {
			n := number(s.Intervals[worst.Interval], worst.End)
			d.Headline += fmt.Sprintf(", a tenth as wide %s", n.Text())
			d.Evidence = append(d.Evidence, wording.Measured(end, text, n))
			rows = append(rows, []string{text, n.Text()})
		}
	}
	d.Headline += "."
	rows = append(rows, []string{p.Text, worst.From.Text()}, []string{wideText, worst.To.Text()})
	d.Sketch = wording.Columns(rows)
	for _, con := range m.Conclusions {
		a, b := f.Probability(declared, con), f.Probability(wide, con)
		if a.Err == nil && b.Err == nil && a.Drawn != b.Drawn {
			d.Severity = diag.Stop
			d.Notes = append(d.Notes, fmt.Sprintf("With the wider bounds the conclusion %q changes.", con.Name))
		}
	}
	d.Notes = append(d.Notes, "It goes away with a bound that is known and has a source, with a proper prior that falls off by itself, or with data that end the range before the bound does.")
	return d, true
}

// under is the declared analysis with another range.
func under(f *facts.Facts, c cut) (*model.Analysis, string, bool) {
	if c.low.Cmp(c.high) >= 0 {
		return nil, "", false
	}
	text := c.text()
	p, err := model.PriorFromText(f.Model, text)
	if err != nil {
		return nil, "", false
	}
	return f.Model.Declared().With(text, p), text, true
}

// number is the end of an interval that a shift is about.
func number(in posterior.Interval, end string) posterior.Number {
	if strings.HasPrefix(end, "lower") {
		return in.Low
	}
	return in.High
}
