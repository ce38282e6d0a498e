package symbolic

import (
	"errors"
	"math/big"
)

// polyFactor is base^power.
type polyFactor struct {
	base  *poly
	power int
}

// factorPoly splits a polynomial into powers of generators, contents,
// square-free parts, rational linear factors and factors of quadratics with a
// square discriminant. The coefficient and the factors multiply back to p
// exactly; a factor may still be reducible.
func factorPoly(p *poly) (*big.Rat, []polyFactor, error) {
	whole := p
	p, _ = p.normal()
	var out []polyFactor
	// Powers of generators.
	for v := range p.n {
		least := -1
		for k := range p.t {
			if e := exponent(k, v); least < 0 || e < least {
				least = e
			}
		}
		if least > 0 {
			out = append(out, polyFactor{monomial(p.ring, v, 1), least})
			p = p.divide(monomial(p.ring, v, least))
		}
	}
	parts, err := splitContents(p)
	if err != nil {
		return nil, nil, err
	}
	for _, part := range parts {
		free, err := squareFree(part)
		if err != nil {
			return nil, nil, err
		}
		for _, f := range free {
			pieces, err := splitQuadratic(f.base)
			if err != nil {
				return nil, nil, err
			}
			for _, piece := range pieces {
				if q, _ := piece.normal(); !q.constant() {
					out = append(out, polyFactor{q, f.power})
				}
			}
		}
	}
	// The coefficient is what is left after multiplying back.
	product := constantPoly(p.ring, ratOne)
	for _, f := range out {
		power, err := f.base.power(f.power)
		if err != nil {
			return nil, nil, err
		}
		if product, err = product.mul(power); err != nil {
			return nil, nil, err
		}
	}
	coef := whole.divide(product)
	if coef == nil || !coef.constant() || coef.zero() {
		return nil, nil, errors.New("the factors do not multiply back")
	}
	return coef.t[coef.leading()], out, nil
}

// splitContents separates factors that are free of some generator.
func splitContents(p *poly) ([]*poly, error) {
	for v := range p.n {
		if p.degree(v) == 0 {
			continue
		}
		c, err := contentIn(p, v)
		if err != nil {
			return nil, err
		}
		if c.constant() {
			continue
		}
		a, err := splitContents(c)
		if err != nil {
			return nil, err
		}
		b, err := splitContents(p.divide(c))
		return append(a, b...), err
	}
	return []*poly{p}, nil
}

// squareFree is Yun's algorithm in the first generator that occurs; p has no
// content there.
func squareFree(p *poly) ([]polyFactor, error) {
	v := -1
	for i := range p.n {
		if p.degree(i) > 0 {
			v = i
			break
		}
	}
	if v < 0 || p.degree(v) == 1 {
		return []polyFactor{{p, 1}}, nil
	}
	g, err := gcd(p, p.derivative(v))
	if err != nil {
		return nil, err
	}
	if g.constant() {
		return []polyFactor{{p, 1}}, nil
	}
	var out []polyFactor
	w := p.divide(g)
	for power := 1; !w.constant(); power++ {
		y, err := gcd(w, g)
		if err != nil {
			return nil, err
		}
		if z := w.divide(y); !z.constant() {
			out = append(out, polyFactor{z, power})
		}
		w, g = y, g.divide(y)
	}
	return out, nil
}

// splitQuadratic splits off linear factors: rational roots when one generator
// occurs, or the roots of a quadratic in some generator whose discriminant is a
// square.
func splitQuadratic(p *poly) ([]*poly, error) {
	only, count := -1, 0
	for v := range p.n {
		if p.degree(v) > 0 {
			only, count = v, count+1
		}
	}
	if count == 0 {
		return []*poly{p}, nil
	}
	if count == 1 {
		return rationalRoots(p, only), nil
	}
	for v := range p.n {
		switch p.degree(v) {
		case 0:
			continue
		case 1:
			return []*poly{p}, nil // linear without content: irreducible
		case 2:
		default:
			continue
		}
		cs := p.coefficients(v)
		bb, err := cs[1].mul(cs[1])
		if err != nil {
			return nil, err
		}
		ac, err := cs[2].mul(cs[0])
		if err != nil {
			return nil, err
		}
		root, err := squareRoot(bb.add(ac, big.NewRat(-4, 1)))
		if err != nil {
			return nil, err
		}
		if root == nil {
			return []*poly{p}, nil
		}
		// p divides (2a v + b - r)(2a v + b + r) up to a factor free of v.
		ax, err := cs[2].mul(monomial(p.ring, v, 1))
		if err != nil {
			return nil, err
		}
		linear := ax.add(ax, ratOne).add(cs[1], ratOne)
		f, err := gcd(p, linear.add(root, big.NewRat(-1, 1)))
		if err != nil {
			return nil, err
		}
		if f.constant() {
			return []*poly{p}, nil
		}
		return []*poly{f, p.divide(f)}, nil
	}
	return []*poly{p}, nil
}

// squareRoot is the polynomial whose square p is, nil when there is none.
func squareRoot(p *poly) (*poly, error) {
	root, rest := newPoly(p.ring), p
	var lead string
	var leadCoef *big.Rat
	for step := 0; !rest.zero(); step++ {
		if step > mostTerms {
			return nil, nil
		}
		k := rest.leading()
		if lead == "" {
			half := make([]byte, len(k))
			for i := range p.n {
				e := exponent(k, i)
				if e%2 != 0 {
					return nil, nil
				}
				half[2*i], half[2*i+1] = byte(e/2>>8), byte(e/2)
			}
			c, irrational := numberPower(rest.t[k], ratHalf)
			if rest.t[k].Sign() < 0 || len(irrational) > 0 {
				return nil, nil
			}
			lead, leadCoef = string(half), c
			root.put(lead, c)
		} else {
			d, ok := subKeys(k, lead)
			if !ok || d >= lead {
				return nil, nil
			}
			root.put(d, new(big.Rat).Quo(rest.t[k], mulRat(big.NewRat(2, 1), leadCoef)))
		}
		square, err := root.mul(root)
		if err != nil {
			return nil, err
		}
		rest = p.add(square, big.NewRat(-1, 1))
	}
	return root, nil
}

// rationalRoots splits off v - r for the rational roots r with numerator and
// denominator up to a bound.
func rationalRoots(p *poly, v int) []*poly {
	p, _ = p.normal()
	var out []*poly
	for p.degree(v) > 1 {
		cs := p.coefficients(v)
		zero := make([]byte, 2*p.n)
		low, high := cs[0].t[string(zero)], cs[len(cs)-1].t[string(zero)]
		found := false
		if low == nil {
			break
		}
	search:
		for _, b := range divisors(high.Num()) {
			for _, a := range divisors(low.Num()) {
				for _, sign := range []int64{1, -1} {
					r := big.NewRat(sign*a, b)
					f := monomial(p.ring, v, 1).add(constantPoly(p.ring, r), big.NewRat(-1, 1))
					if q := p.divide(f); q != nil {
						out, p, found = append(out, f), q, true
						p, _ = p.normal()
						break search
					}
				}
			}
		}
		if !found {
			break
		}
	}
	return append(out, p)
}

// divisors of a whole number up to 10^4; only 1 beyond.
func divisors(n *big.Int) []int64 {
	abs := new(big.Int).Abs(n)
	if !abs.IsInt64() || abs.Int64() > 10_000 {
		return []int64{1}
	}
	var out []int64
	for i, m := int64(1), abs.Int64(); i <= m && len(out) < 64; i++ {
		if m%i == 0 {
			out = append(out, i)
		}
	}
	return out
}
