package objective

import (
	"context"
	"math"
	"strings"
	"testing"

	sy "wellposed/checks/objective/symbolic"
	"wellposed/parser/model"
)

// TestStandardChoices: every choice is a text of the language, there is more than
// one, and the classic ones are there.
func TestStandardChoices(t *testing.T) {
	for _, c := range []struct {
		name, text, unknown string
		want                []string
	}{
		{"binomial", "unknown p : probability\nobserve 0 of 40 with probability p\nprior p as Beta(1, 1)\n", "p",
			[]string{"p as Beta(1, 1)", "p as Beta(1/2, 1/2)", "p as Beta(1/3, 1/3)", "p as Beta(0, 0)"}},
		{"inverse sampling", "unknown p : probability\ngiven y = 19\nobserve y as negative-Binomial(size = 1, probability = p)\nprior p as Beta(1, 1)\n", "p",
			[]string{"p as Beta(1, 1)", "p as Beta(0, 1/2)"}},
		{"rate", "unknown r : rate\nobserve 2 in 6 at rate r\nprior r flat\n", "r", []string{"r flat", "r ∝ 1/sqrt(r)", "r ∝ 1/r"}},
		{"location", "given y = [1, 2, 4]\nunknown m : location\nunknown s : scale\nobserve y as Normal(m, sd = s)\nprior m flat\nprior s ∝ 1/s\n", "m", []string{"m flat"}},
		{"scale", "given y = [1, 2, 4]\nunknown m : location\nunknown s : scale\nobserve y as Normal(m, sd = s)\nprior m flat\nprior s ∝ 1/s\n", "s",
			[]string{"s ∝ 1/s", "s flat", "s as half-Normal(sd = 3)", "s as half-Cauchy(2)"}},
		{"between groups", "table d\n| g | y | se |\n| a | 0.1 | 0.2 |\n| b | 0.4 | 0.2 |\n| c | 0.3 | 0.2 |\nunknown mu : location\nunknown tau : scale\nvary th across g as Normal(mu, sd = tau)\nobserve y as Normal(th[g], sd = se)\nprior mu flat\nprior tau flat\n", "tau",
			[]string{"tau flat", "tau as half-Normal(sd = 1/2)", "tau as half-Normal(sd = 1)", "tau as half-Cauchy(1/2)"}},
		{"Weibull shape", "given y = [1, 2, 4]\nunknown k : shape\nunknown s : scale\nobserve y as Weibull(shape = k, scale = s)\nprior k ∝ 1/k\nprior s ∝ 1/s\n", "k", []string{"k ∝ 1/k", "k flat"}},
		{"coefficient", binaryTable + "unknown a, b : effect\nobserve y as Bernoulli(expit(a + b * x))\nprior a flat\nprior b flat\n", "b", []string{"b flat", "b as Normal(0, sd = 2.5)"}},
		{"coefficients", binaryTable + "unknown b for (x) : effect\nobserve y as Bernoulli(expit(linear(b)))\nprior b flat\n", "b", []string{"b flat", "b jeffreys"}},
		{"proportions", "unknown w : proportions(3)\ngiven a = 1, b = 2, c = 0\nobserve (a, b, c) as Multinomial(3, w)\nprior w as Dirichlet(1)\n", "w", []string{"w as Dirichlet(1)", "w as Dirichlet(1/2)", "w as Dirichlet(1/3)"}},
		{"correlation", "unknown r : correlation\ngiven a = 1, b = 2\nobserve (a, b) as multivariate-Normal(0, sd = 1, correlation = r)\nprior r flat\n", "r", []string{"r as Uniform(-1, 1)", "r ∝ 1/(1 - r^2)"}},
		{"degrees", "unknown v : degrees\ngiven y = 1\nobserve y as Student-t(degrees = v, location = 0, scale = 1)\nprior v as Gamma(shape = 2, rate = 0.1)\n", "v", []string{"v as Gamma(shape = 2, rate = 1/10)"}},
		{"count", "unknown n : count\nunknown p : probability\ngiven y = 3\nobserve y as Binomial(n, p)\nprior n ∝ 1/n\nprior p as Beta(1, 1)\n", "n", []string{"n ∝ 1/n", "n flat"}},
		{"covariance", "unknown S : covariance(2)\ngiven a = 1, b = 2\nobserve (a, b) as multivariate-Normal(0, covariance = S)\nprior S as inverse-Wishart(degrees = 3, scale = 1)\n", "S", []string{"S ∝ det(S)^(-3/2)"}},
	} {
		t.Run(c.name, func(t *testing.T) {
			m := build(t, c.text)
			var u *model.Unknown
			for _, v := range m.Unknowns {
				if v.Name == c.unknown {
					u = v
				}
			}
			choices := Standard(context.Background(), m.Declared(), u)
			all := map[string]bool{}
			for _, choice := range choices {
				if all[choice.Text] {
					t.Errorf("%s stands twice", choice.Text)
				}
				all[choice.Text] = true
				if choice.Label == "" || choice.Source == "" || choice.Note == "" {
					t.Errorf("%+v lacks a label, a source or a note", choice)
				}
				if strings.Contains(choice.Note, "recommend") || strings.Contains(choice.Label, "best") {
					t.Errorf("%+v recommends", choice)
				}
				if _, err := model.PriorFromText(m, choice.Text); err != nil {
					t.Errorf("%q is not read: %v", choice.Text, err)
				}
			}
			for _, want := range c.want {
				if !all[want] {
					t.Errorf("%q is not among %v", want, choices)
				}
			}
		})
	}
}

