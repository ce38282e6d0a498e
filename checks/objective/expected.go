package objective

import (
	"context"
	"errors"
	"fmt"
	"math"
	"math/big"
	"sync"

	sy "wellposed/checks/objective/symbolic"
	"wellposed/parser/model"
)

// piece is a part of the sample space of one row: an interval or counts with a
// density, or one event with a probability.
type piece struct {
	log      sy.Expr
	event    bool
	discrete bool
	first    int     // smallest count
	top      sy.Expr // largest count, nil for infinite
	low      sy.Expr // ends of an interval, nil for infinite
	high     sy.Expr
	centre   sy.Expr
	width    sy.Expr
}

// mostExpectedRows bounds the different rows whose information is an expectation
// found by quadrature or summation.
const mostExpectedRows = 60

// expected adds the information of an observation by expectation over the sample
// space of each row: mixtures, truncation, limits of detection.
func (s *space) expected(ctx context.Context, in *information, o *model.Observation, rows []int) error {
	if len(o.What) != 1 || o.Reading != model.Values || o.Weight != nil {
		return errors.New("the information of this form of observation is not followed")
	}
	y := &sy.Symbol{Name: "value of y"}
	upper, lower, err := s.limits(in, o, rows)
	if err != nil {
		return err
	}
	for _, group := range s.patterns(o.Dist, rows) {
		pieces, err := s.pieces(o, group[0], y, lower, upper)
		if err != nil {
			return err
		}
		var columns []*sy.Symbol
		seen := map[string]bool{}
		for _, p := range pieces {
			for _, e := range []sy.Expr{p.log, p.top, p.low, p.high, p.centre, p.width} {
				if e == nil {
					continue
				}
				for _, c := range s.dataIn(e) {
					if !seen[c.Name] {
						seen[c.Name] = true
						columns = append(columns, c)
					}
				}
			}
		}
		distinct, counts := [][]*big.Rat{nil}, []int{len(group)}
		if len(columns) > 0 {
			if distinct, counts, err = s.distinctRows(columns, group); err != nil {
				return err
			}
		}
		if len(distinct) > mostExpectedRows {
			return fmt.Errorf("%d different rows are more than the %d whose information is found by quadrature", len(distinct), mostExpectedRows)
		}
		for i, values := range distinct {
			if err := ctx.Err(); err != nil {
				return err
			}
			by := map[string]sy.Expr{}
			for j, c := range columns {
				by[c.Name] = sy.Rat(values[j])
			}
			if err := s.addExpectation(in, pieces, by, y, counts[i]); err != nil {
				return err
			}
		}
	}
	in.say(fmt.Sprintf("E[score scoreᵀ] over the sample space of each row, by quadrature or summation, refined until two levels agree to %.0e", numericError/10))
	in.exact = false
	return nil
}

// limits are the limits of detection and of follow-up that the plan is taken to
// have: the recorded limit where all limited rows share one.
func (s *space) limits(in *information, o *model.Observation, rows []int) (upper, lower *big.Rat, err error) {
	if upper, err = s.limit(in, o, rows); err != nil {
		return nil, nil, err
	}
	if o.Left == nil {
		return upper, nil, nil
	}
	for _, row := range rows {
		v, ok := exactIn(o.What[0], row)
		if !ok {
			return nil, nil, errors.New("the recorded values are not there yet, so the limit of detection is not known")
		}
		c, ok := conditionIn(o.Left, row)
		if !ok {
			return nil, nil, errors.New("the condition of censoring cannot be read row by row")
		}
		if !c {
			continue
		}
		if lower != nil && lower.Cmp(v) != 0 {
			return nil, nil, errors.New("the limits of detection differ, so the plan that set them is not known: the information needs the limit of every reading, those above it included")
		}
		lower = v
	}
	if lower == nil {
		in.assume("no reading was below a limit, so the plan is read as one without a limit")
	} else {
		in.assume(fmt.Sprintf("every reading below %s would have been recorded as such (one limit of detection)", lower.RatString()))
	}
	return upper, lower, nil
}

