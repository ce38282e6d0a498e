package objective

import (
	"context"
	"math"
	"strings"
	"testing"

	"wellposed/parser/model"
)

func TestConstrainedMean(t *testing.T) {
	d := derive(t, "unknown lambda : rate\nobserve 1 in 6 at rate lambda\nprior lambda constrained to mean 0.144\n")
	// Gamma(1/2, 1/(2 · mean)): NUREG/CR-6823, section 6.2.2.5.2 (from memory).
	if d.Name != "Gamma(shape = 1/2, rate = 125/36)" {
		t.Errorf("printed as %s", d.Name)
	}
	for _, mean := range []string{"0.5", "0.3", "0.05", "0.9", "0.001"} {
		d := derive(t, "unknown p : probability\nobserve 1 of 6 with probability p\nprior p constrained to mean "+mean+"\n")
		var mass, moment float64
		// The midpoint rule in the angle arcsin sqrt p, where the kernel is smooth.
		const n = 20000
		for i := range n {
			phi := (float64(i) + 0.5) / n * math.Pi / 2
			p := math.Pow(math.Sin(phi), 2)
			w := math.Exp(d.LogKernel([]float64{p})) * 2 * math.Sin(phi) * math.Cos(phi)
			mass, moment = mass+w, moment+w*p
		}
		if want := float(t, mean); !(math.Abs(moment/mass-want) <= 1e-9*want) {
			t.Errorf("mean %v, want %v", moment/mass, want)
		}
		if d.Prior.Form == model.ByRule {
			t.Errorf("mean %s: not written in the language", mean)
		}
	}
	if _, err := tryDerive(t, "unknown r : rate\ngiven y = 1\nobserve y as Exponential(rate = r)\nprior r constrained to mean 2\n"); err == nil {
		t.Error("1/r has no tilt with a mean: want an error")
	}
}

func TestMovingSupports(t *testing.T) {
	for _, c := range []struct{ text, want string }{
		{"unknown t : positive\ngiven y = 1\nobserve y as Uniform(0, t)\nprior t jeffreys\n", "1/t"},
		{"unknown t : positive\ngiven y = 1\nobserve y as Uniform(0, t^2)\nprior t jeffreys\n", "1/t"},
		{"unknown t : real\ngiven y = 1\nobserve y as Uniform(t - 1/2, t + 1/2)\nprior t jeffreys\n", "flat"},
		{"unknown t : positive\ngiven y = 3\nobserve y as Uniform(t, 2 * t)\nprior t jeffreys\n", "1/t"},
		{"unknown t : real\ngiven y = 3\nobserve y as Exponential(mean = 2, origin = t)\nprior t jeffreys\n", "flat"},
		{"unknown t : real\nunknown u : scale\ngiven y = 3\nobserve y as Exponential(mean = u, origin = t)\nprior (t, u) jeffreys jointly\n", "1/u"},
		{"unknown t : real\nunknown u : scale\ngiven y = 3\nobserve y as Exponential(mean = u, origin = t)\nprior (t, u) jeffreys separately\n", "1/u"},
		{"unknown t : positive\nunknown u : shape\ngiven y = 3\nobserve y as Pareto(minimum = t, shape = u)\nprior (t, u) reference t before u\n", "1/(t * u)"},
		{"unknown t : positive\ngiven y = 3\nobserve y as Pareto(minimum = t, shape = 2)\nprior t jeffreys\n", "1/t"},
	} {
		d := derive(t, c.text)
		if d.Name != c.want {
			t.Errorf("%s gives %s, want %s", c.text, d.Name, c.want)
		}
		if !strings.Contains(strings.Join(d.Steps, "\n"), "Fisher information is not") {
			t.Errorf("the derivation does not say that Fisher information does not apply:\n%s", strings.Join(d.Steps, "\n"))
		}
	}
	if _, err := tryDerive(t, "unknown t : positive in (1, inf)\ngiven y = 3\nobserve y as Uniform(t, t^2)\nprior t jeffreys\n"); err == nil {
		t.Error("Uniform(t, t^2) has no group: want an error")
	}
}

