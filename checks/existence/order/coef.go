package order

import (
	"math/big"
	"sort"
	"sync/atomic"
)

// Coef is a real number: a rational plus rational multiples of atoms, which are
// logarithms of primes or numbers that are only known to lie in an interval.
//
// A form without interval atoms can be tested for 0 without rounding: by unique factorisation
// logarithms of distinct primes are linearly independent over the rationals,
// and by Lindemann's theorem so are they together with 1.
type Coef struct {
	r    *big.Rat
	logs []logTerm
	iv   Interval
	pos  bool // known to be positive although the interval touches 0
}

// logTerm is q times an atom: the logarithm of the prime p, or, for a negative
// p, a number of which only an interval is known. The same p is the same number
// everywhere, so sums and differences of such numbers stay exact in them.
type logTerm struct {
	p  int64
	q  *big.Rat
	iv Interval // of an atom with negative p
}

var lastID atomic.Int64

const maxBits = 640 // beyond this size an exact number becomes an interval

// Rat is an exact coefficient.
func Rat(r *big.Rat) Coef {
	if r.IsInt() && r.Num().IsInt64() {
		if n := r.Num().Int64(); n >= -smallest && n <= smallest {
			return smallInts[n+smallest]
		}
	}
	if r.Num().BitLen()+r.Denom().BitLen() > 8*maxBits {
		return opaque(ratInterval(r))
	}
	return Coef{r: r, iv: ratInterval(r)}
}

// smallInts share their rationals, so that equal ones are seen at once.
const smallest = 64

var smallInts = func() (all [2*smallest + 1]Coef) {
	for n := int64(-smallest); n <= smallest; n++ {
		all[n+smallest] = Coef{r: new(big.Rat).SetInt64(n), iv: Interval{float64(n), float64(n)}}
	}
	return all
}()

// Int is a small exact coefficient.
func Int(n int64) Coef {
	if n >= -smallest && n <= smallest {
		return smallInts[n+smallest]
	}
	return Rat(new(big.Rat).SetInt64(n))
}

// Within is a number of which only an interval is known.
func Within(lo, hi float64) Coef { return opaque(Interval{lo, hi}) }

func opaque(iv Interval) Coef {
	if !iv.valid() {
		unknown("a constant could not be bounded")
	}
	return Coef{r: ratZero, logs: []logTerm{{p: -lastID.Add(1), q: ratOne, iv: iv}}, iv: iv}
}

func ratInterval(r *big.Rat) Interval {
	if r.IsInt() && r.Num().IsInt64() {
		if n := r.Num().Int64(); n < 1<<53 && n > -1<<53 {
			return Interval{float64(n), float64(n)}
		}
	}
	f, exact := r.Float64()
	if exact {
		return Interval{f, f}
	}
	return Interval{down(f), up(f)}
}

// Exact returns the rational value, nil when it is not known to be rational.
func (c Coef) Exact() *big.Rat {
	if len(c.logs) == 0 {
		return c.r
	}
	return nil
}

// Interval encloses the value.
func (c Coef) Interval() Interval { return c.iv }

// A rational that a double holds exactly shows its value in the interval.
func (c Coef) isOne() bool {
	return len(c.logs) == 0 && c.iv.Lo == 1 && c.iv.Hi == 1
}
func (c Coef) isZero() bool { return len(c.logs) == 0 && c.r.Sign() == 0 }

var (
	ratOne  = big.NewRat(1, 1)
	ratZero = new(big.Rat)
	one     = Int(1)
	zero    = Int(0)
)

// Sign is −1, 0 or 1; ok is false when it can't be told.
func (c Coef) Sign() (sign int, ok bool) {
	if c.pos {
		return 1, true
	}
	if len(c.logs) == 0 {
		return c.r.Sign(), true
	}
	if s, ok := c.iv.sign(); ok {
		return s, true
	}
	if c.r.Sign() != 0 || c.logs[0].p < 0 {
		return 0, false
	}
	return signOfLogs(c.logs)
}

// signOfLogs compares Π p^q with 1 in whole numbers.
func signOfLogs(logs []logTerm) (int, bool) {
	lcm := big.NewInt(1)
	for _, l := range logs {
		g := new(big.Int).GCD(nil, nil, lcm, l.q.Denom())
		lcm.Mul(lcm, new(big.Int).Div(l.q.Denom(), g))
	}
	if lcm.BitLen() > 12 {
		return 0, false
	}
	above, below := big.NewInt(1), big.NewInt(1)
	for _, l := range logs {
		e := new(big.Int).Mul(l.q.Num(), new(big.Int).Div(lcm, l.q.Denom()))
		if e.BitLen() > 14 {
			return 0, false
		}
		w := new(big.Int).Exp(big.NewInt(l.p), new(big.Int).Abs(e), nil)
		if e.Sign() > 0 {
			above.Mul(above, w)
		} else {
			below.Mul(below, w)
		}
	}
	return above.Cmp(below), true
}

