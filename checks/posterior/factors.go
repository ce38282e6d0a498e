package posterior

import (
	"math"
	"sort"
	"strconv"

	"wellposed/checks/posterior/special"
	"wellposed/parser/model"
)

// factor is one term of the log-density and the slots that it touches.
type factor struct {
	log   fn
	slots []int
	// owners are the slots that it is the prior of; none for data.
	owners []int
	// weight is about how many ordinary factors it costs as much as, less one.
	weight int
	// flat says that it is constant.
	flat bool
	// gauss is set for a normal law of a number that may be integrated exactly.
	gauss *gaussFactor
}

// gaussFactor says that Normal(mean, exp(logSD)) stands at data or a variable.
type gaussFactor struct {
	// slot is that of the variable, −1 for data: then y is the mean of count
	// readings whose squared deviations sum to squares.
	slot              int
	y, count, squares float64
	mean              model.Expr
	row               int
	logSD             fn
	sdSlots           []int
	// alike is the statement whose rows all have the same logSD, nil otherwise.
	alike any
}

// touching runs a compilation and returns the slots it used.
func (c *compiler) touching(compile func() fn) factor {
	before := c.touched
	c.touched = map[int]bool{}
	f := factor{log: compile()}
	for i := range c.touched {
		f.slots = append(f.slots, i)
	}
	sort.Ints(f.slots)
	c.touched = before
	return f
}

// varies says whether an expression can differ between rows.
func varies(list ...model.Expr) bool {
	out := false
	for _, e := range list {
		if e == nil {
			continue
		}
		model.Walk(e, func(e model.Expr) {
			switch e := e.(type) {
			case *model.ColumnRef:
				out = true
			case *model.UnknownRef:
				out = out || e.Which == model.ByRow
			case *model.Call:
				out = out || e.Func == "linear" || e.Func == "previous"
			}
		})
	}
	return out
}

func lawExprs(d *model.Dist) []model.Expr {
	var labels []string
	for l := range d.Args {
		labels = append(labels, l)
	}
	sort.Strings(labels)
	var out []model.Expr
	for _, l := range labels {
		out = append(out, d.Args[l])
	}
	for _, p := range d.Parts {
		out = append(out, p.Weight)
		out = append(out, lawExprs(p.Dist)...)
	}
	return out
}

func float(e model.Expr, row int) float64 {
	v, err := model.EvalFloat(e, row)
	if err != nil {
		refuse("%v", err)
	}
	return v
}

// observation compiles the likelihood of a statement, as one factor for each
// group of rows that read alike.
func (c *compiler) observation(o *model.Observation) []factor {
	switch o.Dist.Spec.Name {
	case "Multinomial", "categorical", "multivariate-Normal", "Cox", "AR1", "cumulative-logit", "cumulative-probit", "multinomial-logit", "Wishart":
		return c.special(o)
	}
	same := !varies(lawExprs(o.Dist)...) && (o.Truncated == nil || !varies(o.Truncated.Low, o.Truncated.High))
	if len(o.What) != 1 && o.Reading == model.Values {
		refuse("several values observed together under %s", o.Dist.Spec.Name)
	}
	if same && o.Reading == model.Values && o.Right == nil && o.Left == nil && o.Truncated == nil {
		if f, ok := c.sufficient(o); ok {
			return []factor{f}
		}
	}
	// Rows that are the same in everything are counted.
	type group struct {
		row   int
		count float64
	}
	var groups []group
	seen := map[string]int{}
	var columns []*model.Column
	all := append(lawExprs(o.Dist), o.What...)
	all = append(all, o.Low, o.High, o.N, o.Mean, o.SD, o.Right, o.Left)
	if o.Truncated != nil {
		all = append(all, o.Truncated.Low, o.Truncated.High)
	}
	shifts := false
	for _, e := range all {
		if e == nil {
			continue
		}
		model.Walk(e, func(e model.Expr) {
			switch e := e.(type) {
			case *model.ColumnRef:
				columns = append(columns, e.Column)
			case *model.UnknownRef:
				columns = append(columns, e.By...)
			case *model.Call:
				shifts = shifts || e.Func == "previous"
				if e.Func == "linear" {
					if r, ok := e.Args[0].(*model.UnknownRef); ok {
						columns = append(columns, r.Unknown.For...)
					}
				}
			}
		})
	}
	for _, row := range o.Rows {
		w := 1.0
		if o.Weight != nil {
			w = float(o.Weight, row)
		}
		key := make([]byte, 0, 64)
		if shifts {
			key = strconv.AppendInt(key, int64(row), 10)
		}
		for _, col := range columns {
			key = append(append(key, col.Texts[row]...), 0)
		}
		if i, ok := seen[string(key)]; ok {
			groups[i].count += w
			continue
		}
		seen[string(key)] = len(groups)
		groups = append(groups, group{row, w})
	}
	var out []factor
	for _, g := range groups {
		f := c.touching(func() fn {
			one := c.reading(o, g.row)
			if g.count == 1 {
				return one
			}
			n := g.count
			return func(s *state) float64 { return n * one(s) }
		})
		if o.Reading == model.Values && o.Dist.Spec.Name == "Normal" && o.Truncated == nil && o.Right == nil && o.Left == nil {
			f.gauss = c.normal(o.Dist, g.row)
			f.gauss.y, f.gauss.count = float(o.What[0], g.row), g.count
			if !varies(spreadOf(o.Dist)) {
				f.gauss.alike = o
			}
		}
		if o.Reading == model.Summary && o.Truncated == nil && o.Dist.Spec.Name == "Normal" {
			n, sd := float(o.N, g.row), float(o.SD, g.row)
			f = c.normalReadings(o.Dist, g.row, n*g.count, float(o.Mean, g.row), (n-1)*sd*sd*g.count)
		}
		out = append(out, f)
	}
	return out
}

