package objective

import (
	"errors"
	"fmt"

	sy "wellposed/checks/objective/symbolic"
	"wellposed/parser/model"
)

// law is a sampling law seen through arguments: what one observation tells
// about them.
type law struct {
	// args as expressions of the unknowns and the row's data.
	args []sy.Expr
	// info is the expected information about args; nil entries are zero.
	info [][]sy.Expr
	// says is one line for the derivation, with the arguments by name.
	says string
	// assumed is what had to be assumed about the sampling plan.
	assumed string
	// compact says that J′ I J needs no simplification: the argument is a linear
	// predictor under its link.
	compact bool
}

// irregular says that the support moves with an unknown.
type irregular struct {
	dist  *model.Dist
	label string
}

func (e *irregular) Error() string {
	return fmt.Sprintf("the support of %s moves with its %s, so Fisher information is not the right tool", e.dist.Spec.Name, e.label)
}

// reader reads the arguments of a distribution.
type reader struct {
	s   *space
	d   *model.Dist
	row int
	err error
}

func (r *reader) arg(label string) sy.Expr {
	e := r.d.Args[label]
	if e == nil {
		if r.err == nil {
			r.err = fmt.Errorf("%s has no argument %q here", r.d.Spec.Name, label)
		}
		return sy.One
	}
	x, err := r.s.lower(e, r.row)
	if err != nil {
		if r.err == nil {
			r.err = err
		}
		return sy.One
	}
	return x
}

func (r *reader) has(label string) bool { return r.d.Args[label] != nil }

func (r *reader) vector(label string) []sy.Expr {
	e := r.d.Args[label]
	if e == nil {
		r.err = fmt.Errorf("%s has no argument %q here", r.d.Spec.Name, label)
		return nil
	}
	v, err := r.s.lowerVector(e, r.row)
	if err != nil && r.err == nil {
		r.err = err
	}
	return v
}

// spread reads a standard deviation in any of its forms.
func (r *reader) spread() sy.Expr {
	switch {
	case r.has("variance"):
		return sy.Sqrt(r.arg("variance"))
	case r.has("precision"):
		return sy.Inv(sy.Sqrt(r.arg("precision")))
	}
	return r.arg("sd")
}

func diagonal(xs ...sy.Expr) [][]sy.Expr {
	m := make([][]sy.Expr, len(xs))
	for i := range m {
		m[i] = make([]sy.Expr, len(xs))
		m[i][i] = xs[i]
	}
	return m
}

func symmetric(a, b, c sy.Expr) [][]sy.Expr { return [][]sy.Expr{{a, b}, {b, c}} }

// over is c / x^2.
func over(c, x sy.Expr) sy.Expr { return sy.Div(c, sy.Square(x)) }

// law of a distribution in a row. size is the number of values observed
// together.
func (s *space) law(d *model.Dist, row, size int) (*law, error) {
	r := &reader{s: s, d: d, row: row}
	if e := d.Args["origin"]; e != nil {
		x, err := s.lower(e, row)
		if err != nil {
			return nil, err
		}
		if s.watches(x) {
			return nil, &irregular{d, "origin"}
		}
	}
	f := laws[d.Spec.Name]
	if f == nil {
		return nil, fmt.Errorf("the information of %s is not known here", d.Spec.Name)
	}
	l := f(r, size)
	if r.err != nil {
		return nil, r.err
	}
	if l == nil {
		return nil, fmt.Errorf("the information of %s is not known here", d.Spec.Name)
	}
	return l, nil
}

// parametersIn are the symbols that are no data.
func parametersIn(e sy.Expr) []*sy.Symbol {
	var out []*sy.Symbol
	for _, x := range sy.Symbols(e) {
		if !x.Data {
			out = append(out, x)
		}
	}
	return out
}

// watches reports whether an expression depends on a watched parameter.
func (s *space) watches(e sy.Expr) bool {
	for _, x := range sy.Symbols(e) {
		if s.watch[x.Name] {
			return true
		}
	}
	return false
}

// still refuses an end of the support that moves with a watched parameter.
func (r *reader) still(label string) {
	if x := r.arg(label); r.err == nil && r.s.watches(x) {
		r.err = &irregular{r.d, label}
	}
}

var errVector = errors.New("the number of values and the arguments do not match")

