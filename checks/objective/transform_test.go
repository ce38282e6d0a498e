package objective

import (
	"fmt"
	"math"
	"strings"
	"testing"

	sy "wellposed/checks/objective/symbolic"
)

// onScale pairs a scale with its inverse in the language and the kind of unknown
// that lives on it.
var onScale = []struct{ name, back, from, kind string }{
	{"odds", "t / (1 + t)", "probability", "positive"},
	{"logit", "expit(t)", "probability", "real"},
	{"probit", "Phi(t)", "probability", "real"},
	{"cloglog", "(1 - exp(-exp(t)))", "probability", "real"},
	{"log", "exp(t)", "positive", "real"},
	{"square", "sqrt(t)", "positive", "positive"},
	{"variance", "sqrt(t)", "positive", "positive"},
	{"precision", "(1 / sqrt(t))", "positive", "positive"},
	{"sqrt", "t^2", "positive", "positive"},
	{"sd", "t^2", "positive", "positive"},
	{"reciprocal", "(1 / t)", "positive", "positive"},
	{"mean", "(1 / t)", "positive", "positive"},
	{"rate", "(1 / t)", "positive", "positive"},
	{"atanh", "tanh(t)", "correlation", "real"},
	{"exp", "log(t)", "real", "positive"},
	{"expit", "logit(t)", "real", "probability"},
}

// laws with one unknown T by its kind.
var transformedLaws = map[string][]string{
	"probability": {"Binomial(7, T)", "geometric(T, first = 0)", "negative-Binomial(size = 3, probability = T)"},
	"positive": {"Poisson(T)", "Exponential(rate = T)", "Normal(1, sd = T)", "Weibull(shape = T, scale = 2)", "Gamma(shape = T, rate = 2)",
		"inverse-Gaussian(mean = T, shape = 2)", "negative-Binomial(mean = T, size = 5)", "Student-t(degrees = T, location = 0, scale = 1)"},
	"real":        {"Normal(T, sd = 2)", "logistic(T, 2)", "Normal(T, sd = exp(T))"},
	"correlation": {"Normal(T, sd = 1 - T^2)"},
}

// TestDerivedPriorsCommuteWithTransforms derives on the transformed text and
// compares with the change of variable.
func TestDerivedPriorsCommuteWithTransforms(t *testing.T) {
	covered := map[string]bool{}
	for _, scale := range onScale {
		covered[scale.name] = true
		for _, law := range transformedLaws[scale.from] {
			for _, rule := range []string{"jeffreys", "matching"} {
				name := fmt.Sprintf("%s of %s in %s", rule, law, scale.name)
				text := func(kind, arg string) string {
					return "unknown t : " + kind + "\ngiven y = 1\nobserve y as " + strings.ReplaceAll(law, "T", arg) + "\nprior t " + rule + "\n"
				}
				if strings.HasPrefix(law, "Student-t") { // keep the name's own T
					text = func(kind, arg string) string {
						return "unknown t : " + kind + "\ngiven y = 1\nobserve y as Student-t(degrees = " + arg + ", location = 0, scale = 1)\nprior t " + rule + "\n"
					}
				}
				plain := derive(t, text(scale.from, "t"))
				moved := derive(t, text(scale.kind, scale.back))
				on, err := plain.On(scale.name)
				if err != nil {
					t.Errorf("%s: %v", name, err)
					continue
				}
				x := moved.Parameters[0].Symbol
				there := sy.Substitute(on.Kernel, map[string]sy.Expr{on.Symbol.Name: sy.Sym(x)})
				if same, sure := sy.Proportional(there, moved.Kernel, []*sy.Symbol{x}); same && sure {
					continue
				}
				// Not settled in symbols: compare at points.
				c, err := sy.Compile(there, []*sy.Symbol{x})
				if err != nil {
					t.Fatal(err)
				}
				points := []float64{0.3, 0.05, 0.6, 0.9}
				var first float64
				for i, v := range points {
					l, _ := c.LogAbs([]float64{v})
					d := l - moved.LogKernel([]float64{v})
					if i == 0 {
						first = d
					} else if !(math.Abs(d-first) <= 1e-9) {
						t.Errorf("%s: %s and %s differ by the factor exp(%v) at %v", name, sy.Text(there), sy.Text(moved.Kernel), d-first, v)
					}
				}
			}
		}
	}
	for _, s := range Transforms {
		if !covered[s.Name] {
			t.Errorf("the scale %s is not tested", s.Name)
		}
	}
}

// TestSeveralCommute moves two unknowns at once.
func TestSeveralCommute(t *testing.T) {
	for _, c := range []struct{ name, a, b string }{
		{"normal", twoOf("location scale", "Normal(t, sd = u)", "RULE"), twoOf("location real", "Normal(t, sd = exp(u))", "RULE")},
		{"weibull", twoOf("shape scale", "Weibull(shape = t, scale = u)", "RULE"), twoOf("shape real", "Weibull(shape = t, scale = exp(u))", "RULE")},
		{"gamma", twoOf("shape rate", "Gamma(shape = t, rate = u)", "RULE"), twoOf("shape real", "Gamma(shape = t, rate = exp(u))", "RULE")},
		{"inverse Gaussian", twoOf("positive shape", "inverse-Gaussian(mean = t, shape = u)", "RULE"), twoOf("positive real", "inverse-Gaussian(mean = t, shape = exp(u))", "RULE")},
	} {
		for _, rule := range []string{"jeffreys jointly", "jeffreys separately", "reference t before u", "reference u before t"} {
			plain, moved := derive(t, strings.ReplaceAll(c.a, "RULE", rule)), derive(t, strings.ReplaceAll(c.b, "RULE", rule))
			var first float64
			for i, x := range [][]float64{{0.4, 0.3}, {1.2, -1}, {3, 0.7}, {0.1, 2}} {
				d := moved.LogKernel(x) - plain.LogKernel([]float64{x[0], math.Exp(x[1])}) - x[1]
				if i == 0 {
					first = d
				} else if !(math.Abs(d-first) <= 1e-9) {
					t.Errorf("%s, %s: the factor changes by exp(%v) at %v", c.name, rule, d-first, x)
				}
			}
		}
	}
}

// TestMaximalDataIsNotInvariant documents the rule that depends on the scale.
func TestMaximalDataIsNotInvariant(t *testing.T) {
	d := derive(t, "unknown t : probability\nobserve 1 of 3 with probability t\nprior t maximal-data-information\n")
	moved := derive(t, "unknown t : real\ngiven y = 1\nobserve y as Binomial(3, expit(t))\nprior t maximal-data-information\n")
	on, err := d.On("logit")
	if err != nil {
		t.Fatal(err)
	}
	x := moved.Parameters[0].Symbol
	there := sy.Substitute(on.Kernel, map[string]sy.Expr{on.Symbol.Name: sy.Sym(x)})
	c, _ := sy.Compile(there, []*sy.Symbol{x})
	a, _ := c.LogAbs([]float64{0})
	b, _ := c.LogAbs([]float64{2})
	if math.Abs((b-a)-(moved.LogKernel([]float64{2})-moved.LogKernel([]float64{0}))) < 0.1 {
		t.Error("the maximal-data-information prior should change with the scale")
	}
}
