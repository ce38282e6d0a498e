package objective

import (
	"math"

	sy "wellposed/checks/objective/symbolic"
	"wellposed/parser/model"
)

func realLine(x []float64) (float64, float64, float64, float64) {
	return math.Inf(-1), math.Inf(1), x[0], x[1]
}

func logTwoPi() sy.Expr { return sy.Log(sy.Mul(sy.Int(2), sy.Pi())) }

func logNormalDensity(z sy.Expr) sy.Expr {
	return sy.Sub(sy.Mul(sy.Frac(-1, 2), sy.Square(z)), sy.Mul(sy.Half, logTwoPi()))
}

// families are the laws whose information is an expectation without closed form.
var families = map[string]*sampling{
	"skew-Normal": {name: "skew-Normal", labels: []string{"location", "scale", "shape-any"}, frame: realLine,
		log: func(y sy.Expr, a []sy.Expr) sy.Expr {
			z := sy.Div(sy.Sub(y, a[0]), a[1])
			return sy.Add(sy.Log(sy.Int(2)), sy.Neg(sy.Log(a[1])), logNormalDensity(z), sy.Log(sy.Phi(sy.Mul(a[2], z))))
		}},
	"Weibull, censored": {name: "Weibull, censored", labels: []string{"shape", "scale", "limit"}, extra: 1,
		frame: func(x []float64) (float64, float64, float64, float64) { return 0, x[2], x[1], x[1] },
		log: func(y sy.Expr, a []sy.Expr) sy.Expr {
			z := sy.Sub(sy.Log(y), sy.Log(a[1]))
			return sy.Add(sy.Log(a[0]), sy.Neg(sy.Log(a[1])), sy.Mul(sy.Sub(a[0], sy.One), z), sy.Neg(sy.Exp(sy.Mul(a[0], z))))
		},
		dead: func(c sy.Expr, a []sy.Expr) sy.Expr {
			return sy.Neg(sy.Exp(sy.Mul(a[0], sy.Sub(sy.Log(c), sy.Log(a[1])))))
		}},
	"beta-Binomial": {name: "beta-Binomial", labels: []string{"a", "b", "trials"}, extra: 1, discrete: true,
		top: func(x []float64) int { return int(x[2]) },
		log: func(y sy.Expr, a []sy.Expr) sy.Expr {
			n, g := a[2], sy.LogGamma
			return sy.Add(g(sy.Add(n, sy.One)), sy.Neg(g(sy.Add(y, sy.One))), sy.Neg(g(sy.Add(sy.Sub(n, y), sy.One))),
				g(sy.Add(y, a[0])), g(sy.Add(sy.Sub(n, y), a[1])), sy.Neg(g(sy.Add(n, a[0], a[1]))),
				g(sy.Add(a[0], a[1])), sy.Neg(g(a[0])), sy.Neg(g(a[1])))
		}},
}

func betaBinomial(r *reader, _ int) *law {
	n := r.arg("trials")
	var a, b sy.Expr
	if r.has("mean") {
		m, t := r.arg("mean"), r.arg("total")
		a, b = sy.Mul(m, t), sy.Mul(sy.Sub(sy.One, m), t)
	} else {
		a, b = r.arg("a"), r.arg("b")
	}
	l := numericLaw("beta-Binomial", []sy.Expr{a, b, n})
	l.assumed = "the number of trials was fixed beforehand"
	return l
}

// extremeValue is the information of the generalized extreme value law for
// shape ξ above −1/2, with p = (1 + ξ)² Γ(1 + 2ξ) and
// q = Γ(2 + ξ)(ψ(1 + ξ) + (1 + ξ)/ξ) (Prescott & Walden 1980, Biometrika 67, in
// this sign of ξ; from memory, checked against quadrature in law_test.go).
func extremeValue(r *reader, _ int) *law {
	m, s, x := r.arg("location"), r.arg("scale"), r.arg("shape")
	if v := sy.Number(x); v != nil && v.Sign() == 0 {
		g := sy.Sub(sy.One, sy.Euler())
		return &law{args: []sy.Expr{m, s},
			info: symmetric(over(sy.One, s), sy.Neg(over(g, s)), over(sy.Add(sy.Mul(sy.Frac(1, 6), sy.Square(sy.Pi())), sy.Square(g)), s)),
			says: "one extreme value with shape 0 (Gumbel)"}
	}
	f := func(fn *sy.Function) sy.Expr { return fn.Apply(x) }
	return &law{args: []sy.Expr{m, s, x},
		info: [][]sy.Expr{
			{over(f(gevMM), s), over(f(gevMS), s), sy.Div(f(gevMX), s)},
			{over(f(gevMS), s), over(f(gevSS), s), sy.Div(f(gevSX), s)},
			{sy.Div(f(gevMX), s), sy.Div(f(gevSX), s), f(gevXX)}},
		says: "one extreme value with shape ξ above −1/2: the information of Prescott & Walden (1980)"}
}

