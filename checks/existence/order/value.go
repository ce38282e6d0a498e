package order

import (
	"fmt"
	"math/big"
)

// Mono is a scale function of x → 0+: x^A · L^B · LL^C · exp(P), where
// L = log(1/x), LL = log L, and P is an exact sum of terms that tend to
// infinity and are no multiple of L or LL.
type Mono struct {
	A, B, C Coef
	P       *Series // nil is 0
}

var monoOne = Mono{A: zero, B: zero, C: zero}

func (m Mono) isOne() bool {
	return m.P == nil && m.A.isZero() && m.B.isZero() && m.C.isZero()
}

// Term is a coefficient times a scale function.
type Term struct {
	C Coef
	M Mono
}

// Series is a finite sum of terms, largest first, plus a remainder that is at
// most a constant times Rem for small x. A nil Rem means none.
type Series struct {
	Terms []Term
	Rem   *Mono
}

// maxTerms is how many terms are kept; the first one beyond becomes the
// remainder.
const maxTerms = 4

// Unknown is the reason why an expansion could not be made.
type Unknown struct{ Reason string }

func (u *Unknown) Error() string { return u.Reason }

func unknown(format string, args ...any) { panic(&Unknown{fmt.Sprintf(format, args...)}) }

func constant(c Coef) *Series {
	if c.isZero() {
		return &Series{}
	}
	return &Series{Terms: []Term{{c, monoOne}}}
}

// isExactZero reports a series that is 0.
func (s *Series) isExactZero() bool { return len(s.Terms) == 0 && s.Rem == nil }

// isConst returns the value of a series that is one constant.
func (s *Series) isConst() (Coef, bool) {
	if s.Rem != nil || len(s.Terms) > 1 {
		return zero, false
	}
	if len(s.Terms) == 0 {
		return zero, true
	}
	return s.Terms[0].C, s.Terms[0].M.isOne()
}

// lead is the leading term; it panics with Unknown when there is none to be
// seen, and must not be asked of 0.
func (s *Series) lead() Term {
	if len(s.Terms) == 0 {
		unknown("the leading term cancels")
	}
	return s.Terms[0]
}

// compareMono is 1 when a/b → ∞, −1 when a/b → 0 and 0 when a = b.
func compareMono(a, b Mono) int {
	if a.P == nil && b.P == nil {
		if s := mustCompare(b.A, a.A); s != 0 {
			return s
		}
		if s := mustCompare(a.B, b.B); s != 0 {
			return s
		}
		return mustCompare(a.C, b.C)
	}
	if a.P != nil && b.P != nil && len(a.P.Terms) == 1 && len(b.P.Terms) == 1 {
		// The common case: both exponents are one term of the same order, larger
		// than L.
		s, t := a.P.Terms[0], b.P.Terms[0]
		if s.M.P == nil && t.M.P == nil && compareMono(s.M, t.M) == 0 && compareMono(s.M, monoL) > 0 {
			if c := mustCompare(s.C, t.C); c != 0 {
				return c
			}
			return compareMono(Mono{A: a.A, B: a.B, C: a.C}, Mono{A: b.A, B: b.B, C: b.C})
		}
	}
	d := logRatio(a, b)
	if len(d.Terms) == 0 {
		return mustCompare(a.C, b.C)
	}
	sign, ok := d.Terms[0].C.Sign()
	if !ok {
		unknown("two orders can't be told apart")
	}
	return sign
}

func mustCompare(a, b Coef) int {
	s, ok := compareCoef(a, b)
	if !ok {
		unknown("two exponents can't be told apart")
	}
	return s
}

var (
	monoL  = Mono{A: zero, B: one, C: zero}
	monoLL = Mono{A: zero, B: zero, C: one}
)

