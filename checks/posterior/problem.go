package posterior

import (
	"context"
	"math"
	"math/big"
	"slices"
	"sort"

	"wellposed/parser/model"
)

// problem is the density of an analysis over some of its variables.
type problem struct {
	ctx      context.Context
	analysis *model.Analysis
	compiler *compiler
	vars     []variable
	coords   []coordinate
	factors  []factor
	// priorOnly leaves out the data.
	priorOnly bool
	// depth is how far below its top a density counts; 0 for the usual.
	depth float64
	// cost is the number of factors evaluated at a point.
	cost int
}

// assemble compiles an analysis.
func assemble(ctx context.Context, a *model.Analysis, priorOnly bool) *problem {
	p := &problem{ctx: ctx, analysis: a, vars: variablesOf(a.Unknowns), priorOnly: priorOnly}
	p.compiler = newCompiler(p.vars)
	for _, q := range a.Use {
		p.factors = append(p.factors, p.compiler.prior(q)...)
	}
	for _, q := range a.Populations {
		p.factors = append(p.factors, p.compiler.population(q)...)
	}
	if !priorOnly {
		for _, o := range a.Observations {
			if o.Awaited {
				panic(refusal{ErrAwaited})
			}
			list := p.compiler.observation(o)
			if name := o.Dist.Spec.Name; name == "Bernoulli" || name == "Binomial" {
				list = p.logistic(list, o)
			}
			p.factors = append(p.factors, list...)
		}
	}
	p.coords = make([]coordinate, len(p.vars))
	return p
}

// narrowed is the support of a variable cut down by its prior.
func (p *problem) narrowed(v variable) model.Bounds {
	b := v.unknown.Support
	raise := func(x *big.Rat) {
		if x != nil && (b.Low == nil || x.Cmp(b.Low) > 0) {
			b.Low = x
		}
	}
	cut := func(x *big.Rat) {
		if x != nil && (b.High == nil || x.Cmp(b.High) < 0) {
			b.High = x
		}
	}
	exact := func(e model.Expr) *big.Rat {
		if e == nil {
			return nil
		}
		x, err := model.EvalExact(e, 0)
		if err != nil {
			return nil
		}
		return x
	}
	for _, q := range p.analysis.Use {
		ref, ok := q.Target.(*model.UnknownRef)
		if !ok || ref.Unknown != v.unknown || ref.Which == model.Fixed && ref.Component != v.component {
			continue
		}
		if q.Dist != nil {
			switch q.Dist.Spec.Name {
			case "Uniform", "triangular":
				raise(exact(q.Dist.Arg("low")))
				cut(exact(q.Dist.Arg("high")))
			case "Pareto":
				raise(exact(q.Dist.Arg("minimum")))
			case "Beta":
				raise(new(big.Rat))
				cut(one)
			case "half-Normal", "half-Cauchy", "half-Student-t", "Gamma", "inverse-Gamma", "Exponential", "log-Normal", "Weibull", "chi-square":
				raise(new(big.Rat))
			}
		}
		if q.Truncated != nil {
			raise(exact(q.Truncated.Low))
			cut(exact(q.Truncated.High))
		}
	}
	return b
}

// group is the part of the problem that hangs together with some slots.
func (p *problem) group(slots []int) (members []int, factors []factor) {
	if p.priorOnly {
		return p.ancestors(slots)
	}
	parent := make([]int, len(p.vars))
	for i := range parent {
		parent[i] = i
	}
	find := func(i int) int {
		for parent[i] != i {
			parent[i] = parent[parent[i]]
			i = parent[i]
		}
		return i
	}
	join := func(list []int) {
		for _, s := range list {
			if a, b := find(list[0]), find(s); a != b {
				parent[a] = b
			}
		}
	}
	for _, f := range p.factors {
		join(f.slots)
	}
	// Shares of a whole hang together.
	for i := 1; i < len(p.vars); i++ {
		if p.vars[i].unknown == p.vars[i-1].unknown && p.vars[i].unknown.Size > 0 {
			join([]int{i - 1, i})
		}
	}
	wanted := map[int]bool{}
	for _, s := range slots {
		wanted[find(s)] = true
	}
	for i := range p.vars {
		if wanted[find(i)] {
			members = append(members, i)
		}
	}
	for _, f := range p.factors {
		if len(f.slots) > 0 && wanted[find(f.slots[0])] {
			factors = append(factors, f)
		}
	}
	return members, factors
}

// ancestors are the slots and those that their priors refer to. What only hangs
// on them integrates to one.
func (p *problem) ancestors(slots []int) (members []int, factors []factor) {
	needed, used := map[int]bool{}, make([]bool, len(p.factors))
	for _, s := range slots {
		needed[s] = true
	}
	for changed := true; changed; {
		changed = false
		for i, f := range p.factors {
			if used[i] || !slices.ContainsFunc(f.owners, func(s int) bool { return needed[s] }) {
				continue
			}
			used[i], changed = true, true
			for _, s := range f.slots {
				needed[s] = true
			}
		}
	}
	for i := range p.vars {
		if needed[i] {
			members = append(members, i)
		}
	}
	for i, f := range p.factors {
		if used[i] {
			factors = append(factors, f)
		}
	}
	return members, factors
}

// place prepares the coordinates of the members. Every one needs a law.
func (p *problem) place(members []int, factors []factor) {
	has := map[int]bool{}
	for _, f := range factors {
		for _, s := range f.slots {
			has[s] = true
		}
	}
	for _, i := range members {
		v := p.vars[i]
		if v.unknown.Kind.Discrete {
			refuse("%s is a whole number, which is not summed over here", v.unknown.Name)
		}
		if p.analysis.PriorOf(v.unknown) == nil && v.unknown.Population == nil {
			panic(refusal{ErrNoPrior})
		}
		p.coords[i] = coordinateOf(v, i, p.narrowed(v))
	}
}

// free are the members that have a coordinate of their own: the last share of a
// whole follows from the others.
func (p *problem) free(members []int) []int {
	var out []int
	for _, i := range members {
		v := p.vars[i]
		if v.unknown.Kind.Name == "proportions" && v.component == v.unknown.Components()-1 {
			continue
		}
		out = append(out, i)
	}
	return out
}

// density sums the factors.
func density(factors []factor) fn {
	return func(s *state) float64 {
		t := 0.0
		for i := range factors {
			v := factors[i].log(s)
			if math.IsInf(v, -1) || v != v {
				return -inf
			}
			t += v
		}
		return t
	}
}

// slotsOf are the slots that an expression uses.
func (p *problem) slotsOf(e model.Expr) []int {
	f := p.compiler.touching(func() fn {
		p.compileAny(e)
		return nil
	})
	sort.Ints(f.slots)
	return f.slots
}

// compileAny touches everything in an expression or a condition.
func (p *problem) compileAny(e model.Expr) {
	model.Walk(e, func(x model.Expr) {
		r, ok := x.(*model.UnknownRef)
		if !ok {
			return
		}
		if r.Which == model.ByRow {
			refuse("%s differs between rows, so it is no single quantity", model.Text(e))
		}
		for _, k := range p.compiler.components(r, 0) {
			p.compiler.component(r.Unknown, k)
		}
	})
}
