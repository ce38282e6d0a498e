package evidence

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"wellposed/checks/design"
	"wellposed/checks/existence"
	"wellposed/checks/facts"
	"wellposed/checks/posterior"
	"wellposed/checks/posterior/longrun"
	"wellposed/parser/diag"
	"wellposed/parser/model"
)

func askedText(r *model.Report) string {
	var parts []string
	for _, a := range r.Intervals {
		parts = append(parts, string(a.Kind)+" "+level(a.Level))
	}
	return strings.Join(append(parts, r.Points...), ", ")
}

func (c *collector) reports() {
	for _, r := range c.m.Reports {
		out := Report{Name: r.Name, Formula: model.Text(r.Value), Asked: askedText(r), Mark: c.mark(r)}
		base := c.f.Posterior(c.m.Declared(), r)
		summaries := make([]facts.Summary, len(c.analyses))
		for i, a := range c.analyses {
			s := c.f.Posterior(a, r)
			summaries[i] = s
			row := Row{Analysis: a.Name, Priors: c.about(a), Median: Number{Text: "–"}, Shift: Number{Text: "–"}}
			if s.Err != nil {
				row.None = c.whyNone(a, r, s.Err)
			} else {
				row.Median, row.Law = c.number(s.Median), s.Law
				for _, in := range s.Intervals {
					row.Spans = append(row.Spans, Interval{string(in.Kind), level(in.Level), c.number(in.Low), c.number(in.High)})
				}
				if i > 0 && base.Err == nil {
					if shift, bound := design.Shift(base.Summary, s.Summary); !math.IsNaN(shift) {
						row.Shift = figure(shift, bound, diag.Bounded, "")
						row.Shift.Text = diag.Figure(shift, bound, 2)
					}
				}
			}
			out.Rows = append(out.Rows, row)
		}
		c.curves(&out, r, summaries)
		c.e.Reports = append(c.e.Reports, out)
	}
}

// whyNone says why a report has no numbers under an analysis.
func (c *collector) whyNone(a *model.Analysis, r *model.Report, err error) string {
	for _, u := range model.UnknownsIn(r.Value) {
		v := c.f.Existence(a).Of(u)
		switch {
		case v == nil:
		case v.Status == existence.DoesNotExist:
			return "no posterior"
		case v.Status == existence.NotDecided && c.waits():
			return "data awaited"
		case v.Status == existence.NotDecided:
			return "existence not decided"
		}
	}
	if c.f.Context().Err() != nil {
		return "not computed in the time allowed"
	}
	return err.Error()
}

func (c *collector) waits() bool { return len(c.m.Awaited) > 0 }

// mark is the number that a conclusion compares a reported quantity with.
func (c *collector) mark(r *model.Report) *float64 {
	for _, k := range c.m.Conclusions {
		op, ok := k.Event.(*model.Op)
		if !ok || len(op.Args) != 2 {
			continue
		}
		x, y := op.Args[0], op.Args[1]
		if model.Known(x) {
			x, y = y, x
		}
		if model.Known(y) && model.Text(x) == model.Text(r.Value) {
			if v, err := model.EvalFloat(y, 0); err == nil && !math.IsInf(v, 0) {
				return &v
			}
		}
	}
	return nil
}

// curves sketches prior and posterior densities on the reported scale, over one
// range for all analyses.
func (c *collector) curves(out *Report, r *model.Report, summaries []facts.Summary) {
	low, high := math.Inf(1), math.Inf(-1)
	laws := make([][2]*posterior.Law, len(c.analyses))
	for i, a := range c.analyses {
		if l := c.f.PriorLaw(a, r.Value); l.Err == nil {
			laws[i][0] = l.Law
		}
		if summaries[i].Err == nil {
			if l := c.f.PosteriorLaw(a, r.Value); l.Err == nil {
				laws[i][1] = l.Law
				low, high = widen(l.Law, low, high, 0.002)
			}
		}
	}
	if math.IsInf(low, 1) {
		for i := range laws {
			if laws[i][0] != nil {
				low, high = widen(laws[i][0], low, high, 0.05)
			}
		}
	}
	if !(low < high) || math.IsInf(high-low, 1) {
		return
	}
	several := 0
	for _, u := range model.UnknownsIn(r.Value) {
		several += u.Components()
	}
	for i := range laws {
		out.Rows[i].Prior = density(laws[i][0], low, high, several)
		out.Rows[i].Posterior = density(laws[i][1], low, high, several)
	}
}

func widen(l *posterior.Law, low, high, tail float64) (float64, float64) {
	a, errA := l.Quantile(tail)
	b, errB := l.Quantile(1 - tail)
	if errA != nil || errB != nil || math.IsNaN(a.Value) || math.IsNaN(b.Value) || math.IsInf(a.Value, 0) || math.IsInf(b.Value, 0) {
		return low, high
	}
	return math.Min(low, a.Value), math.Max(high, b.Value)
}

// density is a curve of differences of the distribution function, scaled to a
// height of 1; nil where there is no law, and where a value of it takes a nested
// integral (a combination of several unknowns without a closed form).
func density(l *posterior.Law, low, high float64, several int) []longrun.Point {
	if l == nil {
		return nil
	}
	const bins = 64
	if n, err := l.Below(low + (high-low)/2); err != nil || several > 1 && n.Method != "closed form" {
		return nil
	}
	var out []longrun.Point
	before, top := math.NaN(), 0.0
	for i := 0; i <= bins; i++ {
		x := low + (high-low)*float64(i)/bins
		below, err := l.Below(x)
		if err != nil || math.IsNaN(below.Value) {
			return nil
		}
		if i > 0 {
			y := math.Max(0, below.Value-before)
			top = math.Max(top, y)
			out = append(out, longrun.Point{X: x - (high-low)/(2*bins), Y: y})
		}
		before = below.Value
	}
	if top <= 0 {
		return nil
	}
	for i := range out {
		out[i].Y /= top
	}
	return out
}

