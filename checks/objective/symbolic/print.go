package symbolic

import (
	"math/big"
	"sort"
	"strings"
)

// Binding strengths.
const (
	atSum = iota
	atProduct
	atPower
	atAtom
)

// Text writes an expression in the spelling of the model language.
func Text(e Expr) string { return show(e, atSum) }

func bracket(s string, strength, context int) string {
	if strength < context {
		return "(" + s + ")"
	}
	return s
}

func show(e Expr, context int) string {
	switch e := e.(type) {
	case *number:
		s := e.v.RatString()
		switch {
		case e.v.Sign() < 0:
			return bracket(s, atSum, context)
		case !e.v.IsInt():
			return bracket(s, atProduct, context)
		}
		return s
	case *symbol:
		return e.s.Name
	case *call:
		if len(e.args) == 0 {
			return e.f.Name
		}
		if e.f == expFunction {
			if s, ok := showPower(e.args[0]); ok {
				return bracket(s, atPower, context)
			}
		}
		args := make([]string, len(e.args))
		for i, a := range e.args {
			args[i] = show(a, atSum)
		}
		return e.f.Name + "(" + strings.Join(args, ", ") + ")"
	case *sum:
		return bracket(showSum(e), atSum, context)
	case *product:
		s, strength := showProduct(e)
		return bracket(s, strength, context)
	}
	return "?"
}

// showPower writes exp(k log x) as x^k.
func showPower(argument Expr) (string, bool) {
	p, ok := argument.(*product)
	if !ok {
		return "", false
	}
	for i, f := range p.factors {
		if c, ok := f.base.(*call); ok && c.f == logFunction && f.exp.Cmp(ratOne) == 0 {
			rest := append(append([]factor(nil), p.factors[:i]...), p.factors[i+1:]...)
			q := Mul(Rat(p.coef), newProduct(ratOne, rest))
			return show(c.args[0], atAtom) + "^" + show(q, atAtom), true
		}
	}
	return "", false
}

func showSum(e *sum) string {
	type piece struct {
		negative bool
		degree   int
		text     string
	}
	var pieces []piece
	if e.constant.Sign() != 0 {
		pieces = append(pieces, piece{e.constant.Sign() < 0, 0, show(Rat(new(big.Rat).Abs(e.constant)), atProduct)})
	}
	for _, t := range e.terms {
		pieces = append(pieces, piece{t.coef.Sign() < 0, 1, show(scaled(new(big.Rat).Abs(t.coef), t.rest), atProduct)})
	}
	sort.SliceStable(pieces, func(i, j int) bool {
		if pieces[i].negative != pieces[j].negative {
			return pieces[j].negative
		}
		return pieces[i].degree < pieces[j].degree
	})
	var b strings.Builder
	for i, p := range pieces {
		switch {
		case i == 0 && p.negative:
			b.WriteString("-")
		case i > 0 && p.negative:
			b.WriteString(" - ")
		case i > 0:
			b.WriteString(" + ")
		}
		b.WriteString(p.text)
	}
	return b.String()
}

func showProduct(e *product) (string, int) {
	if asPowers(e) {
		parts := make([]string, 0, len(e.factors))
		for _, f := range orderFactors(e.factors) {
			parts = append(parts, showFactor(f.base, f.exp, false))
		}
		return strings.Join(parts, " * "), atProduct
	}
	var above, below []string
	negative := e.coef.Sign() < 0
	abs := new(big.Rat).Abs(e.coef)
	if !abs.Num().IsInt64() || abs.Num().Int64() != 1 {
		above = append(above, abs.Num().String())
	}
	if !abs.IsInt() {
		below = append(below, abs.Denom().String())
	}
	for _, f := range orderFactors(e.factors) {
		if f.exp.Sign() > 0 {
			above = append(above, showFactor(f.base, f.exp, true))
		} else {
			below = append(below, showFactor(f.base, new(big.Rat).Neg(f.exp), true))
		}
	}
	s := "1"
	if len(above) > 0 {
		s = strings.Join(above, " * ")
	}
	strength := atProduct
	switch len(below) {
	case 0:
		if len(above) == 1 && len(e.factors) == 1 && !negative && e.coef.Cmp(ratOne) == 0 {
			strength = atPower
			if e.factors[0].exp.Cmp(ratHalf) == 0 {
				strength = atAtom
			}
		}
	case 1:
		s += "/" + below[0]
		if len(above) > 0 {
			s = strings.Join(above, " * ") + " / " + below[0]
		}
	default:
		sep := "/"
		if len(above) > 0 {
			sep = " / "
		}
		s += sep + "(" + strings.Join(below, " * ") + ")"
	}
	if negative {
		return "-" + s, atSum
	}
	return s, strength
}

// asPowers says whether a kernel on a bounded support reads best as a product of
// powers: p^(-1/2) * (1 - p)^(-1/2).
func asPowers(e *product) bool {
	if len(e.factors) < 2 || e.coef.Cmp(ratOne) != 0 {
		return false
	}
	var only string
	for _, f := range e.factors {
		symbols := Symbols(f.base)
		if len(symbols) != 1 || f.exp.IsInt() || symbols[0].High == nil {
			return false
		}
		switch f.base.(type) {
		case *symbol, *sum:
		default:
			return false
		}
		if only != "" && only != symbols[0].Name {
			return false
		}
		only = symbols[0].Name
	}
	return true
}

// orderFactors puts plain symbols first, then the rest, by name.
func orderFactors(fs []factor) []factor {
	out := append([]factor(nil), fs...)
	rank := func(f factor) int {
		switch f.base.(type) {
		case *number:
			return 0
		case *symbol:
			return 1
		case *sum:
			return 2
		}
		return 3
	}
	sort.SliceStable(out, func(i, j int) bool { return rank(out[i]) < rank(out[j]) })
	return out
}

func showFactor(base Expr, exp *big.Rat, roots bool) string {
	if exp.Cmp(ratOne) == 0 {
		return show(base, atPower)
	}
	if roots && exp.Cmp(ratHalf) == 0 {
		return "sqrt(" + show(base, atSum) + ")"
	}
	q := exp.RatString()
	if !exp.IsInt() || exp.Sign() < 0 {
		q = "(" + q + ")"
	}
	return show(base, atAtom) + "^" + q
}