func TestPlans(t *testing.T) {
	times := "table d\n| hours | failed |\n| 1 | 1 |\n| 4 | 0 |\n| 2 | 1 |\n| 4 | 0 |\n"
	d := derive(t, times+"unknown r : rate\nobserve hours as Exponential(rate = r), right-censored where failed == 0\nprior r jeffreys\n")
	ratio(t, "fixed-time censoring", d, [][]float64{{0.3}, {0.01}, {2}, {9}}, func(x []float64) float64 { return math.Sqrt(-math.Expm1(-4*x[0])) / x[0] })
	if !strings.Contains(strings.Join(d.Assumed, " "), "followed up to 4") {
		t.Errorf("assumed: %v", d.Assumed)
	}
	if _, err := tryDerive(t, strings.Replace(times, "| 4 | 0 |", "| 3 | 0 |", 1)+"unknown r : rate\nobserve hours as Exponential(rate = r), right-censored where failed == 0\nprior r jeffreys\n"); err == nil {
		t.Error("different limits say nothing about the plan: want an error")
	}

	d = derive(t, "unknown m : rate\ngiven y = 2\nobserve y as Poisson(m), truncated to [1, inf)\nprior m jeffreys\n")
	ratio(t, "zero-truncated Poisson", d, [][]float64{{0.3}, {0.01}, {2}, {9}}, func(x []float64) float64 {
		m := x[0]
		mu := m / -math.Expm1(-m)
		return math.Sqrt(mu*(1+m-mu)) / m
	})

	d = derive(t, "unknown q : probability\ngiven y = 2\nobserve y as Mixture(q: Point(0), 1 - q: Poisson(3))\nprior q jeffreys\n")
	ratio(t, "extra zeros", d, [][]float64{{0.3}, {0.01}, {0.9}}, func(x []float64) float64 {
		q, e := x[0], math.Exp(-3)
		p0 := q + (1-q)*e
		return math.Sqrt((1-e)*(1-e)/p0 + (1-e)/(1-q))
	})

	flags := "table d\n| y | flag |\n| 1 | below |\n| 2.5 | seen |\n| 1.7 | seen |\n"
	d = derive(t, flags+"unknown m : location\nobserve y as Normal(m, sd = 1), left-censored where flag == \"below\"\nprior m jeffreys\n")
	ratio(t, "limit of detection", d, [][]float64{{1}, {3}, {-2}}, func(x []float64) float64 {
		// I = E[z²; z > c] + φ(c)²/Φ(c) with c = 1 − m.
		c := 1 - x[0]
		phi, upper := math.Exp(-c*c/2)/math.Sqrt(2*math.Pi), math.Erfc(c/math.Sqrt2)/2
		return math.Sqrt(c*phi + upper + phi*phi/(math.Erfc(-c/math.Sqrt2)/2))
	})
}

// ratio compares a kernel with a formula from the first point on.
func ratio(t *testing.T, name string, d *Derived, points [][]float64, kernel func([]float64) float64) {
	t.Helper()
	var first float64
	for i, x := range points {
		v := d.LogKernel(x) - math.Log(kernel(x))
		if i == 0 {
			first = v
		} else if !(math.Abs(v-first) <= 1e-8) {
			t.Errorf("%s: at %v off by the factor exp(%v)", name, x, v-first)
		}
	}
}

func TestRefusals(t *testing.T) {
	for _, c := range []struct{ text, says string }{
		{"unknown n : count\ngiven y = 3\nunknown p : probability\nobserve y as Binomial(n, p)\nprior p as Beta(1, 1)\nprior n jeffreys\n", "whole number"},
		{"unknown a, b : effect\ngiven y = 1\nobserve y as Bernoulli(expit(a + b))\nprior (a, b) jeffreys jointly\n", "combinations"},
		{"unknown t : rate\nunknown u : rate\ngiven y = 1\nobserve y as Poisson(u)\nprior u ∝ 1/u\nprior t jeffreys\n", "no observation depends on it"},
		{"unknown a, b : effect\n" + binaryTable + "observe y as Bernoulli(expit(a + b * x))\nprior b flat\nprior a jeffreys\n", "together"},
	} {
		_, err := tryDerive(t, c.text)
		if err == nil || !strings.Contains(err.Error(), c.says) {
			t.Errorf("%s\nerror %v, want one that says %q", c.text, err, c.says)
		}
	}
}

func TestResolve(t *testing.T) {
	m := build(t, "unknown p : probability\nobserve 0 of 40 with probability p\nprior p jeffreys because \"plan\"\nunknown a : shape\nunknown b : rate\ngiven y = 1\nobserve y as Gamma(shape = a, rate = b)\nprior (a, b) jeffreys jointly\n")
	a := Resolve(context.Background(), m.Declared())
	p := a.PriorOf(m.Unknowns[0])
	if p.Form != model.ByDist || p.Text != "p as Beta(1/2, 1/2)" || p.Reason.Because != "plan" {
		t.Errorf("resolved to %+v", p)
	}
	q := a.PriorOf(m.Unknowns[1])
	if q.Form != model.ByRule || q.Rule.LogKernel == nil {
		t.Fatalf("the numeric prior is %+v", q)
	}
	want := math.Sqrt(1.3*trigammaOf(1.3)-1) / 0.7
	base := math.Sqrt(2*trigammaOf(2)-1) / 1
	if got := q.Rule.LogKernel([]float64{1.3, 0.7}) - q.Rule.LogKernel([]float64{2, 1}); math.Abs(got-math.Log(want/base)) > 1e-10 {
		t.Errorf("numeric kernel off: %v", got)
	}
	if m.Declared().PriorOf(m.Unknowns[0]).Form != model.ByRule {
		t.Error("the declared analysis was changed")
	}
}

