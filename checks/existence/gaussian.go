package existence

import (
	"context"
	"fmt"
	"math"
	"math/big"
	"strings"

	"wellposed/checks/existence/certificate"
	"wellposed/checks/existence/kernel"
	"wellposed/checks/existence/order"
	"wellposed/parser/diag"
	"wellposed/parser/model"
)

// The Gaussian block. Unknowns that enter only through means of normal laws,
// linearly and with flat or normal priors, are integrated out in closed form;
// what is left is a kernel in the spread (literature 1.5). With A = X'WX, the
// integral over the block is |A|^(−1/2) exp(−Q/2) Π w^(1/2), where Q is the
// weighted residual sum of squares, and it is infinite when X has no full rank.

// gaussTerm is one normal factor: constant + Σ coef·β has mean 0 and the given
// spread.
type gaussTerm struct {
	exactRow
	error float64 // bound on the error of the constant
	class string
	times int64
	row   int
	fresh bool // a population or prior term, not a reading
}

type gaussClass struct {
	key   string
	dist  *model.Dist
	row   int
	known *big.Rat // 1/variance when it is a known number
}

type gaussBlock struct {
	g       *group
	beta    []variable
	index   map[variable]int
	rest    []variable
	terms   []gaussTerm
	classes map[string]*gaussClass
	order   []string
	others  func(env *kernel.Env) order.Value
	hier    bool // a population law carries the spread
	outside []model.Expr
	obs     *model.Observation
	// spreadPriors are kept for telling the exponent of the prior.
	priors []priorFactor
}

func hasPrevious(x model.Expr) bool {
	found := false
	walk(x, func(x model.Expr) {
		if c, ok := x.(*model.Call); ok && c.Func == "previous" {
			found = true
		}
	})
	return found
}

func normalSpread(d *model.Dist) model.Expr {
	for _, l := range []string{"sd", "variance", "precision", "log sd"} {
		if x := d.Arg(l); x != nil {
			return x
		}
	}
	return nil
}

func normalMean(d *model.Dist) model.Expr {
	if d.Spec.Name == "log-Normal" {
		return d.Arg("log mean")
	}
	return d.Arg("mean")
}

func isNormal(d *model.Dist) bool {
	if d == nil {
		return false
	}
	return d.Spec.Name == "Normal" || d.Spec.Name == "log-Normal" && d.Arg("log mean") != nil && d.Arg("origin") == nil
}

func plainReading(o *model.Observation) bool {
	return o.Reading == model.Values && o.Right == nil && o.Left == nil && o.Truncated == nil && o.Weight == nil && len(o.What) == 1
}

func unknownsIn(xs ...model.Expr) map[*model.Unknown]bool {
	m := map[*model.Unknown]bool{}
	for _, x := range xs {
		walk(x, func(x model.Expr) {
			if r, ok := x.(*model.UnknownRef); ok {
				m[r.Unknown] = true
			}
		})
	}
	return m
}

