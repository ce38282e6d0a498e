package objective

import (
	"errors"
	"fmt"
	"strings"

	sy "wellposed/checks/objective/symbolic"
	"wellposed/parser/model"
)

// reference is the Berger–Bernardo reference prior with ordered groups, in the
// separable case: with |h_j| the ratio of the determinants of the information
// of groups j, j+1, … and j+1, …, when each |h_j|^(1/2) is a function of group j
// times a function of the other groups, the reference prior is the product of
// the former, on rectangular compact sets (Berger & Bernardo 1992; Datta &
// Ghosh 1995).
func (w *work) reference() error {
	w.d.Source = "Berger & Bernardo (1992), Bayesian Statistics 4; Bernardo & Smith (1994), section 5.4.5"
	order := w.rule.Order
	if len(order) == 0 {
		order = [][]*model.Unknown{w.about}
	}
	listed := map[*model.Unknown]bool{}
	var ps []*Parameter
	var groups [][]int
	for _, g := range order {
		var at []int
		for _, u := range g {
			if listed[u] {
				return fmt.Errorf("%s stands twice in the order", u.Name)
			}
			listed[u] = true
			for _, p := range w.s.free(u) {
				at = append(at, len(ps))
				ps = append(ps, p)
			}
		}
		groups = append(groups, at)
	}
	for _, u := range w.about {
		if !listed[u] {
			return fmt.Errorf("the order does not place %s", u.Name)
		}
	}
	if len(groups) == 1 {
		if done, err := w.simplex(); done {
			return err
		}
	}
	in, err := w.s.information(w.ctx, ps)
	var moves *irregular
	if errors.As(err, &moves) {
		return w.invariant(moves)
	}
	if err != nil {
		return err
	}
	w.learn(in)
	w.domain(in)
	w.step("order of interest: %s", orderText(order))
	if len(groups) == 1 {
		w.step("one group: the reference prior is sqrt(det I)")
		return w.rootDeterminant(in)
	}
	h := make([]sy.Expr, len(groups))
	after := sy.One // determinant of the groups after j
	for j := len(groups) - 1; j >= 0; j-- {
		var at []int
		for _, g := range groups[j:] {
			at = append(at, g...)
		}
		sub := &information{parameters: pick(ps, at), entries: part(in.entries, at), exact: in.exact}
		d, _, err := symbolicDeterminant(sub)
		if err != nil {
			return err
		}
		h[j] = simplified(sy.Sqrt(sy.Div(d, after)))
		after = d
	}
	kernel := sy.One
	for j, g := range groups {
		own, separate := sy.Own(h[j], symbolsOf(pick(ps, g)))
		if !separate {
			return w.referenceByExpectation(in, ps, groups, h)
		}
		w.step("|h|^(1/2) of group %d: %s, of which %s is its own", j+1, sy.Text(h[j]), sy.Text(own))
		kernel = sy.Mul(kernel, own)
	}
	w.step("each comes apart from the other groups, so π is the product of their own factors")
	w.kernel = kernel
	return nil
}

func pick(ps []*Parameter, at []int) []*Parameter {
	out := make([]*Parameter, len(at))
	for i, a := range at {
		out[i] = ps[a]
	}
	return out
}

func orderText(order [][]*model.Unknown) string {
	parts := make([]string, len(order))
	for i, g := range order {
		parts[i] = names(g)
		if len(g) > 1 {
			parts[i] = "(" + parts[i] + ")"
		}
	}
	return strings.Join(parts, " before ")
}

// referenceByExpectation is the general two-step for two single unknowns when
// the conditional reference prior of the second is proper and the same for every
// value of the first: π(θ1) ∝ exp E[log h1] needs no compact sets then. Every
// other case is refused: the answer would depend on the sets chosen.
func (w *work) referenceByExpectation(in *information, ps []*Parameter, groups [][]int, h []sy.Expr) error {
	refuse := fmt.Errorf("the information does not come apart by groups (%s), so the reference prior depends on the compact sets chosen; it is not derived", sy.Text(h[0]))
	if len(groups) != 2 || len(ps) != 2 {
		return refuse
	}
	interest, nuisance := ps[groups[0][0]], ps[groups[1][0]]
	own, separate := sy.Own(h[1], []*sy.Symbol{nuisance.Symbol})
	if !separate {
		return refuse
	}
	outer, inner := splitFor(h[0], interest.Symbol)
	at := 0
	if w.about[0] != interest.Unknown {
		at = 1
	}
	log, err := expectedLog(outer, inner, own, interest, nuisance, at)
	if err != nil {
		return fmt.Errorf("%w: %v", refuse, err)
	}
	w.step("given %s, %s has the proper reference prior ∝ %s", interest.Symbol.Name, nuisance.Symbol.Name, sy.Text(own))
	w.step("π(%s) ∝ exp E[log %s] under it, by quadrature", interest.Symbol.Name, sy.Text(h[0]))
	w.log = log
	w.d.Error = numericError
	return nil
}

// splitFor separates the factors that depend on the interest alone.
func splitFor(h sy.Expr, interest *sy.Symbol) (outer, inner sy.Expr) {
	outer, inner = sy.One, sy.One
	bases, qs := sy.Factors(h)
	for i, b := range bases {
		f := sy.Pow(b, qs[i])
		only := true
		for _, s := range sy.Symbols(b) {
			only = only && s.Name == interest.Name
		}
		if only {
			outer = sy.Mul(outer, f)
		} else {
			inner = sy.Mul(inner, f)
		}
	}
	return outer, inner
}
