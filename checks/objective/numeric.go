package objective

import (
	"fmt"
	"math"
	"sync"

	"gonum.org/v1/gonum/mathext"

	sy "wellposed/checks/objective/symbolic"
)

// numericError is the relative error aimed at for an information found by
// quadrature or summation: each is refined until two levels agree to a tenth of
// it. It is an estimate, checked against independent values in the tests.
const numericError = 1e-9

// besselRatio is A(κ) = I₁(κ)/I₀(κ), by its continued fraction (Abramowitz &
// Stegun 1964, 9.1.73 for the modified functions).
var besselRatio = &sy.Function{Name: "bessel-ratio", Eval: func(x []float64) float64 { return ratioI1I0(x[0]) }}

func ratioI1I0(k float64) float64 {
	// A = 1/(2/k + 1/(4/k + 1/(6/k + …))), evaluated backwards.
	n := 40 + int(2*math.Abs(k))
	if n > 200000 {
		n = 200000
	}
	r := 0.0
	for i := n; i >= 1; i-- {
		r = 1 / (2*float64(i)/k + r)
	}
	return r
}

// mostCounts bounds the counts that are summed for one value; beyond it the value
// is undefined rather than slow.
const mostCounts = 1_000_000

// negativeBinomialSize is I(k, k) of one count with mean m and size k: the
// variance of the score, summed over the counts.
var negativeBinomialSize = &sy.Function{Name: "negative-Binomial-size-information", Error: numericError,
	Eval: func(x []float64) float64 {
		m, k := x[0], x[1]
		if !(m > 0) || !(k > 0) {
			return math.NaN()
		}
		centre := mathext.Digamma(k) - math.Log(k/(k+m)) - 1
		lg, _ := math.Lgamma(k)
		spread := math.Sqrt(m + m*m/k)
		if m+12*spread > mostCounts {
			return math.NaN()
		}
		total := 0.0
		for y := 0; y < 2*mostCounts; y++ {
			v := float64(y)
			ly, _ := math.Lgamma(v + k)
			lf, _ := math.Lgamma(v + 1)
			logp := ly - lg - lf + k*math.Log(k/(k+m)) + v*math.Log(m/(k+m))
			s := mathext.Digamma(v+k) - centre - (k+v)/(k+m)
			t := math.Exp(logp) * s * s
			total += t
			if v > m+12*spread && t < 1e-14*total {
				break
			}
		}
		return total
	}}

// sampling is a law whose information is found by expectation of the products
// of its scores.
type sampling struct {
	name   string
	labels []string
	// log is the log density at y, dead the log probability of a value beyond
	// the limit of censoring, nil when there is no censoring.
	log  func(y sy.Expr, args []sy.Expr) sy.Expr
	dead func(limit sy.Expr, args []sy.Expr) sy.Expr
	// discrete sums over 0, 1, …; top is the largest value, −1 for infinite.
	discrete bool
	top      func(args []float64) int
	// ends and frame of the integration: low, high, a central value, a width.
	frame func(args []float64) (low, high, centre, width float64)
	// extra is the number of trailing arguments that are no parameters.
	extra int

	once   sync.Once
	err    error
	logf   *sy.Compiled
	score  []*sy.Compiled
	logS   *sy.Compiled
	scoreS []*sy.Compiled

	mu   sync.Mutex
	last []float64
	info [][]float64

	functions [][]*sy.Function
}

var (
	samplingsMu sync.Mutex
	samplings   = map[string]*sampling{}
)

// prepare differentiates and compiles.
func (q *sampling) prepare() {
	y := &sy.Symbol{Name: "y", Data: true}
	if q.name != "" && !q.discrete {
		if low, _, _, _ := q.frame(q.probe()); low == 0 {
			y.Low = rat(0, 1)
		}
	}
	symbols, args := []*sy.Symbol{y}, []sy.Expr{}
	for _, l := range q.labels {
		s := &sy.Symbol{Name: l, Low: rat(0, 1)}
		if l == "location" || l == "shape-any" || l == "mean-any" {
			s.Low = nil
		}
		symbols, args = append(symbols, s), append(args, sy.Sym(s))
	}
	f := q.log(sy.Sym(y), args)
	if q.logf, q.err = sy.Compile(f, symbols); q.err != nil {
		return
	}
	n := len(q.labels) - q.extra
	for i := range n {
		d, err := sy.Diff(f, symbols[i+1])
		if err != nil {
			q.err = err
			return
		}
		c, err := sy.Compile(d, symbols)
		if err != nil {
			q.err = err
			return
		}
		q.score = append(q.score, c)
	}
	if q.dead == nil {
		return
	}
	s := q.dead(args[len(args)-1], args)
	if q.logS, q.err = sy.Compile(s, symbols); q.err != nil {
		return
	}
	for i := range n {
		d, err := sy.Diff(s, symbols[i+1])
		if err != nil {
			q.err = err
			return
		}
		c, err := sy.Compile(d, symbols)
		if err != nil {
			q.err = err
			return
		}
		q.scoreS = append(q.scoreS, c)
	}
}

// probe are arguments at which the ends of the support can be read.
func (q *sampling) probe() []float64 {
	x := make([]float64, len(q.labels))
	for i := range x {
		x[i] = 1
	}
	return x
}

// at is the information matrix at args.
func (q *sampling) at(args []float64) [][]float64 {
	q.once.Do(q.prepare)
	q.mu.Lock()
	defer q.mu.Unlock()
	if q.last != nil && equalFloats(q.last, args) {
		return q.info
	}
	n := len(q.labels) - q.extra
	m := make([][]float64, n)
	for i := range m {
		m[i] = make([]float64, n)
	}
	if q.err != nil {
		fill(m, math.NaN())
	} else {
		q.expect(args, m)
	}
	q.last, q.info = append([]float64(nil), args...), m
	return m
}

