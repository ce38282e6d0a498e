package existence

import (
	"context"
	"flag"
	"fmt"
	"math"
	"math/rand/v2"
	"strings"
	"testing"

	"wellposed/parser/model"
	"wellposed/parser/source"
)

var oracleRuns = flag.Int("oracle", 400, "random models against the numerical oracle; from 2000 on the other long checks run in full too")

// oracleModel is a random model: its text, and its log kernel written a second
// time in floating point, in a coordinate u over the whole line with the
// Jacobian put in; nuisance unknowns are integrated out numerically.
type oracleModel struct {
	text string
	log  func(u float64) float64
}

func pick[T any](r *rand.Rand, xs ...T) T { return xs[r.IntN(len(xs))] }

// logExpit avoids overflow at both ends.
func logExpit(u float64) float64 {
	if u < 0 {
		return u - math.Log1p(math.Exp(u))
	}
	return -math.Log1p(math.Exp(-u))
}

func list(xs []float64) string {
	var s []string
	for _, x := range xs {
		s = append(s, fmt.Sprint(x))
	}
	return "[" + strings.Join(s, ", ") + "]"
}

// logSumOver integrates exp(f) over v by the trapezoid rule around its peaks.
func logIntegral(f func(v float64) float64, lo, hi float64, n int) float64 {
	h := (hi - lo) / float64(n)
	best := math.Inf(-1)
	vals := make([]float64, n+1)
	for i := range vals {
		vals[i] = f(lo + h*float64(i))
		best = max(best, vals[i])
	}
	s := 0.0
	for _, v := range vals {
		s += math.Exp(v - best)
	}
	return best + math.Log(s*h)
}

