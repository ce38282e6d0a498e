package design

import (
	"context"
	"math"
	"strings"
	"testing"

	"wellposed/parser/diag"
	"wellposed/parser/model"
	"wellposed/parser/source"
)

func build(t *testing.T, text string) *model.Model {
	t.Helper()
	m := model.Build(context.Background(), source.NewFile("m.bayes", text), model.Options{})
	for _, p := range m.Problems {
		if p.Severity == diag.Stop {
			t.Fatalf("%s: %s", p.Rule, p.Headline)
		}
	}
	return m
}

const relay = `given n = 40
await y
unknown p : probability
observe y as Binomial(n, p)
prior p as Beta(0, 0) because "x"
report p, upper 95%
conclude "meets 0.05" when P(p < 0.05) >= 0.95
suppose p in 0.01, 0.02, 0.05
`

const assay = `table assay
| dose  | n | deaths |
| -0.86 | 5 | NA |
| -0.30 | 5 | NA |
| -0.05 | 5 | NA |
| 0.73  | 5 | NA |
await deaths
unknown alpha : effect
unknown slope : effect
let eta = alpha + slope * dose
observe deaths as Binomial(n, expit(eta))
prior alpha flat because "x"
prior slope flat because "x"
report ld50 = -alpha / slope
suppose (alpha, slope) in (0.85, 7.75), (0.85, 4), (0.5, 2), (0.85, 15)
`

func TestBreaking(t *testing.T) {
	for _, c := range []struct {
		name, text, says string
		bad              int
		chances          []float64
		within           float64
	}{
		// 0.98^40 + 0.02^40 and its neighbours, by hand.
		{"none or all of forty", relay, "y = 0 or y = 40", 2, []float64{math.Pow(0.99, 40), math.Pow(0.98, 40), math.Pow(0.95, 40)}, 1e-9},
		// Enumerated independently with a one-column separation test.
		{"four doses of five", assay, "", 0, []float64{0.4038, 0.1144, 0.0169, 0.8843}, 6e-5},
	} {
		t.Run(c.name, func(t *testing.T) {
			b, err := Breaking(context.Background(), build(t, c.text).Declared())
			if err != nil {
				t.Fatal(err)
			}
			if b.Undecided != 0 || b.How != diag.Proved {
				t.Errorf("%d outcomes are not decided", b.Undecided)
			}
			if c.says != "" && (b.Text != c.says || b.Bad != c.bad) {
				t.Errorf("%q, %d", b.Text, b.Bad)
			}
			if len(b.Chances) != len(c.chances) {
				t.Fatalf("%d planning values", len(b.Chances))
			}
			for i, want := range c.chances {
				if got := b.Chances[i]; got.Err != nil || math.Abs(got.Value-want) > c.within {
					t.Errorf("%s: %v (%v), want %v", got.Plan.Text, got.Value, got.Err, want)
				}
			}
		})
	}
}

func TestConjugacy(t *testing.T) {
	for _, c := range []struct {
		prior string
		a, b  float64
		ok    bool
	}{
		{"p as Beta(1/2, 1/2)", 0.5, 0.5, true}, {"p flat", 1, 1, true}, {"logit(p) flat", 0, 0, true}, {"p as Uniform(0, 1)", 1, 1, true},
		{"p as Beta(1, 1), truncated to (0, 1/2)", 0, 0, false}, {"logit(p) as Normal(0, sd = 2)", 0, 0, false},
	} {
		m := build(t, "given n = 40\nawait y\nunknown p : probability\nobserve y as Binomial(n, p)\nprior "+c.prior+"\nreport p\n")
		got := Conjugacy(m.Declared())
		if (got != nil) != c.ok || c.ok && (got.Kernel.A != c.a || got.Kernel.B != c.b || got.Plan.Trials != 40) {
			t.Errorf("%s: %+v", c.prior, got)
		}
	}
	for _, c := range []struct {
		prior string
		a, b  float64
	}{{"r as Gamma(shape = 2, rate = 3)", 2, 3}, {"r flat", 1, 0}, {"log(r) flat", 0, 0}, {"r ∝ 1/sqrt(r)", 0.5, 0}, {"r ∝ r^(-1/3)", 2. / 3, 0}} {
		m := build(t, "await y\nunknown r : rate\nobserve y as Poisson(r * 6)\nprior "+c.prior+"\nreport r\n")
		got := Conjugacy(m.Declared())
		if got == nil || math.Abs(got.Kernel.A-c.a) > 1e-15 || got.Kernel.B != c.b || got.Plan.Exposure != 6 {
			t.Errorf("%s: %+v", c.prior, got)
		}
	}
}