func (c Coef) neg() Coef { return mulCoef(c, Int(-1)) }

func addCoef(a, b Coef) Coef {
	if a.isZero() {
		return b
	}
	if b.isZero() {
		return a
	}
	r := new(big.Rat).Add(a.r, b.r)
	if len(a.logs) == 0 && len(b.logs) == 0 {
		return Rat(r)
	}
	logs := mergeLogs(a.logs, b.logs)
	if len(logs) == 0 {
		return Rat(r)
	}
	c := Coef{r: r, logs: logs}
	if len(logs) > 40 {
		c = opaque(a.iv.add(b.iv))
	} else {
		c.iv = logInterval(r, logs)
	}
	return positiveIf(c, atLeastZero(a) && atLeastZero(b) && (isPositive(a) || isPositive(b)))
}

func isPositive(a Coef) bool  { s, ok := a.Sign(); return ok && s > 0 }
func atLeastZero(a Coef) bool { return a.iv.Lo >= 0 }

// positiveIf marks a number as positive when rounding has lost that.
func positiveIf(c Coef, known bool) Coef {
	if known && c.iv.Lo <= 0 {
		c.iv.Lo, c.pos = 0, true
	}
	return c
}

// subCoef is a − b, exactly 0 for one and the same number.
func subCoef(a, b Coef) Coef {
	return addCoef(a, b.neg())
}

func mergeLogs(a, b []logTerm) []logTerm {
	var out []logTerm
	for len(a) > 0 || len(b) > 0 {
		switch {
		case len(b) == 0 || len(a) > 0 && a[0].p < b[0].p:
			out, a = append(out, a[0]), a[1:]
		case len(a) == 0 || b[0].p < a[0].p:
			out, b = append(out, b[0]), b[1:]
		default:
			if q := new(big.Rat).Add(a[0].q, b[0].q); q.Sign() != 0 {
				out = append(out, logTerm{a[0].p, q, a[0].iv})
			}
			a, b = a[1:], b[1:]
		}
	}
	return out
}

func logInterval(r *big.Rat, logs []logTerm) Interval {
	iv := ratInterval(r)
	for _, l := range logs {
		if l.p < 0 {
			iv = iv.add(ratInterval(l.q).mul(l.iv))
			continue
		}
		p := float64(l.p)
		iv = iv.add(ratInterval(l.q).mul(Interval{p, p}.log()))
	}
	return iv
}

func mulCoef(a, b Coef) Coef {
	if a.isOne() {
		return b
	}
	if b.isOne() {
		return a
	}
	if a.isZero() || b.isZero() {
		return zero
	}
	if len(a.logs) == 0 || len(b.logs) == 0 {
		if len(b.logs) > 0 {
			a, b = b, a
		}
		r := new(big.Rat).Mul(a.r, b.r)
		if len(a.logs) == 0 {
			return Rat(r)
		}
		logs := make([]logTerm, len(a.logs))
		for i, l := range a.logs {
			logs[i] = logTerm{l.p, new(big.Rat).Mul(l.q, b.r), l.iv}
		}
		c := Coef{r: r, logs: logs, iv: logInterval(r, logs)}
		sa, oka := a.Sign()
		return positiveIf(c, oka && sa*b.r.Sign() > 0)
	}
	if same(a, b) {
		iv := a.iv.mul(a.iv)
		if iv.Lo < 0 {
			iv.Lo = 0
		}
		return opaque(iv)
	}
	sa, oka := a.Sign()
	sb, okb := b.Sign()
	return positiveIf(opaque(a.iv.mul(b.iv)), oka && okb && sa*sb > 0)
}

func invCoef(a Coef) Coef {
	if r := a.Exact(); r != nil {
		if r.Sign() == 0 {
			unknown("division by 0")
		}
		return Rat(new(big.Rat).Inv(r))
	}
	if s, ok := a.Sign(); !ok || s == 0 {
		unknown("the sign of a constant is not known")
	}
	iv, ok := a.iv.inv()
	if !ok {
		unknown("division by a constant that may be 0")
	}
	return positiveIf(opaque(iv), isPositive(a))
}

// same reports one and the same number.
func same(a, b Coef) bool {
	if len(a.logs) != len(b.logs) {
		return false
	}
	for i := range a.logs {
		if a.logs[i].p != b.logs[i].p || a.logs[i].q.Cmp(b.logs[i].q) != 0 {
			return false
		}
	}
	return a.r.Cmp(b.r) == 0
}

// compareCoef is the sign of a − b; ok is false when it can't be told.
func compareCoef(a, b Coef) (int, bool) {
	switch {
	case a.r == b.r && len(a.logs) == 0 && len(b.logs) == 0:
		return 0, true
	case a.iv.Lo > b.iv.Hi:
		return 1, true
	case a.iv.Hi < b.iv.Lo:
		return -1, true
	}
	if x, y := a.Exact(), b.Exact(); x != nil && y != nil {
		return x.Cmp(y), true
	}
	return subCoef(a, b).Sign()
}

