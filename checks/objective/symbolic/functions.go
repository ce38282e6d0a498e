package symbolic

import (
	"math"
	"math/big"
	"strings"

	"gonum.org/v1/gonum/mathext"
)

// Function is a function that has no closed form in powers.
type Function struct {
	Name string
	// Language is set when the model language has the function by that name.
	Language bool
	// Eval is the value; NaN outside the domain.
	Eval func(args []float64) float64
	// Diff is the derivative by argument i; nil when it has no expression here.
	Diff func(args []Expr, i int) Expr
	// Bounds are rational bounds of the value; nil when none are known.
	Bounds func(args []Expr) (low, high *big.Rat)
	// Error bounds the relative error of Eval; 0 stands for rounding.
	Error float64
}

// Apply is f(args) without any simplification.
func (f *Function) Apply(args ...Expr) Expr {
	keys := make([]string, len(args))
	for i, a := range args {
		keys[i] = a.key()
	}
	return &call{f, args, f.Name + "(" + strings.Join(keys, ",") + ")"}
}

func one(f func(float64) float64) func([]float64) float64 {
	return func(x []float64) float64 { return f(x[0]) }
}

func nonNegative([]Expr) (*big.Rat, *big.Rat) { return ratZero, nil }
func unit([]Expr) (*big.Rat, *big.Rat)        { return ratZero, ratOne }

var (
	expFunction, logFunction, absFunction, phiFunction, probitFunction,
	atanFunction, logGammaFunction, digammaFunction, trigammaFunction,
	piFunction, eulerFunction *Function
)

func init() {
	expFunction = &Function{Name: "exp", Language: true, Eval: one(math.Exp), Bounds: nonNegative,
		Diff: func(a []Expr, _ int) Expr { return Exp(a[0]) }}
	logFunction = &Function{Name: "log", Language: true, Eval: one(math.Log),
		Diff: func(a []Expr, _ int) Expr { return Inv(a[0]) }, Bounds: logBounds}
	absFunction = &Function{Name: "abs", Language: true, Eval: one(math.Abs), Bounds: nonNegative,
		Diff: func(a []Expr, _ int) Expr { return Div(Abs(a[0]), a[0]) }}
	phiFunction = &Function{Name: "Phi", Language: true, Bounds: unit,
		Eval: one(func(x float64) float64 { return math.Erfc(-x/math.Sqrt2) / 2 }),
		Diff: func(a []Expr, _ int) Expr { return NormalDensity(a[0]) }}
	probitFunction = &Function{Name: "probit", Language: true,
		Eval: one(func(p float64) float64 { return -math.Sqrt2 * math.Erfcinv(2*p) }),
		Diff: func(a []Expr, _ int) Expr { return Inv(NormalDensity(Probit(a[0]))) }}
	atanFunction = &Function{Name: "atan", Language: true, Eval: one(math.Atan),
		Diff: func(a []Expr, _ int) Expr { return Inv(Add(One, Square(a[0]))) }}
	logGammaFunction = &Function{Name: "log-gamma", Language: true,
		Eval: one(func(x float64) float64 { v, _ := math.Lgamma(x); return v }),
		Diff: func(a []Expr, _ int) Expr { return Digamma(a[0]) }}
	digammaFunction = &Function{Name: "digamma", Eval: one(mathext.Digamma),
		Diff: func(a []Expr, _ int) Expr { return Trigamma(a[0]) }}
	trigammaFunction = &Function{Name: "trigamma", Bounds: nonNegative,
		Eval: one(trigamma)}
	piFunction = &Function{Name: "pi", Language: true, Eval: func([]float64) float64 { return math.Pi },
		Bounds: func([]Expr) (*big.Rat, *big.Rat) { return big.NewRat(314, 100), big.NewRat(315, 100) }}
	eulerFunction = &Function{Name: "euler", Eval: func([]float64) float64 { return 0.57721566490153286060651209008240243 },
		Bounds: func([]Expr) (*big.Rat, *big.Rat) { return big.NewRat(57, 100), big.NewRat(58, 100) }}
}

// logBounds uses only the sign of log x, from x against 1.
func logBounds(a []Expr) (*big.Rat, *big.Rat) {
	low, high := bounds(a[0])
	if low != nil && low.Cmp(ratOne) >= 0 {
		return ratZero, nil
	}
	if high != nil && high.Cmp(ratOne) <= 0 {
		return nil, ratZero
	}
	return nil, nil
}

// trigamma is Σ 1/(x + k)²: recurrence up to 20, then the asymptotic series
// (Abramowitz & Stegun 1964, 6.4.6, 6.4.12). Relative error below 1e-14 for x > 0.
func trigamma(x float64) float64 {
	if !(x > 0) {
		return math.NaN()
	}
	s := 0.0
	for x < 20 {
		s += 1 / (x * x)
		x++
	}
	y := 1 / (x * x)
	tail := 1/x + y/2 + y/x*(1.0/6-y*(1.0/30-y*(1.0/42-y*(1.0/30-y*(5.0/66-y*691.0/2730)))))
	return s + tail
}

// Pi and Euler are π and Euler's γ.
func Pi() Expr    { return piFunction.Apply() }
func Euler() Expr { return eulerFunction.Apply() }

