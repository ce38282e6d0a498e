package posterior

import (
	"context"
	"fmt"
	"math"
	"testing"

	"wellposed/checks/objective"
	"wellposed/parser/model"
	"wellposed/parser/source"
)

func build(t testing.TB, text string) *model.Model {
	t.Helper()
	m := model.Build(context.Background(), source.NewFile("m.bayes", text), model.Options{})
	for _, f := range m.Problems {
		t.Fatalf("%s\n%s %v", text, f.Headline, f.Notes)
	}
	return m
}

func summary(t testing.TB, text string) *Summary {
	t.Helper()
	m := build(t, text)
	a := objective.Resolve(context.Background(), m.Declared())
	s, err := Summarize(context.Background(), a, m.Reports[0])
	if err != nil {
		t.Fatalf("%s\n%v", text, err)
	}
	return s
}

func near(t testing.TB, what string, got, want, within float64) {
	t.Helper()
	if !(math.Abs(got-want) <= within) {
		t.Errorf("%s: %.10g, want %.10g ± %.1g", what, got, want, within)
	}
}

const clinics = `unknown mu : location
unknown tau : scale
table studies
| name | estimate | error |
| a    | 0.28     | 0.20  |
| b    | 0.51     | 0.25  |
| c    | -0.05    | 0.30  |
vary theta across name as Normal(mu, sd = tau)
observe estimate as Normal(theta[name], sd = error)
prior mu flat
`

// Table 1.2 of the project's reference, three invented studies: by quadrature on
// a grid of 40,001 points in log tau. Three of its ends were rounded away from the
// middle there: adaptive quadrature in SciPy gives −0.2346, −1.6550 and 5.1246.
func TestThreeStudies(t *testing.T) {
	for _, c := range []struct {
		prior                  string
		median, q95, low, high float64
		chance                 float64
	}{
		{"tau as half-Normal(sd = 1/2)", 0.21, 0.69, -0.24, 0.75, 0.895},
		{"tau as half-Normal(sd = 1)", 0.28, 1.10, -0.43, 0.94, 0.859},
		{"tau as half-Cauchy(scale = 1/2)", 0.21, 0.83, -0.28, 0.79, 0.891},
		{"tau as half-Cauchy(scale = 25)", 0.40, 4.02, -1.66, 2.15, 0.800},
		{"tau as Uniform(0, 2)", 0.34, 1.47, -0.62, 1.12, 0.832},
		{"tau as Uniform(0, 10)", 0.40, 3.44, -1.40, 1.90, 0.803},
		{"tau flat", 0.41, 5.13, -2.11, 2.61, 0.796},
		{"tau^2 as inverse-Gamma(shape = 0.001, scale = 0.001)", 0.14, 0.81, -0.23, 0.75, 0.911},
		{"tau^2 as inverse-Gamma(shape = 0.01, scale = 0.01)", 0.25, 1.10, -0.40, 0.90, 0.868},
		{"tau^2 as inverse-Gamma(shape = 1, scale = 1)", 0.82, 1.78, -0.98, 1.48, 0.694},
	} {
		text := clinics + "prior " + c.prior + "\n"
		s := summary(t, text+"report tau, upper 95%\n")
		near(t, c.prior+" tau median", s.Median.Value, c.median, 0.005001)
		near(t, c.prior+" tau 95 %", s.Intervals[0].High.Value, c.q95, 0.0055)
		s = summary(t, text+"report mu, central 95%\n")
		near(t, c.prior+" mu low", s.Intervals[0].Low.Value, c.low, 0.0055)
		near(t, c.prior+" mu high", s.Intervals[0].High.Value, c.high, 0.005001)
		m := build(t, text+"report mu\nconclude \"helps\" when P(mu > 0) >= 0.95\n")
		n, err := Probability(context.Background(), m.Declared(), m.Conclusions[0].Event)
		if err != nil {
			t.Fatal(err)
		}
		near(t, c.prior+" P(mu > 0)", n.Value, c.chance, 0.00051)
	}
}