var gevMM, gevMS, gevMX, gevSS, gevSX, gevXX = gevEntry(0), gevEntry(1), gevEntry(2), gevEntry(3), gevEntry(4), gevEntry(5)

func gevEntry(which int) *sy.Function {
	return &sy.Function{Name: "extreme-value-information-" + string(rune('a'+which)), Error: numericError,
		Eval: func(x []float64) float64 { return gevInformation(x[0])[which] }}
}

// gevInformation integrates the scores of the standard law over w = E ~
// Exponential(1), z = (w^(−ξ) − 1)/ξ, which stays accurate through ξ = 0.
func gevInformation(xi float64) [6]float64 {
	nan := math.NaN()
	if !(xi > -0.5) {
		return [6]float64{nan, nan, nan, nan, nan, nan}
	}
	m := [][]float64{{0, 0, 0}, {0, 0, 0}, {0, 0, 0}}
	add := func(w, weight float64, into [][]float64) float64 {
		p := math.Exp(-w) * weight
		if p == 0 || w <= 0 || math.IsInf(w, 1) {
			return 0
		}
		l := -math.Log(w) // l = log(1 + ξz)/ξ
		// z = (e^(ξl) − 1)/ξ and its derivative by ξ at fixed z.
		var z, dl float64
		if math.Abs(xi*l) > 1e-5 {
			z = math.Expm1(xi*l) / xi
			// l(ξ, z) = log(1 + ξz)/ξ; ∂l/∂ξ = z/(ξ(1 + ξz)) − l/ξ
			dl = -(math.Expm1(-xi*l) + xi*l) / (xi * xi)
		} else {
			z = l * (1 + xi*l/2 + xi*xi*l*l/6)
			dl = -l * l / 2 * (1 - xi*l/3)
		}
		u := math.Exp(-xi * l) // 1/(1 + ξz)
		// log f = −log σ − (1 + ξ) l − e^(−l), l at z = (y − μ)/σ, ∂l/∂z = u.
		d := -(1 + xi) + w // derivative by l
		sm := -d * u
		ss := -1 - d*u*z
		sx := -l + d*dl
		s := [3]float64{sm, ss, sx}
		for _, v := range s {
			if math.IsInf(v, 0) || math.IsNaN(v) {
				return 0
			}
		}
		for i := range s {
			for j := range s {
				into[i][j] += p * s[i] * s[j]
			}
		}
		return p
	}
	integrateInto(m, 0, math.Inf(1), 1, 1, add)
	return [6]float64{m[0][0], m[0][1], m[0][2], m[1][1], m[1][2], m[2][2]}
}

// censoredLaw is the law under a fixed limit of follow-up (type I censoring).
func (s *space) censoredLaw(d *model.Dist, row int, limit sy.Expr) *law {
	r := &reader{s: s, d: d, row: row}
	if r.has("origin") {
		return nil
	}
	switch d.Spec.Name {
	case "Exponential":
		var x sy.Expr
		if r.has("rate") {
			x = r.arg("rate")
		} else {
			x = sy.Inv(r.arg("mean"))
		}
		if r.err != nil {
			return nil
		}
		failed := sy.Sub(sy.One, sy.Exp(sy.Neg(sy.Mul(x, limit))))
		return &law{args: []sy.Expr{x}, info: diagonal(sy.Div(failed, sy.Square(x))),
			says: "one waiting time followed up to C: I(rate) = (1 − exp(−rate C)) / rate²"}
	case "Weibull":
		args := []sy.Expr{r.arg("shape"), r.arg("scale"), limit}
		if r.err != nil {
			return nil
		}
		// At scale 1 with the limit in units of the scale.
		k, scale := args[0], args[1]
		l := lawOf(register(families["Weibull, censored"]), []sy.Expr{k, sy.One, sy.Div(limit, scale)})
		l.args = []sy.Expr{k, scale}
		l.info[0][1], l.info[1][0] = sy.Div(l.info[0][1], scale), sy.Div(l.info[1][0], scale)
		l.info[1][1] = over(l.info[1][1], scale)
		return l
	}
	return nil
}