func randomModel(r *rand.Rand) oracleModel {
	switch r.IntN(8) {
	case 0: // binomial, powers of p and 1 − p
		n := r.IntN(4) + 1
		y := r.IntN(n + 1)
		a, b := pick(r, -2.0, -1.5, -1, -0.5, 0, 1), pick(r, -2.0, -1.5, -1, -0.5, 0, 1)
		return oracleModel{
			fmt.Sprintf("given n = %d, y = %d\nunknown p : probability\nobserve y as Binomial(n, p)\nprior p ∝ p^(%v) * (1 - p)^(%v)\nreport p\n", n, y, a, b),
			func(u float64) float64 {
				return (float64(y)+a+1)*logExpit(u) + (float64(n-y)+b+1)*logExpit(-u)
			}}
	case 1: // Poisson with background and a power prior
		y, c, b := r.IntN(4), pick(r, -2.0, -1.5, -1, -0.5, 0, 1), pick(r, 0.0, 0, 1.5)
		return oracleModel{
			fmt.Sprintf("given y = %d\nunknown s : rate\nobserve y as Poisson(2 * s + %v)\nprior s ∝ s^(%v)\nreport s\n", y, b, c),
			func(u float64) float64 {
				m := 2*math.Exp(u) + b
				l := math.Log(m)
				if b == 0 {
					l = math.Log(2) + u
				}
				return float64(y)*l - m + (c+1)*u
			}}
	case 2: // exponential lifetimes with right-censoring, mean or rate
		k := r.IntN(3) + 1
		var t, d []float64
		events, total := 0.0, 0.0
		for range k {
			x, f := float64(r.IntN(9)+1), float64(r.IntN(2))
			t, d = append(t, x), append(d, f)
			events, total = events+f, total+x
		}
		c := pick(r, -3.0, -2, -1, 0, 1)
		if r.IntN(2) == 0 {
			return oracleModel{
				fmt.Sprintf("given t = %s, d = %s\nunknown q : rate\nobserve t as Exponential(rate = q), right-censored where d == 0\nprior q ∝ q^(%v)\nreport q\n", list(t), list(d), c),
				func(u float64) float64 { return events*u - math.Exp(u)*total + (c+1)*u }}
		}
		return oracleModel{
			fmt.Sprintf("given t = %s, d = %s\nunknown q : positive\nobserve t as Exponential(mean = q), right-censored where d == 0\nprior q ∝ q^(%v)\nreport q\n", list(t), list(d), c),
			func(u float64) float64 { return -events*u - math.Exp(-u)*total + (c+1)*u }}
	case 3: // normal sample, flat mean, power of sigma
		n := r.IntN(4) + 1
		var y []float64
		for range n {
			y = append(y, float64(r.IntN(3)))
		}
		c := pick(r, -2.0, -1.5, -1, -0.5, 0, 1)
		mean, ss := 0.0, 0.0
		for _, v := range y {
			mean += v / float64(n)
		}
		for _, v := range y {
			ss += (v - mean) * (v - mean)
		}
		return oracleModel{
			fmt.Sprintf("given y = %s\nunknown mu : location\nunknown sigma : scale\nobserve y as Normal(mu, sd = sigma)\nprior mu flat\nprior sigma ∝ sigma^(%v)\nreport mu\n", list(y), c),
			func(u float64) float64 {
				if ss < 1e-9 {
					ss = 0
				}
				return -float64(n-1)*u - ss/2*math.Exp(-2*u) + (c+1)*u
			}}
	case 4: // meta-analysis
		k := r.IntN(3) + 1
		var y, se []float64
		for range k {
			y, se = append(y, float64(r.IntN(5))/4), append(se, pick(r, 0.25, 0.5, 1))
		}
		c := pick(r, -2.0, -1, -0.5, 0, 1)
		return oracleModel{
			fmt.Sprintf("given y = %s, se = %s\nunknown mu : location\nunknown tau : scale\nobserve y as Normal(mu, sd = sqrt(tau^2 + se^2))\nprior mu flat\nprior tau ∝ tau^(%v)\nreport mu\n", list(y), list(se), c),
			func(u float64) float64 {
				w, wy, l := 0.0, 0.0, 0.0
				for i := range y {
					v := math.Exp(2*u) + se[i]*se[i]
					w, wy, l = w+1/v, wy+y[i]/v, l-math.Log(v)/2
				}
				q := 0.0
				for i := range y {
					d := y[i] - wy/w
					q += d * d / (math.Exp(2*u) + se[i]*se[i])
				}
				return l - math.Log(w)/2 - q/2 + (c+1)*u
			}}
	case 5: // negative-binomial size, mean known
		n := r.IntN(3) + 1
		var y []float64
		for range n {
			y = append(y, float64(r.IntN(4)))
		}
		c := pick(r, -3.0, -2, -1, -0.5, 0)
		return oracleModel{
			fmt.Sprintf("given y = %s\nunknown k : shape\nobserve y as negative-Binomial(mean = 2, size = k)\nprior k ∝ k^(%v)\nreport k\n", list(y), c),
			func(u float64) float64 {
				k := math.Exp(u)
				s := (c + 1) * u
				for _, v := range y {
					for i := 0.0; i < v; i++ {
						s += logAddK(u, i)
					}
					s -= v * logAddK(u, 2)
					s -= k * math.Log1p(2*math.Exp(-u))
				}
				return s
			}}
	case 6: // Cauchy sample, flat location
		n := r.IntN(3) + 1
		var y []float64
		for range n {
			y = append(y, float64(r.IntN(3)))
		}
		c := pick(r, -2.0, -1, -0.5, 0)
		return oracleModel{
			fmt.Sprintf("given y = %s\nunknown mu : location\nunknown s : scale\nobserve y as Cauchy(mu, s)\nprior mu flat\nprior s ∝ s^(%v)\nreport mu\n", list(y), c),
			func(u float64) float64 {
				s := math.Exp(u)
				// mu = y_i + s·sinh(v) around each reading, counted where that reading
				// is the nearest.
				total := math.Inf(-1)
				for i := range y {
					seen := false
					for j := range i {
						seen = seen || y[j] == y[i]
					}
					if seen {
						continue
					}
					i := i
					l := logIntegral(func(v float64) float64 {
						d := s * math.Sinh(v)
						f := 0.0
						for j := range y {
							if math.Abs(y[i]+d-y[j]) < math.Abs(d) && y[j] != y[i] {
								return math.Inf(-1)
							}
							z := d / s
							if y[j] != y[i] {
								z = (y[i] - y[j] + d) / s
							}
							f -= math.Log1p(z*z) + u
						}
						return f + u + math.Log(math.Cosh(v))
					}, -300, 300, 6000)
					total = logAdd(total, l)
				}
				return total + (c+1)*u
			}}
	default: // Weibull, scale ∝ 1/scale, power of the shape
		k := r.IntN(3) + 1
		var t, d []float64
		for range k {
			t, d = append(t, float64(r.IntN(3)+1)), append(d, float64(r.IntN(2)))
		}
		c := pick(r, -2.0, -1, 0, 1)
		return oracleModel{
			fmt.Sprintf("given t = %s, d = %s\nunknown k : shape\nunknown s : scale\nobserve t as Weibull(shape = k, scale = s), right-censored where d == 0\nprior k ∝ k^(%v)\nprior s ∝ 1/s\nreport k\n", list(t), list(d), c),
			func(u float64) float64 {
				k := math.Exp(u)
				events, logs, most := 0.0, 0.0, math.Inf(-1)
				for i := range t {
					events += d[i]
					logs += d[i] * math.Log(t[i])
					most = max(most, math.Log(t[i]))
				}
				if events == 0 {
					return 0 // no integral over the scale at all
				}
				sum := 0.0
				for i := range t {
					sum += math.Exp(k * (math.Log(t[i]) - most))
				}
				return events*u + k*(logs-events*most) - events*math.Log(sum) - u + (c+1)*u
			}}
	}
}

