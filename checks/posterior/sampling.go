package posterior

import (
	"fmt"
	"math"
	"math/rand/v2"
	"sort"

	"wellposed/parser/diag"
	"wellposed/parser/model"
)

// Seed of all sampling; most and least draws of one importance sample.
const (
	seed        = 1
	mostDraws   = 20_000
	fewestDraws = 2_000
)

// sample is a weighted sample of a quantity.
type sample struct {
	value, weight []float64 // sorted by value; weights sum to 1
	effective     float64
}

// bySampling draws from a Student-t law with 5 degrees of freedom around the
// mode, with the curvature there, and weighs the draws (importance sampling,
// Geweke 1989).
func (p *problem) bySampling(order []int, logf fn, e model.Expr) (*quantity, error) {
	d := len(order)
	if d > 60 {
		return nil, reach("%d unknowns hang together without a structure that reduces them", d)
	}
	s := newState(len(p.vars))
	target := func(u []float64) float64 {
		t := 0.0
		for k, i := range order {
			t += p.coords[i].set(s, u[k])
		}
		v := logf(s) + t
		if v != v {
			return -inf
		}
		return v
	}
	n := p.nest(order, logf) // centres and scales
	if n.err != nil {
		return nil, n.err
	}
	u := make([]float64, d)
	for k, i := range order {
		if len(n.hints[k]) > 0 && p.coords[i].kind != wholeLine {
			u[k] = n.hints[k][0].Mode
		}
	}
	chol, ok := ascend(target, u)
	if !ok {
		return nil, reach("no mode with a curvature was found among %d unknowns", d)
	}
	g := p.compiler.compile(e, 0)
	draws := min(mostDraws, max(fewestDraws, work/(p.cost+4)))
	random := rand.New(rand.NewPCG(seed, seed))
	const nu = 5.0
	values, logs := make([]float64, 0, draws), make([]float64, 0, draws)
	z, v := make([]float64, d), make([]float64, d)
	top := -inf
	for k := range draws {
		if k&255 == 0 && p.ctx.Err() != nil {
			return nil, p.ctx.Err()
		}
		chi := 0.0
		for range int(nu) {
			x := random.NormFloat64()
			chi += x * x
		}
		scale, norm := math.Sqrt(nu/chi), 0.0
		for i := range z {
			z[i] = random.NormFloat64() * scale
			norm += z[i] * z[i]
		}
		for i := range v {
			v[i] = u[i]
			for j := 0; j <= i; j++ {
				v[i] += chol[i*d+j] * z[j]
			}
		}
		l := target(v) + (nu+float64(d))/2*math.Log1p(norm/nu)
		values, logs = append(values, g.value(s)), append(logs, l)
		top = math.Max(top, l)
	}
	if math.IsInf(top, 0) {
		return nil, reach("sampling met no mass")
	}
	out := &sample{}
	index := make([]int, draws)
	total, squares := 0.0, 0.0
	for i := range index {
		index[i] = i
		w := math.Exp(logs[i] - top)
		logs[i] = w
		total += w
		squares += w * w
	}
	out.effective = total * total / squares
	if out.effective < 400 {
		return nil, reach("importance sampling over %d unknowns is worth only %.0f draws", d, out.effective)
	}
	sort.SliceStable(index, func(a, b int) bool { return values[index[a]] < values[index[b]] })
	for _, i := range index {
		out.value, out.weight = append(out.value, values[i]), append(out.weight, logs[i]/total)
	}
	method := fmt.Sprintf("importance sampling, seed %d, %d draws worth %.0f", seed, draws, out.effective)
	return &quantity{how: diag.Indicated, method: method, sample: out}, nil
}