func TestMatrices(t *testing.T) {
	text := "unknown m1, m2 : location\nunknown S : covariance(2)\ngiven y1 = 1, y2 = 2\nobserve (y1, y2) as multivariate-Normal((m1, m2), covariance = S)\nprior m1 flat\nprior m2 flat\nprior S jeffreys\n"
	d := derive(t, text)
	if d.Name != "det(S)^(-3/2)" {
		t.Errorf("printed as %s", d.Name)
	}
	got := d.LogKernel([]float64{2, 0.5, 0.5, 1}) - d.LogKernel([]float64{1, 0, 0, 1})
	if want := -1.5 * math.Log(1.75); math.Abs(got-want) > 1e-12 {
		t.Errorf("log kernel %v, want %v", got, want)
	}
}

// TestReferenceByExpectation: the information does not come apart, but the
// conditional prior of the second unknown is proper and free of the first.
func TestReferenceByExpectation(t *testing.T) {
	model := "unknown t : positive\nunknown u : probability\ngiven y1 = 1, y2 = 2\nobserve y1 as Normal(t^2, sd = 1)\nobserve y2 as Normal(t, sd = exp(atan(sqrt(u / (1 - u)))))\n"
	for order, at := range map[string]int{"(t, u) reference t before u": 0, "(u, t) reference t before u": 1} {
		d := derive(t, model+"prior "+order+"\n")
		// I(t, t) = 4t² + exp(−2φ), φ = arcsin sqrt(u) uniform on (0, π/2) under the
		// conditional prior.
		want := func(v, u float64) float64 {
			total := 0.0
			const n = 4000
			for i := range n {
				phi := (float64(i) + 0.5) / n * math.Pi / 2
				total += math.Log(4*v*v+math.Exp(-2*phi)) / n
			}
			return total/2 - math.Log(u*(1-u))/2
		}
		var first float64
		for i, x := range [][2]float64{{0.3, 0.2}, {2, 0.2}, {0.01, 0.9}, {0.5, 0.5}} {
			in := []float64{x[0], x[1]}
			if at == 1 {
				in = []float64{x[1], x[0]}
			}
			v := d.LogKernel(in) - want(x[0], x[1])
			if i == 0 {
				first = v
			} else if !(math.Abs(v-first) <= 1e-7) {
				t.Errorf("%s: at %v off by %v", order, x, v-first)
			}
		}
	}
}

func TestRightHaarIsSaid(t *testing.T) {
	d := derive(t, twoOf("location scale", "Cauchy(t, u)", "reference t before u"))
	if !strings.Contains(strings.Join(d.Steps, "\n"), "right-Haar") {
		t.Errorf("steps: %v", d.Steps)
	}
	d = derive(t, twoOf("location scale", "Cauchy(t, u)", "jeffreys jointly"))
	if strings.Contains(strings.Join(d.Steps, "\n"), "right-Haar") {
		t.Errorf("1/u² is not the right-Haar measure; steps: %v", d.Steps)
	}
}

// TestScaleUnknownInVaryingEffects: Jeffreys for the spread between known-error
// studies, sqrt Σ τ²/(se² + τ²)².
func TestScaleUnknownInVaryingEffects(t *testing.T) {
	d := derive(t, "table d\n| g | y | se |\n| a | 0.1 | 0.2 |\n| b | 0.4 | 0.3 |\nunknown mu : location\nunknown tau : scale\nvary th across g as Normal(mu, sd = tau)\nobserve y as Normal(th[g], sd = se)\nprior mu flat\nprior tau jeffreys\n")
	ratio(t, "spread", d, [][]float64{{0.3}, {0.01}, {2}, {9}}, func(x []float64) float64 {
		v := x[0] * x[0]
		return x[0] * math.Sqrt(math.Pow(0.04+v, -2)+math.Pow(0.09+v, -2))
	})
}

// TestVectorsAreOneLaw: Jeffreys for a vector of coefficients is one law over its
// components.
func TestVectorsAreOneLaw(t *testing.T) {
	d := derive(t, "table d\n| x | z | y |\n| 1 | 0 | 0 |\n| 1 | 1 | 1 |\n| 1 | 1 | 0 |\nunknown b for (x, z) : effect\nobserve y as Bernoulli(expit(linear(b)))\nprior b jeffreys\n")
	if !d.Prior.Joint || len(d.Parameters) != 2 {
		t.Errorf("joint %v over %d components", d.Prior.Joint, len(d.Parameters))
	}
	v, ok := d.Prior.Target.(*model.Vector)
	if !ok || len(v.Items) != 2 {
		t.Errorf("target %T", d.Prior.Target)
	}
	// Two groups of 1 and 2 with log odds b1 and b1 + b2.
	ratio(t, "two groups", d, [][]float64{{0.3, 0.1}, {-1, 2}, {4, -3}}, func(x []float64) float64 {
		w := func(e float64) float64 { return 1 / (4 * math.Pow(math.Cosh(e/2), 2)) }
		return math.Sqrt(w(x[0]) * w(x[0]+x[1]))
	})
	d = derive(t, "given y = 1\nunknown x : real\nobserve y as generalized-Pareto(scale = 2, shape = x)\nprior x jeffreys\n")
	if d.Prior.Truncated == nil || !math.IsInf(d.LogKernel([]float64{-0.7}), -1) {
		t.Error("the prior of a shape should end at −1/2, where the information does")
	}
}