// TestDerivedTextsAreRead: the text of a derived prior is read back as a prior
// with the same kernel.
func TestDerivedTextsAreRead(t *testing.T) {
	for _, e := range catalogue() {
		for _, in := range e.in {
			m := build(t, in.text)
			var stated *model.Prior
			for _, q := range m.Priors {
				if q.Form == model.ByRule {
					stated = q
				}
			}
			d, err := DerivePrior(context.Background(), m.Declared(), stated)
			if err != nil {
				t.Fatal(err)
			}
			p, err := model.PriorFromText(m, d.Prior.Text)
			if err != nil {
				t.Errorf("%s/%s: %q is not read: %v", e.id, in.name, d.Prior.Text, err)
				continue
			}
			if p.Form != d.Prior.Form && strings.Contains(d.Prior.Text, "∝") {
				t.Errorf("%s/%s: %q is read in another form", e.id, in.name, d.Prior.Text)
			}
			if p.Form != model.ByKernel || len(d.Parameters) != len(d.About) {
				continue
			}
			// The kernel that is read back and the one in the tree agree with the derivation.
			s := newSpace(m.Declared())
			for _, kernel := range []model.Expr{p.Kernel, d.Prior.Kernel} {
				back, err := s.lower(kernel, 0)
				if err != nil {
					t.Errorf("%s/%s: %v", e.id, in.name, err)
					continue
				}
				check(t, e.id+"/"+in.name, d, back)
			}
		}
	}
}

// check compares an expression with the derived kernel at points.
func check(t *testing.T, name string, d *Derived, e sy.Expr) {
	t.Helper()
	var symbols []*sy.Symbol
	for _, p := range d.Parameters {
		symbols = append(symbols, p.Symbol)
	}
	c, err := sy.Compile(e, symbols)
	if err != nil {
		t.Errorf("%s: %v", name, err)
		return
	}
	var first float64
	for i, v := range []float64{0.3, 0.05, 0.6, 0.9} {
		x := make([]float64, len(symbols))
		for j := range x {
			x[j] = v / float64(j+1)
		}
		l, sign := c.LogAbs(x)
		off := l - d.LogKernel(x)
		if i == 0 {
			first = off
		}
		if sign < 0 || !(math.Abs(off-first) <= 1e-10) {
			t.Errorf("%s: the text says another kernel, off by exp(%v) at %v", name, off-first, x)
		}
	}
}
