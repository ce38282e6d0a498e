package design

import (
	"context"
	"errors"
	"fmt"
	"math"

	"wellposed/checks/posterior"
	"wellposed/checks/posterior/longrun"
	"wellposed/parser/diag"
	"wellposed/parser/model"
)

// MaxComputed bounds how many outcomes are taken through the numeric engine.
const MaxComputed = 2000

// Claims says for every outcome of a plan whether a conclusion is drawn.
type Claims struct {
	Conclusion *model.Conclusion
	cells      []Cell
	counts     []longrun.Count
	direct     *Conjugate
	drawn      func(y int) bool
	status     map[string]byte
	// Method says how the posterior probabilities were made.
	Method string
}

const drawn = 'd'

// Deciding finds the outcomes that lead to a conclusion. An outcome that leaves no
// posterior leads to none. The analysis is of a prospective model, its rules
// resolved; b are its breaks.
func Deciding(ctx context.Context, a *model.Analysis, b *Breaks, c *model.Conclusion) (*Claims, error) {
	r := &Claims{Conclusion: c, cells: b.Cells}
	if d := Conjugacy(a); d != nil {
		if yes := closedForm(d, c); yes != nil {
			r.direct, r.drawn, r.Method = d, yes, "closed form, outcomes enumerated"
			return r, nil
		}
	}
	for _, cell := range b.Cells {
		if cell.Trials == 0 {
			return nil, errors.New("a Poisson count has no last outcome to enumerate")
		}
		r.counts = append(r.counts, longrun.Count{Trials: cell.Trials})
	}
	r.status = map[string]byte{}
	if two := twoArms(a, b, c); two != nil {
		r.Method = "exact recurrence between two Beta laws, outcomes enumerated"
		_, err := longrun.Enumerate(ctx, r.counts, MaxCombinations, func(y []int) error {
			if s := two(y); s != 0 && b.status[key(y)] == 0 {
				r.status[key(y)] = s
			}
			return nil
		})
		return r, err
	}
	r.Method = "posterior probability of every outcome, outcomes enumerated"
	_, err := longrun.Enumerate(ctx, r.counts, MaxComputed, func(y []int) error {
		if b.status[key(y)] != 0 {
			if b.status[key(y)] == undecided {
				r.status[key(y)] = undecided
			}
			return nil
		}
		switch yes, sure, err := Drawn(ctx, Given(a, b.Cells, y), c); {
		case err != nil && ctx.Err() != nil:
			return ctx.Err()
		case err != nil || !sure:
			r.status[key(y)] = undecided
		case yes:
			r.status[key(y)] = drawn
		}
		return nil
	})
	return r, err
}

// Drawn says whether a conclusion is drawn; sure is false when the error bound of
// the posterior probability reaches the threshold.
func Drawn(ctx context.Context, a *model.Analysis, c *model.Conclusion) (yes, sure bool, err error) {
	yes, sure = true, true
	clauses := append([]model.Clause{{Event: c.Event, Op: c.Op, Threshold: c.Threshold}}, c.More...)
	for _, clause := range clauses {
		n, err := posterior.Probability(ctx, a, clause.Event)
		if err != nil {
			return false, false, err
		}
		threshold, _ := clause.Threshold.Float64()
		margin := n.Value - threshold
		if clause.Op == "<" || clause.Op == "<=" {
			margin = -margin
		}
		switch {
		case math.Abs(margin) <= n.Error || math.IsNaN(n.Value):
			sure = false
		case margin < 0:
			return false, true, nil
		}
	}
	return yes, sure, nil
}

