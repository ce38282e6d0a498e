package symbolic

import (
	"math/big"
	"sort"
)

// generators are the atoms that an expression is rational in. Generator i
// stands for atom^(1/root).
type generators struct {
	index map[string]int
	list  []*generator
	ring  *ring
}

type generator struct {
	atom Expr
	root int64
}

func (g *generators) need(atom Expr, exp *big.Rat) error {
	if !exp.Denom().IsInt64() || exp.Denom().Int64() > 60 {
		return errLarge
	}
	d := exp.Denom().Int64()
	k := atom.key()
	if i, ok := g.index[k]; ok {
		r := g.list[i].root
		g.list[i].root = r / gcd64(r, d) * d
		return nil
	}
	if len(g.list) >= 40 {
		return errLarge
	}
	g.index[k] = len(g.list)
	g.list = append(g.list, &generator{atom, d})
	return nil
}

func gcd64(a, b int64) int64 {
	for b != 0 {
		a, b = b, a%b
	}
	return a
}

// expTerms splits the argument of an exponential into monomials.
func expTerms(c *call) []term {
	switch a := c.args[0].(type) {
	case *sum:
		terms := append([]term(nil), a.terms...)
		if a.constant.Sign() != 0 {
			terms = append(terms, term{a.constant, One})
		}
		return terms
	case *product:
		return []term{{a.coef, monic(a)}}
	case *number:
		return []term{{a.v, One}}
	}
	return []term{{ratOne, c.args[0]}}
}

// collect finds the generators of an expression.
func (g *generators) collect(e Expr) error {
	switch e := e.(type) {
	case *symbol:
		return g.need(e, ratOne)
	case *call:
		return g.collectPower(e, ratOne)
	case *sum:
		for _, t := range e.terms {
			if err := g.collect(t.rest); err != nil {
				return err
			}
		}
	case *product:
		for _, f := range e.factors {
			if err := g.collectPower(f.base, f.exp); err != nil {
				return err
			}
		}
	}
	return nil
}

func (g *generators) collectPower(base Expr, exp *big.Rat) error {
	switch b := base.(type) {
	case *call:
		if b.f == expFunction {
			for _, t := range expTerms(b) {
				if err := g.need(expFunction.Apply(t.rest), mulRat(t.coef, exp)); err != nil {
					return err
				}
			}
			return nil
		}
	case *sum:
		if err := g.collect(b); err != nil {
			return err
		}
		if exp.IsInt() {
			return nil
		}
	}
	return g.need(base, exp)
}

// ratio is numerator over denominator.
type ratio struct{ num, den *poly }

func (g *generators) constant(c *big.Rat) ratio {
	return ratio{constantPoly(g.ring, c), constantPoly(g.ring, ratOne)}
}

func (g *generators) atomPower(atom Expr, exp *big.Rat) (ratio, error) {
	i := g.index[atom.key()]
	e := mulRat(exp, big.NewRat(g.list[i].root, 1))
	if !e.IsInt() || !e.Num().IsInt64() {
		return ratio{}, errLarge
	}
	k := e.Num().Int64()
	if k > mostExponent || k < -mostExponent {
		return ratio{}, errLarge
	}
	r := g.constant(ratOne)
	if k >= 0 {
		r.num = monomial(g.ring, i, int(k))
	} else {
		r.den = monomial(g.ring, i, int(-k))
	}
	return r, nil
}

func (a ratio) times(b ratio) (ratio, error) {
	num, err := a.num.mul(b.num)
	if err != nil {
		return ratio{}, err
	}
	den, err := a.den.mul(b.den)
	if err != nil {
		return ratio{}, err
	}
	return ratio{num, den}.cancel()
}

func (a ratio) plus(b ratio) (ratio, error) {
	g, err := gcd(a.den, b.den)
	if err != nil {
		return ratio{}, err
	}
	ad, bd := a.den.divide(g), b.den.divide(g)
	x, err := a.num.mul(bd)
	if err != nil {
		return ratio{}, err
	}
	y, err := b.num.mul(ad)
	if err != nil {
		return ratio{}, err
	}
	den, err := a.den.mul(bd)
	if err != nil {
		return ratio{}, err
	}
	return ratio{x.add(y, ratOne), den}.cancel()
}

