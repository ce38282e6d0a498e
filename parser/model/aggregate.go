package model

import (
	"errors"
	"math"
	"math/big"
	"sync"
)

// gathers reports whether a call makes one value of all items, components or
// rows of its argument: sum(x), mean(x), length(x), and min(x) and max(x) of one
// argument. The columns in it do not make the statement run over rows.
func gathers(function string, arguments int) bool {
	switch function {
	case "sum", "mean", "length", "min", "max":
		return arguments == 1
	}
	return false
}

// memo keeps the value of a gathering call, which is the same in every row.
type memo struct {
	exact, float sync.Once
	value        *big.Rat
	err          error
	f            float64
	ferr         error
}

// gathered evaluates a gathering call exactly.
func gathered(e *Call, row int) (*big.Rat, error) {
	if e.memo == nil {
		return gather(e, row)
	}
	e.memo.exact.Do(func() { e.memo.value, e.memo.err = gather(e, row) })
	return e.memo.value, e.memo.err
}

func gather(e *Call, row int) (*big.Rat, error) {
	items, rows, err := spread(e, row)
	if err != nil {
		return nil, err
	}
	if e.Func == "length" {
		return big.NewRat(int64(len(items)*len(rows)), 1), nil
	}
	var total *big.Rat
	for _, item := range items {
		for _, row := range rows {
			x, err := EvalExact(item, row)
			if err != nil {
				return nil, err
			}
			switch {
			case total == nil:
				total = new(big.Rat).Set(x)
			case e.Func == "min" || e.Func == "max":
				if (e.Func == "max") == (x.Cmp(total) > 0) && x.Cmp(total) != 0 {
					total.Set(x)
				}
			default:
				total.Add(total, x)
			}
			if size(total) > maxBits {
				return nil, errors.New("the number is too large")
			}
		}
	}
	if total == nil {
		if e.Func == "sum" {
			return new(big.Rat), nil
		}
		return nil, errors.New("it is the " + e.Func + " of nothing")
	}
	if e.Func == "mean" {
		total.Quo(total, big.NewRat(int64(len(items)*len(rows)), 1))
	}
	return total, nil
}

// gatheredFloat is gathered in doubles, for values that are no rationals.
func gatheredFloat(e *Call, row int) (float64, error) {
	if e.memo == nil {
		return gatherFloat(e, row)
	}
	e.memo.float.Do(func() { e.memo.f, e.memo.ferr = gatherFloat(e, row) })
	return e.memo.f, e.memo.ferr
}

func gatherFloat(e *Call, row int) (float64, error) {
	items, rows, err := spread(e, row)
	if err != nil {
		return 0, err
	}
	total, lost, n := 0.0, 0.0, 0
	for _, item := range items {
		for _, row := range rows {
			x, err := EvalFloat(item, row)
			if err != nil {
				return 0, err
			}
			switch {
			case n == 0:
				total = x
			case e.Func == "min":
				total = min(total, x)
			case e.Func == "max":
				total = max(total, x)
			default: // with the rounding error carried along (Neumaier 1974)
				sum := total + x
				if math.Abs(total) >= math.Abs(x) {
					lost += (total - sum) + x
				} else {
					lost += (x - sum) + total
				}
				total = sum
			}
			n++
		}
	}
	if n == 0 {
		return 0, errors.New("it is the " + e.Func + " of nothing")
	}
	if total += lost; e.Func == "mean" {
		total /= float64(n)
	}
	return total, nil
}

// spread lists what a gathering call runs over: the items of a list in the row
// at hand, or one expression over all rows of its columns.
func spread(e *Call, row int) (items []Expr, rows []int, err error) {
	switch a := e.Args[0].(type) {
	case *Vector:
		return a.Items, []int{row}, nil
	case *UnknownRef:
		if e.Func == "length" && a.Which == Whole {
			return make([]Expr, a.Unknown.Components()), []int{row}, nil
		}
		return nil, nil, ErrUnknown
	}
	columns := columnsOf(e.Args[0])
	if len(columns) == 0 {
		return []Expr{e.Args[0]}, []int{row}, nil
	}
	n := columns[0].Rows()
	for _, c := range columns {
		if c.Rows() != n {
			return nil, nil, errors.New(columns[0].Name + " and " + c.Name + " have different lengths")
		}
	}
	rows = make([]int, n)
	for i := range rows {
		rows[i] = i
	}
	return []Expr{e.Args[0]}, rows, nil
}
