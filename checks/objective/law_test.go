package objective

import (
	"encoding/json"
	"math"
	"os"
	"testing"

	sy "wellposed/checks/objective/symbolic"
	"wellposed/grammar"
	"wellposed/parser/model"
)

func unknownOf(name, kind string) *model.Unknown {
	k := grammar.FindKind(kind)
	u := &model.Unknown{Name: name, Kind: k, Levels: []string{""}, Relative: -1}
	u.Support = model.Bounds{Low: model.ParseDecimal(k.Low), High: model.ParseDecimal(k.High)}
	return u
}

// lawAt builds a law whose arguments are unknowns named after their labels.
func lawAt(t *testing.T, dist string, form int, fixed map[string]int64, size int) (*law, []*sy.Symbol) {
	t.Helper()
	spec := grammar.FindDistribution(dist)
	d := &model.Dist{Spec: spec, Form: form, Args: map[string]model.Expr{}}
	m := &model.Model{}
	for _, p := range spec.Forms[form] {
		if p.Optional {
			continue
		}
		if v, ok := fixed[p.Label]; ok {
			d.Args[p.Label] = number(rat(v, 1))
			continue
		}
		kind := "positive"
		switch p.Label {
		case "location", "mean":
			kind = "real"
		case "coefficient":
			kind = "correlation"
		case "shape":
			if dist == "skew-Normal" || dist == "generalized-extreme-value" {
				kind = "real"
			}
		}
		u := unknownOf(p.Label, kind)
		m.Unknowns = append(m.Unknowns, u)
		d.Args[p.Label] = &model.UnknownRef{Unknown: u}
	}
	s := newSpace(m.Declared())
	l, err := s.law(d, 0, size)
	if err != nil {
		t.Fatal(err)
	}
	var symbols []*sy.Symbol
	for _, u := range m.Unknowns {
		symbols = append(symbols, s.parameters[u][0].Symbol)
	}
	return l, symbols
}

func TestLawsAgainstExpectations(t *testing.T) {
	data, err := os.ReadFile("testdata/laws.json")
	if err != nil {
		t.Fatal(err)
	}
	var list []struct {
		Law  string
		Args []string
		Info [][]string
	}
	if err := json.Unmarshal(data, &list); err != nil {
		t.Fatal(err)
	}
	if len(list) < 10 {
		t.Fatalf("%d laws, want at least 10", len(list))
	}
	for _, c := range list {
		var l *law
		var symbols []*sy.Symbol
		at := make([]float64, 0, len(c.Args))
		for _, a := range c.Args {
			at = append(at, float(t, a))
		}
		switch c.Law {
		case "beta-Binomial":
			l, symbols = lawAt(t, c.Law, 0, map[string]int64{"trials": int64(at[2])}, 1)
			at = at[:2]
		case "AR1":
			l, symbols = lawAt(t, c.Law, 0, nil, int(at[3]))
			at = at[:3]
		case "Weibull, censored":
			spec := grammar.FindDistribution("Weibull")
			k, s := unknownOf("k", "shape"), unknownOf("s", "scale")
			m := &model.Model{Unknowns: []*model.Unknown{k, s}}
			space := newSpace(m.Declared())
			d := &model.Dist{Spec: spec, Args: map[string]model.Expr{"shape": &model.UnknownRef{Unknown: k}, "scale": &model.UnknownRef{Unknown: s}}}
			l = space.censoredLaw(d, 0, sy.Rat(model.ParseDecimal(c.Args[2])))
			symbols = []*sy.Symbol{space.parameters[k][0].Symbol, space.parameters[s][0].Symbol}
			at = at[:2]
		default:
			l, symbols = lawAt(t, c.Law, 0, nil, 1)
		}
		for i := range c.Info {
			for j := range c.Info {
				e := entry(l.info, i, j)
				f, err := sy.Compile(e, symbols)
				if err != nil {
					t.Fatal(err)
				}
				got, want := f.Value(at), float(t, c.Info[i][j])
				scale := math.Sqrt(float(t, c.Info[i][i]) * float(t, c.Info[j][j]))
				if !(math.Abs(got-want) <= 1e-8*scale) {
					t.Errorf("%s at %v: information %d, %d is %v, want %v", c.Law, c.Args, i, j, got, want)
				}
			}
		}
	}
}
