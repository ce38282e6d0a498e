// Package symbolic is the algebra behind derived priors: expressions over
// parameters with known supports, exact rational coefficients and exponents.
//
// Constructors keep a light canonical form (like terms and like factors are
// merged, exponentials are collected, logarithms of positive products are
// expanded). Factored goes further: it brings an expression over a common
// denominator, cancels it and factors it, so that two kernels that are rational
// in the same generators are proportional exactly when their factored forms
// agree up to the coefficient.
package symbolic

import (
	"math/big"
	"sort"
	"strings"
)

// Expr is an immutable expression.
type Expr interface {
	// key is the same for equal canonical forms.
	key() string
}

// Symbol is a parameter or a datum. Symbols with the same name are the same.
type Symbol struct {
	Name string
	// Low and High are the ends of the support, nil when infinite. An
	// expression is examined inside the support, not at its ends.
	Low, High *big.Rat
	// Data marks a value that is known in each row.
	Data bool
}

type (
	number struct {
		v *big.Rat
		k string
	}
	symbol struct{ s *Symbol }
	call   struct {
		f    *Function
		args []Expr
		k    string
	}
	// factor is base^exp inside a product.
	factor struct {
		base Expr
		exp  *big.Rat
	}
	// product is coef times factors, sorted by the keys of their bases.
	product struct {
		coef    *big.Rat
		factors []factor
		k       string
	}
	term struct {
		coef *big.Rat
		rest Expr // without a coefficient of its own
	}
	// sum is constant plus terms, sorted by the keys of their rests.
	sum struct {
		constant *big.Rat
		terms    []term
		k        string
	}
)

func (e *number) key() string  { return e.k }
func (e *symbol) key() string  { return "$" + e.s.Name }
func (e *call) key() string    { return e.k }
func (e *product) key() string { return e.k }
func (e *sum) key() string     { return e.k }

var (
	ratZero = new(big.Rat)
	ratOne  = big.NewRat(1, 1)
	ratHalf = big.NewRat(1, 2)
)

// Zero, One and Half are the commonest numbers.
var (
	Zero Expr = Rat(ratZero)
	One  Expr = Rat(ratOne)
	Half Expr = Rat(ratHalf)
)

// Rat is an exact number.
func Rat(r *big.Rat) Expr { return &number{r, r.RatString()} }

// Int is a whole number.
func Int(n int64) Expr { return Rat(big.NewRat(n, 1)) }

// Frac is p/q.
func Frac(p, q int64) Expr { return Rat(big.NewRat(p, q)) }

// Sym is a symbol as an expression.
func Sym(s *Symbol) Expr { return &symbol{s} }

// Equal reports whether two expressions have the same canonical form.
func Equal(a, b Expr) bool { return a.key() == b.key() }

// Number returns the value of an expression that is a number, else nil.
func Number(e Expr) *big.Rat {
	if n, ok := e.(*number); ok {
		return n.v
	}
	return nil
}

// IsSymbol returns the symbol that an expression is, else nil.
func IsSymbol(e Expr) *Symbol {
	if s, ok := e.(*symbol); ok {
		return s.s
	}
	return nil
}

func isZero(e Expr) bool { n := Number(e); return n != nil && n.Sign() == 0 }

// Neg is -e.
func Neg(e Expr) Expr { return Mul(Int(-1), e) }

// Sub is a - b.
func Sub(a, b Expr) Expr { return Add(a, Neg(b)) }

// Div is a / b.
func Div(a, b Expr) Expr { return Mul(a, Pow(b, big.NewRat(-1, 1))) }

// Inv is 1 / e.
func Inv(e Expr) Expr { return Pow(e, big.NewRat(-1, 1)) }

// Sqrt is the square root.
func Sqrt(e Expr) Expr { return Pow(e, ratHalf) }

// Square is e^2.
func Square(e Expr) Expr { return Pow(e, big.NewRat(2, 1)) }

// Add is the sum.
func Add(xs ...Expr) Expr {
	b := sumBuilder{constant: new(big.Rat), terms: map[string]term{}}
	for _, x := range xs {
		b.add(x, ratOne)
	}
	return b.done()
}

type sumBuilder struct {
	constant *big.Rat
	terms    map[string]term
}