func (a ratio) cancel() (ratio, error) {
	if a.den.constant() {
		return a, nil
	}
	g, err := gcd(a.num, a.den)
	if err != nil {
		return ratio{}, err
	}
	if g.constant() {
		return a, nil
	}
	return ratio{a.num.divide(g), a.den.divide(g)}, nil
}

// convert writes an expression as a ratio of polynomials in the generators.
func (g *generators) convert(e Expr) (ratio, error) {
	switch e := e.(type) {
	case *number:
		return g.constant(e.v), nil
	case *sum:
		r := g.constant(e.constant)
		for _, t := range e.terms {
			x, err := g.convert(t.rest)
			if err != nil {
				return ratio{}, err
			}
			x.num = x.num.add(x.num, new(big.Rat).Sub(t.coef, ratOne))
			if r, err = r.plus(x); err != nil {
				return ratio{}, err
			}
		}
		return r, nil
	case *product:
		r := g.constant(e.coef)
		for _, f := range e.factors {
			x, err := g.convertPower(f.base, f.exp)
			if err != nil {
				return ratio{}, err
			}
			if r, err = r.times(x); err != nil {
				return ratio{}, err
			}
		}
		return r, nil
	}
	return g.convertPower(e, ratOne)
}

func (g *generators) convertPower(base Expr, exp *big.Rat) (ratio, error) {
	switch b := base.(type) {
	case *call:
		if b.f == expFunction {
			r := g.constant(ratOne)
			for _, t := range expTerms(b) {
				x, err := g.atomPower(expFunction.Apply(t.rest), mulRat(t.coef, exp))
				if err != nil {
					return ratio{}, err
				}
				if r, err = r.times(x); err != nil {
					return ratio{}, err
				}
			}
			return r, nil
		}
	case *sum:
		whole := new(big.Int).Div(exp.Num(), exp.Denom())
		rest := new(big.Rat).Sub(exp, new(big.Rat).SetInt(whole))
		if !whole.IsInt64() || whole.Int64() > 100 || whole.Int64() < -100 {
			return ratio{}, errLarge
		}
		x, err := g.convert(b)
		if err != nil {
			return ratio{}, err
		}
		k := int(whole.Int64())
		if k < 0 {
			x, k = ratio{x.den, x.num}, -k
			if x.den.zero() {
				return ratio{}, errLarge
			}
		}
		num, err := x.num.power(k)
		if err != nil {
			return ratio{}, err
		}
		den, err := x.den.power(k)
		if err != nil {
			return ratio{}, err
		}
		r := ratio{num, den}
		if rest.Sign() != 0 {
			root, err := g.atomPower(b, rest)
			if err != nil {
				return ratio{}, err
			}
			return r.times(root)
		}
		return r, nil
	}
	return g.atomPower(base, exp)
}

// compressed takes powers of generators out of a polynomial and writes what is
// left in whole atoms where only whole powers of them are left, so that 1 − u is
// not split into factors with sqrt(u). It returns the powers taken out as an
// expression and the root that each generator stands for in what is left.
func (g *generators) compressed(p *poly) (outside Expr, left *poly, roots []int64) {
	outside, roots = One, make([]int64, len(g.list))
	least := make([]int, len(g.list))
	for v, gen := range g.list {
		least[v], roots[v] = -1, gen.root
		for k := range p.t {
			if e := exponent(k, v); least[v] < 0 || e < least[v] {
				least[v] = e
			}
		}
		if least[v] > 0 {
			outside = Mul(outside, Pow(gen.atom, big.NewRat(int64(least[v]), gen.root)))
		}
		whole := true
		for k := range p.t {
			whole = whole && int64(exponent(k, v)-least[v])%gen.root == 0
		}
		if whole {
			roots[v] = 1
		}
	}
	left = newPoly(p.ring)
	for k, c := range p.t {
		b := []byte(k)
		for v, gen := range g.list {
			e := exponent(k, v) - least[v]
			if roots[v] == 1 {
				e /= int(gen.root)
			}
			b[2*v], b[2*v+1] = byte(e>>8), byte(e)
		}
		left.put(string(b), c)
	}
	return outside, left, roots
}

