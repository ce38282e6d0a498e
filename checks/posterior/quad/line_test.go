package quad

import (
	"math"
	"testing"
)

func lgamma(x float64) float64 { v, _ := math.Lgamma(x); return v }

func log1pexp(u float64) float64 {
	if u > 0 {
		return u + math.Log1p(math.Exp(-u))
	}
	return math.Log1p(math.Exp(u))
}

func TestNormalisers(t *testing.T) {
	for _, c := range []struct {
		name string
		f    LogDensity
		want float64
	}{
		{"normal", func(u float64) float64 { return -u * u / 2 }, math.Log(2*math.Pi) / 2},
		{"narrow, far off", func(u float64) float64 { z := (u - 12345.678) / 1e-3; return -z * z / 2 }, math.Log(2*math.Pi)/2 + math.Log(1e-3)},
		{"beta(0.5, 40.5)", func(u float64) float64 { return -0.5*log1pexp(-u) - 40.5*log1pexp(u) }, lgamma(0.5) + lgamma(40.5) - lgamma(41)},
		{"beta(3e4, 7e5)", func(u float64) float64 { return -3e4*log1pexp(-u) - 7e5*log1pexp(u) }, lgamma(3e4) + lgamma(7e5) - lgamma(7.3e5)},
		{"gamma(0.001)", func(u float64) float64 { return 0.001*u - math.Exp(u) }, lgamma(0.001)},
		{"gamma(1e-6)", func(u float64) float64 { return 1e-6*u - math.Exp(u) }, lgamma(1e-6)},
		{"logistic tails", func(u float64) float64 { return -math.Log(math.Cosh(math.Min(math.Abs(u), 700))) }, math.Log(math.Pi)},
		{"two hills", func(u float64) float64 {
			a, b := u+7, (u-9)/0.1
			return math.Log(math.Exp(-a*a/2) + 3*math.Exp(-b*b/2))
		}, math.Log(math.Sqrt(2*math.Pi) * 1.3)},
		{"kink", func(u float64) float64 { return -math.Abs(u - 0.3) }, math.Log(2)},
	} {
		l, err := Integrate(c.f, 1e-13)
		if err != nil {
			t.Errorf("%s: %v", c.name, err)
			continue
		}
		if e := math.Abs(l.LogTotal() - c.want); !(e < 1e-11+l.Error+1e-15*lgamma(1e6)*math.Abs(c.want)/1e5) {
			t.Errorf("%s: log integral %.15g, want %.15g (claimed %.1e)", c.name, l.LogTotal(), c.want, l.Error)
		}
	}
}

func TestQuantiles(t *testing.T) {
	l, err := Integrate(func(u float64) float64 { return -u * u / 2 }, 1e-13)
	if err != nil {
		t.Fatal(err)
	}
	for _, p := range []float64{1e-10, 1e-4, 0.025, 0.3, 0.5, 0.7, 0.975, 0.9999} {
		want := -math.Sqrt2 * math.Erfcinv(2*p)
		if got := l.Quantile(p); !(math.Abs(got-want) < 1e-10*math.Max(1, 1e-4/math.Min(p, 1-p))) {
			t.Errorf("quantile %g: %.15g, want %.15g", p, got, want)
		}
		if got := l.CDF(l.Quantile(p)); math.Abs(got-p) > 1e-14 {
			t.Errorf("CDF at the %g quantile is %g", p, got)
		}
	}
	if m, v := l.Expect(func(u float64) float64 { return u }), l.Expect(func(u float64) float64 { return u * u }); math.Abs(m) > 1e-12 || math.Abs(v-1) > 1e-12 {
		t.Errorf("mean %g, variance %g", m, v)
	}
}

func TestNotIntegrable(t *testing.T) {
	for name, f := range map[string]LogDensity{
		"flat":          func(u float64) float64 { return 0 },
		"flat leftward": func(u float64) float64 { return -math.Exp(u) },
		"rising":        func(u float64) float64 { return u },
		"zero":          func(u float64) float64 { return math.Inf(-1) },
	} {
		if _, err := Integrate(f, 1e-12); err == nil {
			t.Errorf("%s: no error", name)
		}
	}
}

func BenchmarkBeta(b *testing.B) {
	f := func(u float64) float64 { return -0.5*log1pexp(-u) - 40.5*log1pexp(u) }
	evals := 0
	Integrate(func(u float64) float64 { evals++; return f(u) }, 1e-12)
	b.ReportMetric(float64(evals), "evals")
	for b.Loop() {
		l, _ := Integrate(f, 1e-12)
		l.Quantile(0.025)
		l.Quantile(0.5)
		l.Quantile(0.975)
	}
	b.ReportMetric(float64(evals), "evals")
}
