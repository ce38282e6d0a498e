package objective

import (
	"errors"
	"fmt"
	"math/big"
	"strings"

	sy "wellposed/checks/objective/symbolic"
	"wellposed/parser/model"
)

// overRows sums a row's expression over rows: exactly where the data come apart
// from the unknowns or few rows differ, else as a function that sums in
// floating point.
func (s *space) overRows(in *information, e sy.Expr, rows []int) (sy.Expr, error) {
	columns := s.dataIn(e)
	if len(columns) == 0 {
		return sy.Mul(e, sy.Int(int64(len(rows)))), nil
	}
	if parts, ok := sy.Separate(e); ok {
		total := sy.Zero
		for _, p := range parts {
			sum, exact, err := s.sumData(p.Data, rows)
			if err != nil {
				return nil, err
			}
			in.exact = in.exact && exact
			total = sy.Add(total, sy.Mul(sy.Rat(p.Coef), sum, p.Rest))
		}
		return total, nil
	}
	distinct, counts, err := s.distinctRows(columns, rows)
	if err != nil {
		return nil, err
	}
	if len(distinct) <= mostDistinctRows {
		total := sy.Zero
		for i, values := range distinct {
			by := map[string]sy.Expr{}
			for j, c := range columns {
				by[c.Name] = sy.Rat(values[j])
			}
			total = sy.Add(total, sy.Mul(sy.Int(int64(counts[i])), sy.Substitute(e, by)))
		}
		return total, nil
	}
	in.exact = false
	return s.rowFunction(e, columns, distinct, counts)
}

// dataIn are the data symbols that stand for columns.
func (s *space) dataIn(e sy.Expr) []*sy.Symbol {
	var out []*sy.Symbol
	for _, x := range sy.Symbols(e) {
		if x.Data && s.byData[x.Name] != nil {
			out = append(out, x)
		}
	}
	return out
}

// sumData is Σ over rows of an expression in data; exact is false when it had
// to be taken in floating point.
func (s *space) sumData(e sy.Expr, rows []int) (sum sy.Expr, exact bool, err error) {
	columns := s.dataIn(e)
	if len(columns) == 0 {
		return sy.Mul(e, sy.Int(int64(len(rows)))), true, nil
	}
	bases, exponents := sy.Factors(e)
	monomial := true
	for i, b := range bases {
		x := sy.IsSymbol(b)
		if x == nil || s.byData[x.Name] == nil || !exponents[i].IsInt() || exponents[i].Num().BitLen() > 6 {
			monomial = false
		}
	}
	if monomial {
		total, err := s.sumMonomial(sy.Coefficient(e), bases, exponents, rows)
		if err != nil {
			return nil, false, err
		}
		return sy.Rat(total), true, nil
	}
	distinct, counts, err := s.distinctRows(columns, rows)
	if err != nil {
		return nil, false, err
	}
	c, err := sy.Compile(e, columns)
	if err != nil {
		return nil, false, err
	}
	total := 0.0
	x := make([]float64, len(columns))
	for i, values := range distinct {
		for j, v := range values {
			x[j], _ = v.Float64()
		}
		total += float64(counts[i]) * c.Value(x)
	}
	r := new(big.Rat).SetFloat64(total)
	if r == nil {
		return nil, false, errors.New("a sum over rows is not finite")
	}
	return sy.Rat(r), false, nil
}

// sumMonomial is Σ over rows of coef ∏ column^exponent, exactly. Columns that are
// not divided by are summed as whole numbers over a common denominator.
func (s *space) sumMonomial(coef *big.Rat, bases []sy.Expr, exponents []*big.Rat, rows []int) (*big.Rat, error) {
	type power struct {
		name   string
		column *model.Column
		cells  []*big.Int
		times  int64
	}
	var powers []power
	denominator := big.NewInt(1)
	whole := true
	for i, b := range bases {
		c := s.byData[sy.IsSymbol(b).Name]
		p := power{name: c.Name, column: c, times: exponents[i].Num().Int64()}
		whole = whole && p.times > 0
		for _, row := range rows {
			if x := s.exact(c, row); x == nil {
				return nil, fmt.Errorf("row %d has no number in %s", row+1, c.Name)
			} else if x.Sign() == 0 && p.times < 0 {
				return nil, fmt.Errorf("row %d divides by zero", row+1)
			}
		}
		if p.times > 0 {
			var d *big.Int
			if p.cells, d = s.overCommon(c); p.cells == nil {
				whole = false
			} else {
				denominator.Mul(denominator, new(big.Int).Exp(d, big.NewInt(p.times), nil))
			}
		}
		powers = append(powers, p)
	}
	if whole {
		total, v := new(big.Int), new(big.Int)
		for _, row := range rows {
			v.SetInt64(1)
			for _, p := range powers {
				for range p.times {
					v.Mul(v, p.cells[row])
				}
			}
			total.Add(total, v)
		}
		return new(big.Rat).Mul(coef, new(big.Rat).SetFrac(total, denominator)), nil
	}
	total := new(big.Rat)
	for _, row := range rows {
		v := new(big.Rat).Set(coef)
		for _, p := range powers {
			x := s.exact(p.column, row)
			for range max(p.times, -p.times) {
				if p.times > 0 {
					v.Mul(v, x)
				} else {
					v.Quo(v, x)
				}
			}
		}
		total.Add(total, v)
	}
	return total, nil
}