// gaussian finds the block of a group, nil when there is none.
func (g *group) gaussian(ctx context.Context) *gaussBlock {
	inMeans, elsewhere := map[*model.Unknown]bool{}, map[*model.Unknown]bool{}
	mark := func(m map[*model.Unknown]bool, xs ...model.Expr) {
		for u := range unknownsIn(xs...) {
			m[u] = true
		}
	}
	seen := map[*model.Observation]bool{}
	gaussObs := map[*model.Observation]bool{}
	for _, f := range g.rows {
		if seen[f.obs] {
			continue
		}
		seen[f.obs] = true
		o := f.obs
		if isNormal(o.Dist) && (plainReading(o) || o.Reading == model.Summary && o.Weight == nil && o.Truncated == nil && o.Dist.Spec.Name == "Normal") {
			gaussObs[o] = true
			mark(inMeans, normalMean(o.Dist))
			mark(inMeans, o.What...)
			mark(elsewhere, normalSpread(o.Dist))
			continue
		}
		mark(elsewhere, observationExprs(o)...)
	}
	for _, f := range g.pops {
		if isNormal(f.pop.Dist) && f.pop.Dist.Spec.Name == "Normal" && f.pop.Truncated == nil {
			inMeans[f.pop.Unknown] = true
			mark(inMeans, normalMean(f.pop.Dist))
			mark(elsewhere, normalSpread(f.pop.Dist))
			continue
		}
		elsewhere[f.pop.Unknown] = true
		mark(elsewhere, distExprs(f.pop.Dist)...)
	}
	for _, f := range g.priors {
		p := f.prior
		_, plain := p.Target.(*model.UnknownRef)
		switch {
		case p.Form == model.ByFlat && plain:
		case plain && constantKernel(p):
		case p.Form == model.ByDist && plain && p.Truncated == nil && p.Dist != nil && p.Dist.Spec.Name == "Normal":
			mark(elsewhere, normalSpread(p.Dist))
		default:
			mark(elsewhere, p.Target, p.Kernel)
			for _, u := range p.About {
				elsewhere[u] = true
			}
			mark(elsewhere, distExprs(p.Dist)...)
		}
	}
	// A law of an unknown outside the block keeps its mean outside too: what
	// another factor mentions can't be integrated out here.
	for range len(g.unknowns()) {
		for _, f := range g.pops {
			if elsewhere[f.pop.Unknown] {
				mark(elsewhere, distExprs(f.pop.Dist)...)
			}
		}
		for _, f := range g.priors {
			for _, u := range f.prior.About {
				if elsewhere[u] {
					mark(elsewhere, append(distExprs(f.prior.Dist), f.prior.Kernel, f.prior.Target)...)
				}
			}
		}
	}
	in := func(u *model.Unknown) bool {
		return inMeans[u] && !elsewhere[u] && u.Size == 0 && u.Support.Low == nil && u.Support.High == nil && !(u.Kind != nil && u.Kind.Discrete)
	}
	b := &gaussBlock{g: g, index: map[variable]int{}, classes: map[string]*gaussClass{}}
	for _, v := range g.vars {
		if in(v.Unknown) {
			b.index[v] = len(b.beta)
			b.beta = append(b.beta, v)
		} else {
			b.rest = append(b.rest, v)
		}
	}
	if len(b.beta) == 0 {
		return nil
	}
	if !b.collect(ctx, in, gaussObs) || b.leaks(in) {
		return nil
	}
	return b
}

// leaks reports a factor outside the block that mentions the block: a last
// guard, since integrating it out would then be wrong.
func (b *gaussBlock) leaks(in func(*model.Unknown) bool) bool {
	for _, x := range b.outside {
		for u := range unknownsIn(x) {
			if in(u) {
				return true
			}
		}
	}
	return false
}

