package symbolic

import (
	"fmt"
	"math/big"
	"sort"
)

// Diff is the derivative by a symbol. It fails where a function has no
// derivative here.
func Diff(e Expr, by *Symbol) (d Expr, err error) {
	switch e := e.(type) {
	case *number:
		return Zero, nil
	case *symbol:
		if e.s.Name == by.Name {
			return One, nil
		}
		return Zero, nil
	case *sum:
		parts := make([]Expr, 0, len(e.terms))
		for _, t := range e.terms {
			d, err := Diff(t.rest, by)
			if err != nil {
				return nil, err
			}
			parts = append(parts, Mul(Rat(t.coef), d))
		}
		return Add(parts...), nil
	case *product:
		var parts []Expr
		for i, f := range e.factors {
			if !Depends(f.base, by) {
				continue
			}
			d, err := Diff(f.base, by)
			if err != nil {
				return nil, err
			}
			part := []Expr{Rat(mulRat(e.coef, f.exp)), d, Pow(f.base, new(big.Rat).Sub(f.exp, ratOne))}
			for j, g := range e.factors {
				if j != i {
					part = append(part, Pow(g.base, g.exp))
				}
			}
			parts = append(parts, Mul(part...))
		}
		return Add(parts...), nil
	case *call:
		var parts []Expr
		for i, a := range e.args {
			if !Depends(a, by) {
				continue
			}
			if e.f.Diff == nil {
				return nil, fmt.Errorf("%s has no derivative in closed form", e.f.Name)
			}
			outer := e.f.Diff(e.args, i)
			inner, err := Diff(a, by)
			if err != nil {
				return nil, err
			}
			parts = append(parts, Mul(outer, inner))
		}
		return Add(parts...), nil
	}
	return nil, fmt.Errorf("no derivative of %T", e)
}

// Depends reports whether a symbol occurs.
func Depends(e Expr, s *Symbol) bool {
	found := false
	walk(e, func(t *Symbol) { found = found || t.Name == s.Name })
	return found
}

// Symbols are the symbols that occur, by name.
func Symbols(e Expr) []*Symbol {
	seen := map[string]*Symbol{}
	walk(e, func(s *Symbol) { seen[s.Name] = s })
	list := make([]*Symbol, 0, len(seen))
	for _, s := range seen {
		list = append(list, s)
	}
	sort.Slice(list, func(i, j int) bool { return list[i].Name < list[j].Name })
	return list
}

func walk(e Expr, visit func(*Symbol)) {
	switch e := e.(type) {
	case *symbol:
		visit(e.s)
	case *sum:
		for _, t := range e.terms {
			walk(t.rest, visit)
		}
	case *product:
		for _, f := range e.factors {
			walk(f.base, visit)
		}
	case *call:
		for _, a := range e.args {
			walk(a, visit)
		}
	}
}

// Calls lists the functions that occur, by name.
func Calls(e Expr) []*Function {
	seen := map[string]*Function{}
	var visit func(Expr)
	visit = func(e Expr) {
		switch e := e.(type) {
		case *sum:
			for _, t := range e.terms {
				visit(t.rest)
			}
		case *product:
			for _, f := range e.factors {
				visit(f.base)
			}
		case *call:
			seen[e.f.Name] = e.f
			for _, a := range e.args {
				visit(a)
			}
		}
	}
	visit(e)
	list := make([]*Function, 0, len(seen))
	for _, f := range seen {
		list = append(list, f)
	}
	sort.Slice(list, func(i, j int) bool { return list[i].Name < list[j].Name })
	return list
}

// Substitute puts expressions in the place of symbols, by name.
func Substitute(e Expr, by map[string]Expr) Expr {
	switch e := e.(type) {
	case *symbol:
		if r, ok := by[e.s.Name]; ok {
			return r
		}
	case *sum:
		parts := make([]Expr, 0, len(e.terms)+1)
		parts = append(parts, Rat(e.constant))
		for _, t := range e.terms {
			parts = append(parts, Mul(Rat(t.coef), Substitute(t.rest, by)))
		}
		return Add(parts...)
	case *product:
		parts := make([]Expr, 0, len(e.factors)+1)
		parts = append(parts, Rat(e.coef))
		for _, f := range e.factors {
			parts = append(parts, Pow(Substitute(f.base, by), f.exp))
		}
		return Mul(parts...)
	case *call:
		args := make([]Expr, len(e.args))
		for i, a := range e.args {
			args[i] = Substitute(a, by)
		}
		return Apply(e.f, args...)
	}
	return e
}

// Apply is f(args) through the simplifying constructor.
func Apply(f *Function, args ...Expr) Expr {
	switch f {
	case expFunction:
		return Exp(args[0])
	case logFunction:
		return Log(args[0])
	case absFunction:
		return Abs(args[0])
	case probitFunction:
		return Probit(args[0])
	}
	return f.Apply(args...)
}
