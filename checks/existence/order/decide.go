package order

import (
	"fmt"
	"math/big"
)

// Order is the order of a kernel at an end of its support, in the coordinate
// x → 0+ of that end, with the measure dx:
//
//	kernel ~ x^Power · L^LogPower · (smaller), or faster than any power.
type Order struct {
	// Finite says whether the integral up to the end is finite.
	Finite bool
	// Rapid is 1 or −1 when the kernel grows or falls faster than any power.
	Rapid int
	// Power and LogPower are exact where Exact is set; Power encloses the
	// exponent otherwise.
	Power, LogPower *big.Rat
	Exact           bool
	Low, High       float64
	// Text is the order in words.
	Text string
}

// Integrable decides whether exp(logKernel) · dx has a finite integral at
// x = 0. The log kernel is needed up to a bounded remainder only where the
// exponent is exactly −1, and up to o(L) elsewhere.
func Integrable(logKernel Value) Order {
	s, ok := logKernel.(*Series)
	if !ok {
		unknown("no expansion")
	}
	above := func(m Mono) int { return compareMono(m, monoL) }
	// Terms that are larger than L decide at once.
	if len(s.Terms) > 0 && above(s.Terms[0].M) > 0 {
		sign, _ := s.Terms[0].C.Sign()
		return Order{Finite: sign < 0, Rapid: sign, Text: rapid(sign)}
	}
	if s.Rem != nil && above(*s.Rem) >= 0 {
		unknown("the order of the kernel is hidden by the remainder")
	}
	power := zero // kernel ~ x^power
	rest := s.Terms
	if len(rest) > 0 && above(rest[0].M) == 0 {
		power, rest = rest[0].C.neg(), rest[1:]
	}
	o := Order{Power: power.Exact(), Exact: power.Exact() != nil, Low: power.iv.Lo, High: power.iv.Hi}
	cmp, ok := compareCoef(power, Int(-1))
	if !ok {
		unknown("the exponent can't be told from −1")
	}
	if cmp != 0 {
		o.Finite = cmp > 0
		o.Text = "x^" + exponentText(o)
		return o
	}
	// x^(−1) · exp(rest): ∫ dx/x · g(L) = ∫ g(u) du with u = L → ∞.
	g := &Series{Rem: s.Rem}
	g.Terms = append(g.Terms, rest...)
	if len(g.Terms) > 0 {
		switch compareMono(g.Terms[0].M, monoLL) {
		case 1:
			sign, _ := g.Terms[0].C.Sign()
			o.Finite = sign < 0
			o.Text = "x^(−1) times a factor that beats every power of log x"
			return o
		case 0:
			if g.Rem != nil && compareMono(*g.Rem, monoLL) >= 0 {
				unknown("the power of the logarithm is hidden by the remainder")
			}
			b := g.Terms[0].C
			o.LogPower = b.Exact()
			cmp, ok := compareCoef(b, Int(-1))
			if !ok {
				unknown("the power of the logarithm can't be told from −1")
			}
			if cmp != 0 {
				o.Finite = cmp < 0
				o.Text = "x^(−1) (log 1/x)^" + exponentText(Order{Power: b.Exact(), Exact: b.Exact() != nil, Low: b.iv.Lo})
				return o
			}
			g.Terms = g.Terms[1:]
		}
	}
	bounded := func(m Mono) bool { return compareMono(m, monoOne) <= 0 }
	if len(g.Terms) > 0 && !bounded(g.Terms[0].M) || g.Rem != nil && !bounded(*g.Rem) {
		unknown("a third iterated logarithm is needed")
	}
	o.Finite = false
	if o.LogPower != nil {
		o.Text = "x^(−1) (log 1/x)^(−1)"
	} else {
		o.Text = "x^(−1)"
	}
	return o
}

func rapid(sign int) string {
	if sign < 0 {
		return "falls faster than any power"
	}
	return "grows faster than any power"
}

func exponentText(o Order) string {
	if o.Exact {
		s := o.Power.RatString()
		if o.Power.Sign() < 0 || !o.Power.IsInt() {
			return "(" + s + ")"
		}
		return s
	}
	return fmt.Sprintf("%.3g", o.Low)
}
