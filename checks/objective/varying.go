package objective

import (
	"context"
	"errors"
	"fmt"

	sy "wellposed/checks/objective/symbolic"
	"wellposed/parser/model"
)

// varying adds the information of an observation of Normal varying effects with
// the effects integrated out; done is false when the observation has none.
//
// A group of n readings of one effect with sd σ around a population Normal(m,
// sd = τ) is, for what it tells about (m, σ, τ), n − 1 degrees of freedom about
// σ² and one mean with variance σ²/n + τ².
func (s *space) varying(ctx context.Context, in *information, o *model.Observation, rows []int) (done bool, err error) {
	var effects []*model.Unknown
	for _, u := range unknownsOf(o.Dist) {
		if u.Population != nil {
			effects = append(effects, u)
		}
	}
	if len(effects) == 0 {
		return false, nil
	}
	watched := false
	for _, p := range in.parameters {
		watched = watched || p.Unknown.Population != nil
	}
	if watched {
		return true, errors.New("a varying effect has its population model instead of a prior by rule")
	}
	refuse := errors.New("the information with varying effects is followed only for Normal readings of one Normal effect each")
	if len(effects) != 1 || o.Dist.Spec.Name != "Normal" || o.Left != nil || o.Right != nil || o.Weight != nil || o.Truncated != nil || o.Reading != model.Values || len(o.What) != 1 {
		return true, refuse
	}
	u := effects[0]
	ref, ok := o.Dist.Args["mean"].(*model.UnknownRef)
	if !ok || ref.Unknown != u || ref.Which != model.ByRow || u.Population.Dist.Spec.Name != "Normal" || u.Population.Truncated != nil {
		return true, refuse
	}
	for _, v := range unknownsOf(u.Population.Dist) {
		if v.Population != nil {
			return true, errors.New("a population model that itself varies is not followed")
		}
	}
	for _, other := range s.a.Observations {
		if other == o {
			continue
		}
		for _, v := range unknownsOf(other.Dist) {
			if v == u {
				return true, errors.New("a varying effect that several observations share is not followed")
			}
		}
	}
	in.say("the varying effects are integrated out: a group mean is Normal(m, sd = sqrt(σ²/n + τ²))")
	for _, group := range s.patterns(o.Dist, rows) {
		r := &reader{s: s, d: o.Dist, row: group[0]}
		sd := r.spread()
		p := &reader{s: s, d: u.Population.Dist, row: group[0]}
		m, tau := p.arg("mean"), p.spread()
		if r.err != nil {
			return true, r.err
		}
		if p.err != nil {
			return true, p.err
		}
		if len(s.dataIn(m)) > 0 || len(s.dataIn(tau)) > 0 {
			return true, errors.New("a population model with covariates is not followed")
		}
		n := len(group)
		if n > 1 && len(s.dataIn(sd)) > 0 {
			return true, fmt.Errorf("%d readings of one effect with sds of their own are not followed", n)
		}
		between := sy.Add(sy.Mul(sy.Square(sd), sy.Frac(1, int64(n))), sy.Square(tau))
		l := &law{args: []sy.Expr{m, between}, info: diagonal(sy.Inv(between), sy.Mul(sy.Half, sy.Inv(sy.Square(between))))}
		if n > 1 {
			within := sy.Square(sd)
			l.args = append(l.args, within)
			l.info = diagonal(l.info[0][0], l.info[1][1], sy.Mul(sy.Frac(int64(n-1), 2), sy.Inv(sy.Square(within))))
		}
		if err := s.addLaw(ctx, in, nil, l, group[:1]); err != nil {
			return true, err
		}
	}
	return true, nil
}
