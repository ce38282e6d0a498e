package objective

import (
	"context"
	"errors"
	"fmt"

	sy "wellposed/checks/objective/symbolic"
	"wellposed/parser/model"
)

// group of transformations under which a law with a moving support keeps its
// form: values shift with location and stretch with scale.
type groupOf struct {
	location, scale sy.Expr
	// words names them.
	words string
}

// groupIn reads the group of a distribution whose support moves.
func (s *space) groupIn(d *model.Dist, row int) (*groupOf, error) {
	r := &reader{s: s, d: d, row: row}
	var g *groupOf
	switch d.Spec.Name {
	case "Uniform":
		low, high := r.arg("low"), r.arg("high")
		g = &groupOf{low, sy.Sub(high, low), "the lower end shifts the values, the width stretches them"}
	case "Exponential":
		scale := sy.Expr(nil)
		if r.has("rate") {
			scale = sy.Inv(r.arg("rate"))
		} else {
			scale = r.arg("mean")
		}
		g = &groupOf{r.arg("origin"), scale, "the origin shifts the values, the mean stretches them"}
	case "Pareto":
		g = &groupOf{sy.Log(r.arg("minimum")), sy.Inv(r.arg("shape")), "log minimum shifts the logarithms, 1/shape stretches them"}
	case "Gamma", "Weibull", "log-Normal", "generalized-Pareto":
		g = &groupOf{r.arg("origin"), nil, "the origin shifts the values"}
	default:
		return nil, fmt.Errorf("no group of transformations is known for %s", d.Spec.Name)
	}
	return g, r.err
}

// measure is the prior that the group gives to the watched parameters: for one
// of them the invariant measure, for a location and a scale together the
// right-Haar measure 1/scale.
func (g *groupOf) measure(ps []*Parameter) (sy.Expr, string, error) {
	symbols := symbolsOf(ps)
	depends := func(e sy.Expr) bool {
		if e == nil {
			return false
		}
		for _, s := range symbols {
			if sy.Depends(e, s) {
				return true
			}
		}
		return false
	}
	shifts, stretches := depends(g.location), depends(g.scale)
	refuse := errors.New("its support moves in a way that no group of shifts and stretches follows; Fisher information is not defined, and no prior is derived")
	switch len(ps) {
	case 1:
		x := symbols[0]
		if stretches {
			if shifts {
				// The low end may move alone, or both ends in proportion.
				upper := sy.Add(g.location, g.scale)
				ratio := simplified(sy.Div(g.location, g.scale))
				if depends(upper) && depends(ratio) {
					return nil, "", refuse
				}
			}
			d, err := sy.Diff(g.scale, x)
			if err != nil {
				return nil, "", err
			}
			return sy.Abs(simplified(sy.Div(d, g.scale))), "the values stretch with " + x.Name + ": the invariant measure is d(scale)/scale", nil
		}
		d, err := sy.Diff(g.location, x)
		if err != nil {
			return nil, "", err
		}
		return sy.Abs(simplified(d)), "the values shift with " + x.Name + ": the invariant measure is flat on the shift", nil
	case 2:
		if g.scale == nil || !shifts || !stretches {
			return nil, "", refuse
		}
		var j [2][2]sy.Expr
		for a, e := range []sy.Expr{g.location, g.scale} {
			for b, x := range symbols {
				d, err := sy.Diff(e, x)
				if err != nil {
					return nil, "", err
				}
				j[a][b] = d
			}
		}
		det := simplified(sy.Sub(sy.Mul(j[0][0], j[1][1]), sy.Mul(j[0][1], j[1][0])))
		if isZero(det) {
			return nil, "", refuse
		}
		return sy.Abs(simplified(sy.Div(det, g.scale))), g.words + ": the right-Haar measure is d(location) d(scale)/scale", nil
	}
	return nil, "", refuse
}

// invariant derives the prior from invariance where the support moves with an
// unknown.
func (w *work) invariant(moves *irregular) error {
	ps := w.of(w.about)
	k, line, err := w.s.invariantOf(w.ctx, ps)
	if err != nil {
		return fmt.Errorf("%w; %v", moves, err)
	}
	w.step("%s.", moves.Error())
	w.step("%s", line)
	w.kernel = k
	w.d.Source = "invariance: right-Haar measure (Hartigan 1964; Berger 1985, Statistical Decision Theory, section 6.6; from memory)"
	return nil
}

// invariantOf is the invariant measure of parameters in the one observation that
// depends on them.
func (s *space) invariantOf(_ context.Context, ps []*Parameter) (sy.Expr, string, error) {
	s.watch = map[string]bool{}
	for _, p := range ps {
		s.watch[p.Symbol.Name] = true
	}
	var found *model.Observation
	for _, o := range s.a.Observations {
		if s.concerns(o) {
			if found != nil {
				return nil, "", errors.New("several observations depend on it")
			}
			found = o
		}
	}
	if found == nil {
		return nil, "", errNoLikelihood
	}
	g, err := s.groupIn(found.Dist, firstRow(found))
	if err != nil {
		return nil, "", err
	}
	return g.measure(ps)
}

// group is the invariant measure of one unknown, the others held.
func (s *space) group(ctx context.Context, u *model.Unknown) (sy.Expr, string, error) {
	k, line, err := s.invariantOf(ctx, s.free(u))
	if err != nil {
		return nil, "", fmt.Errorf("%s: %w", u.Name, err)
	}
	own, separate := sy.Own(simplified(k), symbolsOf(s.free(u)))
	if !separate {
		return nil, "", fmt.Errorf("the measure of %s does not come apart from the other unknowns", u.Name)
	}
	return own, fmt.Sprintf("%s: the support moves with it, so Fisher information is not defined; %s, π ∝ %s", u.Name, line, sy.Text(own)), nil
}