// expression turns a polynomial back; generator i stands for the root roots[i].
func (g *generators) expression(p *poly, roots []int64) Expr {
	parts := make([]Expr, 0, len(p.t))
	for _, k := range p.keys() {
		m := []Expr{Rat(p.t[k])}
		for i, gen := range g.list {
			if e := exponent(k, i); e > 0 {
				m = append(m, Pow(gen.atom, big.NewRat(int64(e), roots[i])))
			}
		}
		parts = append(parts, Mul(m...))
	}
	return Add(parts...)
}

// Factored brings an expression over a common denominator, cancels and factors
// it. It fails when the polynomials grow past a bound.
func Factored(e Expr) (Expr, error) {
	if Size(e) > mostSize {
		return nil, errLarge
	}
	p, ok := e.(*product)
	if !ok {
		return factoredRatio(e)
	}
	// Roots are factored under the root, so that 1 - p is not split into
	// factors with sqrt(p).
	plain, rooted, root := []Expr{Rat(p.coef)}, []Expr{}, int64(1)
	for _, f := range p.factors {
		if !f.exp.IsInt() {
			if !f.exp.Denom().IsInt64() || f.exp.Denom().Int64() > 60 {
				return nil, errLarge
			}
			d := f.exp.Denom().Int64()
			root = root / gcd64(root, d) * d
		}
	}
	outside := []Expr{}
	for _, f := range p.factors {
		_, isSum := f.base.(*sum)
		switch {
		case f.exp.IsInt():
			plain = append(plain, Pow(f.base, f.exp))
		case isSum:
			rooted = append(rooted, Pow(f.base, mulRat(f.exp, big.NewRat(root, 1))))
		default:
			outside = append(outside, Pow(f.base, f.exp))
		}
	}
	a, err := factoredRatio(Mul(plain...))
	if err != nil {
		return nil, err
	}
	b, err := factoredRatio(Mul(rooted...))
	if err != nil {
		return nil, err
	}
	return Mul(append(outside, a, Pow(b, big.NewRat(1, root)))...), nil
}

func factoredRatio(e Expr) (factored Expr, err error) {
	defer func() {
		if p := recover(); p != nil {
			if _, ok := p.(exhausted); !ok {
				panic(p)
			}
			factored, err = nil, errLarge
		}
	}()
	g := &generators{index: map[string]int{}}
	if err := g.collect(e); err != nil {
		return nil, err
	}
	// An order of the generators that does not depend on the expression's.
	sort.Slice(g.list, func(i, j int) bool { return g.list[i].atom.key() < g.list[j].atom.key() })
	for i, gen := range g.list {
		g.index[gen.atom.key()] = i
	}
	g.ring = &ring{len(g.list), mostWork}
	r, err := g.convert(e)
	if err != nil {
		return nil, err
	}
	if r.num.zero() {
		return Zero, nil
	}
	out := One
	for i, p := range []*poly{r.num, r.den} {
		outside, left, roots := g.compressed(p)
		coef, factors, err := factorPoly(left)
		if err != nil {
			return nil, err
		}
		sign := int64(1 - 2*i)
		out = Mul(out, Pow(Mul(Rat(coef), outside), big.NewRat(sign, 1)))
		for _, f := range factors {
			out = Mul(out, Pow(g.expression(f.base, roots), big.NewRat(sign*int64(f.power), 1)))
		}
	}
	return out, nil
}

// Factors lists base and exponent of a product, the coefficient left out.
func Factors(e Expr) (bases []Expr, exponents []*big.Rat) {
	switch e := e.(type) {
	case *number:
	case *product:
		for _, f := range e.factors {
			bases, exponents = append(bases, f.base), append(exponents, f.exp)
		}
	default:
		bases, exponents = []Expr{e}, []*big.Rat{ratOne}
	}
	return bases, exponents
}