// Worked examples; status as in the project's reference: [S] confirmed in a
// published listing, [M] from memory, [C] computed.
func TestWorkedExamples(t *testing.T) {
	p, l := "unknown x : probability\n", "unknown x : rate\n"
	for _, c := range []struct {
		name, text string
		at         map[float64]float64 // quantiles
		mean, sd   float64
		within     float64
	}{
		{"E1 NUREG/CR-6823 (2003), failure to start [S, data M]", p + "observe 1 of 8 with probability x\nprior x as Beta(4.2, 153.1)\n",
			map[float64]float64{0.05: 0.01284, 0.5: 0.02958, 0.95: 0.05648}, 0.03146, 0.01354, 6e-6},
		{"E2 NUREG/CR-6823, initiating events [M]", l + "observe 10 in 6 at rate x\nprior x as Gamma(shape = 1.53, rate = 10.63)\n",
			map[float64]float64{0.05: 0.3949, 0.5: 0.6734, 0.95: 1.0597}, 0.6933, 0, 6e-5},
		{"E3 same prior, 1 event [M]", l + "observe 1 in 6 at rate x\nprior x as Gamma(shape = 1.53, rate = 10.63)\n",
			map[float64]float64{0.05: 0.0353, 0.5: 0.1326, 0.95: 0.3356}, 0.1521, 0, 6e-5},
		{"E4 Jeffreys, 10 events in 6 y [M]", l + "observe 10 in 6 at rate x\nprior x jeffreys\n",
			map[float64]float64{0.05: 0.9659, 0.5: 1.6948, 0.95: 2.7225}, 1.75, 0, 6e-5},
		{"E5 Jeffreys, 8 of 262 [M]", p + "observe 8 of 262 with probability x\nprior x jeffreys\n",
			map[float64]float64{0.05: 0.01665, 0.5: 0.03114, 0.95: 0.05202}, 0.03232, 0, 6e-6},
		{"E6 Jeffreys, 24 in 92.3 y [M]", l + "observe 24 in 92.3 at rate x\nprior x jeffreys\n",
			map[float64]float64{0.05: 0.1838, 0.5: 0.2618, 0.95: 0.3594}, 0.2654, 0, 6e-5},
		{"E11 437 girls of 980 births [M]", p + "observe 437 of 980 with probability x\nprior x flat\n",
			map[float64]float64{0.025: 0.4151, 0.975: 0.4772}, 0.4460, 0, 6e-5},
		{"E17 Jeffreys interval, 0 of 10 (2001) [paper S, number M]", p + "observe 0 of 10 with probability x\nprior x as Beta(1/2, 1/2)\n",
			map[float64]float64{0.975: 0.2172}, math.NaN(), 0, 6e-5},
		{"E17, 1 of 10", p + "observe 1 of 10 with probability x\nprior x as Beta(1/2, 1/2)\n",
			map[float64]float64{0.025: 0.0110, 0.975: 0.3813}, math.NaN(), 0, 6e-5},
		{"E18 flat, no event [M]", l + "observe 0 in 1 at rate x\nprior x flat\n",
			map[float64]float64{0.9: 2.3026, 0.95: 2.9957}, math.NaN(), 0, 6e-5},
		{"E18 flat, 3 events [M]", l + "observe 3 in 1 at rate x\nprior x flat\n", map[float64]float64{0.95: 7.754}, math.NaN(), 0, 6e-4},
		{"finding 1, Gamma(0.001, 0.001), 0 in 1500 [C]", l + "observe 0 in 1500 at rate x\nprior x as Gamma(shape = 0.001, rate = 0.001)\n",
			map[float64]float64{0.95: 2.0e-26}, math.NaN(), 0, 0.05e-26},
		{"E12 speed of light, n = 66 [M]", "unknown x : location\nunknown s : scale\nobserve summary(n = 66, mean = 26.2, sd = 10.8) as Normal(x, sd = s)\nprior x flat\nprior log(s) flat\n",
			map[float64]float64{0.025: 23.545, 0.975: 28.855}, 26.2, 0, 6e-4},
	} {
		m := build(t, c.text+"report x, central 95%\n")
		a := objective.Resolve(context.Background(), m.Declared())
		law, err := LawOf(context.Background(), a, m.Reports[0].Value)
		if err != nil {
			t.Errorf("%s: %v", c.name, err)
			continue
		}
		for q, want := range c.at {
			n, _ := law.Quantile(q)
			near(t, fmt.Sprintf("%s, %g", c.name, q), n.Value, want, c.within)
		}
		mean, sd := law.Moments()
		if c.mean == c.mean {
			near(t, c.name+" mean", mean.Value, c.mean, c.within)
		}
		if c.sd != 0 {
			near(t, c.name+" sd", sd.Value, c.sd, c.within)
		}
	}
}

// E13, the bioassay with flat coefficients [data S, numbers C by a grid].
func TestAssay(t *testing.T) {
	s := summary(t, assay+"report slope, central 95%\n")
	near(t, "E slope", s.Mean.Value, 11.64, 0.02)
	near(t, "slope low", s.Intervals[0].Low.Value, 3.44, 0.02)
	near(t, "slope high", s.Intervals[0].High.Value, 25.4, 0.2)
	s = summary(t, assay+"report -alpha / slope, central 95%\n")
	near(t, "dose", s.Median.Value, -0.112, 0.001)
	near(t, "dose low", s.Intervals[0].Low.Value, -0.276, 0.002)
	near(t, "dose high", s.Intervals[0].High.Value, 0.103, 0.002)
	s = summary(t, "unknown p, q : probability\nobserve 0 of 20 with probability p\nobserve 5 of 20 with probability q\nprior p flat\nprior q flat\nreport log(odds(q) / odds(p)), central 95%\n")
	near(t, "log odds ratio", s.Median.Value, 2.4, 0.05)
	near(t, "log odds ratio low", s.Intervals[0].Low.Value, 0.3, 0.05)
	near(t, "log odds ratio high", s.Intervals[0].High.Value, 5.8, 0.05)
	s = summary(t, "unknown p, q : probability\nobserve 0 of 20 with probability p\nobserve 5 of 20 with probability q\nprior logit(p) as Normal(0, sd = 100)\nprior logit(q) as Normal(0, sd = 100)\nreport log(odds(q) / odds(p)), central 95%\n")
	near(t, "log odds ratio, N(0, 100²)", s.Median.Value, 68, 1)
	near(t, "log odds ratio, N(0, 100²) low", s.Intervals[0].Low.Value, 5, 0.5)
	near(t, "log odds ratio, N(0, 100²) high", s.Intervals[0].High.Value, 224, 1)
}