func (b *sumBuilder) add(x Expr, times *big.Rat) {
	switch x := x.(type) {
	case *number:
		b.constant.Add(b.constant, mulRat(x.v, times))
	case *sum:
		b.constant.Add(b.constant, mulRat(x.constant, times))
		for _, t := range x.terms {
			b.put(mulRat(t.coef, times), t.rest)
		}
	case *product:
		b.put(mulRat(x.coef, times), monic(x))
	default:
		b.put(times, x)
	}
}

func (b *sumBuilder) put(coef *big.Rat, rest Expr) {
	k := rest.key()
	if t, ok := b.terms[k]; ok {
		coef = new(big.Rat).Add(coef, t.coef)
	}
	b.terms[k] = term{coef, rest}
}

func (b *sumBuilder) done() Expr {
	terms := make([]term, 0, len(b.terms))
	for _, t := range b.terms {
		if t.coef.Sign() != 0 {
			terms = append(terms, t)
		}
	}
	if len(terms) == 0 {
		return Rat(b.constant)
	}
	if len(terms) == 1 && b.constant.Sign() == 0 {
		return scaled(terms[0].coef, terms[0].rest)
	}
	sort.Slice(terms, func(i, j int) bool { return terms[i].rest.key() < terms[j].rest.key() })
	return newSum(b.constant, terms)
}

func newSum(constant *big.Rat, terms []term) *sum {
	var k strings.Builder
	k.WriteString("(+" + constant.RatString())
	for _, t := range terms {
		k.WriteString(" " + t.coef.RatString() + "*" + t.rest.key())
	}
	k.WriteString(")")
	return &sum{constant, terms, k.String()}
}

// scaled is coef times an expression without a coefficient of its own.
func scaled(coef *big.Rat, rest Expr) Expr {
	if coef.Cmp(ratOne) == 0 {
		return rest
	}
	if p, ok := rest.(*product); ok {
		return newProduct(coef, p.factors)
	}
	return newProduct(coef, []factor{{rest, ratOne}})
}

// monic is a product without its coefficient.
func monic(p *product) Expr {
	if len(p.factors) == 1 && p.factors[0].exp.Cmp(ratOne) == 0 {
		return p.factors[0].base
	}
	return newProduct(ratOne, p.factors)
}

func newProduct(coef *big.Rat, factors []factor) *product {
	var k strings.Builder
	k.WriteString("[" + coef.RatString())
	for _, f := range factors {
		k.WriteString(" " + f.base.key())
		if f.exp.Cmp(ratOne) != 0 {
			k.WriteString("^" + f.exp.RatString())
		}
	}
	k.WriteString("]")
	return &product{coef, factors, k.String()}
}

// Mul is the product.
func Mul(xs ...Expr) Expr {
	b := productBuilder{coef: new(big.Rat).Set(ratOne), factors: map[string]factor{}}
	for _, x := range xs {
		b.mul(x)
	}
	return b.done()
}

type productBuilder struct {
	coef    *big.Rat
	factors map[string]factor
	// exponent collects the arguments of exponentials.
	exponent []Expr
}

func (b *productBuilder) mul(x Expr) {
	switch x := x.(type) {
	case *number:
		b.coef.Mul(b.coef, x.v)
	case *product:
		b.coef.Mul(b.coef, x.coef)
		for _, f := range x.factors {
			b.put(f.base, f.exp)
		}
	default:
		b.put(x, ratOne)
	}
}

func (b *productBuilder) put(base Expr, exp *big.Rat) {
	if c, ok := base.(*call); ok && c.f == expFunction {
		b.exponent = append(b.exponent, Mul(Rat(exp), c.args[0]))
		return
	}
	if s, ok := base.(*sum); ok {
		content, primitive := s.primitive(exp.IsInt())
		if primitive != s {
			coef, root := numberPower(content, exp)
			b.coef.Mul(b.coef, coef)
			for _, f := range root {
				b.put(f.base, f.exp)
			}
			base = primitive
		}
	}
	k := base.key()
	if f, ok := b.factors[k]; ok {
		exp = new(big.Rat).Add(exp, f.exp)
	}
	b.factors[k] = factor{base, exp}
}

