package symbolic

import (
	"encoding/binary"
	"errors"
	"math/big"
	"sort"
)

// errLarge ends work on polynomials that have grown past a bound.
var errLarge = errors.New("the expression is too large to factor")

// mostSize bounds the expressions that are factored at all.
const mostSize = 250

// mostTerms bounds the terms of a polynomial.
const mostTerms = 600

// Bounds of the work on polynomials: operations on terms for one expression,
// bits of a coefficient, an exponent.
const (
	mostWork     = 20_000
	mostBits     = 4000
	mostExponent = 400
)

// ring is the n generators that polynomials are in, with the work left.
type ring struct{ n, left int }

// exhausted is the panic that ends work past its bound; factoredRatio turns it
// into errLarge.
type exhausted struct{}

func (r *ring) spend(n int) {
	if r.left -= n; r.left < 0 {
		panic(exhausted{})
	}
}

// poly is a polynomial with rational coefficients; the key of a monomial holds
// its exponents, two bytes each.
type poly struct {
	*ring
	t map[string]*big.Rat
}

func newPoly(r *ring) *poly { return &poly{r, map[string]*big.Rat{}} }

func constantPoly(r *ring, c *big.Rat) *poly {
	p := newPoly(r)
	if c.Sign() != 0 {
		p.t[string(make([]byte, 2*r.n))] = c
	}
	return p
}

func monomial(r *ring, generator, power int) *poly {
	k := make([]byte, 2*r.n)
	binary.BigEndian.PutUint16(k[2*generator:], uint16(power))
	return &poly{r, map[string]*big.Rat{string(k): ratOne}}
}

func exponent(k string, i int) int { return int(k[2*i])<<8 | int(k[2*i+1]) }

func (p *poly) zero() bool { return len(p.t) == 0 }

func (p *poly) constant() bool {
	return p.zero() || len(p.t) == 1 && p.t[string(make([]byte, 2*p.n))] != nil
}

// keys are the monomials in decreasing lexicographic order.
func (p *poly) keys() []string {
	ks := make([]string, 0, len(p.t))
	for k := range p.t {
		ks = append(ks, k)
	}
	sort.Sort(sort.Reverse(sort.StringSlice(ks)))
	return ks
}

func (p *poly) leading() string {
	best := ""
	for k := range p.t {
		if best == "" || k > best {
			best = k
		}
	}
	return best
}

func (p *poly) put(k string, c *big.Rat) {
	if old, ok := p.t[k]; ok {
		c = new(big.Rat).Add(old, c)
	}
	if c.Sign() == 0 {
		delete(p.t, k)
		return
	}
	p.t[k] = c
}

func (p *poly) add(q *poly, times *big.Rat) *poly {
	r := newPoly(p.ring)
	for k, c := range p.t {
		r.t[k] = c
	}
	for k, c := range q.t {
		r.put(k, mulRat(c, times))
	}
	return r
}

func (p *poly) mul(q *poly) (*poly, error) {
	r := newPoly(p.ring)
	p.spend(len(p.t) * len(q.t))
	for a, c := range p.t {
		for b, d := range q.t {
			k, err := addKeys(a, b)
			if err != nil {
				return nil, err
			}
			e := mulRat(c, d)
			if e.Num().BitLen() > mostBits || e.Denom().BitLen() > mostBits {
				return nil, errLarge
			}
			r.put(k, e)
		}
		if len(r.t) > mostTerms {
			return nil, errLarge
		}
	}
	return r, nil
}

func (p *poly) power(n int) (*poly, error) {
	r := constantPoly(p.ring, ratOne)
	for range n {
		var err error
		if r, err = r.mul(p); err != nil {
			return nil, err
		}
	}
	return r, nil
}

func addKeys(a, b string) (string, error) {
	k := make([]byte, len(a))
	for i := 0; i < len(a); i += 2 {
		e := exponent(a, i/2) + exponent(b, i/2)
		if e > mostExponent {
			return "", errLarge
		}
		binary.BigEndian.PutUint16(k[i:], uint16(e))
	}
	return string(k), nil
}

// subKeys is a - b, false when some exponent would be negative.
func subKeys(a, b string) (string, bool) {
	k := make([]byte, len(a))
	for i := 0; i < len(a); i += 2 {
		e := exponent(a, i/2) - exponent(b, i/2)
		if e < 0 {
			return "", false
		}
		binary.BigEndian.PutUint16(k[i:], uint16(e))
	}
	return string(k), true
}

// divide is the exact quotient p / q, nil when q does not divide p.
func (p *poly) divide(q *poly) *poly {
	rest, result := p.add(newPoly(p.ring), ratOne), newPoly(p.ring)
	lead := q.leading()
	for !rest.zero() {
		p.spend(len(rest.t) + len(q.t))
		k := rest.leading()
		d, ok := subKeys(k, lead)
		if !ok {
			return nil
		}
		c := new(big.Rat).Quo(rest.t[k], q.t[lead])
		result.put(d, c)
		minus := new(big.Rat).Neg(c)
		for b, e := range q.t {
			m, err := addKeys(d, b)
			if err != nil {
				return nil
			}
			rest.put(m, mulRat(e, minus))
		}
	}
	return result
}