func logAddK(u, i float64) float64 { return u + math.Log1p(i*math.Exp(-u)) }

func logAdd(a, b float64) float64 {
	if a < b {
		a, b = b, a
	}
	if math.IsInf(b, -1) {
		return a
	}
	return a + math.Log1p(math.Exp(b-a))
}

// converges judges an end of the line from the slope of the log kernel far out:
// 1 converges, −1 diverges, 0 can't say.
func converges(f func(float64) float64, side float64) int {
	a, b := f(side*120), f(side*240)
	switch {
	case math.IsInf(b, -1) || b < -1e6:
		return 1
	case math.IsNaN(a) || math.IsNaN(b):
		return 0
	}
	slope := (b - a) / 120
	switch {
	case slope < -0.1:
		return 1
	case slope > -0.01:
		return -1
	}
	return 0
}

// TestOracle compares verdicts with the growth of the kernel far out. A
// contradiction is an error; models that are not decided are counted.
func TestOracle(t *testing.T) {
	r := rand.New(rand.NewPCG(1, 2))
	decided, told := 0, 0
	for i := range *oracleRuns {
		m := randomModel(r)
		built := model.Build(context.Background(), source.NewFile("random.bayes", m.text), model.Options{})
		for _, p := range built.Problems {
			t.Fatalf("%s\n%s", m.text, p.Headline)
		}
		res := Decide(context.Background(), built.Declared())
		got, _ := res.Overall()
		up, low := converges(m.log, 1), converges(m.log, -1)
		if got != NotDecided {
			decided++
		} else {
			t.Logf("not decided: %s: %s", strings.ReplaceAll(m.text, "\n", "; "), res.Verdicts[len(res.Verdicts)-1].Claim)
		}
		want := NotDecided
		switch {
		case up < 0 || low < 0:
			want = DoesNotExist
		case up > 0 && low > 0:
			want = Exists
		}
		if want == NotDecided {
			continue
		}
		told++
		if got != NotDecided && got != want {
			t.Errorf("run %d: %s, the oracle says %s\n%s", i, got, want, m.text)
			for _, v := range res.Verdicts {
				t.Logf("  %s: %s", v.Status, v.Claim)
			}
		}
	}
	t.Logf("%d models, %d decided, the oracle could tell %d", *oracleRuns, decided, told)
}