func (b *productBuilder) done() Expr {
	if b.coef.Sign() == 0 {
		return Zero
	}
	if len(b.exponent) > 0 {
		e := Exp(Add(b.exponent...))
		b.exponent = nil
		if c, ok := e.(*call); ok && c.f == expFunction {
			b.factors[c.key()] = factor{c, ratOne}
		} else {
			b.mulRaw(e)
		}
	}
	factors := make([]factor, 0, len(b.factors))
	for _, f := range b.factors {
		switch base := f.base.(type) {
		case *number: // a root that may have grown to a whole power
			if f.exp.Sign() == 0 {
				continue
			}
			coef, root := numberPower(base.v, f.exp)
			b.coef.Mul(b.coef, coef)
			factors = append(factors, root...)
			continue
		case *call:
			if base.f == absFunction && isEven(f.exp) {
				factors = append(factors, factor{base.args[0], f.exp})
				continue
			}
		}
		if f.exp.Sign() != 0 {
			factors = append(factors, f)
		}
	}
	if len(factors) == 0 {
		return Rat(b.coef)
	}
	if len(factors) == 1 && factors[0].exp.Cmp(ratOne) == 0 {
		if b.coef.Cmp(ratOne) == 0 {
			return factors[0].base
		}
		if s, ok := factors[0].base.(*sum); ok {
			c := sumBuilder{constant: new(big.Rat), terms: map[string]term{}}
			c.add(s, b.coef)
			return c.done()
		}
	}
	sort.Slice(factors, func(i, j int) bool { return factors[i].base.key() < factors[j].base.key() })
	return newProduct(b.coef, factors)
}

// mulRaw multiplies by an expression whose exponentials are already collected.
func (b *productBuilder) mulRaw(e Expr) {
	p, ok := e.(*product)
	if !ok {
		b.mul(e)
		return
	}
	b.coef.Mul(b.coef, p.coef)
	for _, f := range p.factors {
		k := f.base.key()
		exp := f.exp
		if g, ok := b.factors[k]; ok {
			exp = new(big.Rat).Add(exp, g.exp)
		}
		b.factors[k] = factor{f.base, exp}
	}
}

// Pow is base^q for a rational q. Where a fractional power of a factor of
// unknown sign is taken, an even power becomes a power of the absolute value.
// The whole is read where it is defined: of several factors of unknown sign each
// stands with its absolute value, a single one takes the sign of the coefficient.
func Pow(base Expr, q *big.Rat) Expr {
	if q.Sign() == 0 {
		return One
	}
	if q.Cmp(ratOne) == 0 {
		return base
	}
	switch x := base.(type) {
	case *number:
		coef, root := numberPower(x.v, q)
		if len(root) == 0 {
			return Rat(coef)
		}
		return newProduct(coef, root)
	case *product:
		if q.IsInt() {
			parts := make([]Expr, 0, len(x.factors)+1)
			parts = append(parts, Pow(Rat(x.coef), q))
			for _, f := range x.factors {
				parts = append(parts, Pow(f.base, mulRat(f.exp, q)))
			}
			return Mul(parts...)
		}
		return rootOfProduct(x, q)
	case *sum:
		content, primitive := x.primitive(q.IsInt())
		if primitive != x {
			return Mul(Pow(Rat(content), q), newProduct(ratOne, []factor{{primitive, q}}))
		}
	case *call:
		if x.f == expFunction {
			return Exp(Mul(Rat(q), x.args[0]))
		}
		if x.f == absFunction && isEven(q) {
			return Pow(x.args[0], q)
		}
	}
	return newProduct(ratOne, []factor{{base, q}})
}

// rootOfProduct is a fractional power of a product, factor by factor.
func rootOfProduct(x *product, q *big.Rat) Expr {
	unsure := 0
	for _, f := range x.factors {
		if f.exp.IsInt() && !isEven(f.exp) && !Positive(f.base) {
			unsure++
		}
	}
	coef := x.coef
	if unsure > 0 {
		coef = new(big.Rat).Abs(coef)
	}
	parts := []Expr{Pow(Rat(coef), q)}
	for _, f := range x.factors {
		e := mulRat(f.exp, q)
		base := f.base
		switch {
		case Positive(base) || !f.exp.IsInt():
		case isEven(f.exp) || unsure > 1:
			base = Abs(base)
		case x.coef.Sign() < 0:
			base = Neg(base)
		}
		parts = append(parts, Pow(base, e))
	}
	return Mul(parts...)
}

