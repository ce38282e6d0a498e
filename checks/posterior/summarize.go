package posterior

import (
	"context"
	"math"

	"wellposed/parser/diag"
	"wellposed/parser/model"
)

// Summarize is the posterior law of a reported quantity under an analysis.
// Errors are ErrAwaited, ErrNoPosterior, ErrNoPrior, *UnresolvedError and
// *ReachError, or that of the context.
func Summarize(ctx context.Context, a *model.Analysis, r *model.Report) (s *Summary, err error) {
	defer catch(&err)
	p := assemble(ctx, a, false)
	q, err := p.lawOf(r.Value)
	if err != nil {
		return nil, err
	}
	s, err = q.summarise(a, r)
	if err == nil && q.mix != nil && s.SD.Value != s.SD.Value && (q.mix.split == nil || len(r.Points) > 0) {
		// The tails carry the moments: look further out, which takes long for several
		// unknowns and is done for them only where points are asked for.
		p.depth = 300
		if deep, deepErr := p.lawOf(r.Value); deepErr == nil {
			s.Mean, s.SD = deep.moments()
		}
	}
	return s, err
}

// Law is the law of a quantity, for pictures and further questions.
type Law struct{ q *quantity }

// LawOf is the posterior law of an expression.
func LawOf(ctx context.Context, a *model.Analysis, e model.Expr) (l *Law, err error) {
	defer catch(&err)
	q, err := assemble(ctx, a, false).lawOf(e)
	if err != nil {
		return nil, err
	}
	return &Law{q}, nil
}

// Induced is the law that the priors in force give an expression before any
// data: ErrImproper when they have none. Its numbers are what a prior means on a
// reported scale.
func Induced(ctx context.Context, a *model.Analysis, e model.Expr) (l *Law, err error) {
	defer catch(&err)
	q, err := assemble(ctx, a, true).lawOf(e)
	if err != nil {
		return nil, improper(err)
	}
	return &Law{q}, nil
}

func improper(err error) error {
	if isNoPosterior(err) {
		return ErrImproper
	}
	return err
}

// Quantile is the p-quantile, 0 < p < 1.
func (l *Law) Quantile(p float64) (n Number, err error) {
	defer catch(&err)
	return l.q.quantile(p, 1-p), nil
}

// Below is P(quantity ≤ t), Above P(quantity > t), each accurate when small.
func (l *Law) Below(t float64) (n Number, err error) {
	defer catch(&err)
	low, _, e := l.q.below(t)
	return Number{low, e, l.q.how, l.q.method}, nil
}

// Above is described at Below.
func (l *Law) Above(t float64) (n Number, err error) {
	defer catch(&err)
	_, up, e := l.q.below(t)
	return Number{up, e, l.q.how, l.q.method}, nil
}

// Moments are mean and sd, NaN where they do not exist or were not found.
func (l *Law) Moments() (mean, sd Number) { return l.q.moments() }

// Probability is the posterior probability of an event: comparisons joined by
// and, or and not.
func Probability(ctx context.Context, a *model.Analysis, event model.Expr) (n Number, err error) {
	defer catch(&err)
	return assemble(ctx, a, false).probability(event)
}

// PriorProbability is the probability of an event before any data.
func PriorProbability(ctx context.Context, a *model.Analysis, event model.Expr) (n Number, err error) {
	defer catch(&err)
	n, err = assemble(ctx, a, true).probability(event)
	return n, improper(err)
}

func (p *problem) probability(event model.Expr) (Number, error) {
	switch e := event.(type) {
	case *model.LetRef:
		return p.probability(e.Let.Value)
	case *model.Op:
		switch e.Op {
		case "<", "<=", ">", ">=":
			return p.comparison(e)
		case "not":
			n, err := p.probability(e.Args[0])
			n.Value = 1 - n.Value
			return n, err
		case "and", "or":
			return p.joint(e)
		}
	}
	return nan(), reach("the event %s is no comparison", model.Text(event))
}

