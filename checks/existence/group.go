package existence

import (
	"math/big"
	"sort"
	"strconv"
	"strings"

	"wellposed/checks/existence/kernel"
	"wellposed/checks/existence/order"
	"wellposed/parser/model"
)

// variable is one component of an unknown.
type variable = kernel.Variable

// rowFactor is one row of an observation, or several that read the same.
type rowFactor struct {
	obs   *model.Observation
	row   int
	times int64
}

// populationFactor is the population law of one component.
type populationFactor struct {
	pop            *model.Population
	component, row int
}

// priorFactor is a prior on one component, or a joint prior (component 0).
type priorFactor struct {
	prior     *model.Prior
	component int
}

// group is a connected component of the factor graph: its posterior stands
// alone, and the whole posterior exists exactly when that of every group does.
type group struct {
	analysis *model.Analysis
	env      *kernel.Env // binds nothing; for finding components
	vars     []variable
	rows     []rowFactor
	pops     []populationFactor
	priors   []priorFactor
	// unready names an observed value that is not there yet, or an unknown
	// without a prior.
	unready string
}

// split finds the groups of an analysis, in the order of declaration.
func split(a *model.Analysis) []*group {
	s := &splitter{a: a, id: map[variable]int{}, env: kernel.NewEnv(func(variable) order.Value { return order.Number(1) })}
	for _, u := range a.Unknowns {
		for c := range max(1, u.Components()) {
			if c == u.Relative && !u.Scalar() {
				continue
			}
			s.of(variable{Unknown: u, Component: c})
		}
		if u.Size > 0 {
			// The components of a vector hang together.
			for c := 1; c < u.Components(); c++ {
				s.join(s.of(variable{Unknown: u, Component: 0}), s.of(variable{Unknown: u, Component: c}))
			}
		}
	}
	var all []func(g map[int]*group)
	for _, o := range a.Observations {
		all = append(all, s.observation(o)...)
	}
	for _, p := range a.Populations {
		all = append(all, s.population(p)...)
	}
	for _, p := range a.Use {
		all = append(all, s.prior(p)...)
	}
	groups := map[int]*group{}
	var ordered []*group
	for i, v := range s.vars {
		root := s.find(i)
		g := groups[root]
		if g == nil {
			g = &group{analysis: a, env: s.env}
			groups[root] = g
			ordered = append(ordered, g)
		}
		g.vars = append(g.vars, v)
		if v.Unknown.Population == nil && a.PriorOf(v.Unknown) == nil && v.Unknown.Kind != nil {
			g.unready = v.Unknown.Name + " has no prior"
		}
	}
	for _, f := range all {
		f(groups)
	}
	return ordered
}

type splitter struct {
	a      *model.Analysis
	env    *kernel.Env
	vars   []variable
	parent []int
	id     map[variable]int
}

func (s *splitter) of(v variable) int {
	i, ok := s.id[v]
	if !ok {
		i = len(s.vars)
		s.id[v] = i
		s.vars = append(s.vars, v)
		s.parent = append(s.parent, i)
	}
	return i
}

func (s *splitter) find(i int) int {
	for s.parent[i] != i {
		s.parent[i] = s.parent[s.parent[i]]
		i = s.parent[i]
	}
	return i
}

// join puts two variables into one group; the earlier one stays the root.
func (s *splitter) join(i, j int) {
	i, j = s.find(i), s.find(j)
	if i < j {
		s.parent[j] = i
	} else {
		s.parent[i] = j
	}
}

func (s *splitter) joinAll(vs []variable) int {
	for _, v := range vs[1:] {
		s.join(s.of(vs[0]), s.of(v))
	}
	return s.of(vs[0])
}