// ascend climbs by damped Newton steps with numerical derivatives, and returns
// the lower factor of the inverse curvature at the top.
func ascend(f func([]float64) float64, u []float64) ([]float64, bool) {
	d := len(u)
	hess, grad := make([]float64, d*d), make([]float64, d)
	at := f(u)
	h := 1e-3
	for range 200 {
		for i := range d {
			u[i] += h
			a := f(u)
			u[i] -= 2 * h
			b := f(u)
			u[i] += h
			grad[i] = (a - b) / (2 * h)
			hess[i*d+i] = -(a - 2*at + b) / (h * h)
		}
		for i := range d {
			for j := range i {
				u[i] += h
				u[j] += h
				a := f(u)
				u[j] -= 2 * h
				b := f(u)
				u[i] -= 2 * h
				c := f(u)
				u[j] += 2 * h
				e := f(u)
				u[i] += h
				u[j] -= h
				hess[i*d+j] = -(a - b + c - e) / (4 * h * h)
				hess[j*d+i] = hess[i*d+j]
			}
		}
		l, step := factorise(hess, grad, d)
		gain := 0.0
		for i := range step {
			gain += step[i] * grad[i]
		}
		if gain < 1e-6 {
			return invertFactor(l, d), !math.IsInf(at, 0)
		}
		best := append([]float64(nil), u...)
		improved := false
		for k := 1.0; k > 1e-6; k /= 2 {
			for i := range u {
				u[i] = best[i] + k*step[i]
			}
			if v := f(u); v > at {
				at, improved = v, true
				break
			}
		}
		if !improved {
			copy(u, best)
			return invertFactor(l, d), gain < 0.01
		}
	}
	return nil, false
}

// factorise is the Cholesky factor of a matrix made positive by raising its
// diagonal, and the solution for a right side.
func factorise(m, b []float64, d int) (l, x []float64) {
	for raise := 0.0; ; raise = math.Max(2*raise, 1e-6) {
		l = make([]float64, d*d)
		ok := true
		for i := 0; i < d && ok; i++ {
			for j := 0; j <= i; j++ {
				t := m[i*d+j]
				if i == j {
					t += raise
				}
				for k := range j {
					t -= l[i*d+k] * l[j*d+k]
				}
				if i == j {
					if !(t > 1e-9) {
						ok = raise > 1e12
						t = 1e-9
						if !ok {
							break
						}
					}
					l[i*d+i] = math.Sqrt(t)
				} else {
					l[i*d+j] = t / l[j*d+j]
				}
			}
		}
		if ok {
			break
		}
	}
	x = append([]float64(nil), b...)
	for i := range d {
		for k := range i {
			x[i] -= l[i*d+k] * x[k]
		}
		x[i] /= l[i*d+i]
	}
	for i := d - 1; i >= 0; i-- {
		for k := i + 1; k < d; k++ {
			x[i] -= l[k*d+i] * x[k]
		}
		x[i] /= l[i*d+i]
	}
	return l, x
}

// invertFactor is the lower factor of (L Lᵀ)⁻¹.
func invertFactor(l []float64, d int) []float64 {
	inv := make([]float64, d*d) // the inverse of L
	for j := range d {
		for i := j; i < d; i++ {
			t := 0.0
			if i == j {
				t = 1
			}
			for k := j; k < i; k++ {
				t -= l[i*d+k] * inv[k*d+j]
			}
			inv[i*d+j] = t / l[i*d+i]
		}
	}
	cov := make([]float64, d*d)
	for i := range d {
		for j := range d {
			for k := max(i, j); k < d; k++ {
				cov[i*d+j] += inv[k*d+i] * inv[k*d+j]
			}
		}
	}
	out, _ := factorise(cov, make([]float64, d), d)
	return out
}

func (s *sample) se(p float64) float64 {
	return math.Sqrt(math.Max(p*(1-p), 0.25/s.effective) / s.effective)
}

func (s *sample) below(t float64) (lower, upper, bound float64) {
	i := sort.Search(len(s.value), func(i int) bool { return s.value[i] > t })
	for _, w := range s.weight[:i] {
		lower += w
	}
	return lower, 1 - lower, 3 * s.se(lower)
}

// quantile and three standard errors of it, by the order statistics.
func (s *sample) quantile(p float64) (value, bound float64) {
	at := func(p float64) float64 {
		sum := 0.0
		for i, w := range s.weight {
			if sum += w; sum >= p {
				return s.value[i]
			}
		}
		return s.value[len(s.value)-1]
	}
	d := 3 * s.se(p)
	value = at(p)
	return value, math.Max(at(math.Min(1, p+d))-value, value-at(math.Max(0, p-d)))
}

func (s *sample) moments() (mean, meanBound, sd, sdBound float64) {
	for i, v := range s.value {
		mean += s.weight[i] * v
	}
	fourth := 0.0
	for i, v := range s.value {
		d := (v - mean) * (v - mean)
		sd += s.weight[i] * d
		fourth += s.weight[i] * d * d
	}
	spread := math.Sqrt(math.Max(0, fourth-sd*sd) / s.effective)
	sd = math.Sqrt(sd)
	return mean, 3 * sd / math.Sqrt(s.effective), sd, 3 * spread / (2 * sd)
}
