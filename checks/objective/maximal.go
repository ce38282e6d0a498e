package objective

import (
	"errors"
	"fmt"

	sy "wellposed/checks/objective/symbolic"
)

// maximalData is Zellner's maximal-data-information prior exp E[log p(y | θ)] for
// one observation (the average over rows where they differ). It is not invariant:
// it is stated on the unknowns' own scale.
func (w *work) maximalData() error {
	ps := w.of(w.about)
	w.s.watch = map[string]bool{}
	for _, p := range ps {
		w.s.watch[p.Symbol.Name] = true
	}
	w.d.Source = "Zellner (1971), An Introduction to Bayesian Inference in Econometrics; Zellner (1977)"
	total := sy.Zero
	found := false
	for _, o := range w.s.a.Observations {
		if !w.s.concerns(o) {
			continue
		}
		if found {
			return errors.New("several observations depend on it; the rule is stated for one kind of observation")
		}
		found = true
		rows := o.Rows
		if len(rows) == 0 {
			rows = []int{0}
		}
		if o.Right != nil || o.Left != nil || o.Truncated != nil {
			return errors.New("the expected log density under censoring or truncation is not followed")
		}
		in := &information{exact: true}
		for _, group := range w.s.patterns(o.Dist, rows) {
			r := &reader{s: w.s, d: o.Dist, row: group[0]}
			f := negentropies[o.Dist.Spec.Name]
			if f == nil || r.has("origin") {
				return fmt.Errorf("the expected log density of %s has no closed form here", o.Dist.Spec.Name)
			}
			e := f(r)
			if r.err != nil {
				return r.err
			}
			if e == nil {
				return fmt.Errorf("the expected log density of %s has no closed form here", o.Dist.Spec.Name)
			}
			sum, err := w.s.overRows(in, e, group)
			if err != nil {
				return err
			}
			total = sy.Add(total, sy.Mul(sum, sy.Frac(1, int64(len(rows)))))
		}
	}
	if !found {
		return errNoLikelihood
	}
	w.step("E[log p(y | θ)] = %s", sy.Text(total))
	w.step("π ∝ exp E[log p(y | θ)]; another scale of the unknown gives another prior")
	w.kernel = sy.Exp(total)
	return nil
}

// negentropies are E[log density] of one observation, up to constants that do
// not depend on the arguments (Cover & Thomas, Elements of Information Theory,
// table 17.1; each checked against quadrature in maximal_test.go).
var negentropies = map[string]func(r *reader) sy.Expr{
	"Bernoulli": func(r *reader) sy.Expr {
		p := r.arg("probability")
		q := sy.Sub(sy.One, p)
		return sy.Add(sy.Mul(p, sy.Log(p)), sy.Mul(q, sy.Log(q)))
	},
	"Binomial": func(r *reader) sy.Expr {
		// One trial: the rule is stated for one observation.
		p := r.arg("probability")
		q := sy.Sub(sy.One, p)
		return sy.Add(sy.Mul(p, sy.Log(p)), sy.Mul(q, sy.Log(q)))
	},
	"geometric": func(r *reader) sy.Expr {
		p := r.arg("probability")
		q := sy.Sub(sy.One, p)
		return sy.Add(sy.Log(p), sy.Mul(sy.Div(q, p), sy.Log(q)))
	},
	"Normal":   func(r *reader) sy.Expr { r.arg("mean"); return sy.Neg(sy.Log(r.spread())) },
	"Laplace":  func(r *reader) sy.Expr { return sy.Neg(sy.Log(r.arg("scale"))) },
	"Cauchy":   func(r *reader) sy.Expr { return sy.Neg(sy.Log(r.arg("scale"))) },
	"logistic": func(r *reader) sy.Expr { return sy.Neg(sy.Log(r.arg("scale"))) },
	"log-Normal": func(r *reader) sy.Expr {
		m := sy.Expr(nil)
		if r.has("median") {
			m = sy.Log(r.arg("median"))
		} else {
			m = r.arg("log mean")
		}
		return sy.Neg(sy.Add(m, sy.Log(r.arg("log sd"))))
	},
	"Exponential": func(r *reader) sy.Expr {
		if r.has("rate") {
			return sy.Log(r.arg("rate"))
		}
		return sy.Neg(sy.Log(r.arg("mean")))
	},
	"Gamma": func(r *reader) sy.Expr {
		l := gamma(r, 1)
		if r.err != nil {
			return nil
		}
		a, b := l.args[0], l.args[1]
		return sy.Add(sy.Log(b), sy.Neg(sy.LogGamma(a)), sy.Mul(sy.Sub(a, sy.One), sy.Digamma(a)), sy.Neg(a))
	},
	"Weibull": func(r *reader) sy.Expr {
		k, s := r.arg("shape"), r.arg("scale")
		return sy.Add(sy.Log(k), sy.Neg(sy.Log(s)), sy.Div(sy.Euler(), k))
	},
	"Gumbel": func(r *reader) sy.Expr { return sy.Neg(sy.Log(r.arg("scale"))) },
	"generalized-Pareto": func(r *reader) sy.Expr {
		return sy.Neg(sy.Add(sy.Log(r.arg("scale")), r.arg("shape")))
	},
	"generalized-extreme-value": func(r *reader) sy.Expr {
		return sy.Neg(sy.Add(sy.Log(r.arg("scale")), sy.Mul(sy.Euler(), r.arg("shape"))))
	},
	"Pareto": func(r *reader) sy.Expr {
		a := r.arg("shape")
		return sy.Add(sy.Log(a), sy.Neg(sy.Log(r.arg("minimum"))), sy.Neg(sy.Inv(a)))
	},
	"Uniform":     func(r *reader) sy.Expr { return sy.Neg(sy.Log(sy.Sub(r.arg("high"), r.arg("low")))) },
	"half-Normal": func(r *reader) sy.Expr { return sy.Neg(sy.Log(r.spread())) },
	"half-Cauchy": func(r *reader) sy.Expr { return sy.Neg(sy.Log(r.arg("scale"))) },
	"categorical": func(r *reader) sy.Expr {
		total := sy.Zero
		for _, p := range r.vector("proportions") {
			total = sy.Add(total, sy.Mul(p, sy.Log(p)))
		}
		return total
	},
}
