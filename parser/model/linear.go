package model

import (
	"context"
	"errors"
	"math/big"
	"sort"
)

// Entries are the exact values of one column over the rows of a linear form.
// Entry i is Mantissa[i] × 10^Exponent, or Rational[i] when that is set instead.
// With Rows set they are sparse: the k-th value belongs to position Rows[k] of
// the form's rows, and all others are 0.
type Entries struct {
	Mantissa []int64
	Exponent int
	Rational []*big.Rat
	Rows     []int32
}

// Term is an unknown component with its coefficients.
type Term struct {
	Unknown   *Unknown
	Component int
	Entries
}

// Linear is an expression that is linear in the unknowns, over some rows.
type Linear struct {
	Rows   []int
	Offset Entries
	// Terms are ordered by declaration, then component. A component that is
	// fixed at zero has none; one that no row touches has none either.
	Terms []Term
}

// ErrNotLinear is returned for an expression that is not linear in its unknowns.
var ErrNotLinear = errors.New("it is not linear in the unknowns")

// LinearForm takes an expression apart over rows. It returns ErrNotLinear when
// an unknown enters in another way.
func (m *Model) LinearForm(ctx context.Context, e Expr, rows []int) (*Linear, error) {
	l := &former{ctx: ctx, m: m, rows: rows}
	if err := l.add(e, nil, false); err != nil {
		return nil, err
	}
	return l.finish()
}

// part is coefficient × unknown, or a known summand when ref is nil. The
// coefficient is a product of known expressions, perhaps negated.
type part struct {
	ref     *UnknownRef
	factors []factor
	neg     bool
}

type factor struct {
	e       Expr
	inverse bool
}

type former struct {
	ctx   context.Context
	m     *Model
	rows  []int
	parts []part
}

func (l *former) add(e Expr, factors []factor, neg bool) error {
	if Known(e) {
		if c, ok := e.(*Call); !ok || c.Func != "linear" {
			l.parts = append(l.parts, part{nil, extend(factors, factor{e: e}), neg})
			return nil
		}
	}
	switch e := e.(type) {
	case *LetRef:
		return l.add(e.Let.Value, factors, neg)
	case *UnknownRef:
		if e.Which == Whole && !e.Unknown.Scalar() {
			return ErrNotLinear
		}
		l.parts = append(l.parts, part{e, factors, neg})
		return nil
	case *Op:
		switch e.Op {
		case "neg":
			return l.add(e.Args[0], factors, !neg)
		case "+", "-":
			if err := l.add(e.Args[0], factors, neg); err != nil {
				return err
			}
			return l.add(e.Args[1], factors, neg != (e.Op == "-"))
		case "*":
			if Known(e.Args[0]) {
				return l.add(e.Args[1], extend(factors, factor{e: e.Args[0]}), neg)
			}
			if Known(e.Args[1]) {
				return l.add(e.Args[0], extend(factors, factor{e: e.Args[1]}), neg)
			}
		case "/":
			if Known(e.Args[1]) {
				return l.add(e.Args[0], extend(factors, factor{e.Args[1], true}), neg)
			}
		}
	case *Call:
		u, ok := e.Args[0].(*UnknownRef)
		if !ok {
			return ErrNotLinear
		}
		switch e.Func {
		case "linear":
			for i, c := range u.Unknown.For {
				ref := &UnknownRef{Unknown: u.Unknown, Which: Fixed, Component: i}
				l.parts = append(l.parts, part{ref, extend(factors, factor{e: &ColumnRef{Column: c}}), neg})
			}
			return nil
		case "sum", "mean":
			n := u.Unknown.Components()
			if u.Which == Fixed {
				return l.add(u, factors, neg)
			}
			if u.Which == ByRow { // a sum over all rows
				return ErrNotLinear
			}
			for i := range n {
				f := factors
				if e.Func == "mean" {
					f = extend(f, factor{&Number{Value: big.NewRat(int64(n), 1)}, true})
				}
				l.parts = append(l.parts, part{&UnknownRef{Unknown: u.Unknown, Which: Fixed, Component: i}, f, neg})
			}
			return nil
		}
	}
	return ErrNotLinear
}