// primitive splits the content off a sum, so that coefficients are whole
// numbers without a common divisor. With signed, the sign is split off too: the
// primitive part is positive on the support where that is known, else its
// constant or first coefficient is.
func (e *sum) primitive(signed bool) (content *big.Rat, primitive *sum) {
	num, den := new(big.Int), big.NewInt(1)
	collect := func(c *big.Rat) {
		if c.Sign() != 0 {
			num.GCD(nil, nil, num, new(big.Int).Abs(c.Num()))
			g := new(big.Int).GCD(nil, nil, den, c.Denom())
			den.Mul(den, new(big.Int).Quo(c.Denom(), g))
		}
	}
	collect(e.constant)
	for _, t := range e.terms {
		collect(t.coef)
	}
	content = new(big.Rat).SetFrac(num, den)
	if signed && e.negative() {
		content.Neg(content)
	}
	if content.Cmp(ratOne) == 0 {
		return content, e
	}
	inverse := new(big.Rat).Inv(content)
	terms := make([]term, len(e.terms))
	for i, t := range e.terms {
		terms[i] = term{mulRat(t.coef, inverse), t.rest}
	}
	return content, newSum(mulRat(e.constant, inverse), terms)
}

// negative says whether the sign should be split off.
func (e *sum) negative() bool {
	low, high := bounds(e)
	switch {
	case low != nil && low.Sign() >= 0:
		return false
	case high != nil && high.Sign() <= 0:
		return true
	case e.constant.Sign() != 0:
		return e.constant.Sign() < 0
	}
	return e.terms[0].coef.Sign() < 0
}

// numberPower is v^q as a coefficient and at most one root.
func numberPower(v, q *big.Rat) (*big.Rat, []factor) {
	whole := new(big.Int).Div(q.Num(), q.Denom()) // floor
	rest := new(big.Rat).Sub(q, new(big.Rat).SetInt(whole))
	coef := ratPower(v, whole)
	if rest.Sign() == 0 || v.Cmp(ratOne) == 0 {
		return coef, nil
	}
	if v.Sign() == 0 {
		return new(big.Rat), nil
	}
	if n := rest.Denom().Int64(); v.Sign() > 0 && rest.Denom().IsInt64() {
		a, b := exactRoot(v.Num(), n), exactRoot(v.Denom(), n)
		if a != nil && b != nil {
			root := ratPower(new(big.Rat).SetFrac(a, b), rest.Num())
			return coef.Mul(coef, root), nil
		}
	}
	return coef, []factor{{Rat(v), rest}}
}

// exactRoot is the n-th root of a non-negative whole number, nil if not whole.
func exactRoot(v *big.Int, n int64) *big.Int {
	if v.Sign() == 0 || v.Cmp(big.NewInt(1)) == 0 {
		return v
	}
	if n == 2 {
		r := new(big.Int).Sqrt(v)
		if new(big.Int).Mul(r, r).Cmp(v) == 0 {
			return r
		}
		return nil
	}
	low, high := big.NewInt(1), new(big.Int).Lsh(big.NewInt(1), uint(int64(v.BitLen())/n+1))
	for low.Cmp(high) <= 0 {
		mid := new(big.Int).Rsh(new(big.Int).Add(low, high), 1)
		switch new(big.Int).Exp(mid, big.NewInt(n), nil).Cmp(v) {
		case 0:
			return mid
		case -1:
			low = mid.Add(mid, big.NewInt(1))
		default:
			high = mid.Sub(mid, big.NewInt(1))
		}
	}
	return nil
}

func ratPower(v *big.Rat, n *big.Int) *big.Rat {
	abs := new(big.Int).Abs(n)
	r := new(big.Rat).SetFrac(new(big.Int).Exp(v.Num(), abs, nil), new(big.Int).Exp(v.Denom(), abs, nil))
	if n.Sign() < 0 {
		if r.Sign() == 0 {
			return r
		}
		r.Inv(r)
	}
	return r
}

func mulRat(a, b *big.Rat) *big.Rat { return new(big.Rat).Mul(a, b) }

func isEven(q *big.Rat) bool { return q.IsInt() && q.Num().Bit(0) == 0 }
