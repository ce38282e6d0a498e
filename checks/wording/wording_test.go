package wording

import (
	"math/big"
	"testing"

	"wellposed/checks/existence"
	"wellposed/grammar"
	"wellposed/parser/model"
)

func whole(n int64) model.Expr { return &model.Number{Value: big.NewRat(n, 1)} }

func law(name string, args map[string]model.Expr) *model.Dist {
	return &model.Dist{Spec: grammar.FindDistribution(name), Args: args}
}

func scalarUnknown(name, kind string) *model.Unknown {
	return &model.Unknown{Name: name, Kind: grammar.FindKind(kind), Levels: []string{""}}
}

func TestData(t *testing.T) {
	p, rate := scalarUnknown("p", "probability"), scalarUnknown("lambda", "rate")
	table := &model.Table{Name: "trials", Rows: 3}
	y := &model.Column{Name: "y", Table: table, Texts: []string{"0", "1", "2"}}
	n := &model.Column{Name: "n", Table: table, Texts: []string{"5", "5", "2.5"}}
	table.Columns = []*model.Column{y, n}
	ref := func(c *model.Column) model.Expr { return &model.ColumnRef{Column: c} }
	pref, rref := &model.UnknownRef{Unknown: p}, &model.UnknownRef{Unknown: rate}
	rows := []int{0, 1, 2}
	for _, c := range []struct {
		o    *model.Observation
		want string
	}{
		{nil, "these data"},
		{&model.Observation{Awaited: true}, "data that are not there yet"},
		{&model.Observation{What: []model.Expr{whole(0)}, Rows: []int{0}, Dist: law("Binomial", map[string]model.Expr{"trials": whole(40), "probability": pref})}, "0 of 40"},
		{&model.Observation{What: []model.Expr{ref(y)}, Rows: rows, Table: table, Dist: law("Binomial", map[string]model.Expr{"trials": ref(n), "probability": pref})}, "3 of 12.5"},
		{&model.Observation{What: []model.Expr{ref(y)}, Rows: rows, Table: table, Dist: law("Binomial", map[string]model.Expr{"trials": ref(n), "probability": &model.Op{Op: "*", Args: []model.Expr{pref, ref(y)}}})}, "the 3 rows of trials"},
		{&model.Observation{What: []model.Expr{whole(10)}, Rows: []int{0}, Dist: law("Poisson", map[string]model.Expr{"mean": &model.Op{Op: "*", Args: []model.Expr{rref, whole(6)}}})}, "10 in 6"},
		{&model.Observation{What: []model.Expr{whole(10)}, Rows: []int{0}, Dist: law("Poisson", map[string]model.Expr{"mean": rref})}, "a count of 10"},
		{&model.Observation{Reading: model.Summary, N: whole(15), Rows: []int{0}, Dist: law("Normal", nil)}, "15 readings"},
		{&model.Observation{What: []model.Expr{ref(y)}, Rows: rows, Dist: law("Normal", nil)}, "3 readings"},
		{&model.Observation{What: []model.Expr{ref(y)}, Rows: []int{0}, Table: table, Dist: law("Normal", nil)}, "one row of trials"},
	} {
		if got := Data(c.o); got != c.want {
			t.Errorf("got %q, want %q", got, c.want)
		}
	}
}

func TestEscapes(t *testing.T) {
	p := scalarUnknown("p", "probability")
	gamma := &model.Unknown{Name: "gamma", Per: []*model.Column{{Name: "site"}}, Levels: []string{"north", "south"}}
	for _, c := range []struct {
		list []existence.Escape
		want string
	}{
		{nil, ""},
		{[]existence.Escape{{Unknown: p, Toward: "0"}}, "p = 0"},
		{[]existence.Escape{{Unknown: p, Toward: "0"}, {Unknown: p, Toward: "1"}}, "p = 0 and p = 1"},
		{[]existence.Escape{{Unknown: gamma, Component: 1, Toward: "-inf"}}, "gamma[south] → −∞"},
		{[]existence.Escape{{Unknown: gamma, Component: 0, Step: "0"}, {Unknown: gamma, Component: 1, Step: "-1/2"}}, "gamma[south] → −∞"},
		{[]existence.Escape{{Unknown: p, Step: "3"}, {Unknown: gamma, Component: 1, Step: "-20"}}, "(p, gamma[south]) along (3, −20)"},
	} {
		if got := Escapes(&existence.Verdict{Escape: c.list}); got != c.want {
			t.Errorf("got %q, want %q", got, c.want)
		}
	}
}

func TestSentence(t *testing.T) {
	for in, want := range map[string]string{
		"": "", "a + y = 0": "a + y = 0.", "the rank is 1": "The rank is 1.", "needed: a > 0": "Needed: a > 0.", "sigma runs off.": "sigma runs off.",
	} {
		if got := Sentence(in); got != want {
			t.Errorf("Sentence(%q) = %q, want %q", in, got, want)
		}
	}
}

func TestFlat(t *testing.T) {
	half := &model.Number{Value: big.NewRat(1, 2)}
	for _, c := range []struct {
		p    *model.Prior
		want bool
	}{
		{&model.Prior{Form: model.ByFlat}, true},
		{&model.Prior{Form: model.ByKernel, Kernel: whole(1)}, true},
		{&model.Prior{Form: model.ByKernel, Kernel: &model.Op{Op: "/"}}, false},
		{&model.Prior{Form: model.ByDist, Dist: law("Beta", map[string]model.Expr{"a": whole(1), "b": whole(1)})}, true},
		{&model.Prior{Form: model.ByDist, Dist: law("Beta", map[string]model.Expr{"a": whole(1), "b": half})}, false},
		{&model.Prior{Form: model.ByDist, Dist: law("Uniform", nil)}, true},
		{&model.Prior{Form: model.ByRule}, false},
	} {
		if got := Flat(c.p); got != c.want {
			t.Errorf("%+v: %v", c.p, got)
		}
	}
}