// laws are the closed forms, per observation. Sources: Lehmann & Casella,
// Theory of Point Estimation (1998), section 2.5 for location–scale families;
// Johnson, Kotz & Balakrishnan, Continuous Univariate Distributions 1–2
// (1994–1995) for Gamma, Weibull, Gumbel, Beta, inverse-Gaussian, Student-t and
// generalized-Pareto; from memory, each checked against quadrature in
// law_test.go.
var laws map[string]func(r *reader, size int) *law

func init() {
	laws = map[string]func(r *reader, size int) *law{
		"Bernoulli": func(r *reader, _ int) *law { return bernoulli(sy.One, r.arg("probability")) },
		"Binomial":  func(r *reader, _ int) *law { return bernoulli(r.arg("trials"), r.arg("probability")) },
		"geometric": func(r *reader, _ int) *law {
			p := r.arg("probability")
			return &law{args: []sy.Expr{p}, info: diagonal(sy.Inv(sy.Mul(sy.Square(p), sy.Sub(sy.One, p)))),
				says:    "one success waited for: I(p) = 1 / (p²(1 − p))",
				assumed: "sampling goes on until a success (inverse sampling)"}
		},
		"negative-Binomial": negativeBinomial,
		"Poisson": func(r *reader, _ int) *law {
			m := r.arg("mean")
			if eta := sy.IsExp(m); eta != nil {
				return &law{args: []sy.Expr{eta}, info: diagonal(m), compact: true, says: "one Poisson count with mean m = exp(η): I(η) = m"}
			}
			return &law{args: []sy.Expr{m}, info: diagonal(sy.Inv(m)), says: "one Poisson count with mean m: I(m) = 1 / m"}
		},
		"Multinomial": func(r *reader, _ int) *law { return categories(r.arg("trials"), r.vector("proportions")) },
		"categorical": func(r *reader, _ int) *law { return categories(sy.One, r.vector("proportions")) },
		"cumulative-logit": func(r *reader, _ int) *law {
			return categories(sy.One, cumulative(r, sy.Expit))
		},
		"cumulative-probit": func(r *reader, _ int) *law {
			return categories(sy.One, cumulative(r, sy.Phi))
		},
		"multinomial-logit": func(r *reader, _ int) *law {
			etas := r.vector("predictors")
			weights := make([]sy.Expr, len(etas))
			for i, e := range etas {
				weights[i] = sy.Exp(e)
			}
			total := sy.Add(weights...)
			for i := range weights {
				weights[i] = sy.Div(weights[i], total)
			}
			return categories(sy.One, weights)
		},
		"Normal": func(r *reader, _ int) *law { return normal(r.arg("mean"), r.spread(), "Normal reading") },
		"log-Normal": func(r *reader, _ int) *law {
			if r.has("median") {
				return normal(sy.Log(r.arg("median")), r.arg("log sd"), "Normal reading of the logarithm")
			}
			return normal(r.arg("log mean"), r.arg("log sd"), "Normal reading of the logarithm")
		},
		"Student-t": studentT,
		"Cauchy": func(r *reader, _ int) *law {
			return locationScale(r.arg("location"), r.arg("scale"), sy.Half, sy.Half, "Cauchy")
		},
		"Laplace": func(r *reader, _ int) *law {
			return locationScale(r.arg("location"), r.arg("scale"), sy.One, sy.One, "Laplace")
		},
		"logistic": func(r *reader, _ int) *law {
			return locationScale(r.arg("location"), r.arg("scale"), sy.Frac(1, 3),
				sy.Mul(sy.Frac(1, 9), sy.Add(sy.Int(3), sy.Square(sy.Pi()))), "logistic")
		},
		"Exponential": func(r *reader, _ int) *law {
			x := sy.Expr(nil)
			if r.has("rate") {
				x = r.arg("rate")
			} else {
				x = r.arg("mean")
			}
			return &law{args: []sy.Expr{x}, info: diagonal(over(sy.One, x)),
				says: "one complete waiting time: I = 1 / rate² = 1 / mean² on either scale"}
		},
		"Gamma":         gamma,
		"inverse-Gamma": inverseGamma,
		"chi-square": func(r *reader, _ int) *law {
			v := r.arg("degrees")
			return &law{args: []sy.Expr{v}, info: diagonal(sy.Mul(sy.Frac(1, 4), sy.Trigamma(sy.Mul(sy.Half, v)))),
				says: "one chi-square reading: I(ν) = ψ′(ν/2) / 4"}
		},
		"Weibull": func(r *reader, _ int) *law {
			k, s := r.arg("shape"), r.arg("scale")
			g := sy.Sub(sy.One, sy.Euler())
			return &law{args: []sy.Expr{k, s},
				info: symmetric(
					over(sy.Add(sy.Mul(sy.Frac(1, 6), sy.Square(sy.Pi())), sy.Square(g)), k),
					sy.Neg(sy.Div(g, s)), over(sy.Square(k), s)),
				says: "one complete Weibull time: I(k, k) = (π²/6 + (1 − γ)²) / k², I(k, s) = −(1 − γ) / s, I(s, s) = k² / s²"}
		},
		"Gumbel": func(r *reader, _ int) *law {
			m, s := r.arg("location"), r.arg("scale")
			g := sy.Sub(sy.One, sy.Euler())
			return &law{args: []sy.Expr{m, s},
				info: symmetric(over(sy.One, s), sy.Neg(over(g, s)),
					over(sy.Add(sy.Mul(sy.Frac(1, 6), sy.Square(sy.Pi())), sy.Square(g)), s)),
				says: "one Gumbel reading: I(μ, μ) = 1 / σ², I(μ, σ) = −(1 − γ) / σ², I(σ, σ) = (π²/6 + (1 − γ)²) / σ²"}
		},
		"generalized-extreme-value": extremeValue,
		"generalized-Pareto": func(r *reader, _ int) *law {
			s, x := r.arg("scale"), r.arg("shape")
			one, two := sy.Add(sy.One, x), sy.Add(sy.One, sy.Mul(sy.Int(2), x))
			return &law{args: []sy.Expr{s, x},
				info: symmetric(sy.Inv(sy.Mul(sy.Square(s), two)), sy.Inv(sy.Mul(s, one, two)), sy.Div(sy.Int(2), sy.Mul(one, two))),
				says: "one excess, shape ξ above −1/2: I(σ, σ) = 1 / (σ²(1 + 2ξ)), I(σ, ξ) = 1 / (σ(1 + ξ)(1 + 2ξ)), I(ξ, ξ) = 2 / ((1 + ξ)(1 + 2ξ))"}
		},
		"Pareto": func(r *reader, _ int) *law {
			r.still("minimum")
			a := r.arg("shape")
			return &law{args: []sy.Expr{a}, info: diagonal(over(sy.One, a)), says: "one Pareto reading above a known minimum: I(a) = 1 / a²"}
		},
		"inverse-Gaussian": func(r *reader, _ int) *law {
			m, k := r.arg("mean"), r.arg("shape")
			return &law{args: []sy.Expr{m, k},
				info: diagonal(sy.Div(k, sy.Pow(m, rat(3, 1))), over(sy.Half, k)),
				says: "one inverse-Gaussian reading: I(μ, μ) = λ / μ³, I(λ, λ) = 1 / (2λ²)"}
		},
		"Beta": func(r *reader, _ int) *law {
			a, b := sy.Expr(nil), sy.Expr(nil)
			if r.has("mean") {
				m, t := r.arg("mean"), r.arg("total")
				a, b = sy.Mul(m, t), sy.Mul(sy.Sub(sy.One, m), t)
			} else {
				a, b = r.arg("a"), r.arg("b")
			}
			c := sy.Neg(sy.Trigamma(sy.Add(a, b)))
			return &law{args: []sy.Expr{a, b}, info: symmetric(trigammaFall(a, b), c, trigammaFall(b, a)),
				says: "one Beta reading: I(a, a) = ψ′(a) − ψ′(a + b), I(a, b) = −ψ′(a + b), I(b, b) = ψ′(b) − ψ′(a + b)"}
		},
		"Uniform": func(r *reader, _ int) *law {
			r.still("low")
			r.still("high")
			return nil
		},
		"triangular": func(r *reader, _ int) *law {
			r.still("low")
			r.still("high")
			return nil
		},
		"half-Normal": func(r *reader, _ int) *law {
			s := r.spread()
			return &law{args: []sy.Expr{s}, info: diagonal(over(sy.Int(2), s)), says: "one half-Normal reading: I(σ) = 2 / σ²"}
		},
		"half-Cauchy": func(r *reader, _ int) *law {
			s := r.arg("scale")
			return &law{args: []sy.Expr{s}, info: diagonal(over(sy.Half, s)), says: "one half-Cauchy reading: I(s) = 1 / (2s²)"}
		},
		"half-Student-t": func(r *reader, _ int) *law {
			l := studentTInfo(r.arg("degrees"), sy.Zero, r.arg("scale"))
			l.says = "one half-Student-t reading: the information of Student-t about degrees and scale"
			return l
		},
		"von-Mises": func(r *reader, _ int) *law {
			m, k := r.arg("direction"), r.arg("concentration")
			a := besselRatio.Apply(k)
			return &law{args: []sy.Expr{m, k},
				info: diagonal(sy.Mul(k, a), sy.Sub(sy.One, sy.Add(sy.Div(a, k), sy.Square(a)))),
				says: "one direction: I(μ, μ) = κA(κ), I(κ, κ) = A′(κ) with A = I₁/I₀"}
		},
		"Dirichlet": func(r *reader, _ int) *law {
			w := r.vector("weights")
			if len(w) < 2 {
				return nil
			}
			c := sy.Neg(sy.Trigamma(sy.Add(w...)))
			m := make([][]sy.Expr, len(w))
			for i := range m {
				m[i] = make([]sy.Expr, len(w))
				for j := range m[i] {
					m[i][j] = c
					if i == j {
						m[i][j] = sy.Add(c, sy.Trigamma(w[i]))
					}
				}
			}
			return &law{args: w, info: m, says: "one Dirichlet reading: I(aᵢ, aⱼ) = ψ′(aᵢ)[i = j] − ψ′(Σa)"}
		},
		"multivariate-Normal": multivariateNormal,
		"AR1":                 autoregression,
		"beta-Binomial":       betaBinomial,
		"skew-Normal": func(r *reader, _ int) *law {
			m, s, a := r.arg("location"), r.arg("scale"), r.arg("shape")
			// At location 0 and scale 1; the law is a location–scale family.
			l := numericLaw("skew-Normal", []sy.Expr{sy.Zero, sy.One, a})
			l.args = []sy.Expr{m, s, a}
			powers := []int64{1, 1, 0}
			for i := range l.info {
				for j := range l.info[i] {
					l.info[i][j] = sy.Mul(l.info[i][j], sy.Pow(s, rat(-powers[i]-powers[j], 1)))
				}
			}
			return l
		},
	}
}