// pieces of the sample space of one row.
func (s *space) pieces(o *model.Observation, row int, y *sy.Symbol, lower, upper *big.Rat) ([]piece, error) {
	if o.Dist.Spec.Name == "Mixture" {
		if o.Truncated != nil || lower != nil || upper != nil {
			return nil, errors.New("a truncated or censored mixture is not followed")
		}
		return s.mixture(o.Dist, row, y)
	}
	h, err := s.shapeOf(o.Dist, row, sy.Sym(y))
	if err != nil {
		return nil, err
	}
	if h.atom != nil {
		return nil, errors.New("a point has no information")
	}
	base := piece{log: h.log, discrete: h.discrete, top: h.top, low: h.low, high: h.high, centre: h.centre, width: h.width}
	if o.Truncated != nil {
		if lower != nil || upper != nil {
			return nil, errors.New("censoring under truncation is not followed")
		}
		return s.truncate(o, row, y, h, base)
	}
	if lower == nil && upper == nil {
		return []piece{base}, nil
	}
	if h.discrete || h.cdf == nil {
		return nil, fmt.Errorf("the information of %s under censoring is not followed", o.Dist.Spec.Name)
	}
	var out []piece
	if lower != nil {
		base.low = sy.Rat(lower)
		out = append(out, piece{event: true, log: sy.Log(h.cdf(sy.Rat(lower)))})
	}
	if upper != nil {
		base.high = sy.Rat(upper)
		out = append(out, piece{event: true, log: sy.Log(sy.Sub(sy.One, h.cdf(sy.Rat(upper))))})
	}
	return append(out, base), nil
}

// truncate restricts a law to a known interval.
func (s *space) truncate(o *model.Observation, row int, y *sy.Symbol, h *shape, base piece) ([]piece, error) {
	end := func(e model.Expr) (*big.Rat, error) {
		if c, ok := e.(*model.Constant); e == nil || ok && c.Name != "pi" {
			return nil, nil
		}
		if op, ok := e.(*model.Op); ok && op.Op == "neg" {
			if c, ok := op.Args[0].(*model.Constant); ok && c.Name == "inf" {
				return nil, nil
			}
		}
		v, ok := exactIn(e, row)
		if !ok {
			return nil, errors.New("the ends of the truncation are not known numbers")
		}
		return v, nil
	}
	low, err := end(o.Truncated.Low)
	if err != nil {
		return nil, err
	}
	high, err := end(o.Truncated.High)
	if err != nil {
		return nil, err
	}
	if !h.discrete {
		if h.cdf == nil {
			return nil, fmt.Errorf("the information of a truncated %s is not followed", o.Dist.Spec.Name)
		}
		below, upto := sy.Zero, sy.One
		if low != nil {
			below, base.low = h.cdf(sy.Rat(low)), sy.Rat(low)
		}
		if high != nil {
			upto, base.high = h.cdf(sy.Rat(high)), sy.Rat(high)
		}
		base.log = sy.Sub(base.log, sy.Log(sy.Sub(upto, below)))
		return []piece{base}, nil
	}
	first, last := 0, -1
	if low != nil {
		// Both ends of a truncation belong to the range of a count.
		first = ceiling(low)
	}
	if high != nil {
		if last = ceiling(high); !high.IsInt() {
			last--
		}
	}
	at := func(k int) sy.Expr {
		return sy.Exp(sy.Substitute(h.log, map[string]sy.Expr{y.Name: sy.Int(int64(k))}))
	}
	mass := sy.One
	switch {
	case last >= 0 && last-first <= 100:
		mass = sy.Zero
		for k := max(first, 0); k <= last; k++ {
			mass = sy.Add(mass, at(k))
		}
	case last < 0 && first <= 100:
		for k := range max(first, 0) {
			mass = sy.Sub(mass, at(k))
		}
	default:
		return nil, errors.New("the truncation leaves too many counts to add up")
	}
	base.log = sy.Sub(base.log, sy.Log(mass))
	base.first = max(first, 0)
	if last >= 0 {
		base.top = sy.Int(int64(last))
	}
	return []piece{base}, nil
}