// normal divides by the leading coefficient's sign and the content of the
// coefficients; it returns what was divided by.
func (p *poly) normal() (*poly, *big.Rat) {
	if p.zero() {
		return p, ratOne
	}
	num, den := new(big.Int), big.NewInt(1)
	for _, c := range p.t {
		p.spend(1 + (c.Num().BitLen()+c.Denom().BitLen())/128)
		num.GCD(nil, nil, num, new(big.Int).Abs(c.Num()))
		g := new(big.Int).GCD(nil, nil, den, c.Denom())
		den.Mul(den, new(big.Int).Quo(c.Denom(), g))
	}
	content := new(big.Rat).SetFrac(num, den)
	if p.t[p.leading()].Sign() < 0 {
		content.Neg(content)
	}
	inverse, r := new(big.Rat).Inv(content), newPoly(p.ring)
	for k, c := range p.t {
		r.t[k] = mulRat(c, inverse)
	}
	return r, content
}

// degree is the degree in one generator.
func (p *poly) degree(v int) int {
	d := 0
	for k := range p.t {
		d = max(d, exponent(k, v))
	}
	return d
}

// coefficients are those of the powers of one generator, lowest first.
func (p *poly) coefficients(v int) []*poly {
	cs := make([]*poly, p.degree(v)+1)
	for i := range cs {
		cs[i] = newPoly(p.ring)
	}
	for k, c := range p.t {
		b := []byte(k)
		b[2*v], b[2*v+1] = 0, 0
		cs[exponent(k, v)].put(string(b), c)
	}
	return cs
}

// gcd is the greatest common divisor, normalised, by primitive remainder
// sequences in one generator after the other.
func gcd(p, q *poly) (*poly, error) {
	if p.zero() {
		g, _ := q.normal()
		return g, nil
	}
	if q.zero() {
		g, _ := p.normal()
		return g, nil
	}
	if p.constant() || q.constant() {
		return constantPoly(p.ring, ratOne), nil
	}
	for v := range p.n {
		a, b := p.degree(v), q.degree(v)
		switch {
		case a == 0 && b == 0:
			continue
		case a == 0:
			c, err := contentIn(q, v)
			if err != nil {
				return nil, err
			}
			return gcd(p, c)
		case b == 0:
			c, err := contentIn(p, v)
			if err != nil {
				return nil, err
			}
			return gcd(c, q)
		}
		return gcdIn(p, q, v)
	}
	return constantPoly(p.ring, ratOne), nil
}

func contentIn(p *poly, v int) (*poly, error) {
	content := newPoly(p.ring)
	for _, c := range p.coefficients(v) {
		var err error
		if content, err = gcd(content, c); err != nil {
			return nil, err
		}
		if content.constant() && !content.zero() {
			break
		}
	}
	return content, nil
}

func gcdIn(p, q *poly, v int) (*poly, error) {
	cp, err := contentIn(p, v)
	if err != nil {
		return nil, err
	}
	cq, err := contentIn(q, v)
	if err != nil {
		return nil, err
	}
	content, err := gcd(cp, cq)
	if err != nil {
		return nil, err
	}
	a, b := p.divide(cp), q.divide(cq)
	if a.degree(v) < b.degree(v) {
		a, b = b, a
	}
	for {
		r, err := pseudoRemainder(a, b, v)
		if err != nil {
			return nil, err
		}
		if r.zero() {
			break
		}
		if r.degree(v) == 0 {
			return content, nil
		}
		c, err := contentIn(r, v)
		if err != nil {
			return nil, err
		}
		r, _ = r.divide(c).normal()
		a, b = b, r
	}
	g, err := b.mul(content)
	if err != nil {
		return nil, err
	}
	g, _ = g.normal()
	return g, nil
}

func pseudoRemainder(a, b *poly, v int) (*poly, error) {
	db := b.degree(v)
	lead := b.coefficients(v)[db]
	for !a.zero() && a.degree(v) >= db {
		da := a.degree(v)
		top := a.coefficients(v)[da]
		x, err := a.mul(lead)
		if err != nil {
			return nil, err
		}
		y, err := b.mul(top)
		if err != nil {
			return nil, err
		}
		if da > db {
			if y, err = y.mul(monomial(a.ring, v, da-db)); err != nil {
				return nil, err
			}
		}
		a = x.add(y, big.NewRat(-1, 1))
		if !a.zero() && a.degree(v) == da {
			return nil, errLarge // cannot happen; never loop
		}
		a, _ = a.normal()
	}
	return a, nil
}

// derivative by a generator.
func (p *poly) derivative(v int) *poly {
	r := newPoly(p.ring)
	for k, c := range p.t {
		e := exponent(k, v)
		if e == 0 {
			continue
		}
		b := []byte(k)
		binary.BigEndian.PutUint16(b[2*v:], uint16(e-1))
		r.put(string(b), mulRat(c, big.NewRat(int64(e), 1)))
	}
	return r
}