// trigammaFall is ψ′(a) − ψ′(a + b), a finite sum for a small whole b.
func trigammaFall(a, b sy.Expr) sy.Expr {
	if n := sy.Number(b); n != nil && n.IsInt() && n.Sign() > 0 && n.Num().BitLen() <= 4 {
		total := sy.Zero
		for j := range n.Num().Int64() {
			total = sy.Add(total, over(sy.One, sy.Add(a, sy.Int(j))))
		}
		return total
	}
	return sy.Sub(sy.Trigamma(a), sy.Trigamma(sy.Add(a, b)))
}

func bernoulli(n, p sy.Expr) *law {
	if eta := sy.ExpitArgument(p); eta != nil {
		e := sy.Exp(eta)
		return &law{args: []sy.Expr{eta}, info: diagonal(sy.Div(sy.Mul(n, e), sy.Square(sy.Add(sy.One, e)))), compact: true,
			says: "n trials with probability p = expit(η): I(η) = n p(1 − p)", assumed: "the number of trials was fixed beforehand"}
	}
	return &law{args: []sy.Expr{p}, info: diagonal(sy.Div(n, sy.Mul(p, sy.Sub(sy.One, p)))),
		says: "n trials with probability p: I(p) = n / (p(1 − p))", assumed: "the number of trials was fixed beforehand"}
}

