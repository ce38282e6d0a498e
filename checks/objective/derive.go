// Package objective derives default priors by rule: from the Fisher information
// of the likelihood as it is written in the model (its sampling plan, design,
// exposures), or from invariance where the support moves with the unknown.
//
// A derived prior commutes with monotone transforms of an unknown, up to the
// Jacobian, for every rule but the maximal-data-information and the constrained
// one; the tests check that on the model's text.
package objective

import (
	"context"
	"errors"
	"fmt"
	"math"
	"strings"

	sy "wellposed/checks/objective/symbolic"
	"wellposed/parser/model"
)

// Derived is a prior that a rule gives.
type Derived struct {
	Rule  *model.RulePrior
	About []*model.Unknown
	// Parameters are the coordinates of LogKernel, in order.
	Parameters []*Parameter
	// Kernel is the density up to a constant; nil when it is numeric only.
	Kernel sy.Expr
	// Expr is the kernel in the model language; nil when it cannot be written
	// there.
	Expr model.Expr
	// LogKernel is the logarithm of the kernel up to a constant; −∞ outside the
	// support, NaN where it is not defined.
	LogKernel func(x []float64) float64
	// Error is the estimated relative error of the informations behind the
	// kernel; 0 stands for rounding. A determinant of nearly collinear rows loses
	// more.
	Error float64
	// Name is the recognised law or the kernel as people write it: "Beta(1/2,
	// 1/2)", "1/sigma", "flat".
	Name string
	// Prior is ready to stand in an analysis; by the rule itself when the
	// kernel cannot be written in the language.
	Prior *model.Prior
	// Steps are the derivation in a few lines, Assumed what had to be assumed
	// about the sampling plan.
	Steps, Assumed []string
	Source         string
}

// errSense asks for the sense of Jeffreys with several unknowns.
var errSense = errors.New("with several unknowns Jeffreys' rule has more than one sense: say jointly or separately")

// Derive derives the prior of a rule about some unknowns. The error says why
// when no prior is derived.
func Derive(ctx context.Context, a *model.Analysis, rule *model.RulePrior, about []*model.Unknown) (*Derived, error) {
	if rule == nil || len(about) == 0 {
		return nil, errors.New("there is nothing to derive a prior for")
	}
	for _, u := range about {
		if u.Kind.Discrete {
			return nil, fmt.Errorf("%s is a whole number: Fisher information is not defined for it", u.Name)
		}
	}
	w := &work{ctx: ctx, s: newSpace(a), rule: rule, about: about, d: &Derived{Rule: rule, About: about}}
	if done, err := w.covariances(); done {
		return w.finish(err)
	}
	var err error
	switch rule.Name {
	case model.Jeffreys:
		if len(about) > 1 {
			return nil, errSense
		}
		err = w.jeffreys()
	case model.JeffreysJointly:
		err = w.jeffreys()
	case model.JeffreysSeparately:
		err = w.separately()
	case model.ReferencePrior:
		err = w.reference()
	case model.MatchingPrior:
		err = w.matching()
	case model.ConstrainedMean:
		err = w.constrained()
	case model.MaximalData:
		err = w.maximalData()
	default:
		return nil, fmt.Errorf("the rule %q is not known", rule.Name)
	}
	return w.finish(err)
}

// work is one derivation.
type work struct {
	ctx   context.Context
	s     *space
	rule  *model.RulePrior
	about []*model.Unknown
	d     *Derived
	// kernel as derived, before it is put in form; log is set instead when it is
	// numeric only.
	kernel sy.Expr
	log    func(x []float64) float64
	// long is set when the kernel is too long to be written out.
	long bool
}

func (w *work) step(format string, args ...any) {
	w.d.Steps = append(w.d.Steps, fmt.Sprintf(format, args...))
}

// of are the free parameters of some unknowns.
func (w *work) of(us []*model.Unknown) []*Parameter {
	var out []*Parameter
	for _, u := range us {
		out = append(out, w.s.free(u)...)
	}
	return out
}

func symbolsOf(ps []*Parameter) []*sy.Symbol {
	out := make([]*sy.Symbol, len(ps))
	for i, p := range ps {
		out[i] = p.Symbol
	}
	return out
}

func names(us []*model.Unknown) string {
	out := make([]string, len(us))
	for i, u := range us {
		out[i] = u.Name
	}
	return strings.Join(out, ", ")
}

// learn takes over what an information says.
func (w *work) learn(in *information) {
	w.d.Steps = append(w.d.Steps, in.says...)
	w.d.Assumed = append(w.d.Assumed, in.assumed...)
}

