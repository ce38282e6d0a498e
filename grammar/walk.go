package grammar

// Walk calls visit for every expression, argument and distribution of a
// statement or an expression, parents first, in source order. When visit
// returns false, the parts of that node are left out. Nil nodes, as a broken
// statement has them, are passed over.
func Walk(node any, visit func(node any) bool) { walker(visit).walk(node) }

type walker func(node any) bool

func (w walker) walk(node any) {
	switch n := node.(type) {
	case *Matters:
		w.share(n.Share)
	case *Given:
		w.bindings(n.Bindings)
	case *Unknown:
		if n.Kind != nil {
			w.exprs(n.Kind.Size)
		}
		w.interval(n.In)
		w.exprs(n.Limited)
	case *Vary:
		w.dist(n.Dist)
		w.modifiers(n.Mods)
	case *Let:
		w.exprs(n.Value)
	case *Observe:
		w.exprs(n.What, n.Of, n.Prob, n.In, n.Rate)
		w.dist(n.Dist)
		w.modifiers(n.Mods)
	case *Prior:
		w.spec(n.Spec)
	case *Rival:
		for _, s := range n.Specs {
			w.spec(s)
		}
	case *Report:
		w.exprs(n.Value)
		for _, s := range n.Summaries {
			for _, l := range s.Levels {
				w.share(l)
			}
		}
	case *Conclude:
		w.exprs(n.When)
	case *Suppose:
		w.exprs(n.Target)
		w.exprs(n.Values...)
		w.exprs(n.From, n.To)
		w.dist(n.Dist)
	case *Require:
		w.promise(n)
	case *Dist:
		w.dist(n)
	case Expr:
		w.exprs(n)
	}
}

func (w walker) promise(n *Require) {
	switch {
	case n.With != nil:
		w.share(n.With.Least)
	case n.Coverage != nil:
		for _, p := range n.Coverage.Parts {
			w.share(p.Least)
			w.exprs(p.From, p.To)
		}
	case n.Chance != nil:
		w.share(n.Chance.Bound)
		w.bindings(n.Chance.When)
	case n.Agree != nil:
		w.share(n.Agree.Within)
	}
}

func (w walker) spec(s *PriorSpec) {
	if s == nil {
		return
	}
	w.exprs(s.Target)
	w.dist(s.Dist)
	w.modifiers(s.Mods)
	w.exprs(s.Kernel)
	if s.Rule != nil {
		w.exprs(s.Rule.Reference...)
		w.exprs(s.Rule.Constrained)
	}
}

func (w walker) modifiers(mods []*Modifier) {
	for _, m := range mods {
		w.exprs(m.Right, m.Left)
		w.interval(m.Truncated)
		w.exprs(m.Weighted, m.Only)
	}
}

func (w walker) interval(i *Interval) {
	if i != nil {
		w.exprs(i.Low, i.High)
	}
}

func (w walker) share(s *Share) {
	if s != nil {
		w.exprs(s.Value)
	}
}

func (w walker) bindings(bindings []*Binding) {
	for _, b := range bindings {
		w.exprs(b.Value)
	}
}

func (w walker) dist(d *Dist) {
	if d != nil && w(d) {
		w.args(d.Args)
	}
}

func (w walker) args(args []*Arg) {
	for _, a := range args {
		if w(a) {
			w.exprs(a.Weight, a.Value)
			w.dist(a.Dist)
		}
	}
}

func (w walker) exprs(exprs ...Expr) {
	for _, e := range exprs {
		if e == nil || !w(e) {
			continue
		}
		switch e := e.(type) {
		case *Index:
			w.exprs(e.Of)
			w.exprs(e.By...)
		case *Call:
			w.args(e.Args)
		case *Unary:
			w.exprs(e.X)
		case *Binary:
			w.exprs(e.X, e.Y)
		case *Paren:
			w.exprs(e.X)
		case *Tuple:
			w.exprs(e.Items...)
		case *List:
			w.exprs(e.Items...)
		}
	}
}