func spreadOf(d *model.Dist) model.Expr {
	for _, label := range []string{"sd", "variance", "precision"} {
		if e := d.Arg(label); e != nil {
			return e
		}
	}
	return nil
}

// normal prepares a Normal law for exact integration.
func (c *compiler) normal(d *model.Dist, row int) *gaussFactor {
	g := &gaussFactor{mean: d.Arg("mean"), row: row, slot: -1, count: 1}
	f := c.touching(func() fn {
		switch {
		case d.Arg("sd") != nil:
			return c.compile(d.Arg("sd"), row).log
		case d.Arg("variance") != nil:
			v := c.compile(d.Arg("variance"), row).log
			return func(s *state) float64 { return v(s) / 2 }
		}
		v := c.compile(d.Arg("precision"), row).log
		return func(s *state) float64 { return -v(s) / 2 }
	})
	g.logSD, g.sdSlots = f.log, f.slots
	return g
}

// normalReadings are n readings of one Normal law by their mean and squares.
func (c *compiler) normalReadings(d *model.Dist, row int, n, mean, squares float64) factor {
	g := c.normal(d, row)
	g.y, g.count, g.squares = mean, n, squares
	f := c.touching(func() fn {
		centre := c.compile(d.Arg("mean"), row).value
		c.normal(d, row)
		return func(s *state) float64 {
			ls, dev := g.logSD(s), mean-centre(s)
			return -n*ls - (squares+n*dev*dev)/2*math.Exp(-2*ls)
		}
	})
	f.slots = union(f.slots, g.sdSlots)
	f.gauss = g
	return f
}

func union(a, b []int) []int {
	out := append([]int(nil), a...)
	for _, x := range b {
		if i := sort.SearchInts(out, x); i == len(out) || out[i] != x {
			out = append(out, x)
			sort.Ints(out)
		}
	}
	return out
}

// reading is the log-likelihood of one row.
func (c *compiler) reading(o *model.Observation, row int) fn {
	l := c.law(o.Dist, row)
	var base fn
	tail := func() {
		if l.tails == nil {
			refuse("the distribution function of %s is not computed here", o.Dist.Spec.Name)
		}
	}
	condition := func(e model.Expr) bool {
		if e == nil {
			return false
		}
		ok, err := model.Condition(e, row)
		if err != nil {
			refuse("%v", err)
		}
		return ok
	}
	switch o.Reading {
	case model.Between:
		tail()
		low, high := number(float(o.Low, row)), number(float(o.High, row))
		base = func(s *state) float64 { return between(&l, s, low, high) }
	case model.Summary:
		if o.Dist.Spec.Name != "Normal" {
			refuse("a summary of readings under %s", o.Dist.Spec.Name)
		}
		n, m, sd := float(o.N, row), float(o.Mean, row), float(o.SD, row)
		centre := c.compile(o.Dist.Arg("mean"), row).value
		logSD := c.normal(o.Dist, row).logSD
		base = func(s *state) float64 {
			ls, d := logSD(s), m-centre(s)
			return -n*ls - ((n-1)*sd*sd+n*d*d)/2*math.Exp(-2*ls)
		}
	default:
		y := number(float(o.What[0], row))
		switch {
		case condition(o.Right):
			tail()
			below := y
			if l.discrete {
				below = number(y.v - 1) // at least y
			}
			base = func(s *state) float64 { _, u := l.tails(s, below); return u }
		case condition(o.Left):
			tail()
			base = func(s *state) float64 { d, _ := l.tails(s, y); return d }
		default:
			base = func(s *state) float64 { return l.density(s, y) }
		}
	}
	if o.Truncated == nil {
		return base
	}
	tail()
	inside := c.truncation(l, o.Truncated, row)
	return func(s *state) float64 { return base(s) - inside(s) }
}