// collect gathers the normal factors; false when one is not linear.
func (b *gaussBlock) collect(ctx context.Context, in func(*model.Unknown) bool, gaussObs map[*model.Observation]bool) bool {
	g := b.g
	forms := map[any]linearForm{}
	form := func(key any, x model.Expr) (linearForm, bool) {
		if f, ok := forms[key]; ok {
			return f, true
		}
		f, ok := g.linearize(x, in)
		forms[key] = f
		return f, ok
	}
	var others []rowFactor
	var otherPops []populationFactor
	var otherPriors []priorFactor
	for k, f := range g.rows {
		if k%1024 == 0 && ctx.Err() != nil {
			return false
		}
		if !gaussObs[f.obs] {
			others = append(others, f)
			continue
		}
		o := f.obs
		if b.obs == nil {
			b.obs = o
		}
		what := o.Mean
		if o.Reading == model.Values {
			what = o.What[0]
		}
		mean := normalMean(o.Dist)
		if o.Dist.Spec.Name == "log-Normal" {
			what = &model.Call{Func: "log", Args: []model.Expr{what}}
		}
		if o.Reading == model.Values && !mentions(what) && !hasPrevious(what) && kernel.Constant(what, f.row) == nil {
			// A transformed reading, not rational: enclosed.
			fm, ok := form(o, &model.Op{Op: "neg", Args: []model.Expr{mean}})
			if !ok {
				return false
			}
			lo, hi, oky := kernel.Enclose(what, f.row)
			r, okr := g.at(fm, f.row, b.index)
			if !oky || !okr {
				return false
			}
			mid := lo + (hi-lo)/2
			r.constant.Add(r.constant, new(big.Rat).SetFloat64(mid))
			b.add(gaussTerm{exactRow: r, error: (hi - lo) + 1e-15*math.Abs(mid), times: f.times, row: f.row}, o.Dist, f.row)
			continue
		}
		fm, ok := form(o, &model.Op{Op: "-", Args: []model.Expr{what, mean}})
		if !ok {
			return false
		}
		r, okr := g.at(fm, f.row, b.index)
		if !okr {
			return false
		}
		t := gaussTerm{exactRow: r, times: f.times, row: f.row}
		if o.Reading == model.Summary {
			n, sd := kernel.Constant(o.N, f.row), kernel.Constant(o.SD, f.row)
			if n == nil || sd == nil || !n.IsInt() || n.Sign() <= 0 || n.Num().Int64() > 1e9 {
				return false
			}
			// n readings with their mean and sd: one reading repeated n times,
			// and n − 1 contrasts with the sum of squares (n − 1) sd².
			t.times *= n.Num().Int64()
			b.add(t, o.Dist, f.row)
			ss := new(big.Rat).Mul(sd, sd)
			ss.Mul(ss, new(big.Rat).Sub(n, big.NewRat(1, 1)))
			if ss.Sign() > 0 {
				b.residual(ss, o.Dist, f.row)
			}
			continue
		}
		b.add(t, o.Dist, f.row)
	}
	for _, f := range g.pops {
		if !in(f.pop.Unknown) {
			otherPops = append(otherPops, f)
			continue
		}
		if !b.law(f.pop, f.pop.Dist, variable{Unknown: f.pop.Unknown, Component: f.component}, f.row, in) {
			return false
		}
		if len(unknownsIn(normalSpread(f.pop.Dist))) > 0 {
			b.hier = true
		}
	}
	for _, f := range g.priors {
		u := f.prior.About[0]
		if len(f.prior.About) != 1 || !in(u) {
			otherPriors = append(otherPriors, f)
			continue
		}
		if f.prior.Form == model.ByDist && !b.law(f.prior, f.prior.Dist, variable{Unknown: u, Component: f.component}, 0, in) {
			return false
		}
	}
	b.priors = otherPriors
	for _, f := range others {
		b.outside = append(b.outside, observationExprs(f.obs)...)
	}
	for _, f := range otherPops {
		b.outside = append(append(b.outside, distExprs(f.pop.Dist)...), &model.UnknownRef{Unknown: f.pop.Unknown})
	}
	for _, f := range otherPriors {
		b.outside = append(append(b.outside, distExprs(f.prior.Dist)...), f.prior.Kernel, f.prior.Target)
	}
	for _, key := range b.order {
		if c := b.classes[key]; c.dist != nil {
			b.outside = append(b.outside, normalSpread(c.dist))
		}
	}
	b.others = func(env *kernel.Env) order.Value {
		h := group{analysis: g.analysis, pops: otherPops, priors: otherPriors}
		return h.logKernel(env, others)
	}
	return true
}

// law adds a normal law of one component of the block.
func (b *gaussBlock) law(_ any, d *model.Dist, v variable, row int, in func(*model.Unknown) bool) bool {
	fm, ok := b.g.linearize(&model.Op{Op: "-", Args: []model.Expr{
		&model.UnknownRef{Unknown: v.Unknown, Which: model.Fixed, Component: v.Component}, normalMean(d)}}, in)
	if !ok {
		return false
	}
	r, ok := b.g.at(fm, row, b.index)
	if !ok {
		return false
	}
	b.add(gaussTerm{exactRow: r, times: 1, row: row, fresh: true}, d, row)
	return true
}