// E14, eight schools [data S; posterior C, by two adaptive quadratures].
func TestEightSchools(t *testing.T) {
	const schools = `table schools
| name | effect | error |
| a | 28 | 15 |
| b | 8 | 10 |
| c | -3 | 16 |
| d | 7 | 11 |
| e | -1 | 9 |
| f | 1 | 11 |
| g | 18 | 10 |
| h | 12 | 18 |
unknown mu : location
unknown tau : scale
vary theta across name as Normal(mu, sd = tau)
observe effect as Normal(theta[name], sd = error)
prior mu flat
`
	for prior, want := range map[string]float64{
		"tau^2 as inverse-Gamma(shape = 0.001, scale = 0.001)": 0.6032467,
		"tau^2 as inverse-Gamma(shape = 1, scale = 1)":         0.3812081,
		"tau flat": 0.1027480,
	} {
		m := build(t, schools+"prior "+prior+"\nreport tau\nconclude \"small\" when P(tau < 1) >= 0.5\n")
		n, err := Probability(context.Background(), m.Declared(), m.Conclusions[0].Event)
		if err != nil {
			t.Fatal(err)
		}
		near(t, "P(tau < 1), "+prior, n.Value, want, 6e-8)
		if n.Error > 1e-9 {
			t.Errorf("claimed error %g", n.Error)
		}
	}
	m := build(t, schools+"prior tau^2 as inverse-Gamma(shape = 0.001, scale = 0.001)\nreport tau\nconclude \"small\" when P(tau < 1) >= 0.5\n")
	if n, err := PriorProbability(context.Background(), m.Declared(), m.Conclusions[0].Event); err != nil || math.Abs(n.Value-0.0063) > 6e-5 {
		t.Errorf("prior P(tau < 1): %v, %v", n, err)
	}
}

// E8, JCGM 101 (2008) 9.4: X1² + X2² with u = 0.005, in units of 10⁻⁶ [problem S,
// numbers M; C by the scaled non-central chi-square].
func TestSumOfSquares(t *testing.T) {
	for _, c := range []struct{ x, mean, sd, low, high float64 }{
		{0, 50, 50, 0, 149.8}, {0.010, 150, 111.8, 0, 366.0}, {0.050, 2550, 502.5, 1593.6, 3548.6},
	} {
		text := fmt.Sprintf("unknown a, b : location\nobserve %g as Normal(a, sd = 0.005)\nobserve 0 as Normal(b, sd = 0.005)\nprior a flat\nprior b flat\nreport 1000000 * (a^2 + b^2), shortest 95%%\n", c.x)
		s := summary(t, text)
		near(t, "E8 mean", s.Mean.Value, c.mean, 0.06)
		near(t, "E8 sd", s.SD.Value, c.sd, 0.06)
		near(t, "E8 low", s.Intervals[0].Low.Value, c.low, 0.06)
		near(t, "E8 high", s.Intervals[0].High.Value, c.high, 0.06)
	}
}

// E9: the sd of the mean of n readings is s/√n × √((n−1)/(n−3)), none at n = 3.
func TestReadings(t *testing.T) {
	for n, want := range map[int]float64{4: 1.7321, 5: 1.4142, 6: 1.2910, 10: 1.1339, 3: math.NaN()} {
		s := summary(t, fmt.Sprintf("unknown m : location\nunknown s : scale\nobserve summary(n = %d, mean = 0, sd = 1) as Normal(m, sd = s)\nprior m flat\nprior log(s) flat\nreport m, central 95%%\n", n))
		got := s.SD.Value * math.Sqrt(float64(n))
		if want != want {
			if got == got {
				t.Errorf("n = 3: sd %g, but it is infinite", got)
			}
			continue
		}
		if n == 4 && got != got {
			continue // the tail is too heavy for the sd to be found; that is said
		}
		near(t, fmt.Sprint("E9, n = ", n), got, want, 6e-5)
	}
}

// E10, ISO 11929: best estimate of a non-negative measurand [formula M].
func TestNonNegative(t *testing.T) {
	for i, y := range []float64{-1, 0, 1, 2, 3} {
		s := summary(t, fmt.Sprintf("unknown m : location limited to m >= 0 by nature\nobserve %g as Normal(m, sd = 1)\nprior m flat\nreport m, central 95%%\n", y))
		near(t, "E10 mean", s.Mean.Value, []float64{0.5251, 0.7979, 1.2876, 2.0552, 3.0044}[i], 6e-5)
		near(t, "E10 sd", s.SD.Value, []float64{0.4462, 0.6028, 0.7935, 0.9415, 0.9933}[i], 6e-5)
	}
}
