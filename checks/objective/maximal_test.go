package objective

import (
	"math"
	"testing"

	sy "wellposed/checks/objective/symbolic"
	"wellposed/grammar"
	"wellposed/parser/model"
)

// TestNegentropiesAgainstExpectations compares the change of E[log density]
// between two arguments with quadrature or summation over the written density.
func TestNegentropiesAgainstExpectations(t *testing.T) {
	for _, c := range []struct {
		dist string
		form int
		a, b []float64
		logf func(y float64, x []float64) float64
		low  float64 // 0 for positive laws
	}{
		{"Bernoulli", 0, []float64{0.3}, []float64{0.9}, nil, 0},
		{"geometric", 0, []float64{0.3}, []float64{0.8}, nil, 0},
		{"Normal", 0, []float64{1, 2}, []float64{0, 0.5}, nil, math.Inf(-1)},
		{"logistic", 0, []float64{1, 2}, []float64{0, 0.5}, nil, math.Inf(-1)},
		{"Cauchy", 0, []float64{1, 2}, []float64{0, 0.5}, nil, math.Inf(-1)},
		{"Gumbel", 0, []float64{1, 2}, []float64{0, 0.5}, nil, math.Inf(-1)},
		{"log-Normal", 0, []float64{1, 2}, []float64{0, 0.5}, nil, 0},
		{"Exponential", 0, []float64{2}, []float64{0.5}, nil, 0},
		{"Gamma", 0, []float64{2, 3}, []float64{1.5, 0.5}, nil, 0},
		{"Weibull", 0, []float64{2, 3}, []float64{1.5, 0.5}, nil, 0},
		{"Laplace", 0, []float64{1, 2}, []float64{0, 0.5}, func(y float64, x []float64) float64 {
			return -math.Log(2*x[1]) - math.Abs(y-x[0])/x[1]
		}, math.Inf(-1)},
		{"half-Normal", 0, []float64{2}, []float64{0.5}, func(y float64, x []float64) float64 {
			return math.Log(2/math.Sqrt(2*math.Pi)/x[0]) - y*y/(2*x[0]*x[0])
		}, 0},
		{"half-Cauchy", 0, []float64{2}, []float64{0.5}, func(y float64, x []float64) float64 {
			return math.Log(2/math.Pi/x[0]) - math.Log1p(y*y/(x[0]*x[0]))
		}, 0},
		{"generalized-Pareto", 0, []float64{2, 0.3}, []float64{0.5, 1.2}, func(y float64, x []float64) float64 {
			return -math.Log(x[0]) - (1/x[1]+1)*math.Log1p(x[1]*y/x[0])
		}, 0},
		{"generalized-extreme-value", 0, []float64{0, 2, 0.3}, []float64{1, 0.5, 0.8}, nil, 0},
		{"Pareto", 0, []float64{2, 3}, []float64{0.5, 1.5}, nil, 0},
		{"Uniform", 0, []float64{0, 2}, []float64{1, 1.5}, nil, 0},
	} {
		spec := grammar.FindDistribution(c.dist)
		d := &model.Dist{Spec: spec, Form: c.form, Args: map[string]model.Expr{}}
		m := &model.Model{}
		for _, p := range spec.Forms[c.form] {
			if p.Optional {
				continue
			}
			if p.Label == "first" {
				d.Args[p.Label] = number(rat(0, 1))
				continue
			}
			u := unknownOf(p.Label, "real")
			m.Unknowns = append(m.Unknowns, u)
			d.Args[p.Label] = &model.UnknownRef{Unknown: u}
		}
		s := newSpace(m.Declared())
		y := &sy.Symbol{Name: "y"}
		symbols := []*sy.Symbol{y}
		for _, u := range m.Unknowns {
			symbols = append(symbols, s.parameters[u][0].Symbol)
		}
		r := &reader{s: s, d: d}
		formula, err := sy.Compile(negentropies[c.dist](r), symbols)
		if err != nil || r.err != nil {
			t.Fatal(c.dist, err, r.err)
		}
		logf, discrete := c.logf, false
		if h, err := s.shapeOf(d, 0, sy.Sym(y)); err == nil && logf == nil {
			f, err := sy.Compile(h.log, symbols)
			if err != nil {
				t.Fatal(err)
			}
			logf = func(y float64, x []float64) float64 { return f.Value(append([]float64{y}, x...)) }
			discrete = h.discrete
		}
		mean := func(x []float64) float64 {
			switch c.dist {
			case "Pareto": // y = minimum / u^(1/shape)
				return midpoint(func(u float64) float64 { return math.Log(x[1]/x[0]) + (x[1]+1)/x[1]*math.Log(u) })
			case "Uniform":
				return -math.Log(x[1] - x[0])
			case "generalized-extreme-value": // with w = −log F
				return midpoint(func(u float64) float64 { w := -math.Log(u); return -math.Log(x[1]) + (1+x[2])*math.Log(w) - w })
			}
			if discrete {
				total := 0.0
				for k := 0.0; k < 400; k++ {
					if c.dist == "Bernoulli" && k > 1 {
						break
					}
					l := logf(k, x)
					total += math.Exp(l) * l
				}
				return total
			}
			sum := [][]float64{{0, 0}, {0, 0}}
			integrateInto(sum, c.low, math.Inf(1), 1, 1, func(y, w float64, into [][]float64) float64 {
				l := logf(y, x)
				p := math.Exp(l) * w
				if p == 0 || math.IsNaN(p) || math.IsInf(p, 0) {
					return 0
				}
				into[0][0] += p
				into[1][1] += p * l
				return p
			})
			if math.Abs(sum[0][0]-1) > 1e-8 && c.dist != "Laplace" {
				t.Errorf("%s: the density adds up to %v", c.dist, sum[0][0])
			}
			return sum[1][1]
		}
		got := formula.Value(append([]float64{0}, c.a...)) - formula.Value(append([]float64{0}, c.b...))
		want := mean(c.a) - mean(c.b)
		tolerance := 1e-8
		if c.dist == "Laplace" {
			tolerance = 1e-4 // a kink in the middle
		}
		if c.dist == "Pareto" || c.dist == "generalized-extreme-value" {
			tolerance = 1e-4 // the midpoint rule has a logarithm at an end
		}
		if !(math.Abs(got-want) <= tolerance) {
			t.Errorf("%s: E log f changes by %v, want %v", c.dist, got, want)
		}
	}
}

// midpoint is the mean over (0, 1).
func midpoint(f func(u float64) float64) float64 {
	total := 0.0
	const n = 200000
	for i := range n {
		total += f((float64(i) + 0.5) / n)
	}
	return total / n
}