func (b *gaussBlock) add(t gaussTerm, d *model.Dist, row int) {
	t.class = b.class(d, row)
	b.terms = append(b.terms, t)
}

// residual adds a sum of squares that no coefficient can change: a term with
// coefficient 0 whose constant is its root; kept as a square.
func (b *gaussBlock) residual(ss *big.Rat, d *model.Dist, row int) {
	t := gaussTerm{exactRow: exactRow{constant: ss, coef: nil}, times: 0, row: row}
	t.class = b.class(d, row)
	b.terms = append(b.terms, t)
}

// class files a spread: equal keys are the same spread at every value of the
// unknowns.
func (b *gaussBlock) class(d *model.Dist, row int) string {
	x := normalSpread(d)
	label := ""
	for _, l := range []string{"sd", "variance", "precision", "log sd"} {
		if d.Arg(l) != nil {
			label = l
		}
	}
	var key string
	var known *big.Rat
	if !mentions(x) {
		r := kernel.Constant(x, row)
		if r == nil || r.Sign() <= 0 {
			panic(&order.Unknown{Reason: "a known spread is not a positive number"})
		}
		switch label {
		case "precision":
			known = r
		case "variance":
			known = new(big.Rat).Inv(r)
		default:
			known = new(big.Rat).Inv(new(big.Rat).Mul(r, r))
		}
		key = "known"
		if b.classes[key] == nil {
			b.classes[key] = &gaussClass{key: key, known: big.NewRat(1, 1)}
			b.order = append(b.order, key)
		}
		return key + " " + known.RatString()
	}
	var s strings.Builder
	s.WriteString(label)
	s.WriteByte(' ')
	spell(x, row, &s)
	key = s.String()
	if b.classes[key] == nil {
		b.classes[key] = &gaussClass{key: key, dist: d, row: row}
		b.order = append(b.order, key)
	}
	return key
}

// spell writes an expression at a row so that equal texts are equal values.
func spell(x model.Expr, row int, b *strings.Builder) {
	switch x := x.(type) {
	case *model.Number:
		b.WriteString(x.Value.RatString())
	case *model.GivenRef:
		b.WriteString(x.Given.Name)
	case *model.ColumnRef:
		fmt.Fprintf(b, "%q", x.Column.Texts[row])
	case *model.UnknownRef:
		b.WriteString(x.Unknown.Name)
		if x.Which == model.Fixed {
			fmt.Fprintf(b, "[%d]", x.Component)
		}
		for _, c := range x.By {
			fmt.Fprintf(b, "[%q]", c.Texts[row])
		}
	case *model.LetRef:
		spell(x.Let.Value, row, b)
	case *model.Op:
		b.WriteString("(" + x.Op)
		for _, a := range x.Args {
			b.WriteByte(' ')
			spell(a, row, b)
		}
		b.WriteByte(')')
	case *model.Call:
		b.WriteString("(" + x.Func)
		for _, a := range x.Args {
			b.WriteByte(' ')
			spell(a, row, b)
		}
		b.WriteByte(')')
	default:
		fmt.Fprintf(b, "%T%p", x, x)
	}
}

// knownWeight splits the class text of a known spread.
func knownWeight(class string) (*big.Rat, bool) {
	rest, ok := strings.CutPrefix(class, "known ")
	if !ok {
		return nil, false
	}
	r, ok := new(big.Rat).SetString(rest)
	return r, ok
}

