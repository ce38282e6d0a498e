package model

import (
	"context"
	"fmt"
	"math/big"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"wellposed/parser/source"
)

// tour uses every statement of the language.
const tour = `title "Tour"
note "first"
note "second"
matters 5%
given n = 40, y = 3, v = [1, 2.5, 1/3], lo = 1
table t
| site  | year | x    | k | m |
| north | 1    | -0.5 | 1 | 4 |
| south | 1    | 0.25 | 2 | 5 |
| north | 2    | 1e-1 | 0 | 6 |
unknown p : probability "chance" because "asked" from "plan 1"
unknown mu, nu : location
unknown sigma : scale
unknown z : real limited to 0 <= z <= 10 by nature
unknown phi : real in [-1, 1)
unknown gamma per site relative to "north" : effect
unknown delta per site by year : effect
unknown beta for (x, k) : effect
unknown w : proportions(3)
unknown c : cutpoints(2)
unknown N : count
vary theta across site as Normal(mu, sd = sigma), truncated to (-5, inf)
let eta = mu + gamma[site] + delta[site, year] + linear(beta)
observe y as Binomial(n, p)
observe 0 of 40 with probability p
observe 10 in 6 at rate sigma
observe k as Poisson(exp(eta)), only where k > 0, weighted by m
observe x as Normal(theta[site], sd = sigma), right-censored where k == 0
observe between(lo, 3) as Normal(mu, sd = 1)
observe summary(n = 15, mean = 12.1, sd = 3.2) as Normal(mu, sd = sigma)
observe (1, 2, 3) as Multinomial(6, w)
observe v as Mixture(p: Normal(mu, sd = 1), 1 - p: Cauchy(nu, 2))
observe x as Normal(phi * previous(x), sd = sigma)
prior p as Beta(1/2, 1/2) because "usual" from "plan 2"
prior logit(phi / 2 + 1/2) flat
prior sigma ∝ 1 / sigma
prior (mu, nu) jeffreys separately
prior z as Normal(0, sd = 3), truncated to (0, 10)
prior gamma as Normal(0, sd = 2)
prior delta flat
prior beta flat
prior w as Dirichlet(1/2, 1/2, 1/2)
prior c flat
prior N ∝ 1 / N
rival "uniform" p as Beta(1, 1)
rival "two": p as Beta(2, 20); sigma as half-Cauchy(1)
rivals for p: standard
report p, upper 95%, lower 90%
report odds = p / (1 - p)
report gamma["south"], shortest 50% 95%, mean
conclude "small" when P(p < 0.05) >= 0.95 and P(mu > 0) > 1/2
suppose p in 0.01, 0.02
suppose sigma from 1 to 2
suppose mu as Normal(0, sd = 1)
require a posterior for every outcome
require a posterior with probability >= 99.9%
require long-run coverage of p: lowest >= 88%, average >= 94%, p from 0.01 to 0.2
require chance of "small" <= 5% when p = 0.05
require rivals agree on odds within 10%
accept flat-on-unbounded for mu because "location" by "someone" until 2027-06-30
override posterior-does-not-exist for p because "shown"
`