func ceiling(r *big.Rat) int {
	f, _ := r.Float64()
	return int(math.Ceil(f))
}

// mixture is log Σ w f, with points of mass where continuous parts have none.
func (s *space) mixture(d *model.Dist, row int, y *sy.Symbol) ([]piece, error) {
	var discrete, continuous int
	type weighted struct {
		w sy.Expr
		h *shape
	}
	var parts []weighted
	for _, p := range d.Parts {
		w, err := s.lower(p.Weight, row)
		if err != nil {
			return nil, err
		}
		h, err := s.shapeOf(p.Dist, row, sy.Sym(y))
		if err != nil {
			return nil, err
		}
		if h.atom == nil {
			if h.discrete {
				discrete++
			} else {
				continuous++
			}
		}
		parts = append(parts, weighted{w, h})
	}
	if discrete > 0 && continuous > 0 {
		return nil, errors.New("a mixture of counts and continuous parts is not followed")
	}
	density := sy.Zero
	var out piece
	first := true
	for _, p := range parts {
		if p.h.atom != nil {
			continue
		}
		density = sy.Add(density, sy.Mul(p.w, sy.Exp(p.h.log)))
		if first {
			out = piece{discrete: p.h.discrete, top: p.h.top, low: p.h.low, high: p.h.high, centre: p.h.centre, width: p.h.width}
			first = false
			continue
		}
		if (out.low == nil) != (p.h.low == nil) || out.low != nil && !sy.Equal(out.low, p.h.low) || (out.top == nil) != (p.h.top == nil) || out.top != nil && !sy.Equal(out.top, p.h.top) {
			return nil, errors.New("a mixture of laws on different supports is not followed")
		}
		if !out.discrete {
			// A frame around both.
			out.width = sy.Add(out.width, p.h.width, sy.Abs(sy.Sub(out.centre, p.h.centre)))
			out.centre = sy.Mul(sy.Half, sy.Add(out.centre, p.h.centre))
		}
	}
	if first {
		return nil, errors.New("a mixture of points alone is not followed")
	}
	out.log = sy.Log(density)
	pieces := []piece{out}
	for _, p := range parts {
		if p.h.atom == nil {
			continue
		}
		v := sy.Number(p.h.atom)
		if v == nil {
			return nil, errors.New("a point at a value that is not a known number is not followed")
		}
		if !out.discrete {
			pieces = append(pieces, piece{event: true, log: sy.Log(p.w)})
			continue
		}
		if v.Sign() != 0 {
			return nil, errors.New("a point among counts is followed at 0 only")
		}
		// The count 0 has both masses; it becomes an event of its own.
		if pieces[0].first > 0 {
			return nil, errors.New("two points at 0 are not followed")
		}
		zero := sy.Add(p.w, sy.Substitute(density, map[string]sy.Expr{y.Name: sy.Zero}))
		pieces[0].first = 1
		pieces = append(pieces, piece{event: true, log: sy.Log(zero)})
	}
	return pieces, nil
}

// expectation evaluates E[score scoreᵀ] of pieces at values of parameters.
type expectation struct {
	parameters []*sy.Symbol
	pieces     []compiledPiece

	mu   sync.Mutex
	last []float64
	info [][]float64
}

type compiledPiece struct {
	piece
	log                           *sy.Compiled
	score                         []*sy.Compiled
	top, low, high, centre, width *sy.Compiled
}