// whenGaussian decides models whose unknowns are a Gaussian block and at most
// one spread.
func whenGaussian(g *group, ctx context.Context) *Verdict {
	b := g.gaussian(ctx)
	if b == nil {
		return nil
	}
	e := newEchelon(len(b.beta))
	for k, t := range b.terms {
		if k%256 == 0 && ctx.Err() != nil {
			return g.undecided("interrupted")
		}
		e.add(t)
		if e.full() && e.inconsistent {
			break
		}
	}
	if !e.full() {
		return b.rankVerdict(e)
	}
	if len(b.rest) == 0 {
		v := &Verdict{Status: Exists, How: diag.Proved, Unknowns: g.unknowns(), Code: Rank, Source: "derivation",
			Theorem: "a normal likelihood with known spread has a finite integral when the design has full rank",
			Claim:   fmt.Sprintf("the design has rank %d, the number of coefficients", len(b.beta)), Observation: b.obs}
		v.Conditions = []Condition{{Text: "rank of the design = number of coefficients", Filled: fmt.Sprintf("%d = %d", len(b.beta), len(b.beta)), Holds: true}}
		v.Certificate = b.rankCertificate(e)
		return v
	}
	if len(b.rest) != 1 {
		return nil
	}
	return b.spreadVerdict(ctx, e)
}

// rankVerdict names the direction that the design doesn't see.
func (b *gaussBlock) rankVerdict(e *echelon) *Verdict {
	d := e.null()
	r := &Verdict{Status: DoesNotExist, How: diag.Proved, Unknowns: b.g.unknowns(), Code: Rank, Source: "derivation", Observation: b.obs,
		Theorem: "a likelihood that is constant along a direction needs a proper prior there"}
	var names []string
	count := 0
	for _, q := range d {
		if q.Sign() != 0 {
			count++
		}
	}
	for j, q := range d {
		if q.Sign() == 0 {
			continue
		}
		toward := "inf"
		if q.Sign() < 0 {
			toward = "-inf"
		}
		x := Escape{Unknown: b.beta[j].Unknown, Component: b.beta[j].Component, Toward: toward}
		if count > 1 {
			x.Step = ratText(q)
		}
		r.Escape = append(r.Escape, x)
		names = append(names, b.beta[j].Name())
	}
	r.Claim = fmt.Sprintf("the design has rank %d for %d coefficients: the data do not see a combination of %s, and the prior is flat along it",
		e.rank(), len(b.beta), strings.Join(names, ", "))
	r.Conditions = []Condition{{Text: "rank of the design = number of coefficients", Filled: fmt.Sprintf("%d = %d", e.rank(), len(b.beta)), Holds: false}}
	r.Repairs = []string{"a proper prior on one of " + strings.Join(names, ", "), "leaving one of them out"}
	c := &certificate.Cone{Columns: len(b.beta)}
	for _, q := range d {
		c.Direction = append(c.Direction, q.RatString())
	}
	b.addRows(c, 2000)
	r.Certificate = &certificate.Certificate{Kind: certificate.KindCone, Cone: c}
	return r
}

func (b *gaussBlock) addRows(c *certificate.Cone, limit int) {
	seen := map[string]bool{}
	for _, t := range b.terms {
		texts := make([]string, len(b.beta))
		for j := range texts {
			texts[j] = "0"
			if q := t.coef[j]; q != nil {
				texts[j] = q.RatString()
			}
		}
		key := strings.Join(texts, " ")
		if seen[key] {
			continue
		}
		seen[key] = true
		if len(c.Rows) >= limit {
			c.Partial = true
			return
		}
		c.Rows = append(c.Rows, texts)
		c.Equal = append(c.Equal, true)
	}
}

// rankCertificate lists rows of full rank, as equations.
func (b *gaussBlock) rankCertificate(e *echelon) *certificate.Certificate {
	c := &certificate.Cone{Columns: len(b.beta), Overlap: true}
	b.addRows(c, 2000)
	for range c.Rows {
		c.Weights = append(c.Weights, "0")
	}
	return &certificate.Certificate{Kind: certificate.KindCone, Cone: c}
}
