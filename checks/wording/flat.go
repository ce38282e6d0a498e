package wording

import (
	"math/big"

	"wellposed/parser/model"
)

// Flat reports whether a prior is flat on its target: stated so, a constant
// kernel, or a uniform law under one of its names.
func Flat(p *model.Prior) bool {
	switch p.Form {
	case model.ByFlat:
		return true
	case model.ByKernel:
		_, constant := p.Kernel.(*model.Number)
		return constant
	case model.ByDist:
		return p.Dist != nil && p.Dist.Spec != nil && uniform(p.Dist)
	}
	return false
}

func uniform(d *model.Dist) bool {
	switch d.Spec.Name {
	case "Uniform":
		return true
	case "Beta":
		for _, label := range []string{"a", "b"} {
			if x := exact(d.Arg(label), 0); x == nil || !x.IsInt() || x.Num().Int64() != 1 {
				return false
			}
		}
		return true
	}
	return false
}

// Unbounded reports whether a flat prior on this target has infinite mass: its
// range has no end on some side and nothing cuts it off.
func Unbounded(p *model.Prior) bool {
	if p.Form == model.ByDist || p.Joint || len(p.About) != 1 {
		return false
	}
	if t := p.Truncated; t != nil && t.Low != nil && t.High != nil {
		return false
	}
	u := p.About[0]
	if u.Kind == nil || u.Kind.Sized {
		return false
	}
	infinite := u.Support.Low == nil || u.Support.High == nil
	switch e := p.Target.(type) {
	case *model.UnknownRef:
		return infinite
	case *model.Call:
		switch e.Func {
		case "logit", "probit", "cloglog", "odds", "atanh", "log":
			return true
		case "expit", "Phi", "tanh", "atan":
			return false
		}
	}
	return infinite
}

// Informing counts what bears on each component of an unknown: readings, trials
// and rows of observations, or the components of varying effects whose
// population model holds it.
func Informing(m *model.Model, u *model.Unknown) int {
	n := 0
	same := func(v *model.Unknown) bool { return v == u }
	for _, o := range m.Observations {
		if !Touches(o, same) {
			continue
		}
		n += max(len(o.Rows), weight(o))
	}
	for _, p := range m.Populations {
		inside := false
		walkDist(p.Dist, func(v *model.Unknown) { inside = inside || v == u })
		if inside && p.Unknown != nil {
			n += p.Unknown.Components()
		}
	}
	return n / max(1, len(u.Levels))
}

// weight is the number of readings of a summary or of trials of a Binomial; 0
// when it is not known.
func weight(o *model.Observation) int {
	var n *big.Rat
	switch {
	case o.Reading == model.Summary:
		n = exact(o.N, 0)
	case o.Dist != nil && o.Dist.Spec != nil && o.Dist.Spec.Name == "Binomial":
		n = total(o, o.Dist.Arg("trials"))
	}
	if n == nil || !n.IsInt() || !n.Num().IsInt64() || n.Num().Int64() > 1<<40 {
		return 0
	}
	return int(n.Num().Int64())
}
