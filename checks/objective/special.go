package objective

import (
	"fmt"
	"math"

	sy "wellposed/checks/objective/symbolic"
	"wellposed/parser/model"
)

// simplex handles proportions that are categories' probabilities as they stand:
// det I is proportional to 1/∏w for any number of categories, by the matrix
// determinant lemma applied to diag(1/wᵢ) + 11′/w_k.
func (w *work) simplex() (done bool, err error) {
	if len(w.about) != 1 || w.about[0].Kind.Name != "proportions" {
		return false, nil
	}
	u := w.about[0]
	ps := w.s.parameters[u]
	w.s.watch = map[string]bool{}
	for _, p := range ps {
		w.s.watch[p.Symbol.Name] = true
	}
	found := false
	for _, o := range w.s.a.Observations {
		if !w.s.concerns(o) {
			continue
		}
		ref, ok := o.Dist.Args["proportions"].(*model.UnknownRef)
		if !ok || ref.Unknown != u || ref.Which != model.Whole {
			return false, nil
		}
		found = true
	}
	if !found {
		return true, errNoLikelihood
	}
	w.step("n draws among categories: I = n (diag(1/wᵢ) + 11′/w_k) over the first k − 1 shares")
	w.step("det I ∝ 1/∏ w, so π ∝ ∏ w^(−1/2)")
	w.d.Assumed = append(w.d.Assumed, "the number of draws was fixed beforehand")
	w.kernel = sy.One
	for _, p := range ps {
		w.kernel = sy.Mul(w.kernel, sy.Pow(sy.Sym(p.Symbol), rat(-1, 2)))
	}
	return true, nil
}

// covariances handles a covariance matrix S of a multivariate-Normal law by
// invariance under y → A y: |S|^(−(d+1)/2), and jointly with d free means
// |S|^(−(d+2)/2) (Jeffreys 1961; Box & Tiao 1973, section 8.2; from memory).
func (w *work) covariances() (done bool, err error) {
	var matrix *model.Unknown
	for _, u := range w.about {
		if u.Kind.Name == "covariance" {
			if matrix != nil {
				return true, fmt.Errorf("two covariances at once are not followed")
			}
			matrix = u
		}
	}
	if matrix == nil {
		return false, nil
	}
	d := int64(matrix.Size)
	var mean *model.Unknown
	for _, u := range w.about {
		if u != matrix {
			if mean != nil {
				return true, fmt.Errorf("a covariance with several other unknowns is not followed")
			}
			mean = u
		}
	}
	precision := false
	found := false
	for _, o := range w.s.a.Observations {
		uses := false
		for _, u := range unknownsOf(o.Dist) {
			uses = uses || u == matrix
		}
		if !uses {
			continue
		}
		found = true
		whole := func(label string) bool {
			r, ok := o.Dist.Args[label].(*model.UnknownRef)
			return ok && r.Unknown == matrix && r.Which == model.Whole
		}
		switch name := o.Dist.Spec.Name; {
		case name == "multivariate-Normal" && whole("covariance"):
		case name == "multivariate-Normal" && whole("precision"):
			precision = true
		case (name == "Wishart" || name == "inverse-Wishart") && whole("scale"):
		default:
			return true, fmt.Errorf("the covariance %s is followed only where a law has it as it stands", matrix.Name)
		}
		if mean != nil {
			r, ok := o.Dist.Args["mean"].(*model.UnknownRef)
			if !ok || r.Unknown != mean || r.Which != model.Whole || int64(len(w.s.free(mean))) != d {
				return true, fmt.Errorf("the mean is not one free unknown for each of the %d values", d)
			}
		}
	}
	if !found {
		return true, errNoLikelihood
	}
	power := rat(-(d + 1), 2)
	switch w.rule.Name {
	case model.Jeffreys, model.MatchingPrior:
		if mean != nil {
			return true, errSense
		}
		if w.rule.Name == model.MatchingPrior {
			return true, fmt.Errorf("first-order matching is unique for one unknown only")
		}
	case model.JeffreysSeparately:
	case model.JeffreysJointly:
		if mean != nil {
			if power = rat(-(d + 2), 2); precision {
				power = rat(-d, 2)
			}
			w.step("the mean adds |%s|^(−1/2) on the covariance scale", matrix.Name)
		}
	case model.ReferencePrior:
		if len(w.rule.Order) > 1 || mean != nil {
			return true, fmt.Errorf("the reference prior of a covariance depends on an order of its elements that cannot be stated here; it is not derived")
		}
	default:
		return true, fmt.Errorf("the rule %q is not followed for a covariance", w.rule.Name)
	}
	w.d.Source = "Jeffreys (1961); Box & Tiao (1973), Bayesian Inference in Statistical Analysis, section 8.2 (from memory)"
	w.d.Steps = append([]string{fmt.Sprintf("the law keeps its form under y → A y, %s → A %s A′; the invariant measure is |%s|^(−(d + 1)/2), d = %d", matrix.Name, matrix.Name, matrix.Name, d)}, w.d.Steps...)
	w.d.Expr = &model.Op{Op: "^", Args: []model.Expr{
		&model.Call{Func: "det", Args: []model.Expr{&model.UnknownRef{Unknown: matrix}}}, number(power)}}
	w.d.Name = fmt.Sprintf("det(%s)^(%s)", matrix.Name, power.RatString())
	before := 0
	for _, u := range w.about {
		if u == matrix {
			break
		}
		before += len(w.s.parameters[u])
	}
	exponent, _ := power.Float64()
	n := int(d)
	w.d.LogKernel = func(x []float64) float64 {
		// A covariance stands as its d² elements, row by row.
		m := make([][]float64, n)
		for i := range m {
			m[i] = append([]float64(nil), x[before+i*n:before+(i+1)*n]...)
		}
		l := logRootDeterminant(m)
		if math.IsInf(l, -1) {
			return l
		}
		return 2 * exponent * l
	}
	return true, nil
}