func TestTour(t *testing.T) {
	m := build(t, tour, nil)
	for _, f := range m.Problems {
		t.Errorf("%s [%s] %s", f.Rule, m.File.Slice(f.Span), f.Headline)
	}
	unknown := func(name string) *Unknown {
		for _, u := range m.Unknowns {
			if u.Name == name {
				return u
			}
		}
		t.Fatal(name)
		return nil
	}
	if m.Title != "Tour" || !slices.Equal(m.Notes, []string{"first", "second"}) || m.Matters.Cmp(big.NewRat(1, 20)) != 0 {
		t.Error(m.Title, m.Notes, m.Matters)
	}
	if p := unknown("p"); p.Label != "chance" || p.Reason.Because != "asked" || p.Reason.From != "plan 1" || !p.Scalar() {
		t.Errorf("%+v", p)
	}
	if z := unknown("z").Support; z.Low.Sign() != 0 || z.LowOpen || z.High.Cmp(big.NewRat(10, 1)) != 0 || !unknown("z").Limit.Nature {
		t.Errorf("%+v", z)
	}
	if s := unknown("phi").Support; s.Low.Cmp(big.NewRat(-1, 1)) != 0 || s.LowOpen || !s.HighOpen {
		t.Errorf("%+v", s)
	}
	for name, want := range map[string][]string{
		"gamma": {"north", "south"}, "delta": {"north / 1", "south / 1", "north / 2"}, "beta": {"x", "k"}, "w": {"1", "2", "3"}, "c": {"1", "2"}, "theta": {"north", "south"}, "p": {""},
	} {
		if got := unknown(name).Levels; !slices.Equal(got, want) {
			t.Errorf("%s: %q", name, got)
		}
	}
	if unknown("gamma").Relative != 0 || unknown("delta").Relative != -1 || unknown("theta").Population == nil {
		t.Error("relative or population")
	}
	var got []string
	for _, o := range m.Observations {
		got = append(got, fmt.Sprintf("%s %v", DistText(o.Dist), o.Rows))
	}
	want := []string{
		"Binomial(n, p) [0]", "Binomial(40, p) [0]", "Poisson(sigma * 6) [0]", "Poisson(exp(eta)) [0 1]", "Normal(theta[site], sd = sigma) [0 1 2]",
		"Normal(mu, sd = 1) [0]", "Normal(mu, sd = sigma) [0]", "Multinomial(6, w) [0]", "Mixture(p: Normal(mu, sd = 1), 1 - p: Cauchy(nu, 2)) [0 1 2]",
		"Normal(phi * previous(x), sd = sigma) [1 2]",
	}
	if !slices.Equal(got, want) {
		t.Errorf("got  %q\nwant %q", got, want)
	}
	got = nil
	for _, p := range m.Priors {
		got = append(got, p.Text)
	}
	want = []string{
		"p as Beta(1/2, 1/2)", "logit(phi / 2 + 1/2) flat", "sigma ∝ 1 / sigma", "(mu, nu) jeffreys separately", "z as Normal(0, sd = 3), truncated to (0, 10)",
		"gamma as Normal(0, sd = 2)", "delta flat", "beta flat", "w as Dirichlet(1/2, 1/2, 1/2)", "c flat", "N ∝ 1 / N",
	}
	if !slices.Equal(got, want) {
		t.Errorf("got  %q\nwant %q", got, want)
	}
	if len(m.Rivals) != 2 || len(m.Rivals[1].Priors) != 2 || len(m.Standard) != 1 || len(m.Reports) != 3 || len(m.Supposed) != 3 || len(m.Promises) != 5 || len(m.Acceptances) != 2 {
		t.Error(len(m.Rivals), len(m.Standard), len(m.Reports), len(m.Supposed), len(m.Promises), len(m.Acceptances))
	}
	if r := m.Reports[1]; r.Name != "odds" || len(r.Intervals) != 1 || !r.Intervals[0].Default || r.Intervals[0].Kind != Central {
		t.Errorf("%+v", r)
	}
	if r := m.Reports[2]; r.Name != `gamma["south"]` || len(r.Intervals) != 2 || !slices.Equal(r.Points, []string{"mean"}) {
		t.Errorf("%+v", r)
	}
	if c := m.Conclusions[0]; c.Op != ">=" || len(c.More) != 1 || Text(c.Event) != "p < 0.05" || c.More[0].Threshold.Cmp(big.NewRat(1, 2)) != 0 {
		t.Errorf("%+v", c)
	}
	if a := m.Acceptances[0]; a.Rule != "flat-on-unbounded" || a.Until != "2027-06-30" || a.By != "someone" || a.For != "mu" {
		t.Errorf("%+v", a)
	}
}

// TestUses: each use lies on the name that it stands for, none twice, in order,
// and every symbol of the file has its definition.
func TestUses(t *testing.T) {
	m := build(t, tour, nil)
	seen := map[source.Span]bool{}
	defined := map[any]bool{}
	last := -1
	for _, u := range m.Uses {
		if seen[u.Span] || u.Span.Start < last {
			t.Errorf("%q stands twice or out of order", m.File.Slice(u.Span))
		}
		seen[u.Span], last = true, u.Span.Start
		name := ""
		switch s := u.Symbol.(type) {
		case *Unknown:
			name = s.Name
		case *Given:
			name = s.Name
		case *Column:
			name = s.Name
		case *Table:
			name = s.Name
		case *Let:
			name = s.Name
		case *Report:
			name = s.Name
		case *Conclusion:
			name = `"` + s.Name + `"`
		}
		if got := m.File.Slice(u.Span); got != name {
			t.Errorf("%q is said to be %s", got, name)
		}
		if u.Definition {
			defined[u.Symbol] = true
		}
	}
	for _, u := range m.Uses {
		if r, ok := u.Symbol.(*Report); ok && r.Name == "p" {
			continue // a report without a name of its own
		}
		if !defined[u.Symbol] {
			t.Errorf("%q has no definition", m.File.Slice(u.Span))
		}
	}
	// Every place where z stands: its declaration, twice in its limit (one chain), its prior.
	n := 0
	for _, u := range m.Uses {
		if x, ok := u.Symbol.(*Unknown); ok && x.Name == "z" {
			n++
		}
	}
	if n != 3 {
		t.Errorf("z stands in %d places", n)
	}
}

