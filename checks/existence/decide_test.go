package existence

import (
	"context"
	"testing"

	"wellposed/parser/model"
	"wellposed/parser/source"
)

func init() { strict = true }

func read(t testing.TB, text string) *model.Model {
	t.Helper()
	m := model.Build(context.Background(), source.NewFile("test.bayes", text), model.Options{})
	for _, p := range m.Problems {
		t.Logf("problem: %s", p.Headline)
	}
	return m
}

func decide(t testing.TB, text string) *Result {
	t.Helper()
	return Decide(context.Background(), read(t, text).Declared())
}

func TestDecide(t *testing.T) {
	cases := []struct {
		name, text string
		status     Status
		code       Code
	}{
		{"binomial 0", "given n = 40, y = 0\nunknown p : probability\nobserve y as Binomial(n, p)\nprior p as Beta(0, 0)\nreport p\n", DoesNotExist, ""},
		{"binomial 3", "given n = 40, y = 3\nunknown p : probability\nobserve y as Binomial(n, p)\nprior p as Beta(0, 0)\nreport p\n", Exists, ""},
		{"binomial flat logit 40", "given n = 40, y = 40\nunknown p : probability\nobserve y as Binomial(n, p)\nprior logit(p) flat\nreport p\n", DoesNotExist, ""},
		{"normal n=1", "given y = [1.2]\nunknown mu : location\nunknown sigma : scale\nobserve y as Normal(mu, sd = sigma)\nprior mu flat\nprior sigma ∝ 1/sigma\n", DoesNotExist, ""},
		{"normal n=2", "given y = [1.2, 1.3]\nunknown mu : location\nunknown sigma : scale\nobserve y as Normal(mu, sd = sigma)\nprior mu flat\nprior sigma ∝ 1/sigma\n", Exists, ""},
		{"normal n=2 flat", "given y = [1.2, 1.3]\nunknown mu : location\nunknown sigma : scale\nobserve y as Normal(mu, sd = sigma)\nprior mu flat\nprior sigma flat\n", DoesNotExist, ScaleReadings},
		{"normal ties", "given y = [1.2, 1.2, 1.2]\nunknown mu : location\nunknown sigma : scale\nobserve y as Normal(mu, sd = sigma)\nprior mu flat\nprior sigma ∝ 1/sigma\n", DoesNotExist, EqualReadings},
		{"meta 3 flat", "given est = [0.28, 0.51, -0.05], se = [0.2, 0.25, 0.3]\nunknown mu : location\nunknown tau : scale\nobserve est as Normal(mu, sd = sqrt(tau^2 + se^2))\nprior mu flat\nprior tau flat\n", Exists, ""},
		{"meta 2 flat", "given est = [0.28, 0.51], se = [0.2, 0.25]\nunknown mu : location\nunknown tau : scale\nobserve est as Normal(mu, sd = sqrt(tau^2 + se^2))\nprior mu flat\nprior tau flat\n", DoesNotExist, ""},
		{"meta 3 1/tau", "given est = [0.28, 0.51, 0.3], se = [0.2, 0.25, 0.1]\nunknown mu : location\nunknown tau : scale\nobserve est as Normal(mu, sd = sqrt(tau^2 + se^2))\nprior mu flat\nprior tau ∝ 1/tau\n", DoesNotExist, ""},
		{"student df", "given y = [1.2, 0.3, 0.7]\nunknown nu : degrees\nunknown mu : location\nobserve y as Student-t(degrees = nu, location = mu, scale = 1)\nprior mu as Normal(0, sd = 10)\nprior nu flat\n", DoesNotExist, ""},
		{"negative binomial size", "given y = [0, 1, 0, 2, 5]\nunknown m : rate\nunknown k : shape\nobserve y as negative-Binomial(mean = m, size = k)\nprior m as Gamma(shape = 1, rate = 1)\nprior k flat\n", DoesNotExist, ""},
		{"N and p", "given y = [10, 12, 9]\nunknown N : count\nunknown p : probability\nobserve y as Binomial(N, p)\nprior p as Beta(1, 1)\nprior N flat\n", DoesNotExist, ""},
		{"sum", "given y = [1.2, 0.3, 0.7]\nunknown a, b : real\nobserve y as Normal(a + b, sd = 1)\nprior a flat\nprior b flat\n", DoesNotExist, ""},
		{"product", "given y = [1.2, 0.3, 0.7]\nunknown a, b : positive\nobserve y as Normal(a * b, sd = 1)\nprior a flat\nprior b flat\n", DoesNotExist, ""},
		{"uniform theta", "given y = [1.2, 0.3, 0.7]\nunknown theta : positive\nobserve y as Uniform(0, theta)\nprior theta ∝ 1/theta\n", Exists, ""},
		{"signal", "given n = 5\nunknown s : rate\nunknown e : positive\nobserve n as Poisson(s * e + 1.2)\nprior s flat\nprior e as Normal(0.5, sd = 0.2), truncated to (0, inf)\n", DoesNotExist, ""},
	}
	for _, c := range cases {
		r := decide(t, c.text)
		s, how := r.Overall()
		for _, v := range r.Verdicts {
			t.Logf("%s: %s, %s (%s): %s", c.name, v.Status, v.How, v.Code, v.Claim)
		}
		if s != c.status {
			t.Errorf("%s: %s %s, want %s", c.name, s, how, c.status)
		}
		if c.code != "" && len(r.Verdicts) > 0 && r.Verdicts[len(r.Verdicts)-1].Code != c.code {
			t.Errorf("%s: code %s, want %s", c.name, r.Verdicts[0].Code, c.code)
		}
	}
}
