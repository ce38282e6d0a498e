package existence

import (
	"math/big"

	"wellposed/checks/existence/kernel"
	"wellposed/parser/model"
)

// product is one term of a linear predictor: scale · columns · others · ref.
// A nil ref is a term without unknowns.
type product struct {
	scale   *big.Rat
	columns []*model.Column
	others  []model.Expr
	ref     *model.UnknownRef
	// component is fixed for a reference that doesn't depend on the row, else
	// −1.
	component int
}

// linearForm is a sum of products, valid at every row.
type linearForm []product

// linearize writes an expression as a linear form in the unknowns that `in`
// accepts; ok is false when it isn't one.
func (g *group) linearize(x model.Expr, in func(*model.Unknown) bool) (linearForm, bool) {
	l := linearizer{in: in}
	l.add(x, product{scale: big.NewRat(1, 1), component: -1})
	return l.out, !l.failed
}

type linearizer struct {
	in     func(*model.Unknown) bool
	out    linearForm
	failed bool
}

func mentions(x model.Expr) bool {
	found := false
	walk(x, func(x model.Expr) {
		if _, ok := x.(*model.UnknownRef); ok {
			found = true
		}
		if c, ok := x.(*model.Call); ok && c.Func == "previous" {
			found = found || mentions(c.Args[0])
		}
	})
	return found
}

func (p product) times(r *big.Rat) product {
	p.scale = new(big.Rat).Mul(p.scale, r)
	return p
}

func (p product) with(x model.Expr) product {
	switch x := x.(type) {
	case *model.Number:
		return p.times(x.Value)
	case *model.ColumnRef:
		p.columns = append(append([]*model.Column(nil), p.columns...), x.Column)
		return p
	}
	if !rowDependent(x) {
		if r := kernel.Constant(x, 0); r != nil {
			return p.times(r)
		}
	}
	p.others = append(append([]model.Expr(nil), p.others...), x)
	return p
}

func rowDependent(x model.Expr) bool {
	found := false
	walk(x, func(x model.Expr) {
		switch x := x.(type) {
		case *model.ColumnRef:
			found = true
		case *model.Call:
			found = found || x.Func == "previous" || x.Func == "linear"
		}
	})
	return found
}

func (l *linearizer) add(x model.Expr, p product) {
	if l.failed {
		return
	}
	if !mentions(x) {
		l.out = append(l.out, p.with(x))
		return
	}
	switch x := x.(type) {
	case *model.LetRef:
		l.add(x.Let.Value, p)
		return
	case *model.UnknownRef:
		if !l.in(x.Unknown) {
			break
		}
		p.ref = x
		switch {
		case x.Which == model.Fixed:
			p.component = x.Component
		case x.Which == model.Whole && len(x.Unknown.Levels) <= 1 && x.Unknown.Size == 0:
			p.component = 0
		case x.Which == model.Whole:
			l.failed = true
			return
		}
		if p.component >= 0 && p.component == x.Unknown.Relative && !x.Unknown.Scalar() {
			return
		}
		l.out = append(l.out, p)
		return
	case *model.Op:
		switch {
		case len(x.Args) == 1 && (x.Op == "neg" || x.Op == "-"):
			l.add(x.Args[0], p.times(big.NewRat(-1, 1)))
			return
		case x.Op == "+":
			l.add(x.Args[0], p)
			l.add(x.Args[1], p)
			return
		case x.Op == "-":
			l.add(x.Args[0], p)
			l.add(x.Args[1], p.times(big.NewRat(-1, 1)))
			return
		case x.Op == "*" && !mentions(x.Args[0]):
			l.add(x.Args[1], p.with(x.Args[0]))
			return
		case x.Op == "*" && !mentions(x.Args[1]):
			l.add(x.Args[0], p.with(x.Args[1]))
			return
		case x.Op == "/" && !mentions(x.Args[1]):
			one := &model.Number{Value: big.NewRat(1, 1)}
			l.add(x.Args[0], p.with(&model.Op{Op: "/", Args: []model.Expr{one, x.Args[1]}}))
			return
		}
	case *model.Call:
		if x.Func == "linear" {
			r, ok := x.Args[0].(*model.UnknownRef)
			if !ok || !l.in(r.Unknown) {
				break
			}
			for c, col := range r.Unknown.For {
				q := p
				q.columns = append(append([]*model.Column(nil), p.columns...), col)
				q.ref, q.component = r, c
				l.out = append(l.out, q)
			}
			return
		}
		if x.Func == "sum" && len(x.Args) == 1 {
			switch a := x.Args[0].(type) {
			case *model.Vector:
				for _, i := range a.Items {
					l.add(i, p)
				}
				return
			case *model.UnknownRef:
				if l.in(a.Unknown) && a.Which == model.Whole {
					for c := range a.Unknown.Levels {
						if c == a.Unknown.Relative {
							continue
						}
						q := p
						q.ref, q.component = a, c
						l.out = append(l.out, q)
					}
					return
				}
			}
		}
	}
	l.failed = true
}

// coefficient is the factor of a product at a row, nil when it isn't known.
func (p product) coefficient(row int) *big.Rat {
	r := p.scale
	for _, c := range p.columns {
		v := c.Exact(row)
		if v == nil {
			return nil
		}
		r = new(big.Rat).Mul(r, v)
	}
	for _, x := range p.others {
		v := kernel.Constant(x, row)
		if v == nil {
			return nil
		}
		r = new(big.Rat).Mul(r, v)
	}
	return r
}

// exactRow is a linear form with numbers: constant plus coefficients by the
// position of the variable in the group.
type exactRow struct {
	constant *big.Rat
	coef     map[int]*big.Rat
}

// at evaluates a linear form at a row; ok is false when a number is missing.
func (g *group) at(f linearForm, row int, index map[variable]int) (exactRow, bool) {
	r := exactRow{constant: new(big.Rat), coef: map[int]*big.Rat{}}
	for _, p := range f {
		c := p.coefficient(row)
		if c == nil {
			return r, false
		}
		if p.ref == nil {
			r.constant.Add(r.constant, c)
			continue
		}
		component := p.component
		if component < 0 {
			component = g.env.ComponentOf(p.ref.Unknown, p.ref.By, row)
		}
		if component == p.ref.Unknown.Relative && !p.ref.Unknown.Scalar() {
			continue
		}
		i, ok := index[variable{Unknown: p.ref.Unknown, Component: component}]
		if !ok {
			return r, false
		}
		if old := r.coef[i]; old != nil {
			r.coef[i] = new(big.Rat).Add(old, c)
		} else {
			r.coef[i] = c
		}
	}
	for i, c := range r.coef {
		if c.Sign() == 0 {
			delete(r.coef, i)
		}
	}
	return r, true
}

func (g *group) index() map[variable]int {
	m := make(map[variable]int, len(g.vars))
	for i, v := range g.vars {
		m[v] = i
	}
	return m
}