// between is the logarithm of P(low < Y ≤ high).
func between(l *law, s *state, low, high val) float64 {
	a, au := l.tails(s, low)
	b, bu := l.tails(s, high)
	if au < a { // the upper tails are the smaller ones
		return special.LogDiff(au, bu)
	}
	return special.LogDiff(b, a)
}

// truncation is the logarithm of the probability of a range.
func (c *compiler) truncation(l law, r *model.Range, row int) fn {
	end := func(e model.Expr, lower bool) func(s *state) val {
		if e == nil {
			return nil
		}
		t := c.compile(e, row)
		return func(s *state) val {
			v := t.at(s)
			// Both ends belong to the range of a count, and P(Y ≤ y) includes y.
			if l.discrete && lower {
				return number(math.Ceil(v.v) - 1)
			}
			return v
		}
	}
	low, high := end(r.Low, true), end(r.High, false)
	return func(s *state) float64 {
		switch {
		case low != nil && high != nil:
			return between(&l, s, low(s), high(s))
		case low != nil:
			_, u := l.tails(s, low(s))
			return u
		case high != nil:
			d, _ := l.tails(s, high(s))
			return d
		}
		return 0
	}
}

// sufficient compiles independent readings of one law by their sums.
func (c *compiler) sufficient(o *model.Observation) (factor, bool) {
	d := o.Dist
	values := make([]float64, len(o.Rows))
	weights := make([]float64, len(o.Rows))
	n, sum := 0.0, 0.0
	for i, row := range o.Rows {
		values[i], weights[i] = float(o.What[0], row), 1
		if o.Weight != nil {
			weights[i] = float(o.Weight, row)
		}
		n += weights[i]
		sum += weights[i] * values[i]
	}
	if len(values) == 0 {
		return factor{log: func(*state) float64 { return 0 }}, true
	}
	row := o.Rows[0]
	switch d.Spec.Name {
	case "Normal":
		mean, squares := sum/n, 0.0
		for i, v := range values {
			squares += weights[i] * (v - mean) * (v - mean)
		}
		return c.normalReadings(d, row, n, mean, squares), true
	case "Poisson":
		return c.touching(func() fn {
			m := c.compile(d.Arg("mean"), row)
			return func(s *state) float64 { return product(sum, m.log(s)) - n*m.value(s) }
		}), true
	case "Bernoulli":
		return c.touching(func() fn {
			p := c.compile(d.Arg("probability"), row)
			if p.logit != nil {
				return func(s *state) float64 { u := p.logit(s); return sum*u - n*special.Log1pExp(u) }
			}
			return func(s *state) float64 { return product(sum, p.log(s)) + product(n-sum, p.log1m(s)) }
		}), true
	case "Binomial":
		if !model.Known(d.Arg("trials")) {
			return factor{}, false
		}
		total := n * float(d.Arg("trials"), row)
		return c.touching(func() fn {
			p := c.compile(d.Arg("probability"), row)
			return func(s *state) float64 { return product(sum, p.log(s)) + product(total-sum, p.log1m(s)) }
		}), true
	case "Exponential":
		if d.Arg("origin") != nil {
			return factor{}, false
		}
		return c.touching(func() fn {
			if d.Arg("rate") != nil {
				r := c.compile(d.Arg("rate"), row)
				return func(s *state) float64 { return n*r.log(s) - sum*r.value(s) }
			}
			m := c.compile(d.Arg("mean"), row)
			return func(s *state) float64 { l := m.log(s); return -n*l - sum*math.Exp(-l) }
		}), true
	}
	return factor{}, false
}