// A file that awaits nothing is examined as if its plan were carried out again.
func TestProspective(t *testing.T) {
	for _, observe := range []string{"observe 3 of 40 with probability p", "observe y as Binomial(40, p)"} {
		m := build(t, "given y = 3\nunknown p : probability\n"+observe+"\nprior p as Beta(0, 0)\nreport p\nsuppose p in 0.02\n")
		m = Prospective(m)
		b, err := Breaking(context.Background(), m.Declared())
		if err != nil {
			t.Fatal(err)
		}
		if b.Bad != 2 || len(b.Chances) != 1 || math.Abs(b.Chances[0].Value-math.Pow(0.98, 40)) > 1e-9 {
			t.Errorf("%s: %+v", observe, b)
		}
	}
}

func subject(t *testing.T, text string) *Subject {
	t.Helper()
	m := build(t, text)
	s := &Subject{Model: m, Declared: m.Declared(), Planned: Prospective(m).Declared()}
	for _, r := range m.Rivals {
		s.Rivals = append(s.Rivals, m.Declared().With(r.Name, r.Priors...))
	}
	s.Breaks, s.BreaksErr = Breaking(context.Background(), s.Planned)
	return s
}

const promising = `given n = 40
await y
unknown p : probability
observe y as Binomial(n, p)
prior p as Beta(1/2, 1/2)
report p, central 95%
conclude "meets 0.05" when P(p < 0.05) >= 0.95
suppose p in 0.01, 0.02, 0.05
`

func TestJudge(t *testing.T) {
	for _, c := range []struct{ name, model, promise, outcome, distance string }{
		{"every outcome, open prior", relay, "a posterior for every outcome", Broken, "y = 0 or y = 40"},
		{"every outcome, proper prior", promising, "a posterior for every outcome", Kept, "every outcome leaves a posterior"},
		// 1 − 0.99^40 = 0.331 is the least over the planning values.
		{"chance of a posterior", relay, "a posterior with probability >= 99.9%", Broken, "0.331 against 0.999"},
		{"chance kept", relay, "a posterior with probability >= 33%", Kept, "0.331"},
		// Lowest 0.886, average 0.952 (SciPy, 20001 points).
		{"coverage kept", promising, "long-run coverage of p: lowest >= 88%, average >= 94%, p from 0.01 to 0.2", Kept, "against 0.88"},
		{"coverage lowest broken", promising, "long-run coverage of p: lowest >= 90%, average >= 94%, p from 0.01 to 0.2", Broken, "against 0.9"},
		{"coverage average broken", promising, "long-run coverage of p: average >= 96%, p from 0.01 to 0.2", Broken, "against 0.96"},
		// 0.95^40 = 0.1285: with 0 of 40 the Jeffreys upper bound is 0.0466.
		{"false claim", promising, `chance of "meets 0.05" <= 5% when p = 0.05`, Broken, "0.129 against 0.05"},
		{"false claim allowed", promising, `chance of "meets 0.05" <= 13% when p = 0.05`, Kept, "against 0.13"},
		{"success", promising, `chance of "meets 0.05" >= 60% when p = 0.01`, Kept, "0.669 against 0.6"},
	} {
		t.Run(c.name, func(t *testing.T) {
			r := Judge(context.Background(), subject(t, c.model+"require "+c.promise+"\n"))
			if len(r) != 1 || r[0].Outcome != c.outcome || !strings.Contains(r[0].Distance, c.distance) {
				t.Errorf("%+v", r)
			}
			if len(r) == 1 && r[0].Text != c.promise {
				t.Errorf("text %q", r[0].Text)
			}
		})
	}
}

// Two arms of twenty, all 441 outcomes: the chance of a wrong claim at the null,
// 0.025 (uniform) and 0.027 (Jeffreys) at the worst of five values, by exact
// enumeration with SciPy.
func TestTwoArms(t *testing.T) {
	for _, c := range []struct {
		prior string
		worst float64
	}{{"Beta(1, 1)", 0.025}, {"Beta(1/2, 1/2)", 0.027}} {
		text := `given n = 20
await control, treated
unknown pc : probability
unknown pt : probability
observe control as Binomial(n, pc)
observe treated as Binomial(n, pt)
prior pc as ` + c.prior + `
prior pt as ` + c.prior + `
report pt - pc, central 95%
conclude "worse" when P(pt > pc) >= 0.975
suppose (pc, pt) in (0.05, 0.05), (0.1, 0.1), (0.2, 0.2), (0.3, 0.3), (0.5, 0.5)
`
		s := subject(t, text)
		if s.BreaksErr != nil {
			t.Fatal(s.BreaksErr)
		}
		claims, err := Deciding(context.Background(), s.Planned, s.Breaks, s.Model.Conclusions[0])
		if err != nil {
			t.Fatal(err)
		}
		worst := 0.0
		for _, p := range Plans(s.Model) {
			ch := claims.Under(p)
			if ch.Err != nil || ch.Undecided > 1e-9 {
				t.Fatalf("%+v", ch)
			}
			worst = math.Max(worst, ch.Value)
		}
		if math.Abs(worst-c.worst) > 6e-4 {
			t.Errorf("%s: %v, want %v", c.prior, worst, c.worst)
		}
	}
}