// jeffreys is sqrt det I over all components of the unknowns.
func (w *work) jeffreys() error {
	ps := w.of(w.about)
	w.d.Source = "Jeffreys (1946), Proc. R. Soc. A 186; Jeffreys (1961), Theory of Probability"
	if done, err := w.simplex(); done {
		return err
	}
	in, err := w.s.information(w.ctx, ps)
	var moves *irregular
	if errors.As(err, &moves) {
		return w.invariant(moves)
	}
	if err != nil {
		return err
	}
	w.learn(in)
	w.domain(in)
	if len(ps) == 1 {
		w.step("I(%s) = %s", ps[0].Symbol.Name, sy.Text(simplified(in.entries[0][0])))
		w.step("π ∝ sqrt(I)")
	} else {
		w.step("π ∝ sqrt(det I) over %s", names(w.about))
	}
	return w.rootDeterminant(in)
}

// simplified is the factored form where that does not grow: a long expansion
// would lose digits to cancellation.
func simplified(e sy.Expr) sy.Expr {
	if f, err := sy.Factored(e); err == nil && sy.Size(f) <= 3*sy.Size(e)+40 {
		return f
	}
	return e
}

// blocks are the connected groups of parameters that share information.
func blocks(m [][]sy.Expr) [][]int {
	seen := make([]bool, len(m))
	var out [][]int
	for i := range m {
		if seen[i] {
			continue
		}
		group := []int{i}
		seen[i] = true
		for k := 0; k < len(group); k++ {
			for j := range m {
				if !seen[j] && !isZero(entry(m, group[k], j)) {
					seen[j] = true
					group = append(group, j)
				}
			}
		}
		out = append(out, group)
	}
	return out
}

// mostSymbolic bounds the block whose determinant is expanded in symbols.
const mostSymbolic = 4

// rootDeterminant sets the kernel sqrt(det I), block by block.
func (w *work) rootDeterminant(in *information) error {
	det, factored, err := symbolicDeterminant(in)
	if errors.Is(err, errSingular) {
		return err
	}
	if err == nil {
		w.kernel = sy.Sqrt(det)
		if factored {
			return nil
		}
	}
	return w.numericDeterminant(in)
}

var errNumericOnly = errors.New("the determinant is taken in floating point")

// symbolicDeterminant is det I; factored is false when some block was only
// expanded, and then it is not identically zero by evaluation.
func symbolicDeterminant(in *information) (det sy.Expr, factored bool, err error) {
	det, factored = sy.One, true
	for _, g := range blocks(in.entries) {
		m := part(in.entries, g)
		if len(g) > mostSymbolic || len(g) > 1 && !in.exact {
			return nil, false, errNumericOnly
		}
		d := expand(m)
		if len(g) == 1 {
			d = simplified(d)
		} else if f, err := sy.Factored(d); err != nil {
			factored = false
		} else if d = f; sy.Size(f) > 400 {
			factored = false
		}
		if isZero(d) || !factored && singularBlock(m) {
			return nil, false, errSingular
		}
		det = sy.Mul(det, d)
	}
	return det, factored, nil
}

// numericDeterminant sets the kernel by Cholesky's decomposition in floating
// point.
func (w *work) numericDeterminant(in *information) error {
	n := len(in.parameters)
	symbols := symbolsOf(in.parameters)
	entries := make([][]*sy.Compiled, n)
	for i := range entries {
		entries[i] = make([]*sy.Compiled, n)
		for j := range i + 1 {
			c, err := sy.Compile(in.entries[i][j], symbols)
			if err != nil {
				return fmt.Errorf("the information depends on what is not given: %w", err)
			}
			entries[i][j] = c
		}
	}
	matrix := func(x []float64) [][]float64 {
		m := make([][]float64, n)
		for i := range m {
			m[i] = make([]float64, n)
			for j := range i + 1 {
				m[i][j] = entries[i][j].Value(x)
			}
		}
		return m
	}
	if everywhereSingular(symbols, matrix) {
		return errSingular
	}
	w.log = func(x []float64) float64 { return logRootDeterminant(matrix(x)) }
	w.step("the determinant is evaluated in floating point")
	return nil
}

// singularBlock is everywhereSingular for a block that may depend on unknowns
// beside its own.
func singularBlock(m [][]sy.Expr) bool {
	seen := map[string]bool{}
	var symbols []*sy.Symbol
	for i := range m {
		for j := range m {
			for _, x := range sy.Symbols(m[i][j]) {
				if !seen[x.Name] {
					seen[x.Name] = true
					symbols = append(symbols, x)
				}
			}
		}
	}
	entries := make([][]*sy.Compiled, len(m))
	for i := range m {
		entries[i] = make([]*sy.Compiled, len(m))
		for j := range m {
			c, err := sy.Compile(m[i][j], symbols)
			if err != nil {
				return true
			}
			entries[i][j] = c
		}
	}
	return everywhereSingular(symbols, func(x []float64) [][]float64 {
		out := make([][]float64, len(m))
		for i := range m {
			out[i] = make([]float64, len(m))
			for j := range m {
				out[i][j] = entries[i][j].Value(x)
			}
		}
		return out
	})
}

