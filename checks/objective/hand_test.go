package objective

import (
	"context"
	"fmt"
	"testing"

	"wellposed/grammar"
	"wellposed/parser/model"
)

func unk(name, kind string) *model.Unknown {
	k := grammar.FindKind(kind)
	u := &model.Unknown{Name: name, Kind: k, Levels: []string{""}, Relative: -1}
	u.Support = model.Bounds{Low: model.ParseDecimal(k.Low), High: model.ParseDecimal(k.High)}
	return u
}
func ref(u *model.Unknown) model.Expr { return &model.UnknownRef{Unknown: u} }

func TestHand(t *testing.T) {
	p, mu, sigma, k, s, x := unk("p", "probability"), unk("mu", "location"), unk("sigma", "scale"), unk("k", "shape"), unk("s", "scale"), unk("xi", "real")
	show := func(us []*model.Unknown, rule model.RuleName, dist string, form int, args ...model.Expr) {
		spec := grammar.FindDistribution(dist)
		d := &model.Dist{Spec: spec, Form: form, Args: map[string]model.Expr{}}
		for i, a := range args {
			d.Args[spec.Forms[form][i].Label] = a
		}
		m := &model.Model{Unknowns: us, Observations: []*model.Observation{{Dist: d, What: []model.Expr{number(rat(1, 1))}, Rows: []int{0, 1, 2}}}}
		r := &model.RulePrior{Name: rule}
		if rule == model.ReferencePrior {
			for _, u := range us {
				r.Order = append(r.Order, []*model.Unknown{u})
			}
		}
		got, err := Derive(context.Background(), m.Declared(), r, us)
		if err != nil {
			fmt.Println(dist, rule, "ERR", err)
			return
		}
		fmt.Println(dist, rule, "|", got.Name, "|", got.Prior.Text)
	}
	show([]*model.Unknown{p}, model.Jeffreys, "Binomial", 0, number(rat(40, 1)), ref(p))
	show([]*model.Unknown{p}, model.Jeffreys, "geometric", 0, ref(p))
	show([]*model.Unknown{s}, model.Jeffreys, "Poisson", 0, ref(s))
	show([]*model.Unknown{mu, sigma}, model.JeffreysJointly, "Normal", 0, ref(mu), ref(sigma))
	show([]*model.Unknown{mu, sigma}, model.JeffreysSeparately, "Normal", 0, ref(mu), ref(sigma))
	show([]*model.Unknown{mu, sigma}, model.ReferencePrior, "Normal", 0, ref(mu), ref(sigma))
	show([]*model.Unknown{mu, sigma}, model.JeffreysJointly, "Normal", 2, ref(mu), ref(sigma))
	for _, r := range []model.RuleName{model.JeffreysJointly, model.JeffreysSeparately, model.ReferencePrior, model.MaximalData} {
		show([]*model.Unknown{k, s}, r, "Weibull", 0, ref(k), ref(s))
		show([]*model.Unknown{k, s}, r, "Gamma", 0, ref(k), ref(s))
		show([]*model.Unknown{s, x}, r, "generalized-Pareto", 0, ref(s), ref(x))
		show([]*model.Unknown{mu, sigma}, r, "Uniform", 0, ref(mu), ref(sigma))
		show([]*model.Unknown{mu, sigma, x}, r, "skew-Normal", 0, ref(mu), ref(sigma), ref(x))
		show([]*model.Unknown{mu, sigma, x}, r, "generalized-extreme-value", 0, ref(mu), ref(sigma), ref(x))
		show([]*model.Unknown{k, s}, r, "negative-Binomial", 0, ref(k), ref(s))
		show([]*model.Unknown{k, s}, r, "inverse-Gaussian", 0, ref(k), ref(s))
		show([]*model.Unknown{k, s}, r, "Beta", 0, ref(k), ref(s))
	}
}