// Exp is the exponential; exp(c log x) becomes x^c for rational c.
func Exp(x Expr) Expr {
	if isZero(x) {
		return One
	}
	var powers, kept []Expr
	split := func(coef *big.Rat, rest Expr) {
		if c, ok := rest.(*call); ok && c.f == logFunction {
			powers = append(powers, Pow(c.args[0], coef))
		} else {
			kept = append(kept, scaled(coef, rest))
		}
	}
	switch x := x.(type) {
	case *call:
		split(ratOne, x)
	case *product:
		split(x.coef, monic(x))
	case *sum:
		for _, t := range x.terms {
			split(t.coef, t.rest)
		}
		if x.constant.Sign() != 0 {
			kept = append(kept, Rat(x.constant))
		}
	default:
		return expFunction.Apply(x)
	}
	rest := Add(kept...)
	if isZero(rest) {
		return Mul(powers...)
	}
	if len(powers) == 0 {
		return expFunction.Apply(x)
	}
	return Mul(append(powers, expFunction.Apply(rest))...)
}

// Log is the natural logarithm; the logarithm of a product of positive factors
// becomes a sum.
func Log(x Expr) Expr {
	switch e := x.(type) {
	case *number:
		if e.v.Cmp(ratOne) == 0 {
			return Zero
		}
		if e.v.Sign() > 0 && !e.v.IsInt() {
			return Sub(logOf(Rat(new(big.Rat).SetInt(e.v.Num()))), logOf(Rat(new(big.Rat).SetInt(e.v.Denom()))))
		}
	case *call:
		if e.f == expFunction {
			return e.args[0]
		}
	case *product:
		if e.coef.Sign() <= 0 {
			break
		}
		for _, f := range e.factors {
			if !Positive(f.base) {
				return logFunction.Apply(x)
			}
		}
		parts := []Expr{Log(Rat(e.coef))}
		for _, f := range e.factors {
			parts = append(parts, Mul(Rat(f.exp), Log(f.base)))
		}
		return Add(parts...)
	case *sum:
		if content, primitive := e.primitive(false); primitive != e && Positive(primitive) {
			return Add(Log(Rat(content)), logFunction.Apply(primitive))
		}
	}
	return logFunction.Apply(x)
}

func logOf(x Expr) Expr {
	if n := Number(x); n != nil && n.Cmp(ratOne) == 0 {
		return Zero
	}
	return logFunction.Apply(x)
}

// Abs is the absolute value.
func Abs(x Expr) Expr {
	if n := Number(x); n != nil {
		return Rat(new(big.Rat).Abs(n))
	}
	if Positive(x) {
		return x
	}
	if Positive(Neg(x)) {
		return Neg(x)
	}
	if p, ok := x.(*product); ok {
		parts := []Expr{Rat(new(big.Rat).Abs(p.coef))}
		for _, f := range p.factors {
			if isEven(f.exp) {
				parts = append(parts, Pow(f.base, f.exp))
			} else {
				parts = append(parts, Pow(Abs(f.base), f.exp))
			}
		}
		return Mul(parts...)
	}
	if c, ok := x.(*call); ok && c.f == absFunction {
		return x
	}
	return absFunction.Apply(x)
}

// Phi is the standard normal distribution function.
func Phi(x Expr) Expr { return phiFunction.Apply(x) }

// NormalDensity is the standard normal density.
func NormalDensity(x Expr) Expr {
	return Mul(Pow(Mul(Int(2), Pi()), big.NewRat(-1, 2)), Exp(Mul(Frac(-1, 2), Square(x))))
}

// Probit is the inverse of Phi.
func Probit(x Expr) Expr {
	if c, ok := x.(*call); ok && c.f == phiFunction {
		return c.args[0]
	}
	return probitFunction.Apply(x)
}

// Atan is the arc tangent.
func Atan(x Expr) Expr { return atanFunction.Apply(x) }

// LogGamma is the logarithm of the gamma function, Digamma and Trigamma its
// derivatives.
func LogGamma(x Expr) Expr { return logGammaFunction.Apply(x) }

// Digamma is the derivative of LogGamma.
func Digamma(x Expr) Expr { return digammaFunction.Apply(x) }

// Trigamma is the second derivative of LogGamma.
func Trigamma(x Expr) Expr { return trigammaFunction.Apply(x) }

// Expit is 1 / (1 + exp(-x)).
func Expit(x Expr) Expr { e := Exp(x); return Div(e, Add(One, e)) }

// Logit is log(x / (1 - x)).
func Logit(x Expr) Expr { return Sub(Log(x), Log(Sub(One, x))) }

// Odds is x / (1 - x).
func Odds(x Expr) Expr { return Div(x, Sub(One, x)) }

// Cloglog is log(-log(1 - x)).
func Cloglog(x Expr) Expr { return Log(Neg(Log(Sub(One, x)))) }

// Tanh is the hyperbolic tangent.
func Tanh(x Expr) Expr {
	e := Exp(Mul(Int(2), x))
	return Div(Sub(e, One), Add(e, One))
}

// Atanh is Fisher's z.
func Atanh(x Expr) Expr {
	return Mul(Half, Sub(Log(Add(One, x)), Log(Sub(One, x))))
}