// addExpectation adds times the information of one row, entry by entry, as
// functions of the unknowns.
func (s *space) addExpectation(in *information, pieces []piece, by map[string]sy.Expr, y *sy.Symbol, times int) error {
	q := &expectation{}
	seen := map[string]bool{}
	put := func(e sy.Expr) sy.Expr {
		if e == nil {
			return nil
		}
		e = sy.Substitute(e, by)
		for _, x := range sy.Symbols(e) {
			if x.Name != y.Name && !seen[x.Name] {
				seen[x.Name] = true
				q.parameters = append(q.parameters, x)
			}
		}
		return e
	}
	for _, p := range pieces {
		p.log, p.top, p.low, p.high, p.centre, p.width = put(p.log), put(p.top), put(p.low), put(p.high), put(p.centre), put(p.width)
		q.pieces = append(q.pieces, compiledPiece{piece: p})
	}
	symbols := append([]*sy.Symbol{y}, q.parameters...)
	for i := range q.pieces {
		p := &q.pieces[i]
		var err error
		compile := func(e sy.Expr) *sy.Compiled {
			if e == nil || err != nil {
				return nil
			}
			var c *sy.Compiled
			c, err = sy.Compile(e, symbols)
			return c
		}
		p.log = compile(p.piece.log)
		p.top, p.low, p.high = compile(p.piece.top), compile(p.piece.low), compile(p.piece.high)
		p.centre, p.width = compile(p.piece.centre), compile(p.piece.width)
		if err != nil {
			return err
		}
		for _, w := range in.parameters {
			d, e := sy.Diff(p.piece.log, w.Symbol)
			if e != nil {
				return e
			}
			p.score = append(p.score, compile(d))
		}
		if err != nil {
			return err
		}
	}
	args := make([]sy.Expr, len(q.parameters))
	for i, x := range q.parameters {
		args[i] = sy.Sym(x)
	}
	s.functions++
	for a := range in.parameters {
		for b := a; b < len(in.parameters); b++ {
			f := &sy.Function{Name: fmt.Sprintf("expectation %d about %s and %s", s.functions, in.parameters[a].Symbol.Name, in.parameters[b].Symbol.Name),
				Error: numericError, Eval: func(x []float64) float64 { return q.at(x, len(in.parameters))[a][b] }}
			t := sy.Mul(sy.Int(int64(times)), f.Apply(args...))
			in.entries[a][b] = sy.Add(in.entries[a][b], t)
			in.entries[b][a] = in.entries[a][b]
		}
	}
	return nil
}

// at is the information at values of the parameters.
func (q *expectation) at(x []float64, n int) [][]float64 {
	q.mu.Lock()
	defer q.mu.Unlock()
	if q.last != nil && equalFloats(q.last, x) {
		return q.info
	}
	m := make([][]float64, n)
	for i := range m {
		m[i] = make([]float64, n)
	}
	v := append([]float64{0}, x...)
	score := make([]float64, n)
	value := func(c *sy.Compiled, otherwise float64) float64 {
		if c == nil {
			return otherwise
		}
		return c.Value(v)
	}
	for i := range q.pieces {
		p := &q.pieces[i]
		add := func(y, weight float64, into [][]float64) float64 {
			v[0] = y
			l := p.log.Value(v)
			mass := math.Exp(l) * weight
			if mass == 0 || math.IsNaN(mass) || math.IsInf(mass, 0) {
				return 0
			}
			for a, c := range p.score {
				score[a] = c.Value(v)
				if math.IsNaN(score[a]) || math.IsInf(score[a], 0) {
					return 0
				}
			}
			for a := range n {
				for b := range n {
					into[a][b] += mass * score[a] * score[b]
				}
			}
			return mass
		}
		switch {
		case p.event:
			add(0, 1, m)
		case p.discrete:
			top := value(p.top, math.Inf(1))
			total := 0.0
			for y := p.first; y < 2*mostCounts && float64(y) <= top; y++ {
				mass := add(float64(y), 1, m)
				total += mass
				if math.IsInf(top, 1) && total > 0 && mass < 1e-18 && y > 50 {
					break
				}
			}
		default:
			low, high := value(p.low, math.Inf(-1)), value(p.high, math.Inf(1))
			centre, width := value(p.centre, 0), value(p.width, 1)
			if !math.IsInf(low, -1) && math.IsInf(high, 1) {
				// The half-line rule wants a distance from its end.
				centre = math.Max(math.Max(centre-low, width), 1e-300)
			}
			if math.IsInf(low, -1) && !math.IsInf(high, 1) {
				width = math.Max(math.Max(high-centre, width), 1e-300)
			}
			integrateInto(m, low, high, centre, width, add)
		}
	}
	q.last, q.info = append([]float64(nil), x...), m
	return m
}