// closedForm is the rule of a conclusion about the unknown itself; nil when it is
// of another form.
func closedForm(d *Conjugate, c *model.Conclusion) func(y int) bool {
	if len(c.More) > 0 {
		return nil
	}
	op, ok := c.Event.(*model.Op)
	if !ok || len(op.Args) != 2 {
		return nil
	}
	x, y, sign := plain(op.Args[0]), op.Args[1], op.Op
	if model.Known(x) {
		x, y, sign = plain(y), op.Args[0], map[string]string{"<": ">", "<=": ">=", ">": "<", ">=": "<="}[sign]
	}
	u, ok := x.(*model.UnknownRef)
	if !ok || u.Unknown != d.Unknown || !model.Known(y) || sign == "" {
		return nil
	}
	limit, err := model.EvalFloat(y, 0)
	if err != nil {
		return nil
	}
	threshold, _ := c.Threshold.Float64()
	below := sign == "<" || sign == "<="
	return func(y int) bool {
		v, ok := d.Kernel.Below(d.Plan, y, limit)
		if !ok {
			return false
		}
		if !below {
			v = 1 - v
		}
		switch c.Op {
		case ">=":
			return v >= threshold
		case ">":
			return v > threshold
		case "<=":
			return v <= threshold
		}
		return v < threshold
	}
}

// twoArms is the rule of a conclusion that compares the probabilities of two
// independent counts with the same kernel as prior; nil when it is another one.
func twoArms(a *model.Analysis, b *Breaks, c *model.Conclusion) func(y []int) byte {
	op, ok := c.Event.(*model.Op)
	if !ok || len(op.Args) != 2 || len(c.More) > 0 || len(b.Cells) != 2 {
		return nil
	}
	if op.Op != ">" && op.Op != ">=" && op.Op != "<" && op.Op != "<=" {
		return nil
	}
	arms := [2]*Conjugate{directly(a, b.Cells[0]), directly(a, b.Cells[1])}
	if arms[0] == nil || arms[1] == nil || !arms[0].Known || !arms[1].Known || arms[0].Kernel != arms[1].Kernel || arms[0].Unknown == arms[1].Unknown {
		return nil
	}
	of := func(e model.Expr) int {
		if r, ok := plain(e).(*model.UnknownRef); ok {
			for i, d := range arms {
				if d.Unknown == r.Unknown {
					return i
				}
			}
		}
		return -1
	}
	first, second := of(op.Args[0]), of(op.Args[1])
	if first < 0 || second < 0 || first == second {
		return nil
	}
	if op.Op == "<" || op.Op == "<=" {
		first, second = second, first
	}
	threshold, _ := c.Threshold.Float64()
	return func(y []int) byte {
		weight := func(i int) (float64, float64) {
			k := arms[i].Kernel
			return k.A + float64(y[i]), k.B + float64(arms[i].Plan.Trials-y[i])
		}
		p, q := weight(first)
		v, w := weight(second)
		value, bound, ok := longrun.Greater(p, q, v, w)
		margin := value - threshold
		if c.Op == "<" || c.Op == "<=" {
			margin = -margin
		}
		switch {
		case !ok || math.Abs(margin) <= bound:
			return undecided
		case margin > 0:
			return drawn
		}
		return 0
	}
}

// Under is the probability that the conclusion is drawn under a planning value.
func (r *Claims) Under(p Planned) Chance {
	c := Chance{Plan: p}
	arms := make([]longrun.Arm, len(r.cells))
	for i, cell := range r.cells {
		if arms[i], c.Err = cell.arm(p); c.Err != nil {
			return c
		}
	}
	if r.drawn != nil {
		c.Value, c.Error, c.Err = longrun.Chance(arms[0].Count, r.drawn, arms[0].Value)
		return c
	}
	masses := longrun.Masses(arms)
	_, c.Err = longrun.Enumerate(context.Background(), r.counts, MaxCombinations, func(y []int) error {
		switch r.status[key(y)] {
		case drawn:
			c.Value += longrun.Product(masses, y)
		case undecided:
			c.Undecided += longrun.Product(masses, y)
		}
		return nil
	})
	c.Error = 1e-10
	return c
}