// logRatio is log(a/b) without the part from LL^C.
func logRatio(a, b Mono) *Series {
	d := &Series{}
	if a.P != nil {
		d = a.P
	}
	if b.P != nil {
		d = addSeries(d, scale(b.P, Int(-1)))
	}
	terms := append([]Term(nil), d.Terms...)
	if c := subCoef(b.A, a.A); !c.isZero() {
		terms = append(terms, Term{c, monoL})
	}
	if c := subCoef(a.B, b.B); !c.isZero() {
		terms = append(terms, Term{c, monoLL})
	}
	return collect(terms, nil)
}

func mulMono(a, b Mono) Mono {
	m := Mono{A: addCoef(a.A, b.A), B: addCoef(a.B, b.B), C: addCoef(a.C, b.C), P: a.P}
	if a.P == nil {
		m.P = b.P
	} else if b.P != nil {
		m.P = exactOrNil(addSeries(a.P, b.P))
	}
	return m
}

func exactOrNil(s *Series) *Series {
	if s.Rem != nil {
		unknown("an exponent has too many terms")
	}
	if len(s.Terms) == 0 {
		return nil
	}
	return s
}

func powMono(m Mono, q Coef) Mono {
	r := Mono{A: mulCoef(m.A, q), B: mulCoef(m.B, q), C: mulCoef(m.C, q)}
	if m.P != nil {
		r.P = exactOrNil(scale(m.P, q))
	}
	return r
}

// collect sorts terms, joins equal ones and cuts what the remainder hides.
func collect(terms []Term, rem *Mono) *Series {
	out := make([]Term, 0, len(terms))
	for _, t := range terms {
		if t.C.isZero() {
			continue
		}
		if rem != nil && compareMono(t.M, *rem) <= 0 {
			continue
		}
		i := len(out)
		same := false
		for i > 0 {
			c := compareMono(t.M, out[i-1].M)
			if c < 0 {
				break
			}
			if c == 0 {
				same = true
				break
			}
			i--
		}
		if same {
			sum := addCoef(out[i-1].C, t.C)
			out[i-1].C = sum
			continue
		}
		out = append(out, Term{})
		copy(out[i+1:], out[i:])
		out[i] = t
	}
	// Drop what cancelled; a coefficient that may be 0 turns into remainder.
	kept := out[:0]
	for _, t := range out {
		if t.C.isZero() {
			continue
		}
		if _, ok := t.C.Sign(); !ok {
			m := t.M
			rem = &m
			break
		}
		kept = append(kept, t)
	}
	if len(kept) > maxTerms {
		m := kept[maxTerms].M
		kept = kept[:maxTerms]
		if rem == nil || compareMono(m, *rem) > 0 {
			rem = &m
		}
	}
	return &Series{Terms: kept, Rem: rem}
}

func larger(a, b *Mono) *Mono {
	switch {
	case a == nil:
		return b
	case b == nil:
		return a
	case compareMono(*a, *b) >= 0:
		return a
	}
	return b
}

func addSeries(a, b *Series) *Series {
	if a.isExactZero() {
		return b
	}
	if b.isExactZero() {
		return a
	}
	terms := make([]Term, 0, len(a.Terms)+len(b.Terms))
	terms = append(append(terms, a.Terms...), b.Terms...)
	return collect(terms, larger(a.Rem, b.Rem))
}

func scale(a *Series, c Coef) *Series {
	if c.isZero() {
		return &Series{}
	}
	if c.isOne() {
		return a
	}
	terms := make([]Term, len(a.Terms))
	for i, t := range a.Terms {
		terms[i] = Term{mulCoef(t.C, c), t.M}
	}
	if _, ok := c.Sign(); ok {
		return &Series{Terms: terms, Rem: a.Rem} // the order is kept
	}
	return collect(terms, a.Rem)
}

