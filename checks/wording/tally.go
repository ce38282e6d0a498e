package wording

import (
	"math/big"

	"wellposed/parser/model"
)

// Tally is what counts say about one probability or one rate: Y events in N trials,
// or in exposure N.
type Tally struct {
	Y, N *big.Rat
	// Rate is set for events in an exposure.
	Rate bool
	// Last is one of the observations.
	Last *model.Observation
}

// TallyOf adds up the observations about a scalar unknown; not ok when one of them is
// of another kind, is not there yet, or involves other unknowns.
func TallyOf(m *model.Model, u *model.Unknown) (Tally, bool) {
	t := Tally{Y: new(big.Rat), N: new(big.Rat)}
	for _, p := range m.Populations {
		inside := false
		walkDist(p.Dist, func(v *model.Unknown) { inside = inside || v == u })
		if inside {
			return t, false
		}
	}
	for _, o := range m.Observations {
		if !Touches(o, func(v *model.Unknown) bool { return v == u }) {
			continue
		}
		if o.Awaited || o.Reading != model.Values || o.Right != nil || o.Left != nil || o.Truncated != nil || o.Weight != nil || o.Dist == nil || o.Dist.Spec == nil {
			return t, false
		}
		rate := o.Dist.Spec.Name == "Poisson"
		if t.Last != nil && rate != t.Rate {
			return t, false
		}
		var n *big.Rat
		switch o.Dist.Spec.Name {
		case "Binomial":
			if !isScalar(o.Dist.Arg("probability"), u) {
				return t, false
			}
			n = total(o, o.Dist.Arg("trials"))
		case "Bernoulli":
			if !isScalar(o.Dist.Arg("probability"), u) {
				return t, false
			}
			n = big.NewRat(int64(len(o.Rows)), 1)
		case "Poisson":
			if n = exposures(o, u); n == nil {
				return t, false
			}
		default:
			return t, false
		}
		y := total(o, first(o))
		if y == nil || n == nil {
			return t, false
		}
		t.Y.Add(t.Y, y)
		t.N.Add(t.N, n)
		t.Rate, t.Last = rate, o
	}
	return t, t.Last != nil
}

// exposures adds up T over rows with mean u · T.
func exposures(o *model.Observation, u *model.Unknown) *big.Rat {
	mean := o.Dist.Arg("mean")
	if isScalar(mean, u) {
		return big.NewRat(int64(len(o.Rows)), 1)
	}
	op, ok := mean.(*model.Op)
	if !ok || op.Op != "*" || len(op.Args) != 2 {
		return nil
	}
	for i, a := range op.Args {
		if isScalar(a, u) {
			return total(o, op.Args[1-i])
		}
	}
	return nil
}

func isScalar(e model.Expr, u *model.Unknown) bool {
	ref, ok := e.(*model.UnknownRef)
	return ok && ref.Unknown == u && u.Scalar()
}

// OnItself reports whether a prior is stated on one scalar unknown itself.
func OnItself(p *model.Prior) bool {
	return !p.Joint && len(p.About) == 1 && isScalar(p.Target, p.About[0])
}

// Arguments are the exact values of a distribution's arguments; not ok when one of
// them is absent or not known.
func Arguments(d *model.Dist, labels ...string) ([]*big.Rat, bool) {
	var list []*big.Rat
	for _, label := range labels {
		x := exact(d.Arg(label), 0)
		if x == nil {
			return nil, false
		}
		list = append(list, x)
	}
	return list, true
}

// Decimal prints an exact number for people.
func Decimal(r *big.Rat) string { return number(r) }