func fill(m [][]float64, v float64) {
	for i := range m {
		for j := range m[i] {
			m[i][j] = v
		}
	}
}

func equalFloats(a, b []float64) bool {
	for i := range a {
		if a[i] != b[i] {
			return false
		}
	}
	return true
}

// expect fills m with E[s sᵀ].
func (q *sampling) expect(args []float64, m [][]float64) {
	n := len(m)
	x := append([]float64{0}, args...)
	s := make([]float64, n)
	add := func(y, weight float64, into [][]float64) float64 {
		x[0] = y
		l := q.logf.Value(x)
		if math.IsNaN(l) || math.IsInf(l, 0) {
			return 0
		}
		p := math.Exp(l) * weight
		if p == 0 {
			return 0
		}
		for i, c := range q.score {
			s[i] = c.Value(x)
			if math.IsNaN(s[i]) || math.IsInf(s[i], 0) {
				return 0
			}
		}
		for i := range n {
			for j := range n {
				into[i][j] += p * s[i] * s[j]
			}
		}
		return p
	}
	if q.discrete {
		mass, top := 0.0, q.top(args)
		for y := 0; y < 2*mostCounts && (top < 0 || y <= top); y++ {
			p := add(float64(y), 1, m)
			mass += p
			if top < 0 && mass > 0.5 && p < 1e-18 {
				break
			}
		}
		return
	}
	low, high, centre, width := q.frame(args)
	if q.dead != nil {
		high = args[len(args)-1]
	}
	integrateInto(m, low, high, centre, width, add)
	if q.dead == nil {
		return
	}
	l := q.logS.Value(x)
	p := math.Exp(l)
	if !(p > 0) {
		return
	}
	for i := range n {
		s[i] = q.scoreS[i].Value(x)
	}
	for i := range n {
		for j := range n {
			m[i][j] += p * s[i] * s[j]
		}
	}
}

// integrateInto is the double-exponential rule (Takahasi & Mori 1974) for all
// entries at once, halved until the sums agree.
func integrateInto(m [][]float64, low, high, centre, width float64, add func(y, weight float64, into [][]float64) float64) {
	n := len(m)
	at := func(t float64) (y, w float64) {
		u, du := math.Pi/2*math.Sinh(t), math.Pi/2*math.Cosh(t)
		switch {
		case math.IsInf(low, -1) && math.IsInf(high, 1):
			return centre + width*math.Sinh(u), width * math.Cosh(u) * du
		case math.IsInf(high, 1):
			e := centre * math.Exp(u)
			return low + e, e * du
		case math.IsInf(low, -1):
			e := width * math.Exp(u)
			return high - e, e * du
		}
		h := (high - low) / 2
		c := math.Cosh(u)
		// Near the ends the distance to the end is kept, not the difference.
		if u < 0 {
			return low + 2*h/(1+math.Exp(-2*u)), h / (c * c) * du
		}
		return high - 2*h/(1+math.Exp(2*u)), h / (c * c) * du
	}
	sum := make([][]float64, n)
	for i := range sum {
		sum[i] = make([]float64, n)
	}
	const reach = 4.5
	step := 0.5
	for k := -int(reach / step); k <= int(reach/step); k++ {
		y, w := at(float64(k) * step)
		add(y, w, sum)
	}
	previous := make([]float64, n)
	for i := range n {
		previous[i] = sum[i][i] * step
	}
	for range 8 {
		for k := -int(reach / step); k < int(reach/step); k++ {
			y, w := at((float64(k) + 0.5) * step)
			add(y, w, sum)
		}
		step /= 2
		settled := true
		for i := range n {
			v := sum[i][i] * step
			if math.Abs(v-previous[i]) > numericError/10*math.Abs(v) {
				settled = false
			}
			previous[i] = v
		}
		if settled {
			break
		}
	}
	for i := range n {
		for j := range n {
			m[i][j] += sum[i][j] * step
		}
	}
}

// register gives the matrix of functions of a sampling law, one for each entry.
func register(q *sampling) *sampling {
	samplingsMu.Lock()
	defer samplingsMu.Unlock()
	if old := samplings[q.name]; old != nil {
		return old
	}
	n := len(q.labels) - q.extra
	q.functions = make([][]*sy.Function, n)
	for i := range n {
		q.functions[i] = make([]*sy.Function, n)
		for j := range n {
			a, b := min(i, j), max(i, j)
			q.functions[i][j] = &sy.Function{
				Name:  fmt.Sprintf("information of %s about %s and %s", q.name, q.labels[a], q.labels[b]),
				Error: numericError,
				Eval:  func(x []float64) float64 { return q.at(x)[a][b] },
			}
		}
	}
	samplings[q.name] = q
	return q
}

// numericLaw is the information by expectation at args.
func numericLaw(name string, args []sy.Expr) *law {
	q := families[name]
	if q == nil {
		return nil
	}
	return lawOf(register(q), args)
}

func lawOf(q *sampling, args []sy.Expr) *law {
	n := len(q.functions)
	m := make([][]sy.Expr, n)
	for i := range m {
		m[i] = make([]sy.Expr, n)
		for j := range m[i] {
			m[i][j] = q.functions[i][j].Apply(args...)
		}
	}
	return &law{args: args[:n], info: m,
		says: fmt.Sprintf("one observation from %s: E[score scoreᵀ] by quadrature or summation, refined until two levels agree to %.0e", q.name, numericError/10)}
}