func mulSeries(a, b *Series) *Series {
	if a.isExactZero() || b.isExactZero() {
		return &Series{}
	}
	if c, ok := a.isConst(); ok {
		return scale(b, c)
	}
	if c, ok := b.isConst(); ok {
		return scale(a, c)
	}
	if len(a.Terms) == 1 && a.Rem == nil {
		return mulTerm(b, a.Terms[0])
	}
	if len(b.Terms) == 1 && b.Rem == nil {
		return mulTerm(a, b.Terms[0])
	}
	var rem *Mono
	withLead := func(r *Mono, s *Series) {
		if r == nil {
			return
		}
		if len(s.Terms) > 0 {
			m := mulMono(*r, s.Terms[0].M)
			rem = larger(rem, &m)
		}
		if s.Rem != nil {
			m := mulMono(*r, *s.Rem)
			rem = larger(rem, &m)
		}
	}
	withLead(a.Rem, b)
	withLead(b.Rem, a)
	terms := make([]Term, 0, len(a.Terms)*len(b.Terms))
	for _, s := range a.Terms {
		for _, t := range b.Terms {
			terms = append(terms, Term{mulCoef(s.C, t.C), mulMono(s.M, t.M)})
		}
	}
	return collect(terms, rem)
}

// relative splits s = c·M·(1 + δ) and returns δ.
func relative(s *Series) (Term, *Series) {
	t := s.lead()
	inv, c := powMono(t.M, Int(-1)), invCoef(t.C)
	rest := &Series{Terms: s.Terms[1:], Rem: s.Rem}
	if rest.isExactZero() {
		return t, rest
	}
	terms := make([]Term, len(rest.Terms))
	for i, u := range rest.Terms {
		terms[i] = Term{mulCoef(u.C, c), mulMono(u.M, inv)}
	}
	var rem *Mono
	if rest.Rem != nil {
		m := mulMono(*rest.Rem, inv)
		rem = &m
	}
	return t, &Series{Terms: terms, Rem: rem}
}

// taylor sums coefficient(k)·δ^k for k = 0…n with remainder O(δ^(n+1)); δ must
// tend to 0.
func taylor(d *Series, coefficient func(k int) Coef) *Series {
	sum := constant(coefficient(0))
	if d.isExactZero() {
		return sum
	}
	size := biggest(d)
	if compareMono(size, monoOne) >= 0 {
		unknown("an expansion has no small part")
	}
	const n = 3
	if len(d.Terms) == 1 && d.Rem == nil {
		// One term: its powers are written down, already in order.
		t := d.Terms[0]
		terms := sum.Terms
		c := one
		for k := 1; k <= n; k++ {
			c = mulCoef(c, t.C)
			if w := mulCoef(c, coefficient(k)); !w.isZero() {
				terms = append(terms, Term{w, powMono(t.M, Int(int64(k)))})
			}
		}
		m := powMono(t.M, Int(n+1))
		return &Series{Terms: terms, Rem: &m}
	}
	power := constant(one)
	k := 1
	for ; k <= n; k++ {
		power = mulSeries(power, d)
		sum = addSeries(sum, scale(power, coefficient(k)))
		if len(d.Terms) == 0 {
			k++
			break
		}
	}
	m := powMono(size, Int(int64(k)))
	return addSeries(sum, &Series{Rem: &m})
}

func biggest(s *Series) Mono {
	if len(s.Terms) > 0 {
		return s.Terms[0].M
	}
	return *s.Rem
}

// recip is 1/s.
func recip(s *Series) *Series {
	if s.isExactZero() {
		unknown("division by 0")
	}
	t, d := relative(s)
	r := taylor(d, func(k int) Coef {
		if k%2 == 1 {
			return Int(-1)
		}
		return one
	})
	return mulTerm(r, Term{invCoef(t.C), powMono(t.M, Int(-1))})
}