func negativeBinomial(r *reader, _ int) *law {
	k := r.arg("size")
	if r.has("probability") {
		p := r.arg("probability")
		if len(parametersIn(k)) == 0 {
			return &law{args: []sy.Expr{p}, info: diagonal(sy.Div(k, sy.Mul(sy.Square(p), sy.Sub(sy.One, p)))),
				says:    "sampling until the k-th success: I(p) = k / (p²(1 − p))",
				assumed: "sampling goes on until the declared number of successes (inverse sampling)"}
		}
		m := sy.Div(sy.Mul(k, sy.Sub(sy.One, p)), p)
		return negativeBinomialMean(m, k)
	}
	return negativeBinomialMean(r.arg("mean"), k)
}

func negativeBinomialMean(m, k sy.Expr) *law {
	return &law{args: []sy.Expr{m, k},
		info: diagonal(sy.Div(k, sy.Mul(m, sy.Add(k, m))), negativeBinomialSize.Apply(m, k)),
		says: "one negative-Binomial count: I(m, m) = k / (m(m + k)), I(m, k) = 0, I(k, k) by summation"}
}

// categories is one draw among categories with probabilities that sum to 1:
// Σ ∇pᵢ ∇pᵢ′ / pᵢ.
func categories(n sy.Expr, p []sy.Expr) *law {
	info := make([]sy.Expr, len(p))
	for i := range p {
		info[i] = sy.Div(n, p[i])
	}
	return &law{args: p, info: diagonal(info...), says: "n draws among categories: I = n Σ ∇pᵢ ∇pᵢ′ / pᵢ",
		assumed: "the number of draws was fixed beforehand"}
}