// TestOrderDoesNotMatter: the model of the statements in reverse has the same
// priors, laws and supports, and reading finds nothing either.
func TestOrderDoesNotMatter(t *testing.T) {
	var blocks []string
	for _, line := range strings.SplitAfter(tour, "\n") {
		if strings.HasPrefix(line, "|") {
			blocks[len(blocks)-1] += line
		} else if line != "" {
			blocks = append(blocks, line)
		}
	}
	slices.Reverse(blocks)
	a, b := build(t, tour, nil), build(t, strings.Join(blocks, ""), nil)
	if len(b.Problems) > 0 {
		t.Errorf("%q", told(b))
	}
	texts := func(m *Model) []string {
		var list []string
		for _, p := range m.Priors {
			list = append(list, p.Text)
		}
		for _, o := range m.Observations {
			list = append(list, fmt.Sprint(DistText(o.Dist), o.Rows, o.Reading, o.Awaited))
		}
		for _, u := range m.Unknowns {
			list = append(list, fmt.Sprint(u.Name, u.Levels, u.Relative, u.Kind.Name, u.Support.Low, u.Support.High))
		}
		slices.Sort(list)
		return list
	}
	if x, y := texts(a), texts(b); !slices.Equal(x, y) {
		t.Errorf("%q\n%q", x, y)
	}
}

// TestPriorTextRoundTrip: the canonical text of a prior is read back as the same.
func TestPriorTextRoundTrip(t *testing.T) {
	m := build(t, tour, nil)
	priors := slices.Clone(m.Priors)
	for _, r := range m.Rivals {
		priors = append(priors, r.Priors...)
	}
	for _, p := range priors {
		again, err := PriorFromText(m, p.Text)
		if err != nil || again.Text != p.Text || again.Form != p.Form || !slices.Equal(again.About, p.About) || again.Span != (source.Span{}) {
			t.Errorf("%s: %v", p.Text, err)
		}
	}
	for _, text := range []string{"", "q flat", "p as Norml(1)", "p flat\nprior sigma flat", "p as Normal(0, 1)", "y flat", "gamma[\"south\"] flat"} {
		if p, err := PriorFromText(m, text); err == nil {
			t.Errorf("%q is read as %s", text, p.Text)
		}
	}
}

func TestText(t *testing.T) {
	for _, text := range []string{
		"x + y * k", "(x + y) * k", "x - (y - k)", "x - y - k", "-x^2", "(-x)^2", "x^(-2)", "2^3^2", "(2^3)^2", "x / (y / k)", "x / y / k", "-(x + y)",
		"not (x == 1 and y == 2)", "x == 1 or y == 2 and k == 3", "(x == 1 or y == 2) and k == 3", `g == "a"`, "exp(-x / 2)", "max(x, y, 1)", "1/3 * x",
	} {
		if got := Text(let(t, text)); got != text {
			t.Errorf("%s is written %s", text, got)
		}
	}
	// A column whose bare name could mean something else keeps its table.
	m := build(t, "table a\n| x |\n| 1 |\ntable b\n| x |\n| 2 |\nunknown m : location\nobserve a.x as Normal(m + sum(b.x), sd = 1)\nprior m flat\n", nil)
	if len(m.Problems) > 0 || Text(m.Observations[0].What[0]) != "a.x" || Text(m.Observations[0].Dist.Arg("mean")) != "m + sum(b.x)" {
		t.Errorf("%q %s", told(m), DistText(m.Observations[0].Dist))
	}
}

func TestWithOutcome(t *testing.T) {
	m := build(t, "given n = [5, 6]\nunknown p : probability\nawait y, s\nlet twice = 2 * s\nobserve y as Binomial(n, p)\nobserve s of 9 with probability p\nobserve twice as Poisson(3)\nprior p flat\n", nil)
	if len(m.Problems) > 0 || len(m.Awaited) != 2 || !m.Observations[0].Awaited || !m.Observations[1].Awaited || !m.Observations[2].Awaited {
		t.Fatalf("%q %+v", told(m), m.Awaited)
	}
	if rows := m.Observations[0].Rows; !slices.Equal(rows, []int{0, 1}) {
		t.Error(rows)
	}
	some := m.WithOutcome(map[string][]*big.Rat{"y": {big.NewRat(3, 1), big.NewRat(4, 1)}})
	if some.Observations[0].Awaited || !some.Observations[1].Awaited || !m.Observations[0].Awaited {
		t.Error("awaited")
	}
	for row, want := range []int64{3, 4} {
		if x, err := EvalExact(some.Observations[0].What[0], row); err != nil || x.Cmp(big.NewRat(want, 1)) != 0 {
			t.Error(x, err)
		}
	}
	all := some.WithOutcome(map[string][]*big.Rat{"s": {big.NewRat(7, 1)}})
	if all.Observations[1].Awaited || all.Observations[0].Awaited || all.Observations[2].Awaited {
		t.Error("awaited")
	}
	if x, err := EvalExact(all.Observations[2].What[0], 0); err != nil || x.Cmp(big.NewRat(14, 1)) != 0 {
		t.Error(x, err)
	}
	// A column of a table that is filled in later.
	m = build(t, "table t\n| n | y |\n| 5 | NA |\n| 6 | NA |\nunknown p : probability\nawait t.y\nobserve t.y as Binomial(t.n, p)\nprior p flat\n", nil)
	if len(m.Problems) > 0 || !m.Observations[0].Awaited || len(m.Observations[0].Rows) != 2 {
		t.Fatalf("%q", told(m))
	}
	done := m.WithOutcome(map[string][]*big.Rat{"t.y": {big.NewRat(1, 1), big.NewRat(2, 1)}})
	if x, err := EvalExact(done.Observations[0].What[0], 1); err != nil || x.Cmp(big.NewRat(2, 1)) != 0 || done.Observations[0].Awaited {
		t.Error(x, err)
	}
}