func mulTerm(s *Series, t Term) *Series {
	if t.M.isOne() {
		return scale(s, t.C)
	}
	terms := make([]Term, len(s.Terms))
	for i, u := range s.Terms {
		terms[i] = Term{mulCoef(u.C, t.C), mulMono(u.M, t.M)}
	}
	var rem *Mono
	if s.Rem != nil {
		m := mulMono(*s.Rem, t.M)
		rem = &m
	}
	if _, ok := t.C.Sign(); ok {
		return &Series{Terms: terms, Rem: rem} // the order is kept
	}
	return collect(terms, rem)
}

// powSeries is s^q for an exact q; s must be positive unless q is whole.
func powSeries(s *Series, q *big.Rat) *Series {
	switch {
	case q.Sign() == 0:
		return constant(one)
	case q.Cmp(ratOne) == 0:
		return s
	case s.isExactZero():
		if q.Sign() > 0 {
			return s
		}
		unknown("division by 0")
	}
	t, d := relative(s)
	c := powCoef(t.C, q)
	r := taylor(d, func(k int) Coef { return Rat(binomial(q, k)) })
	return mulTerm(r, Term{c, powMono(t.M, Rat(q))})
}

func binomial(q *big.Rat, k int) *big.Rat {
	b := new(big.Rat).SetInt64(1)
	for i := 0; i < k; i++ {
		b.Mul(b, new(big.Rat).Sub(q, new(big.Rat).SetInt64(int64(i))))
		b.Quo(b, new(big.Rat).SetInt64(int64(i+1)))
	}
	return b
}

// logSeries is log s for a positive s.
func logSeries(s *Series) *Series {
	if s.isExactZero() {
		panic(Vanishes)
	}
	t, d := relative(s)
	if sign, ok := t.C.Sign(); !ok || sign <= 0 {
		unknown("logarithm of something that is not positive")
	}
	if !t.M.C.isZero() {
		unknown("a third iterated logarithm is needed")
	}
	var terms []Term
	if t.M.P != nil {
		terms = append(terms, t.M.P.Terms...)
	}
	terms = append(terms, Term{t.M.A.neg(), monoL}, Term{t.M.B, monoLL}, Term{logCoef(t.C), monoOne})
	r := collect(terms, nil)
	if d.isExactZero() {
		return r
	}
	return addSeries(r, taylor(d, func(k int) Coef {
		if k == 0 {
			return zero
		}
		sign := int64(1)
		if k%2 == 0 {
			sign = -1
		}
		return Rat(big.NewRat(sign, int64(k)))
	}))
}

// Vanishes is what a logarithm of exactly 0 panics with.
var Vanishes = &Unknown{"vanishes"}

// expSeries is e^s. Where s is known only up to a bounded remainder the result
// is known up to a factor between two positive constants.
func expSeries(s *Series) *Series {
	m := monoOne
	var p []Term
	var small []Term
	c := zero
	for _, t := range s.Terms {
		switch cmp := compareMono(t.M, monoOne); {
		case cmp == 0:
			c = t.C
		case cmp < 0:
			small = append(small, t)
		case t.M.P == nil && t.M.A.isZero() && t.M.B.isOne() && t.M.C.isZero():
			m.A = t.C.neg()
		case t.M.P == nil && t.M.A.isZero() && t.M.B.isZero() && t.M.C.isOne():
			m.B = t.C
		default:
			p = append(p, t)
		}
	}
	if len(p) > 0 {
		m.P = &Series{Terms: p}
	}
	coef := expCoef(c)
	d := &Series{Terms: small}
	if s.Rem != nil {
		switch compareMono(*s.Rem, monoOne) {
		case 1:
			unknown("the exponent is not known closely enough")
		case 0:
			return &Series{Terms: []Term{{positiveIf(opaque(Interval{0, inf}), true), m}}}
		}
		d.Rem = s.Rem
	}
	f := int64(1)
	r := taylor(d, func(k int) Coef {
		if k > 0 {
			f *= int64(k)
		} else {
			f = 1
		}
		return Rat(big.NewRat(1, f))
	})
	return mulTerm(r, Term{coef, m})
}