func extend(list []factor, f factor) []factor {
	return append(append([]factor(nil), list...), f)
}

type termKey struct {
	unknown   *Unknown
	component int
}

// finish evaluates the coefficients.
func (l *former) finish() (*Linear, error) {
	out := &Linear{Rows: l.rows}
	known := []part{}
	single := map[termKey][]part{}
	var byRow []part
	var keys []termKey
	for _, p := range l.parts {
		switch {
		case p.ref == nil:
			known = append(known, p)
		case p.ref.Which == ByRow:
			byRow = append(byRow, p)
		default:
			k := termKey{p.ref.Unknown, p.ref.Component}
			if p.ref.Unknown.Relative == k.component && !p.ref.Unknown.Scalar() {
				continue
			}
			if single[k] == nil {
				keys = append(keys, k)
			}
			single[k] = append(single[k], p)
		}
	}
	var err error
	if out.Offset, err = l.sum(known); err != nil {
		return nil, err
	}
	// Sums over indicator columns are added as rationals; the common case, one
	// indicator with a constant coefficient, stays in integers.
	scattered := map[termKey]map[int32]*big.Rat{}
	for _, p := range byRow {
		values, err := l.sum([]part{{nil, p.factors, p.neg}})
		if err != nil {
			return nil, err
		}
		for i, row := range l.rows {
			c := p.ref.Unknown.ComponentOf(p.ref.By, row)
			if c < 0 || c == p.ref.Unknown.Relative {
				continue
			}
			k := termKey{p.ref.Unknown, c}
			if scattered[k] == nil {
				scattered[k] = map[int32]*big.Rat{}
				if single[k] == nil {
					keys = append(keys, k)
				}
			}
			v := values.At(i)
			if old := scattered[k][int32(i)]; old != nil {
				v = new(big.Rat).Add(old, v)
			}
			scattered[k][int32(i)] = v
		}
	}
	order := map[*Unknown]int{}
	for i, u := range l.m.Unknowns {
		order[u] = i
	}
	sort.SliceStable(keys, func(i, j int) bool {
		if keys[i].unknown != keys[j].unknown {
			return order[keys[i].unknown] < order[keys[j].unknown]
		}
		return keys[i].component < keys[j].component
	})
	for i, k := range keys {
		if i > 0 && keys[i-1] == k {
			continue
		}
		t := Term{Unknown: k.unknown, Component: k.component}
		if len(single[k]) > 0 {
			if t.Entries, err = l.sum(single[k]); err != nil {
				return nil, err
			}
		}
		if s := scattered[k]; s != nil {
			t.Entries = merge(t.Entries, s, len(l.rows), len(single[k]) > 0)
		}
		out.Terms = append(out.Terms, t)
	}
	return out, nil
}

// merge adds scattered values to dense ones.
func merge(dense Entries, scattered map[int32]*big.Rat, n int, haveDense bool) Entries {
	if !haveDense {
		rows := make([]int32, 0, len(scattered))
		for i, v := range scattered {
			if v.Sign() != 0 {
				rows = append(rows, i)
			}
		}
		sort.Slice(rows, func(i, j int) bool { return rows[i] < rows[j] })
		values := make([]*big.Rat, len(rows))
		for k, i := range rows {
			values[k] = scattered[i]
		}
		e := pack(values)
		e.Rows = rows
		return e
	}
	values := make([]*big.Rat, n)
	for i := range values {
		values[i] = dense.At(i)
		if v := scattered[int32(i)]; v != nil {
			values[i] = new(big.Rat).Add(values[i], v)
		}
	}
	return pack(values)
}