// logCoef is the logarithm of a positive number, exact for a rational that
// factors into small primes.
func logCoef(a Coef) Coef {
	if r := a.Exact(); r != nil {
		if r.Sign() <= 0 {
			unknown("logarithm of a constant that is not positive")
		}
		if logs, ok := factorLogs(r); ok {
			if len(logs) == 0 {
				return zero
			}
			return Coef{r: new(big.Rat), logs: logs, iv: logInterval(ratZero, logs)}
		}
	}
	if s, ok := a.Sign(); !ok || s <= 0 {
		unknown("logarithm of a constant whose sign is not known")
	}
	return opaque(a.iv.log())
}

// expCoef is e^a; exact where a is a rational combination of logarithms that
// makes a rational of moderate size.
func expCoef(a Coef) Coef {
	if a.isZero() {
		return one
	}
	if a.r.Sign() == 0 && len(a.logs) > 0 && a.logs[0].p > 0 {
		out, ok := new(big.Rat).Set(ratOne), true
		for _, l := range a.logs {
			if !l.q.IsInt() || !l.q.Num().IsInt64() || abs64(l.q.Num().Int64()) > 64 {
				ok = false
				break
			}
			out.Mul(out, ratPow(new(big.Rat).SetInt64(l.p), l.q.Num().Int64()))
		}
		if ok && out.Num().BitLen()+out.Denom().BitLen() < maxBits {
			return Rat(out)
		}
	}
	return positiveIf(opaque(a.iv.exp()), true)
}

func abs64(n int64) int64 {
	if n < 0 {
		return -n
	}
	return n
}

func ratPow(r *big.Rat, n int64) *big.Rat {
	if n < 0 {
		return ratPow(new(big.Rat).Inv(r), -n)
	}
	e := big.NewInt(n)
	return new(big.Rat).SetFrac(new(big.Int).Exp(r.Num(), e, nil), new(big.Int).Exp(r.Denom(), e, nil))
}

// factorLogs writes log r over primes; ok is false when r has a factor that
// small primes don't exhaust.
func factorLogs(r *big.Rat) ([]logTerm, bool) {
	if r.Num().BitLen() > 63 || r.Denom().BitLen() > 63 {
		return nil, false
	}
	count := map[int64]int64{}
	if !factor(r.Num().Int64(), 1, count) || !factor(r.Denom().Int64(), -1, count) {
		return nil, false
	}
	var logs []logTerm
	for p, n := range count {
		if n != 0 {
			logs = append(logs, logTerm{p: p, q: new(big.Rat).SetInt64(n)})
		}
	}
	sort.Slice(logs, func(i, j int) bool { return logs[i].p < logs[j].p })
	return logs, true
}

func factor(n, step int64, count map[int64]int64) bool {
	for p := int64(2); p < 1200 && p*p <= n; p++ {
		for n%p == 0 {
			count[p] += step
			n /= p
		}
	}
	if n > 1 {
		if n >= 1200*1200 {
			return false // may be composite
		}
		count[n] += step
	}
	return true
}

// powCoef is a^q for a positive a, or any a and a whole q.
func powCoef(a Coef, q *big.Rat) Coef {
	if q.Sign() == 0 || a.isOne() {
		return one
	}
	if q.Cmp(ratOne) == 0 {
		return a
	}
	if r := a.Exact(); r != nil && q.IsInt() && q.Num().IsInt64() && abs64(q.Num().Int64()) <= 4096 {
		if r.Sign() == 0 {
			if q.Sign() > 0 {
				return zero
			}
			unknown("division by 0")
		}
		n := q.Num().Int64()
		if int64(r.Num().BitLen()+r.Denom().BitLen())*abs64(n) < maxBits {
			return Rat(ratPow(r, n))
		}
	}
	if r := a.Exact(); r != nil && r.Sign() > 0 && q.Denom().IsInt64() && q.Denom().Int64() == 2 {
		num, den := new(big.Int).Sqrt(r.Num()), new(big.Int).Sqrt(r.Denom())
		root := new(big.Rat).SetFrac(num, den)
		if new(big.Rat).Mul(root, root).Cmp(r) == 0 {
			return powCoef(Rat(root), new(big.Rat).SetInt(q.Num()))
		}
	}
	s, ok := a.Sign()
	if !ok {
		unknown("power of a constant whose sign is not known")
	}
	if s < 0 {
		if !q.IsInt() {
			unknown("fractional power of a negative constant")
		}
		p := powCoef(a.neg(), q)
		if q.Num().Bit(0) == 1 {
			return p.neg()
		}
		return p
	}
	if s == 0 {
		if q.Sign() > 0 {
			return zero
		}
		unknown("division by 0")
	}
	return positiveIf(opaque(ratInterval(q).mul(a.iv.log()).exp()), true)
}