// Covering is the long-run coverage of a reported interval as the true value of
// the count's parameter runs over a range.
func Covering(ctx context.Context, a *model.Analysis, report *model.Report, over *model.Unknown, from, to float64) (*longrun.Coverage, diag.How, error) {
	d := Direct(a)
	if d == nil {
		return nil, diag.NotDecided, errors.New("long-run coverage is enumerated for one count whose parameter is an unknown itself")
	}
	if over != nil && over != d.Unknown {
		return nil, diag.NotDecided, fmt.Errorf("long-run coverage runs along %s, not %s", d.Unknown.Name, over.Name)
	}
	if r, ok := plain(report.Value).(*model.UnknownRef); !ok || r.Unknown != d.Unknown {
		return nil, diag.NotDecided, fmt.Errorf("long-run coverage is enumerated for %s itself", d.Unknown.Name)
	}
	n, err := d.Plan.Outcomes(to, longrun.MaxOutcomes)
	if err != nil {
		return nil, diag.NotDecided, err
	}
	asked := report.Intervals[0]
	how := diag.Bounded
	var limits []longrun.Limits
	if tails, ok := tailsOf(asked); ok && d.Known {
		limits = d.Kernel.Intervals(d.Plan, tails, n)
	} else {
		if n > MaxComputed {
			return nil, diag.NotDecided, fmt.Errorf("%d outcomes are more than the engine is asked for", n)
		}
		b, err := Breaking(ctx, a)
		if err != nil {
			return nil, diag.NotDecided, err
		}
		for y := range n {
			if ctx.Err() != nil {
				return nil, diag.NotDecided, ctx.Err()
			}
			if b.status[key([]int{y})] == bad {
				limits = append(limits, longrun.Limits{None: true})
				continue
			}
			s, err := posterior.Summarize(ctx, Given(a, b.Cells, []int{y}), report)
			if err != nil {
				return nil, diag.NotDecided, fmt.Errorf("after %s = %d: %w", d.Cell.Name, y, err)
			}
			how = diag.Indicated
			limits = append(limits, longrun.Limits{Low: s.Intervals[0].Low.Value, High: s.Intervals[0].High.Value})
		}
	}
	c, err := longrun.Cover(ctx, d.Plan, limits, from, to)
	return c, how, err
}

func tailsOf(asked model.Asked) (longrun.Tails, bool) {
	level, _ := asked.Level.Float64()
	switch asked.Kind {
	case model.Central:
		return longrun.Tails{Below: (1 - level) / 2, Above: (1 - level) / 2}, true
	case model.Upper:
		return longrun.Tails{Above: 1 - level}, true
	case model.Lower:
		return longrun.Tails{Below: 1 - level}, true
	}
	return longrun.Tails{}, false
}

// Coverage is a long-run coverage with how it was established.
type Coverage struct {
	*longrun.Coverage
	How diag.How
}

// Demonstration reads a conclusion as a demonstration that a probability is below
// a limit with a credibility; ok is false when it is another one.
func Demonstration(a *model.Analysis, c *model.Conclusion) (limit, credibility float64, ok bool) {
	d := Direct(a)
	if d == nil || d.Plan.Trials == 0 || len(c.More) > 0 || c.Op != ">=" && c.Op != ">" {
		return 0, 0, false
	}
	op, isOp := c.Event.(*model.Op)
	if !isOp || len(op.Args) != 2 || op.Op != "<" && op.Op != "<=" || !model.Known(op.Args[1]) {
		return 0, 0, false
	}
	if u, isRef := plain(op.Args[0]).(*model.UnknownRef); !isRef || u.Unknown != d.Unknown {
		return 0, 0, false
	}
	limit, err := model.EvalFloat(op.Args[1], 0)
	credibility, _ = c.Threshold.Float64()
	return limit, credibility, err == nil && limit > 0 && limit < 1 && credibility > 0 && credibility < 1
}