// At is the exact value at a position of the form's rows.
func (e *Entries) At(i int) *big.Rat {
	k := i
	if e.Rows != nil {
		k = sort.Search(len(e.Rows), func(j int) bool { return e.Rows[j] >= int32(i) })
		if k >= len(e.Rows) || e.Rows[k] != int32(i) {
			return new(big.Rat)
		}
	}
	if e.Rational != nil {
		return e.Rational[k]
	}
	if e.Mantissa == nil {
		return new(big.Rat)
	}
	x := new(big.Rat).SetInt64(e.Mantissa[k])
	if e.Exponent != 0 {
		ten := new(big.Int).Exp(big.NewInt(10), big.NewInt(int64(abs(e.Exponent))), nil)
		p := new(big.Rat).SetInt(ten)
		if e.Exponent < 0 {
			return x.Quo(x, p)
		}
		x.Mul(x, p)
	}
	return x
}

func abs(n int) int {
	if n < 0 {
		return -n
	}
	return n
}

// sum evaluates a sum of known products over the rows.
func (l *former) sum(parts []part) (Entries, error) {
	n := len(l.rows)
	if len(parts) == 0 {
		return Entries{Mantissa: make([]int64, n)}, nil
	}
	if len(parts) == 1 && len(parts[0].factors) <= 1 {
		if e, ok := l.fast(parts[0]); ok {
			return e, nil
		}
	}
	values := make([]*big.Rat, n)
	for i, row := range l.rows {
		if i%1024 == 0 && l.ctx.Err() != nil {
			return Entries{}, l.ctx.Err()
		}
		total := new(big.Rat)
		for _, p := range parts {
			product := big.NewRat(1, 1)
			for _, f := range p.factors {
				x, err := EvalExact(f.e, row)
				if err != nil {
					return Entries{}, err
				}
				if f.inverse {
					if x.Sign() == 0 {
						return Entries{}, errors.New("it divides by zero")
					}
					product.Quo(product, x)
				} else {
					product.Mul(product, x)
				}
			}
			if p.neg {
				total.Sub(total, product)
			} else {
				total.Add(total, product)
			}
		}
		values[i] = total
	}
	return pack(values), nil
}

// fast evaluates one column or one number without a rational for each cell.
func (l *former) fast(p part) (Entries, bool) {
	n := len(l.rows)
	out := Entries{Mantissa: make([]int64, n)}
	sign := int64(1)
	if p.neg {
		sign = -1
	}
	if len(p.factors) == 0 {
		for i := range out.Mantissa {
			out.Mantissa[i] = sign
		}
		return out, true
	}
	if p.factors[0].inverse {
		return out, false
	}
	switch e := p.factors[0].e.(type) {
	case *ColumnRef:
		low := 0
		exponents := make([]int16, n)
		for i, row := range l.rows {
			if row >= len(e.Column.Texts) || e.Column.missing(row) {
				return out, false
			}
			m, x, ok := decimalParts(e.Column.Texts[row])
			if !ok {
				return out, false
			}
			out.Mantissa[i], exponents[i] = m, int16(x)
			if m != 0 && x < low {
				low = x
			}
		}
		for i := range out.Mantissa {
			if out.Mantissa[i] == 0 {
				continue
			}
			m, ok := scaleUp(out.Mantissa[i], int(exponents[i])-low)
			if !ok {
				return out, false
			}
			out.Mantissa[i] = sign * m
		}
		out.Exponent = low
		return out, true
	default:
		if len(columnsOf(e)) > 0 {
			return out, false
		}
		x, err := EvalExact(e, 0)
		if err != nil || !x.IsInt() || !x.Num().IsInt64() {
			return out, false
		}
		for i := range out.Mantissa {
			out.Mantissa[i] = sign * x.Num().Int64()
		}
		return out, true
	}
}

const maxMantissa = 1 << 62

func scaleUp(m int64, by int) (int64, bool) {
	for ; by > 0; by-- {
		if m > maxMantissa/10 || m < -maxMantissa/10 {
			return 0, false
		}
		m *= 10
	}
	return m, true
}