func cumulative(r *reader, link func(sy.Expr) sy.Expr) []sy.Expr {
	eta, cuts := r.arg("predictor"), r.vector("cutpoints")
	var p []sy.Expr
	below := sy.Zero
	for _, c := range cuts {
		upto := link(sy.Sub(c, eta))
		p = append(p, sy.Sub(upto, below))
		below = upto
	}
	return append(p, sy.Sub(sy.One, below))
}

func normal(m, s sy.Expr, what string) *law {
	l := locationScale(m, s, sy.One, sy.Int(2), what)
	l.says = "one " + what + " with sd σ: I(μ, μ) = 1 / σ², I(σ, σ) = 2 / σ², I(μ, σ) = 0"
	return l
}

// locationScale has information a/σ² about the location and b/σ² about the
// scale, none in common, which holds for symmetric densities.
func locationScale(m, s, a, b sy.Expr, name string) *law {
	return &law{args: []sy.Expr{m, s}, info: diagonal(over(a, s), over(b, s)),
		says: fmt.Sprintf("one %s reading with scale σ: I(μ, μ) = %s / σ², I(σ, σ) = %s / σ², I(μ, σ) = 0", name, sy.Text(a), sy.Text(b))}
}

func studentT(r *reader, _ int) *law {
	return studentTInfo(r.arg("degrees"), r.arg("location"), r.arg("scale"))
}

func studentTInfo(v, m, s sy.Expr) *law {
	v1, v3, v5 := sy.Add(v, sy.One), sy.Add(v, sy.Int(3)), sy.Add(v, sy.Int(5))
	zero := sy.Expr(nil)
	vv := sy.Mul(sy.Frac(1, 4), sy.Sub(
		sy.Sub(sy.Trigamma(sy.Mul(sy.Half, v)), sy.Trigamma(sy.Mul(sy.Half, v1))),
		sy.Div(sy.Mul(sy.Int(2), v5), sy.Mul(v, v1, v3))))
	vs := sy.Neg(sy.Div(sy.Int(2), sy.Mul(s, v1, v3)))
	return &law{args: []sy.Expr{v, m, s},
		info: [][]sy.Expr{{vv, zero, vs},
			{zero, sy.Div(v1, sy.Mul(v3, sy.Square(s))), zero},
			{vs, zero, sy.Div(sy.Mul(sy.Int(2), v), sy.Mul(v3, sy.Square(s)))}},
		says: "one Student-t reading: I(μ, μ) = (ν + 1) / ((ν + 3)σ²), I(σ, σ) = 2ν / ((ν + 3)σ²), I(ν, σ) = −2 / (σ(ν + 1)(ν + 3))"}
}

func gamma(r *reader, _ int) *law {
	a, b := r.arg("shape"), sy.Expr(nil)
	switch {
	case r.has("rate"):
		b = r.arg("rate")
	case r.has("scale"):
		b = sy.Inv(r.arg("scale"))
	default:
		b = sy.Div(a, r.arg("mean"))
	}
	return &law{args: []sy.Expr{a, b}, info: symmetric(sy.Trigamma(a), sy.Neg(sy.Inv(b)), over(a, b)),
		says: "one Gamma reading: I(a, a) = ψ′(a), I(a, b) = −1 / b, I(b, b) = a / b² with b the rate"}
}