// everywhereSingular evaluates the information at a few points inside the
// support, scaled to a unit diagonal; true when it has no full rank at any.
func everywhereSingular(symbols []*sy.Symbol, matrix func(x []float64) [][]float64) bool {
	for _, v := range []float64{0.31, 0.17, 0.43, 0.08, 0.71} {
		x := make([]float64, len(symbols))
		for i, s := range symbols {
			x[i] = inner(s, math.Mod(v+0.37*float64(i), 1))
		}
		m := matrix(x)
		scale := make([]float64, len(m))
		for i := range m {
			scale[i] = math.Sqrt(m[i][i])
		}
		for i := range m {
			for j := range i + 1 {
				m[i][j] /= scale[i] * scale[j]
			}
		}
		if logRootDeterminant(m); smallestPivot(m) > 1e-6 { // the root of 1e-12
			return false
		}
	}
	return true
}

// smallestPivot is the smallest diagonal element that the decomposition left.
func smallestPivot(m [][]float64) float64 {
	least := math.Inf(1)
	for i := range m {
		if !(m[i][i] >= least) {
			least = m[i][i]
		}
	}
	return least
}

// inner is a point inside a support, for a share of the way through it.
func inner(s *sy.Symbol, share float64) float64 {
	switch {
	case s.Low != nil && s.High != nil:
		low, _ := s.Low.Float64()
		high, _ := s.High.Float64()
		return low + share*(high-low)
	case s.Low != nil:
		low, _ := s.Low.Float64()
		return low + 0.2 + 2*share
	case s.High != nil:
		high, _ := s.High.Float64()
		return high - 0.2 - 2*share
	}
	return 2*share - 1
}

// logRootDeterminant is ½ log det of a symmetric matrix given by its lower
// triangle; −∞ when it is not positive definite.
func logRootDeterminant(m [][]float64) float64 {
	total := 0.0
	for i := range m {
		for j := range i + 1 {
			s := m[i][j]
			for k := range j {
				s -= m[i][k] * m[j][k]
			}
			if i == j {
				if math.IsNaN(s) {
					m[i][i] = s
					return s
				}
				if s <= 0 {
					m[i][i] = 0
					return math.Inf(-1)
				}
				m[i][i] = math.Sqrt(s)
				total += math.Log(m[i][i])
			} else {
				m[i][j] = s / m[j][j]
			}
		}
	}
	return total
}

// separately is the product of Jeffreys' rule for each unknown with the others
// held.
func (w *work) separately() error {
	w.d.Source = "Jeffreys (1961), Theory of Probability, section 3.2; Sun & Berger (1998), Biometrika 85 (from memory)"
	kernel := sy.One
	var held []*model.Unknown
	for _, u := range w.about {
		ps := w.s.free(u)
		in, err := w.s.information(w.ctx, ps)
		var moves *irregular
		if errors.As(err, &moves) {
			held = append(held, u)
			continue
		}
		if err != nil {
			return fmt.Errorf("%s: %w", u.Name, err)
		}
		w.learn(in)
		w.domain(in)
		det, _, err := symbolicDeterminant(in)
		if err != nil {
			return fmt.Errorf("%s: %w", u.Name, err)
		}
		k, _ := sy.Kernel(sy.Sqrt(det), symbolsOf(ps))
		own, separate := sy.Own(k, symbolsOf(ps))
		if !separate {
			return fmt.Errorf("the information about %s does not come apart from the other unknowns: %s", u.Name, sy.Text(k))
		}
		w.step("%s with the others held: π ∝ %s", u.Name, sy.Text(own))
		kernel = sy.Mul(kernel, own)
	}
	for _, u := range held {
		k, line, err := w.s.group(w.ctx, u)
		if err != nil {
			return err
		}
		w.step("%s", line)
		kernel = sy.Mul(kernel, k)
	}
	w.kernel = kernel
	return nil
}

// matching is the first-order probability matching prior.
func (w *work) matching() error {
	if len(w.of(w.about)) != 1 {
		return errors.New("first-order matching is unique for one unknown only; with others it leaves a free factor (Tibshirani 1989)")
	}
	if err := w.jeffreys(); err != nil {
		return err
	}
	w.step("for one unknown the prior whose one-sided intervals cover to order 1/n is Jeffreys' alone")
	w.d.Source = "Welch & Peers (1963), J. R. Statist. Soc. B 25"
	return nil
}

// domain notes where an information holds only on a part of the support.
func (w *work) domain(in *information) {
	for _, o := range w.s.a.Observations {
		if name := o.Dist.Spec.Name; name == "generalized-Pareto" || name == "generalized-extreme-value" {
			x, err := w.s.lower(o.Dist.Args["shape"], firstRow(o))
			if err == nil && w.s.watches(x) {
				w.d.Assumed = append(w.d.Assumed, "the information exists for a shape above −1/2 only; the prior is not defined below")
			}
		}
	}
}

func firstRow(o *model.Observation) int {
	if len(o.Rows) > 0 {
		return o.Rows[0]
	}
	return 0
}