func (s *splitter) observation(o *model.Observation) []func(map[int]*group) {
	exprs := observationExprs(o)
	byRow := false
	for _, x := range exprs {
		walk(x, func(x model.Expr) {
			if r, ok := x.(*model.UnknownRef); ok && r.Which == model.ByRow {
				byRow = true
			}
		})
	}
	rows := o.Rows
	if len(rows) == 0 && o.Table == nil {
		rows = []int{0}
	}
	var out []func(map[int]*group)
	add := func(first int, rows []rowFactor) {
		out = append(out, func(groups map[int]*group) {
			g := groups[s.find(first)]
			if o.Awaited {
				g.unready = "the data are not there yet"
				return
			}
			g.rows = append(g.rows, rows...)
		})
	}
	if !byRow {
		vs := s.variables(exprs, 0)
		if len(vs) == 0 {
			return nil
		}
		first := s.joinAll(vs)
		all := make([]rowFactor, len(rows))
		for i, r := range rows {
			all[i] = rowFactor{o, r, 1}
		}
		add(first, all)
		return out
	}
	for _, r := range rows {
		vs := s.variables(exprs, r)
		if len(vs) > 0 {
			add(s.joinAll(vs), []rowFactor{{o, r, 1}})
		}
	}
	return out
}

func (s *splitter) population(p *model.Population) []func(map[int]*group) {
	var out []func(map[int]*group)
	u := p.Unknown
	first := s.firstRows(u)
	for c := range u.Components() {
		row := 0
		if c < len(first) {
			row = first[c]
		}
		vs := append([]variable{{Unknown: u, Component: c}}, s.variables(distExprs(p.Dist), row)...)
		i := s.joinAll(vs)
		f := populationFactor{p, c, row}
		out = append(out, func(groups map[int]*group) {
			g := groups[s.find(i)]
			g.pops = append(g.pops, f)
		})
	}
	return out
}

// firstRows finds the first row of each component of a varying effect.
func (s *splitter) firstRows(u *model.Unknown) []int {
	if len(u.Per) == 0 || len(u.Per[0].Texts) == 0 {
		return nil
	}
	first := make([]int, u.Components())
	seen := make([]bool, u.Components())
	if u.Either {
		return first
	}
	for r := range u.Per[0].Texts {
		c := -1
		if order.Try(func() { c = s.env.ComponentOf(u, u.Per, r) }) == nil && c >= 0 && !seen[c] {
			first[c], seen[c] = r, true
		}
	}
	return first
}

func (s *splitter) prior(p *model.Prior) []func(map[int]*group) {
	var out []func(map[int]*group)
	add := func(i int, f priorFactor) {
		out = append(out, func(groups map[int]*group) {
			g := groups[s.find(i)]
			g.priors = append(g.priors, f)
		})
	}
	exprs := append(distExprs(p.Dist), p.Kernel)
	if p.Form == model.ByRule && len(p.About) > 1 {
		exprs = append(exprs, p.Target)
	}
	if len(p.About) == 1 && !p.About[0].Scalar() && p.About[0].Size == 0 {
		u := p.About[0]
		for c := range u.Components() {
			if c == u.Relative {
				continue
			}
			v := variable{Unknown: u, Component: c}
			vs := []variable{v}
			for _, w := range s.variables(exprs, 0) {
				if w.Unknown != u {
					vs = append(vs, w)
				}
			}
			if joint := p.Form == model.ByRule || p.Form == model.ByDist && p.Dist.Spec.On == "vectors"; joint {
				vs = append(vs, s.whole(u)...)
			}
			add(s.joinAll(vs), priorFactor{p, c})
		}
		return out
	}
	var vs []variable
	for _, u := range p.About {
		vs = append(vs, s.whole(u)...)
	}
	vs = append(vs, s.variables(exprs, 0)...)
	if len(vs) == 0 {
		return nil
	}
	if p.Form == model.ByFlat && p.Joint {
		// Flat on a tuple is flat on each: nothing joins them.
		for _, v := range vs {
			one := *p
			one.About, one.Joint = []*model.Unknown{v.Unknown}, false
			one.Target = &model.UnknownRef{Span: p.TargetSpan, Unknown: v.Unknown, Which: model.Fixed, Component: v.Component}
			add(s.of(v), priorFactor{&one, v.Component})
		}
		return out
	}
	if parts := separate(p); parts != nil {
		for _, one := range parts {
			add(s.of(variable{Unknown: one.About[0]}), priorFactor{one, 0})
		}
		return out
	}
	add(s.joinAll(vs), priorFactor{p, 0})
	return out
}