func (c *collector) conclusions() {
	for _, k := range c.m.Conclusions {
		out := Conclusion{Name: k.Name, Rule: conclusionText(k)}
		yes, no := false, false
		for _, a := range c.analyses {
			p := c.f.Probability(a, k)
			row := Decision{Analysis: a.Name, Chance: Number{Text: "–"}, Drawn: "–"}
			switch {
			case p.Err != nil:
				row.None = c.whyNone(a, &model.Report{Value: k.Event}, p.Err)
			case p.Drawn:
				row.Chance, row.Drawn, yes = c.number(p.Number), "yes", true
			default:
				row.Chance, row.Drawn, no = c.number(p.Number), "no", true
			}
			out.Rows = append(out.Rows, row)
		}
		out.Flips = yes && no
		c.e.Conclusions = append(c.e.Conclusions, out)
	}
}

func conclusionText(k *model.Conclusion) string {
	text := "P(" + model.Text(k.Event) + ") " + k.Op + " " + model.Text(&model.Number{Value: k.Threshold})
	for _, m := range k.More {
		text += " and P(" + model.Text(m.Event) + ") " + m.Op + " " + model.Text(&model.Number{Value: m.Threshold})
	}
	return text
}

// ranges cuts an improper prior off further and further out, where the posterior
// does not exist: the reported bound follows the cut.
func (c *collector) ranges() {
	for _, a := range c.analyses {
		for _, v := range c.f.Existence(a).Verdicts {
			if v.Status != existence.DoesNotExist || len(v.Escape) == 0 || c.f.Context().Err() != nil {
				continue
			}
			e := v.Escape[0]
			if e.Unknown == nil || e.Step != "" || !e.Unknown.Scalar() {
				continue
			}
			c.range1(a, v, e)
		}
	}
}

func (c *collector) range1(a *model.Analysis, v *existence.Verdict, e existence.Escape) {
	p := c.f.Resolved(a).PriorOf(e.Unknown)
	if p == nil || p.Joint || len(p.About) != 1 || p.Truncated != nil || p.Rule != nil {
		return
	}
	var report *model.Report
	for _, r := range c.m.Reports {
		for _, u := range model.UnknownsIn(r.Value) {
			if slices.Contains(v.Unknowns, u) && report == nil && len(r.Intervals) > 0 {
				report = r
			}
		}
	}
	if report == nil {
		return
	}
	out := Ranges{Analysis: a.Name, Prior: p.Text, Toward: e.Unknown.Name + " = " + strings.Replace(e.Toward, "inf", "∞", 1), Quantity: string(report.Intervals[0].Kind) + " " + level(report.Intervals[0].Level) + " of " + report.Name}
	for _, text := range widening(p, e) {
		q, err := model.PriorFromText(c.m, text)
		if err != nil {
			return
		}
		s, err := posterior.Summarize(c.f.Context(), c.f.Resolved(a).With(text, q), report)
		if err != nil {
			break
		}
		in := s.Intervals[0]
		n := in.High
		if in.Kind == model.Lower {
			n = in.Low
		}
		out.Steps = append(out.Steps, Step{text, c.number(n)})
	}
	if len(out.Steps) > 1 {
		c.e.Ranges = append(c.e.Ranges, out)
	}
}

// widening are uniform laws over wider and wider ranges whose limit is an improper
// prior: symmetric about 0 where the scale has no end, else from the end.
func widening(p *model.Prior, e existence.Escape) []string {
	x := e.Unknown.Name
	target := model.Text(p.Target)
	itself := target == x
	number := func(d *model.Dist, label string, want float64) bool {
		arg := d.Arg(label)
		if arg == nil || !model.Known(arg) {
			return false
		}
		v, err := model.EvalFloat(arg, 0)
		return err == nil && v == want
	}
	switch {
	case p.Form == model.ByFlat:
	case p.Form == model.ByDist && itself && p.Dist.Spec.Name == "Beta" && number(p.Dist, "a", 0) && number(p.Dist, "b", 0):
		target, itself = "logit("+x+")", false
	case p.Form == model.ByKernel && itself && model.Text(p.Kernel) == "1 / "+x:
		target, itself = "log("+x+")", false
	default:
		return nil
	}
	unbounded := strings.HasPrefix(target, "log(") || strings.HasPrefix(target, "logit(") || strings.HasPrefix(target, "probit(")
	var out []string
	for _, k := range []int{1, 2, 4, 8} {
		switch {
		case unbounded:
			out = append(out, fmt.Sprintf("%s as Uniform(-%d, %d)", target, 5*k, 5*k))
		case e.Unknown.Support.Low == nil && itself:
			out = append(out, fmt.Sprintf("%s as Uniform(-%s, %s)", target, digits(k), digits(k)))
		case e.Unknown.Support.Low != nil && e.Unknown.Support.Low.Sign() == 0 && e.Toward == "inf":
			out = append(out, fmt.Sprintf("%s as Uniform(0, %s)", target, digits(k)))
		}
	}
	return out
}

func digits(k int) string { return "1" + strings.Repeat("0", k) }
