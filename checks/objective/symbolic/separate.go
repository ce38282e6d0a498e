package symbolic

import "math/big"

// Part is coefficient × data × rest, where Data holds data symbols only and
// Rest none.
type Part struct {
	Coef       *big.Rat
	Data, Rest Expr
}

// mostParts bounds the terms of a separation.
const mostParts = 200

// Separate writes an expression as a sum of products of a function of the data
// and a function of the other symbols; false when that is not possible.
func Separate(e Expr) ([]Part, bool) {
	data, rest := composition(e)
	if !data {
		return []Part{{ratOne, One, e}}, true
	}
	if !rest {
		return []Part{{ratOne, e, One}}, true
	}
	switch e := e.(type) {
	case *sum:
		var out []Part
		if e.constant.Sign() != 0 {
			out = append(out, Part{e.constant, One, One})
		}
		for _, t := range e.terms {
			ps, ok := Separate(t.rest)
			if !ok {
				return nil, false
			}
			for _, p := range ps {
				out = append(out, Part{mulRat(p.Coef, t.coef), p.Data, p.Rest})
			}
		}
		return merge(out)
	case *product:
		out := []Part{{e.coef, One, One}}
		for _, f := range e.factors {
			var ps []Part
			data, rest := composition(f.base)
			switch {
			case !data:
				ps = []Part{{ratOne, One, Pow(f.base, f.exp)}}
			case !rest:
				ps = []Part{{ratOne, Pow(f.base, f.exp), One}}
			default:
				base, ok := Separate(f.base)
				if !ok || !f.exp.IsInt() || f.exp.Sign() < 0 || f.exp.Num().BitLen() > 3 {
					return nil, false
				}
				ps = []Part{{ratOne, One, One}}
				for range f.exp.Num().Int64() {
					if ps, ok = multiply(ps, base); !ok {
						return nil, false
					}
				}
			}
			var ok bool
			if out, ok = multiply(out, ps); !ok {
				return nil, false
			}
		}
		return out, true
	case *call:
		if e.f != expFunction {
			return nil, false
		}
		ps, ok := Separate(e.args[0])
		if !ok {
			return nil, false
		}
		d, r := Zero, Zero
		for _, p := range ps {
			dataOnly, _ := composition(p.Data)
			_, restOnly := composition(p.Rest)
			switch {
			case dataOnly && restOnly:
				return nil, false
			case dataOnly:
				d = Add(d, Mul(Rat(p.Coef), p.Data))
			default:
				r = Add(r, Mul(Rat(p.Coef), p.Rest))
			}
		}
		return []Part{{ratOne, Exp(d), Exp(r)}}, true
	}
	return nil, false
}

// composition says whether data symbols and other symbols occur.
func composition(e Expr) (data, rest bool) {
	walk(e, func(s *Symbol) {
		if s.Data {
			data = true
		} else {
			rest = true
		}
	})
	return data, rest
}

func multiply(a, b []Part) ([]Part, bool) {
	out := make([]Part, 0, len(a)*len(b))
	for _, x := range a {
		for _, y := range b {
			out = append(out, Part{mulRat(x.Coef, y.Coef), Mul(x.Data, y.Data), Mul(x.Rest, y.Rest)})
		}
	}
	return merge(out)
}

// merge adds parts with the same data and rest, in order of appearance.
func merge(ps []Part) ([]Part, bool) {
	at := map[string]int{}
	out := ps[:0:0]
	for _, p := range ps {
		k := p.Data.key() + "|" + p.Rest.key()
		if i, ok := at[k]; ok {
			out[i].Coef = new(big.Rat).Add(out[i].Coef, p.Coef)
			continue
		}
		at[k] = len(out)
		out = append(out, p)
	}
	return out, len(out) <= mostParts
}
