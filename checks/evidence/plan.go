package evidence

import (
	"context"
	"fmt"
	"math"

	"wellposed/checks/design"
	"wellposed/checks/posterior/longrun"
	"wellposed/parser/diag"
	"wellposed/parser/model"
)

// design collects the stage before the data, when the file asks about it: it
// awaits data, supposes values, or promises something about outcomes.
func (c *collector) design() {
	asks := c.waits() || len(c.m.Supposed) > 0
	for _, p := range c.m.Promises {
		asks = asks || p.Kind != model.RivalsAgree
	}
	if !asks {
		return
	}
	d := &Design{Hindsight: !c.waits(), Counts: []string{}}
	c.e.Design = d
	for _, a := range c.analyses {
		b, err := c.f.Breaks(a)
		if err != nil {
			if a.Name == "declared" {
				d.Trouble = err.Error()
				return
			}
			continue
		}
		if a.Name == "declared" {
			for _, cell := range b.Cells {
				text := cell.Name
				if cell.Trials > 0 {
					text += fmt.Sprintf(" of %d", cell.Trials)
				}
				d.Counts = append(d.Counts, text)
			}
		}
		row := DesignBreaks{Analysis: a.Name, Text: b.Text}
		if b.Undecided > 0 {
			row.Text += "; some outcomes are not decided"
		}
		for _, ch := range b.Chances {
			if ch.Err == nil {
				row.Plans = append(row.Plans, ch.Plan.Text)
				row.Chances = append(row.Chances, figure(ch.Value, ch.Error+ch.Undecided, b.How, "enumeration"))
			}
		}
		d.Breaks = append(d.Breaks, row)
	}
	plans := c.plans()
	for _, k := range c.m.Conclusions {
		for _, a := range c.analyses {
			claims := c.f.Claims(a, k)
			if claims.Err != nil {
				continue
			}
			row := DesignChance{Analysis: a.Name, Conclusion: k.Name}
			for _, p := range plans {
				if ch := claims.Under(p); ch.Err == nil {
					row.Plans = append(row.Plans, p.Text)
					row.Chances = append(row.Chances, figure(ch.Value, ch.Error+ch.Undecided, diag.Bounded, claims.Method))
				}
			}
			if len(row.Plans) > 0 {
				d.Chances = append(d.Chances, row)
			}
		}
	}
	c.coverage(d)
	d.Sizes = c.sizes()
}

// plans are the planning values of the file and those that promises fix.
func (c *collector) plans() []design.Planned {
	out := design.Plans(c.m)
	for _, p := range c.m.Promises {
		if p.Kind != model.ConclusionChance {
			continue
		}
		at := design.Settled(p.At)
		known := false
		for _, q := range out {
			known = known || q.Text == at.Text
		}
		if !known {
			out = append(out, at)
		}
	}
	return out
}

// coverage draws long-run coverage over the promised range, or over the span of
// the planning values.
func (c *collector) coverage(d *Design) {
	for _, r := range c.m.Reports {
		var over *model.Unknown
		from, to := math.NaN(), math.NaN()
		for _, p := range c.m.Promises {
			if p.Kind == model.LongRunCoverage && p.Report != nil && p.Report.Name == r.Name && p.From != nil && p.To != nil {
				over = p.Over
				from, _ = p.From.Float64()
				to, _ = p.To.Float64()
			}
		}
		if math.IsNaN(from) {
			from, to = math.Inf(1), math.Inf(-1)
			for _, p := range design.Plans(c.m) {
				if len(p.Settings) == 1 {
					over = p.Settings[0].Unknown
					from, to = math.Min(from, p.Settings[0].Value), math.Max(to, p.Settings[0].Value)
				}
			}
		}
		if !(from < to) || len(r.Intervals) == 0 {
			continue
		}
		for _, a := range c.analyses {
			cover := c.f.Coverage(a, r, over, from, to)
			if cover.Err != nil {
				continue
			}
			name := r.Name
			if over != nil {
				name = over.Name
			}
			nominal, _ := r.Intervals[0].Level.Float64()
			d.Curves = append(d.Curves, Curve{
				Analysis: a.Name, Report: r.Name, Interval: string(r.Intervals[0].Kind) + " " + level(r.Intervals[0].Level), Over: name, From: from, To: to, Nominal: nominal,
				Lowest:   figure(cover.Lowest, cover.Error, cover.How, "enumeration, both sides of every jump"),
				LowestAt: cover.Side.String() + " " + name + " = " + design.Plain(cover.LowestAt),
				Average:  figure(cover.Average, cover.Error, cover.How, "enumeration, closed form"), Points: thin(cover.Curve),
			})
		}
	}
}

// thin keeps both sides of jumps and drops points that a line would not show.
func thin(points []longrun.Point) []longrun.Point {
	if len(points) <= 600 {
		return points
	}
	step := float64(len(points)) / 600
	var out []longrun.Point
	for i := 0; i < 600; i++ {
		// The lowest point of each stretch, so that no valley is lost.
		best := points[int(float64(i)*step)]
		for _, p := range points[int(float64(i)*step):min(len(points), int(float64(i+1)*step)+1)] {
			if p.Y < best.Y {
				best = p
			}
		}
		out = append(out, best)
	}
	return out
}

// sizes are the smallest demonstrations without failure, for a conclusion that a
// probability is below a limit.
func (c *collector) sizes() *Sizes {
	for _, k := range c.m.Conclusions {
		limit, credible, ok := design.Demonstration(c.f.Prospective(c.m.Declared()), k)
		if !ok {
			continue
		}
		out := &Sizes{Claim: conclusionText(k)}
		add := func(name string, n int) {
			row := SizeRow{Analysis: name, Trials: "none up to 10,000", Risk: Number{Text: "–"}}
			if n > 0 {
				row.Trials = fmt.Sprint(n)
				row.Risk = figure(math.Pow(1-limit, float64(n)), 1e-12, diag.Proved, "closed form")
			}
			out.Rows = append(out.Rows, row)
		}
		add("classical success run", longrun.ClassicalRun(limit, credible))
		for _, a := range c.analyses {
			d := design.Conjugacy(c.f.Prospective(a))
			if d == nil {
				continue
			}
			add(a.Name, d.Kernel.SuccessRun(context.Background(), limit, credible, 10000))
		}
		return out
	}
	return nil
}