func inverseGamma(r *reader, _ int) *law {
	a, b := r.arg("shape"), r.arg("scale")
	return &law{args: []sy.Expr{a, b}, info: symmetric(sy.Trigamma(a), sy.Neg(sy.Inv(b)), over(a, b)),
		says: "one inverse-Gamma reading: I(a, a) = ψ′(a), I(a, b) = −1 / b, I(b, b) = a / b²"}
}

// multivariateNormal uses I(θ, θ′) = ∂m′Σ⁻¹∂m + ½ tr(Σ⁻¹∂Σ Σ⁻¹∂Σ).
func multivariateNormal(r *reader, size int) *law {
	if r.has("covariance") || r.has("precision") {
		return nil
	}
	if size > 3 {
		r.err = errors.New("more than three values together are not followed in symbols")
		return nil
	}
	mean, sd, rho := r.vector("mean"), r.vector("sd"), r.arg("correlation")
	if r.err != nil {
		return nil
	}
	if len(mean) == 1 {
		for len(mean) < size {
			mean = append(mean, mean[0])
		}
	}
	if len(sd) == 1 {
		for len(sd) < size {
			sd = append(sd, sd[0])
		}
	}
	if len(mean) != size || len(sd) != size {
		r.err = errVector
		return nil
	}
	// Σ is written in terms of stand-in symbols, so that the inverse is taken once.
	cov := make([][]sy.Expr, size)
	for i := range cov {
		cov[i] = make([]sy.Expr, size)
		for j := range cov[i] {
			cov[i][j] = sy.Mul(sd[i], sd[j])
			if i != j {
				cov[i][j] = sy.Mul(cov[i][j], rho)
			}
		}
	}
	inverse, err := invert(cov)
	if err != nil {
		r.err = err
		return nil
	}
	args := append([]sy.Expr(nil), mean...)
	type pair struct{ i, j int }
	var pairs []pair
	for i := range cov {
		for j := i; j < size; j++ {
			args = append(args, cov[i][j])
			pairs = append(pairs, pair{i, j})
		}
	}
	info := diagonal(make([]sy.Expr, len(args))...)
	for i := range mean {
		for j := range mean {
			info[i][j] = inverse[i][j]
		}
	}
	// ½ tr(A E_a A E_b) for the symmetric unit directions E_a of the elements.
	for a, p := range pairs {
		for b, q := range pairs {
			t := sy.Zero
			for _, x := range directions(p.i, p.j) {
				for _, y := range directions(q.i, q.j) {
					t = sy.Add(t, sy.Mul(inverse[y[1]][x[0]], inverse[x[1]][y[0]]))
				}
			}
			info[size+a][size+b] = sy.Mul(sy.Half, t)
		}
	}
	return &law{args: args, info: info, says: "one multivariate-Normal reading: I = ∂m′Σ⁻¹∂m + ½ tr(Σ⁻¹∂Σ Σ⁻¹∂Σ)"}
}

func directions(i, j int) [][2]int {
	if i == j {
		return [][2]int{{i, i}}
	}
	return [][2]int{{i, j}, {j, i}}
}

// autoregression of n values: the information of the stationary likelihood. It
// is set by the caller through the number of rows, see rowsOf.
func autoregression(r *reader, size int) *law {
	n := sy.Int(int64(size))
	m, phi, s := r.arg("mean"), r.arg("coefficient"), r.arg("sd")
	one := sy.Sub(sy.One, sy.Square(phi))
	mm := sy.Div(sy.Mul(sy.Sub(sy.One, phi), sy.Sub(n, sy.Mul(sy.Int(int64(size-2)), phi))), sy.Square(s))
	pp := sy.Div(sy.Sub(sy.Sub(n, sy.One), sy.Mul(sy.Int(int64(size-3)), sy.Square(phi))), sy.Square(one))
	ps := sy.Div(sy.Mul(sy.Int(2), phi), sy.Mul(s, one))
	return &law{args: []sy.Expr{m, phi, s},
		info: [][]sy.Expr{{mm, nil, nil}, {nil, pp, ps}, {nil, ps, over(sy.Mul(sy.Int(2), n), s)}},
		says: "a stationary series of n values: I(μ, μ) = (1 − ρ)(n − (n − 2)ρ) / σ², I(ρ, ρ) = (n − 1 − (n − 3)ρ²) / (1 − ρ²)², I(ρ, σ) = 2ρ / (σ(1 − ρ²)), I(σ, σ) = 2n / σ²"}
}