// comparison is P(x < y): of x against a known y, else of the difference.
func (p *problem) comparison(e *model.Op) (Number, error) {
	x, y, up := e.Args[0], e.Args[1], e.Op == ">" || e.Op == ">="
	if model.Known(x) {
		x, y, up = y, x, !up
	}
	t := 0.0
	if model.Known(y) {
		t = float(y, 0)
	} else {
		x = &model.Op{Op: "-", Args: []model.Expr{x, y}}
	}
	q, err := p.lawOf(x)
	if err != nil {
		return nan(), err
	}
	low, high, bound := q.below(t)
	n := Number{low, bound, q.how, q.method}
	if up {
		n.Value = high
	}
	return n, nil
}

// joint handles two comparisons of one quantity with known numbers, and events
// about unknowns that are independent.
func (p *problem) joint(e *model.Op) (Number, error) {
	a, okA := limits(e.Args[0])
	b, okB := limits(e.Args[1])
	if okA && okB && model.Text(a.of) == model.Text(b.of) {
		q, err := p.lawOf(a.of)
		if err != nil {
			return nan(), err
		}
		low, high := math.Max(a.low, b.low), math.Min(a.high, b.high)
		if e.Op == "or" {
			inside := &model.Op{Op: "and", Args: []model.Expr{negated(e.Args[0]), negated(e.Args[1])}}
			n, err := p.joint(inside)
			n.Value = 1 - n.Value
			return n, err
		}
		if low >= high {
			return Number{0, 0, diag.Proved, "closed form"}, nil
		}
		l1, u1, bound := q.below(low)
		l2, u2, _ := q.below(high)
		v := l2 - l1
		if l1 > 0.5 {
			v = u1 - u2
		}
		return Number{math.Max(0, v), 2 * bound, q.how, q.method}, nil
	}
	first, _ := p.group(p.slotsOf(e.Args[0]))
	second := p.slotsOf(e.Args[1])
	for _, s := range second {
		for _, t := range first {
			if s == t {
				return nan(), reach("the event %s joins quantities that hang together", model.Text(e))
			}
		}
	}
	x, err := p.probability(e.Args[0])
	if err != nil {
		return nan(), err
	}
	y, err := p.probability(e.Args[1])
	if err != nil {
		return nan(), err
	}
	n := Number{x.Value * y.Value, x.Error + y.Error, x.How, x.Method}
	if e.Op == "or" {
		n.Value = x.Value + y.Value - x.Value*y.Value
	}
	if x.How != y.How {
		n.How = weaker(x.How, y.How)
		n.Method = x.Method + "; " + y.Method
	}
	return n, nil
}

func weaker(a, b diag.How) diag.How {
	for _, h := range []diag.How{diag.NotDecided, diag.Indicated, diag.Bounded} {
		if a == h || b == h {
			return h
		}
	}
	return a
}

type range1 struct {
	of        model.Expr
	low, high float64
}

// limits reads a comparison of an expression with a known number.
func limits(e model.Expr) (range1, bool) {
	op, ok := e.(*model.Op)
	if !ok || len(op.Args) != 2 {
		return range1{}, false
	}
	x, y, up := op.Args[0], op.Args[1], op.Op == ">" || op.Op == ">="
	if !up && op.Op != "<" && op.Op != "<=" {
		return range1{}, false
	}
	if model.Known(x) {
		x, y, up = y, x, !up
	}
	if !model.Known(y) || model.Known(x) {
		return range1{}, false
	}
	t := float(y, 0)
	if up {
		return range1{x, t, inf}, true
	}
	return range1{x, -inf, t}, true
}

// negated turns a comparison round.
func negated(e model.Expr) model.Expr {
	if op, ok := e.(*model.Op); ok && len(op.Args) == 2 {
		if other := map[string]string{"<": ">=", "<=": ">", ">": "<=", ">=": "<"}[op.Op]; other != "" {
			return &model.Op{Op: other, Args: op.Args}
		}
	}
	return &model.Op{Op: "not", Args: []model.Expr{e}}
}

// Drawn says whether a conclusion is drawn, with the probability of its first
// clause.
func Drawn(ctx context.Context, a *model.Analysis, c *model.Conclusion) (bool, Number, error) {
	first, err := Probability(ctx, a, c.Event)
	if err != nil {
		return false, first, err
	}
	drawn := holds(first.Value, c.Op, c.Threshold)
	for _, m := range c.More {
		n, err := Probability(ctx, a, m.Event)
		if err != nil {
			return false, first, err
		}
		drawn = drawn && holds(n.Value, m.Op, m.Threshold)
	}
	return drawn, first, nil
}