// separate writes a joint kernel that is a product of factors in one unknown
// each, such as 1/(k·s), as one prior for each; nil when it isn't one.
func separate(p *model.Prior) []*model.Prior {
	if p.Form != model.ByKernel || len(p.About) < 2 || !isVectorOfRefs(p.Target) {
		return nil
	}
	for _, u := range p.About {
		if !u.Scalar() {
			return nil
		}
	}
	one := &model.Number{Value: big.NewRat(1, 1)}
	kernels := map[*model.Unknown]model.Expr{}
	for _, u := range p.About {
		kernels[u] = one
	}
	var visit func(x model.Expr, wrap func(model.Expr) model.Expr) bool
	visit = func(x model.Expr, wrap func(model.Expr) model.Expr) bool {
		x = unlet(x)
		us := unknownsIn(x)
		if len(us) == 0 {
			return true // a constant
		}
		if len(us) == 1 {
			for u := range us {
				old, ok := kernels[u]
				if !ok {
					return false
				}
				kernels[u] = &model.Op{Op: "*", Args: []model.Expr{old, wrap(x)}}
			}
			return true
		}
		o, ok := x.(*model.Op)
		if !ok || len(o.Args) != 2 {
			return false
		}
		switch o.Op {
		case "*":
			return visit(o.Args[0], wrap) && visit(o.Args[1], wrap)
		case "/":
			inverse := func(y model.Expr) model.Expr {
				return wrap(&model.Op{Op: "/", Args: []model.Expr{one, y}})
			}
			return visit(o.Args[0], wrap) && visit(o.Args[1], inverse)
		case "^":
			if mentions(o.Args[1]) {
				return false
			}
			return visit(o.Args[0], func(y model.Expr) model.Expr {
				return wrap(&model.Op{Op: "^", Args: []model.Expr{y, o.Args[1]}})
			})
		}
		return false
	}
	if !visit(p.Kernel, func(x model.Expr) model.Expr { return x }) {
		return nil
	}
	var out []*model.Prior
	for _, u := range p.About {
		q := *p
		q.About, q.Joint, q.Kernel = []*model.Unknown{u}, false, kernels[u]
		q.Target = &model.UnknownRef{Span: p.TargetSpan, Unknown: u, Which: model.Fixed}
		out = append(out, &q)
	}
	return out
}

func (s *splitter) whole(u *model.Unknown) []variable {
	var vs []variable
	for c := range max(1, u.Components()) {
		if c == u.Relative && !u.Scalar() {
			continue
		}
		vs = append(vs, variable{Unknown: u, Component: c})
	}
	return vs
}

// variables lists what expressions mention at a row.
func (s *splitter) variables(exprs []model.Expr, row int) []variable {
	var vs []variable
	seen := map[variable]bool{}
	add := func(v variable) {
		if !seen[v] && !(v.Component == v.Unknown.Relative && !v.Unknown.Scalar()) {
			seen[v] = true
			vs = append(vs, v)
		}
	}
	for _, x := range exprs {
		walk(x, func(x model.Expr) {
			r, ok := x.(*model.UnknownRef)
			if !ok {
				return
			}
			switch r.Which {
			case model.Fixed:
				add(variable{Unknown: r.Unknown, Component: r.Component})
			case model.ByRow:
				c := -1
				if order.Try(func() { c = s.env.ComponentOf(r.Unknown, r.By, row) }) == nil {
					add(variable{Unknown: r.Unknown, Component: c})
					return
				}
				fallthrough
			default:
				for _, v := range s.whole(r.Unknown) {
					add(v)
				}
			}
		})
	}
	return vs
}