// decimalParts reads a decimal text as mantissa × 10^exponent, when it fits.
func decimalParts(s string) (mantissa int64, exponent int, ok bool) {
	if m, places, ok := shortParts(s); ok {
		return m, -places, true
	}
	i, neg := 0, false
	if i < len(s) && (s[i] == '-' || s[i] == '+') {
		neg = s[i] == '-'
		i++
	}
	digits, point := 0, false
	for ; i < len(s); i++ {
		c := s[i]
		switch {
		case c >= '0' && c <= '9':
			if mantissa > maxMantissa/10-10 {
				return 0, 0, false
			}
			mantissa = mantissa*10 + int64(c-'0')
			digits++
			if point {
				exponent--
			}
		case c == '.' && !point:
			point = true
		case (c == 'e' || c == 'E') && digits > 0:
			e, sign, n := 0, 1, 0
			i++
			if i < len(s) && (s[i] == '-' || s[i] == '+') {
				if s[i] == '-' {
					sign = -1
				}
				i++
			}
			for ; i < len(s); i++ {
				if s[i] < '0' || s[i] > '9' || e > 1000 {
					return 0, 0, false
				}
				e, n = e*10+int(s[i]-'0'), n+1
			}
			if n == 0 || e > 1000 {
				return 0, 0, false
			}
			exponent += sign * e
		default:
			return 0, 0, false
		}
	}
	if digits == 0 {
		return 0, 0, false
	}
	// Drop trailing zeros, so that 0.50 and 0.5 are the same.
	for mantissa != 0 && mantissa%10 == 0 && exponent < 0 {
		mantissa, exponent = mantissa/10, exponent+1
	}
	if neg {
		mantissa = -mantissa
	}
	return mantissa, exponent, true
}

// shortParts is decimalParts for the common form, up to 18 digits with or
// without a point: mantissa / 10^places, without trailing zeros.
func shortParts(s string) (mantissa int64, places int, ok bool) {
	i, neg := 0, false
	if i < len(s) && s[i] == '-' {
		i, neg = 1, true
	}
	if len(s)-i > 19 || len(s) == i {
		return 0, 0, false
	}
	point, zeros, digits := false, 0, 0
	for ; i < len(s); i++ {
		c := s[i] - '0'
		if c > 9 {
			if s[i] != '.' || point {
				return 0, 0, false
			}
			point = true
			continue
		}
		digits++
		if !point {
			mantissa = mantissa*10 + int64(c)
			continue
		}
		// Zeros behind the point count once a digit follows them.
		if c == 0 {
			zeros++
			continue
		}
		for ; zeros > 0; zeros-- {
			mantissa, places = mantissa*10, places+1
		}
		mantissa, places = mantissa*10+int64(c), places+1
	}
	if digits == 0 || digits > 18 {
		return 0, 0, false
	}
	if neg {
		mantissa = -mantissa
	}
	return mantissa, places, true
}

// pack turns rationals into integers when they all are decimals that fit.
func pack(values []*big.Rat) Entries {
	low := 0
	for _, v := range values {
		for d := 0; ; d++ {
			if d > 18 {
				return Entries{Rational: values}
			}
			if new(big.Rat).Mul(v, powersOfTen[d]).IsInt() {
				low = min(low, -d)
				break
			}
		}
	}
	out := Entries{Mantissa: make([]int64, len(values)), Exponent: low}
	for i, v := range values {
		x := new(big.Rat).Mul(v, powersOfTen[-low])
		if !x.Num().IsInt64() || abs64(x.Num().Int64()) > maxMantissa {
			return Entries{Rational: values}
		}
		out.Mantissa[i] = x.Num().Int64()
	}
	return out
}

func abs64(n int64) int64 {
	if n < 0 {
		return -n
	}
	return n
}

var powersOfTen = func() []*big.Rat {
	list := make([]*big.Rat, 20)
	p := big.NewInt(1)
	for i := range list {
		list[i] = new(big.Rat).SetInt(p)
		p = new(big.Int).Mul(p, big.NewInt(10))
	}
	return list
}()