// overCommon writes a column as whole numbers over one denominator; nil when
// that grows past a bound or a cell is no number.
func (s *space) overCommon(c *model.Column) ([]*big.Int, *big.Int) {
	if w, ok := s.whole[c]; ok {
		return w.cells, w.denominator
	}
	s.whole[c] = wholeColumn{}
	d := big.NewInt(1)
	for i := range c.Texts {
		x := s.exact(c, i)
		if x == nil {
			return nil, nil
		}
		if g := new(big.Int).GCD(nil, nil, d, x.Denom()); g.Cmp(x.Denom()) != 0 {
			d = new(big.Int).Mul(d, new(big.Int).Quo(x.Denom(), g))
			if d.BitLen() > 256 {
				return nil, nil
			}
		}
	}
	cells := make([]*big.Int, len(c.Texts))
	for i := range cells {
		x := s.exact(c, i)
		cells[i] = new(big.Int).Mul(x.Num(), new(big.Int).Quo(d, x.Denom()))
	}
	s.whole[c] = wholeColumn{cells, d}
	return cells, d
}

type wholeColumn struct {
	cells       []*big.Int
	denominator *big.Int
}

// exact is the exact number in a cell, read once.
func (s *space) exact(c *model.Column, row int) *big.Rat {
	cells := s.cells[c]
	if cells == nil {
		cells = make([]*big.Rat, len(c.Texts))
		for i := range cells {
			cells[i] = c.Exact(i)
		}
		s.cells[c] = cells
	}
	if row < 0 || row >= len(cells) {
		return nil
	}
	return cells[row]
}

type distinctRows struct {
	values [][]*big.Rat
	counts []int
}

// distinctRows are the different rows in the given columns with their counts.
func (s *space) distinctRows(columns []*sy.Symbol, rows []int) (values [][]*big.Rat, counts []int, err error) {
	var key strings.Builder
	fmt.Fprintf(&key, "%p %d", &rows[0], len(rows))
	for _, c := range columns {
		key.WriteString(" " + c.Name)
	}
	if d, ok := s.distinct[key.String()]; ok {
		return d.values, d.counts, nil
	}
	defer func() {
		if err == nil {
			s.distinct[key.String()] = distinctRows{values, counts}
		}
	}()
	at := map[string]int{}
	for _, row := range rows {
		v := make([]*big.Rat, len(columns))
		var k strings.Builder
		for j, c := range columns {
			v[j] = s.exact(s.byData[c.Name], row)
			if v[j] == nil {
				return nil, nil, fmt.Errorf("row %d has no number in %s", row+1, c.Name)
			}
			k.WriteString(v[j].RatString() + ",")
		}
		i, ok := at[k.String()]
		if !ok {
			i = len(values)
			at[k.String()] = i
			values, counts = append(values, v), append(counts, 0)
		}
		counts[i]++
	}
	return values, counts, nil
}

// rowFunction is a function of the unknowns that sums over rows.
func (s *space) rowFunction(e sy.Expr, columns []*sy.Symbol, distinct [][]*big.Rat, counts []int) (sy.Expr, error) {
	ps := parametersIn(e)
	c, err := sy.Compile(e, append(append([]*sy.Symbol(nil), ps...), columns...))
	if err != nil {
		return nil, err
	}
	data := make([][]float64, len(distinct))
	for i, v := range distinct {
		data[i] = make([]float64, len(v))
		for j, x := range v {
			data[i][j], _ = x.Float64()
		}
	}
	s.functions++
	f := &sy.Function{Name: fmt.Sprintf("sum over rows %d", s.functions), Eval: func(x []float64) float64 {
		at := make([]float64, len(ps)+len(columns))
		copy(at, x)
		total := 0.0
		for i, d := range data {
			copy(at[len(ps):], d)
			total += float64(counts[i]) * c.Value(at)
		}
		return total
	}}
	args := make([]sy.Expr, len(ps))
	for i, p := range ps {
		args[i] = sy.Sym(p)
	}
	return f.Apply(args...), nil
}