// walk visits an expression and what it is made of.
func walk(x model.Expr, visit func(model.Expr)) {
	if x == nil {
		return
	}
	visit(x)
	switch x := x.(type) {
	case *model.Op:
		for _, a := range x.Args {
			walk(a, visit)
		}
	case *model.Call:
		for _, a := range x.Args {
			walk(a, visit)
		}
	case *model.Vector:
		for _, a := range x.Items {
			walk(a, visit)
		}
	case *model.LetRef:
		walk(x.Let.Value, visit)
	}
}

func distExprs(d *model.Dist) []model.Expr {
	if d == nil {
		return nil
	}
	labels := make([]string, 0, len(d.Args))
	for l := range d.Args {
		labels = append(labels, l)
	}
	sort.Strings(labels)
	var out []model.Expr
	for _, l := range labels {
		out = append(out, d.Args[l])
	}
	for _, p := range d.Parts {
		out = append(append(out, p.Weight), distExprs(p.Dist)...)
	}
	return out
}

func observationExprs(o *model.Observation) []model.Expr {
	out := append([]model.Expr(nil), o.What...)
	out = append(out, o.Low, o.High, o.N, o.Mean, o.SD, o.Right, o.Left, o.Weight)
	if o.Truncated != nil {
		out = append(out, o.Truncated.Low, o.Truncated.High)
	}
	out = append(out, distExprs(o.Dist)...)
	kept := out[:0]
	for _, x := range out {
		if x != nil {
			kept = append(kept, x)
		}
	}
	return kept
}

// merged returns the rows with those that read the same joined. It returns nil
// when more than limit different rows remain.
func (g *group) merged(limit int) []rowFactor {
	index := map[string]int{}
	columns := map[*model.Observation][]*model.Column{}
	var out []rowFactor
	for _, f := range g.rows {
		cols, ok := columns[f.obs]
		if !ok {
			previous := false
			for _, x := range observationExprs(f.obs) {
				walk(x, func(x model.Expr) {
					switch x := x.(type) {
					case *model.ColumnRef:
						cols = append(cols, x.Column)
					case *model.UnknownRef:
						cols = append(cols, x.By...)
						if len(x.Unknown.For) > 0 {
							cols = append(cols, x.Unknown.For...)
						}
					case *model.Call:
						previous = previous || x.Func == "previous"
					}
				})
			}
			if previous {
				cols = nil
			} else if cols == nil {
				cols = []*model.Column{}
			}
			columns[f.obs] = cols
		}
		if cols != nil {
			var b strings.Builder
			b.WriteString(f.obs.Dist.Spec.Name)
			b.WriteString(strconv.Itoa(obsIndex(g.analysis, f.obs)))
			for _, c := range cols {
				b.WriteByte(0)
				b.WriteString(c.Texts[f.row])
			}
			if i, ok := index[b.String()]; ok {
				out[i].times += f.times
				continue
			}
			index[b.String()] = len(out)
		}
		out = append(out, f)
		if len(out) > limit {
			return nil
		}
	}
	return out
}

func obsIndex(a *model.Analysis, o *model.Observation) int {
	for i, p := range a.Observations {
		if p == o {
			return i
		}
	}
	return -1
}

// support is the interval on which a variable lives, with the truncation of its
// prior.
func (g *group) support(v variable) (lo, hi *big.Rat) {
	lo, hi = v.Unknown.Support.Low, v.Unknown.Support.High
	narrow := func(r *model.Range) {
		if r == nil {
			return
		}
		if l := kernel.Constant(r.Low, 0); l != nil && (lo == nil || l.Cmp(lo) > 0) {
			lo = l
		}
		if h := kernel.Constant(r.High, 0); h != nil && (hi == nil || h.Cmp(hi) < 0) {
			hi = h
		}
	}
	for _, p := range g.priors {
		if _, plain := p.prior.Target.(*model.UnknownRef); plain && p.prior.About[0] == v.Unknown {
			narrow(p.prior.Truncated)
		}
	}
	if p := v.Unknown.Population; p != nil {
		narrow(p.Truncated)
	}
	return lo, hi
}