// TestTableCache: a table that is kept gives the same model, and marks of one
// model do not leak into another.
func TestTableCache(t *testing.T) {
	cache := &TableCache{}
	files := Memory{"t.csv": "x,g\n1,a\n2,b\n"}
	read := func(text string) *Model {
		return Build(context.Background(), source.NewFile("m.bayes", text), Options{Loader: files, Tables: cache})
	}
	first := read("table t from \"t.csv\"\nawait t.x\nunknown m per g : location\nprior m flat\nobserve x as Normal(m[g], sd = 1)\n")
	second := read("table q from \"t.csv\"\nunknown m : location\nprior m flat\nobserve x as Normal(m, sd = 1)\n")
	if !first.Observations[0].Awaited || second.Observations[0].Awaited {
		t.Error("a mark leaked")
	}
	a, b := first.Tables[0], second.Tables[0]
	if a.Name != "t" || b.Name != "q" || a.Hash != b.Hash || &a.Columns[0].Texts[0] != &b.Columns[0].Texts[0] || b.Columns[0].Table != b || b.Columns[1].Codes != nil {
		t.Error("the cells are not shared, or more than the cells")
	}
	files["t.csv"] = "x,g\n7,a\n"
	if third := read("table t from \"t.csv\"\n"); third.Tables[0].Rows != 1 {
		t.Error("a changed file was not read again")
	}
}

// FuzzBuild: reading never panics, ends, and places every finding and use inside
// the file.
func FuzzBuild(f *testing.F) {
	f.Add(tour)
	for _, pattern := range []string{"../../testdata/existence/*.bayes", "../../testdata/language/*.bayes", "../../testdata/demo/*.bayes"} {
		paths, err := filepath.Glob(pattern)
		if err != nil {
			f.Fatal(err)
		}
		for _, path := range paths {
			text, err := os.ReadFile(path)
			if err != nil {
				f.Fatal(err)
			}
			f.Add(string(text))
		}
	}
	f.Fuzz(func(t *testing.T, text string) {
		if len(text) > 20_000 {
			return
		}
		m := build(t, text, data)
		inside := func(s source.Span) bool { return s.Start >= 0 && s.Start <= s.End && s.End <= len(text) }
		for _, p := range m.Problems {
			if !inside(p.Span) || p.Rule == "" || p.Headline == "" {
				t.Fatalf("%+v", p)
			}
			for _, fix := range p.Fixes {
				for _, e := range fix.Edits {
					if !inside(e.Span) {
						t.Fatalf("%+v", fix)
					}
				}
			}
		}
		for _, u := range m.Uses {
			if !inside(u.Span) || u.Symbol == nil {
				t.Fatalf("%+v", u)
			}
		}
		for _, u := range m.Unknowns {
			if len(u.Levels) == 0 || u.Kind == nil || u.Relative >= len(u.Levels) {
				t.Fatalf("%+v", u)
			}
		}
		for _, o := range m.Observations {
			for _, e := range append(o.expressions(), o.Dist.expressions()...) {
				Text(e)
				UnknownsIn(e)
				for _, row := range o.Rows[:min(3, len(o.Rows))] {
					EvalFloat(e, row)
				}
				m.LinearForm(context.Background(), e, o.Rows[:min(3, len(o.Rows))])
			}
		}
		for _, p := range m.Priors {
			if len(p.About) == 0 || p.Text == "" {
				t.Fatalf("%+v", p)
			}
		}
		m.WithOutcome(map[string][]*big.Rat{"y": {big.NewRat(1, 1)}, "x": {big.NewRat(1, 1), big.NewRat(2, 1)}})
	})
}