// Coefficient is the rational coefficient of a product.
func Coefficient(e Expr) *big.Rat {
	switch e := e.(type) {
	case *number:
		return e.v
	case *product:
		return e.coef
	}
	return ratOne
}

// Terms lists the coefficients and rests of a sum and its constant.
func Terms(e Expr) (constant *big.Rat, coefs []*big.Rat, rests []Expr) {
	switch e := e.(type) {
	case *number:
		return e.v, nil, nil
	case *sum:
		for _, t := range e.terms {
			coefs, rests = append(coefs, t.coef), append(rests, t.rest)
		}
		return e.constant, coefs, rests
	case *product:
		return ratZero, []*big.Rat{e.coef}, []Expr{monic(e)}
	}
	return ratZero, []*big.Rat{ratOne}, []Expr{e}
}

// Kernel is an expression up to a constant: factored, without the coefficient
// and without the factors that are free of all the given symbols. Exponents
// apart from those of log-linear parts stay exact. When the expression is too
// large to factor it is returned as it is, with factored false. The expression
// must not be negative; factors of unknown sign stand with their absolute value.
func Kernel(e Expr, of []*Symbol) (kernel Expr, factored bool) {
	f, err := Factored(e)
	if err != nil || Size(f) > 3*Size(e)+40 {
		f = e // a long expansion would lose digits to cancellation
	}
	free := func(x Expr) bool {
		for _, s := range of {
			if Depends(x, s) {
				return false
			}
		}
		return true
	}
	bases, exponents := Factors(f)
	if _, isSum := f.(*sum); isSum {
		bases, exponents = []Expr{f}, []*big.Rat{ratOne}
	}
	parts := []Expr{}
	for i, b := range bases {
		if c, ok := b.(*call); ok && c.f == expFunction {
			// exp(constant + …) loses its constant part.
			var kept []Expr
			for _, t := range expTerms(c) {
				if !free(t.rest) {
					kept = append(kept, scaled(t.coef, t.rest))
				}
			}
			parts = append(parts, Exp(Mul(Rat(exponents[i]), Add(kept...))))
			continue
		}
		if !free(b) {
			if s, ok := b.(*sum); ok && !exponents[i].IsInt() {
				_, b2 := s.primitive(false)
				b = b2
			}
			if exponents[i].IsInt() && !isEven(exponents[i]) && !Positive(b) {
				b = Abs(b) // a kernel is not negative
			}
			parts = append(parts, Pow(b, exponents[i]))
		}
	}
	k := narrowed(Mul(parts...))
	if _, isSum := k.(*sum); isSum {
		return k, err == nil
	}
	return Mul(k, Rat(new(big.Rat).Inv(Coefficient(k)))), err == nil
}

// narrowed uses that a linear base c + a·x under a root is positive: other
// factors need no absolute value where that settles their sign.
func narrowed(k Expr) Expr {
	by := map[string]Expr{}
	bases, exponents := Factors(k)
	for i, b := range bases {
		s, ok := b.(*sum)
		if !ok || exponents[i].IsInt() || len(s.terms) != 1 {
			continue
		}
		x, ok := s.terms[0].rest.(*symbol)
		if !ok {
			continue
		}
		end := new(big.Rat).Quo(new(big.Rat).Neg(s.constant), s.terms[0].coef)
		y := *x.s
		if s.terms[0].coef.Sign() > 0 && (y.Low == nil || y.Low.Cmp(end) < 0) {
			y.Low = end
		}
		if s.terms[0].coef.Sign() < 0 && (y.High == nil || y.High.Cmp(end) > 0) {
			y.High = end
		}
		by[y.Name] = Sym(&y)
	}
	if len(by) == 0 {
		return k
	}
	return Substitute(k, by)
}

// Proportional reports whether two expressions are proportional in the given
// symbols; sure is false when one of them could not be factored, and then
// proportional is false.
func Proportional(a, b Expr, of []*Symbol) (proportional, sure bool) {
	q, ok := Kernel(Div(a, b), of)
	if !ok {
		return false, false
	}
	return Number(q) != nil, true
}
