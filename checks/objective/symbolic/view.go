package symbolic

import "math/big"

// View is the outside of an expression. Exactly one of the groups is set.
type View struct {
	Number *big.Rat
	Symbol *Symbol

	// A call.
	Function *Function
	Args     []Expr

	// A product: Coef times Bases to the power Exponents.
	Coef      *big.Rat
	Bases     []Expr
	Exponents []*big.Rat

	// A sum: Constant plus Coefs times Rests.
	Constant *big.Rat
	Coefs    []*big.Rat
	Rests    []Expr
}

// Look opens an expression.
func Look(e Expr) View {
	switch e := e.(type) {
	case *number:
		return View{Number: e.v}
	case *symbol:
		return View{Symbol: e.s}
	case *call:
		return View{Function: e.f, Args: e.args}
	case *product:
		v := View{Coef: e.coef}
		for _, f := range orderFactors(e.factors) {
			v.Bases, v.Exponents = append(v.Bases, f.base), append(v.Exponents, f.exp)
		}
		return v
	case *sum:
		v := View{Constant: e.constant}
		for _, t := range e.terms {
			v.Coefs, v.Rests = append(v.Coefs, t.coef), append(v.Rests, t.rest)
		}
		return v
	}
	return View{}
}

// Language reports whether the model language can write an expression.
func Language(e Expr) bool {
	for _, f := range Calls(e) {
		if !f.Language {
			return false
		}
	}
	return true
}

// IsExp returns the argument when e is an exponential, else nil.
func IsExp(e Expr) Expr {
	if c, ok := e.(*call); ok && c.f == expFunction {
		return c.args[0]
	}
	return nil
}

// ExpitArgument returns η when e is expit(η), else nil.
func ExpitArgument(e Expr) Expr {
	p, ok := e.(*product)
	if !ok || len(p.factors) != 2 {
		return nil
	}
	for _, f := range p.factors {
		if eta := IsExp(f.base); eta != nil && Equal(e, Expit(eta)) {
			return eta
		}
	}
	return nil
}

// Own splits a product into the factor that depends on the given symbols only;
// separate is false when some factor mixes them with others.
func Own(e Expr, of []*Symbol) (own Expr, separate bool) {
	mine := map[string]bool{}
	for _, s := range of {
		mine[s.Name] = true
	}
	mix := func(x Expr) (a, b bool) {
		walk(x, func(s *Symbol) {
			if mine[s.Name] {
				a = true
			} else if !s.Data {
				b = true
			}
		})
		return a, b
	}
	bases, exponents := Factors(e)
	own = One
	for i, base := range bases {
		if c, ok := base.(*call); ok && c.f == expFunction {
			for _, t := range expTerms(c) {
				a, b := mix(t.rest)
				if a && b {
					return nil, false
				}
				if a {
					own = Mul(own, Exp(Mul(Rat(mulRat(exponents[i], t.coef)), t.rest)))
				}
			}
			continue
		}
		a, b := mix(base)
		if a && b {
			return nil, false
		}
		if a {
			own = Mul(own, Pow(base, exponents[i]))
		}
	}
	return own, true
}

// Size counts the symbols, numbers and functions of an expression.
func Size(e Expr) int {
	n := 1
	switch e := e.(type) {
	case *sum:
		for _, t := range e.terms {
			n += Size(t.rest)
		}
	case *product:
		for _, f := range e.factors {
			n += Size(f.base)
		}
	case *call:
		for _, a := range e.args {
			n += Size(a)
		}
	}
	return n
}
