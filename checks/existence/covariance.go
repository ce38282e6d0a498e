package existence

import (
	"context"
	"fmt"
	"math/big"

	"wellposed/checks/existence/kernel"
	"wellposed/parser/model"
)

// Covariance matrices. n vectors of length d, multivariate normal with mean known
// or flat and covariance S with kernel det(S)^(−q): the mean integrates out to
// det(S)^(1/2), and what is left is det(S)^(−q−m/2) exp(−tr(S⁻¹ C)/2) with C the
// sum of squares and products (m = n with a known mean, n − 1 with a flat one).
// This is an inverse-Wishart kernel with degrees ν = m + 2q − d − 1: finite iff C
// is positive definite and ν > d − 1. When C has a null vector the kernel does not
// fall as the corresponding eigenvalue goes to 0, and grows there unless the
// exponent is too small for the other end; so both conditions are needed.
func whenCovariance(g *group, ctx context.Context) *Verdict {
	if len(g.rows) == 0 || len(g.pops) > 0 {
		return nil
	}
	o := g.rows[0].obs
	d := len(o.What)
	if o.Dist.Spec.Name != "multivariate-Normal" || d < 1 || d > 30 || o.Reading != model.Values || o.Weight != nil {
		return nil
	}
	s, ok := unlet(o.Dist.Arg("covariance")).(*model.UnknownRef)
	if o.Dist.Arg("covariance") == nil || !ok || s.Unknown.Size != d || s.Unknown.Kind == nil || s.Unknown.Kind.Name != "covariance" {
		return nil
	}
	// The mean: known numbers, or one flat unknown for each value.
	means := meanItems(o.Dist.Arg("mean"), d)
	if means == nil {
		return nil
	}
	free := 0
	flat := map[*model.Unknown]bool{}
	for _, x := range means {
		if !mentions(x) {
			continue
		}
		r, ok := unlet(x).(*model.UnknownRef)
		if !ok || !r.Unknown.Scalar() || flat[r.Unknown] || r.Unknown.Support.Low != nil || r.Unknown.Support.High != nil {
			return nil
		}
		flat[r.Unknown] = true
		free++
	}
	if free != 0 && free != d {
		return nil
	}
	var q *big.Rat
	for _, f := range g.priors {
		p := f.prior
		switch {
		case len(p.About) == 1 && flat[p.About[0]] && p.Form == model.ByFlat:
			if _, plain := p.Target.(*model.UnknownRef); !plain {
				return nil
			}
		case len(p.About) == 1 && p.About[0] == s.Unknown:
			switch {
			case p.Form == model.ByFlat:
				if _, plain := p.Target.(*model.UnknownRef); !plain {
					return nil
				}
				q = new(big.Rat)
			case p.Form == model.ByKernel:
				if q = detPower(p.Kernel, s.Unknown); q == nil {
					return nil
				}
				q = new(big.Rat).Neg(q)
			default:
				return nil
			}
		default:
			return nil
		}
	}
	if q == nil {
		return nil
	}
	for _, v := range g.vars {
		if v.Unknown != s.Unknown && !flat[v.Unknown] {
			return nil
		}
	}
	// Rank of the readings about their mean.
	var first []*big.Rat
	e := newEchelon(d)
	n := int64(0)
	for k, f := range g.rows {
		if k%256 == 0 && ctx.Err() != nil {
			return g.undecided("interrupted")
		}
		if f.obs != o {
			return nil
		}
		row := exactRow{constant: new(big.Rat), coef: map[int]*big.Rat{}}
		values := make([]*big.Rat, d)
		for j, x := range o.What {
			y := kernel.Constant(x, f.row)
			if y == nil {
				return nil
			}
			values[j] = y
			if free == 0 {
				m := kernel.Constant(means[j], f.row)
				if m == nil {
					return nil
				}
				values[j] = new(big.Rat).Sub(y, m)
			}
		}
		n++
		if free > 0 && first == nil {
			first = values
			continue
		}
		for j, y := range values {
			if free > 0 {
				y = new(big.Rat).Sub(y, first[j])
			}
			if y.Sign() != 0 {
				row.coef[j] = y
			}
		}
		e.add(gaussTerm{exactRow: row, times: 1})
	}
	m := n
	if free > 0 {
		m--
	}
	var j judge
	j.need(fmt.Sprintf("rank of the readings − %d > 0", d-1), whole64(int64(e.rank())), whole64(int64(1-d)))
	j.need("degrees − d + 1 > 0, with degrees = m + 2q − d − 1", whole64(m), new(big.Rat).Mul(whole64(2), q), whole64(int64(-d-1)), whole64(int64(1-d)))
	r := j.verdict(g, ScaleReadings, "inverse-Wishart kernel", "derivation")
	r.Observation = o
	if r.Status == DoesNotExist {
		r.Escape = []Escape{{Unknown: s.Unknown, Toward: "0"}}
		if j.fails[0] == 1 {
			r.Escape[0].Toward = "inf"
		}
		r.Repairs = []string{"more readings", "a proper prior on " + s.Unknown.Name}
	}
	return r
}

func meanItems(x model.Expr, d int) []model.Expr {
	if x == nil {
		return nil
	}
	if v, ok := unlet(x).(*model.Vector); ok {
		if len(v.Items) != d {
			return nil
		}
		return v.Items
	}
	if mentions(x) {
		return nil
	}
	out := make([]model.Expr, d)
	for i := range out {
		out[i] = x
	}
	return out
}

// detPower reads det(S)^q, 1/det(S)^q.
func detPower(x model.Expr, u *model.Unknown) *big.Rat {
	x = unlet(x)
	if a, ok := call(x, "det"); ok {
		if r, ok := unlet(a).(*model.UnknownRef); ok && r.Unknown == u {
			return big.NewRat(1, 1)
		}
		return nil
	}
	o, ok := x.(*model.Op)
	if !ok || len(o.Args) != 2 {
		return nil
	}
	switch {
	case o.Op == "^" && !mentions(o.Args[1]):
		q, e := detPower(o.Args[0], u), kernel.Constant(o.Args[1], 0)
		if q == nil || e == nil {
			return nil
		}
		return new(big.Rat).Mul(q, e)
	case o.Op == "/" && isOne(o.Args[0]):
		if q := detPower(o.Args[1], u); q != nil {
			return new(big.Rat).Neg(q)
		}
	}
	return nil
}
