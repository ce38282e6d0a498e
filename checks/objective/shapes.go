package objective

import (
	"fmt"

	sy "wellposed/checks/objective/symbolic"
	"wellposed/parser/model"
)

// shape is a law of one value as expressions: its log density at y, and what an
// integration over y needs.
type shape struct {
	log sy.Expr
	// cdf is P(Y ≤ y) for a continuous law, nil when it has no expression.
	cdf      func(y sy.Expr) sy.Expr
	discrete bool
	// top is the largest count, nil for infinite.
	top sy.Expr
	// low is the lower end of a continuous law, nil for −∞; high likewise.
	low, high sy.Expr
	// centre and width frame a continuous law.
	centre, width sy.Expr
	// atom is set for a Point: all mass at this value.
	atom sy.Expr
}

// shapes are the laws whose log densities are written out (the same references
// as laws).
var shapes map[string]func(r *reader, y sy.Expr) *shape

func init() {
	minus := sy.Neg
	location := func(f func(z sy.Expr) sy.Expr, cdf func(z sy.Expr) sy.Expr, m, s string) func(*reader, sy.Expr) *shape {
		return func(r *reader, y sy.Expr) *shape {
			a, b := r.arg(m), sy.Expr(nil)
			if s == "sd" {
				b = r.spread()
			} else {
				b = r.arg(s)
			}
			z := func(y sy.Expr) sy.Expr { return sy.Div(sy.Sub(y, a), b) }
			return &shape{log: sy.Sub(f(z(y)), sy.Log(b)), centre: a, width: b,
				cdf: func(y sy.Expr) sy.Expr { return cdf(z(y)) }}
		}
	}
	choose := func(n, y sy.Expr) sy.Expr {
		return sy.Sub(sy.LogGamma(sy.Add(n, sy.One)), sy.Add(sy.LogGamma(sy.Add(y, sy.One)), sy.LogGamma(sy.Add(sy.Sub(n, y), sy.One))))
	}
	trials := func(n, p, y sy.Expr) *shape {
		return &shape{discrete: true, top: n,
			log: sy.Add(choose(n, y), sy.Mul(y, sy.Log(p)), sy.Mul(sy.Sub(n, y), sy.Log(sy.Sub(sy.One, p))))}
	}
	lifetime := func(r *reader, log sy.Expr, centre sy.Expr, cdf func(y sy.Expr) sy.Expr) *shape {
		return &shape{log: log, low: sy.Zero, centre: centre, width: centre, cdf: cdf}
	}
	shapes = map[string]func(r *reader, y sy.Expr) *shape{
		"Bernoulli": func(r *reader, y sy.Expr) *shape { return trials(sy.One, r.arg("probability"), y) },
		"Binomial":  func(r *reader, y sy.Expr) *shape { return trials(r.arg("trials"), r.arg("probability"), y) },
		"Poisson": func(r *reader, y sy.Expr) *shape {
			m := r.arg("mean")
			return &shape{discrete: true, log: sy.Add(sy.Mul(y, sy.Log(m)), minus(m), minus(sy.LogGamma(sy.Add(y, sy.One))))}
		},
		"geometric": func(r *reader, y sy.Expr) *shape {
			// Counted from 0 whatever the first value is called: the information is the same.
			p := r.arg("probability")
			return &shape{discrete: true, log: sy.Add(sy.Log(p), sy.Mul(y, sy.Log(sy.Sub(sy.One, p))))}
		},
		"negative-Binomial": func(r *reader, y sy.Expr) *shape {
			k := r.arg("size")
			var p sy.Expr
			if r.has("probability") {
				p = r.arg("probability")
			} else {
				p = sy.Div(k, sy.Add(k, r.arg("mean")))
			}
			return &shape{discrete: true, log: sy.Add(sy.LogGamma(sy.Add(y, k)), minus(sy.LogGamma(k)), minus(sy.LogGamma(sy.Add(y, sy.One))),
				sy.Mul(k, sy.Log(p)), sy.Mul(y, sy.Log(sy.Sub(sy.One, p))))}
		},
		"Normal": location(logNormalDensity, sy.Phi, "mean", "sd"),
		"logistic": location(func(z sy.Expr) sy.Expr {
			return sy.Sub(minus(z), sy.Mul(sy.Int(2), sy.Log(sy.Add(sy.One, sy.Exp(minus(z))))))
		}, sy.Expit, "location", "scale"),
		"Cauchy": location(func(z sy.Expr) sy.Expr {
			return sy.Sub(minus(sy.Log(sy.Pi())), sy.Log(sy.Add(sy.One, sy.Square(z))))
		}, func(z sy.Expr) sy.Expr { return sy.Add(sy.Half, sy.Div(sy.Atan(z), sy.Pi())) }, "location", "scale"),
		"Gumbel": location(func(z sy.Expr) sy.Expr { return sy.Sub(minus(z), sy.Exp(minus(z))) },
			func(z sy.Expr) sy.Expr { return sy.Exp(minus(sy.Exp(minus(z)))) }, "location", "scale"),
		"log-Normal": func(r *reader, y sy.Expr) *shape {
			var m sy.Expr
			if r.has("median") {
				m = sy.Log(r.arg("median"))
			} else {
				m = r.arg("log mean")
			}
			s := r.arg("log sd")
			z := func(y sy.Expr) sy.Expr { return sy.Div(sy.Sub(sy.Log(y), m), s) }
			return lifetime(r, sy.Add(logNormalDensity(z(y)), minus(sy.Log(s)), minus(sy.Log(y))), sy.Exp(m),
				func(y sy.Expr) sy.Expr { return sy.Phi(z(y)) })
		},
		"Exponential": func(r *reader, y sy.Expr) *shape {
			var m sy.Expr
			if r.has("rate") {
				m = sy.Inv(r.arg("rate"))
			} else {
				m = r.arg("mean")
			}
			return lifetime(r, minus(sy.Add(sy.Log(m), sy.Div(y, m))), m,
				func(y sy.Expr) sy.Expr { return sy.Sub(sy.One, sy.Exp(minus(sy.Div(y, m)))) })
		},
		"Weibull": func(r *reader, y sy.Expr) *shape {
			k, s := r.arg("shape"), r.arg("scale")
			power := func(y sy.Expr) sy.Expr { return sy.Exp(sy.Mul(k, sy.Sub(sy.Log(y), sy.Log(s)))) }
			return lifetime(r, sy.Add(sy.Log(k), minus(sy.Log(y)), sy.Mul(k, sy.Sub(sy.Log(y), sy.Log(s))), minus(power(y))), s,
				func(y sy.Expr) sy.Expr { return sy.Sub(sy.One, sy.Exp(minus(power(y)))) })
		},
		"Gamma": func(r *reader, y sy.Expr) *shape {
			l := gamma(r, 1)
			if r.err != nil {
				return nil
			}
			a, b := l.args[0], l.args[1]
			return lifetime(r, sy.Add(sy.Mul(a, sy.Log(b)), minus(sy.LogGamma(a)), sy.Mul(sy.Sub(a, sy.One), sy.Log(y)), minus(sy.Mul(b, y))), sy.Div(a, b), nil)
		},
		"Student-t": func(r *reader, y sy.Expr) *shape {
			v, m, s := r.arg("degrees"), r.arg("location"), r.arg("scale")
			z := sy.Div(sy.Sub(y, m), s)
			half := sy.Mul(sy.Half, sy.Add(v, sy.One))
			return &shape{centre: m, width: s, log: sy.Add(sy.LogGamma(half), minus(sy.LogGamma(sy.Mul(sy.Half, v))),
				sy.Mul(sy.Frac(-1, 2), sy.Add(sy.Log(v), sy.Log(sy.Pi()))), minus(sy.Log(s)),
				minus(sy.Mul(half, sy.Log(sy.Add(sy.One, sy.Div(sy.Square(z), v))))))}
		},
		"Point": func(r *reader, _ sy.Expr) *shape {
			x := r.arg("value")
			if r.err == nil && r.s.watches(x) {
				r.err = &irregular{r.d, "value"}
			}
			return &shape{atom: x}
		},
	}
}

// shapeOf is the shape of a distribution in a row.
func (s *space) shapeOf(d *model.Dist, row int, y sy.Expr) (*shape, error) {
	r := &reader{s: s, d: d, row: row}
	f := shapes[d.Spec.Name]
	if f == nil || r.has("origin") {
		return nil, fmt.Errorf("the density of %s is not written out here", d.Spec.Name)
	}
	h := f(r, y)
	if r.err != nil {
		return nil, r.err
	}
	return h, nil
}
