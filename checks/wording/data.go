package wording

import (
	"fmt"
	"math/big"

	"wellposed/parser/model"
)

// Data says in a few words what an observation holds: "0 of 40", "10 in 6",
// "3 readings", "20 rows".
func Data(o *model.Observation) string {
	if o == nil {
		return "these data"
	}
	if o.Awaited {
		return "data that are not there yet"
	}
	switch {
	case o.Reading == model.Summary:
		if n := exact(o.N, 0); n != nil {
			return number(n) + " readings"
		}
	case o.Dist == nil || o.Dist.Spec == nil:
	case o.Dist.Spec.Name == "Binomial":
		if y, n := total(o, first(o)), total(o, o.Dist.Arg("trials")); y != nil && n != nil && sameProbability(o) {
			return number(y) + " of " + number(n)
		}
	case o.Dist.Spec.Name == "Bernoulli":
		if y := total(o, first(o)); y != nil && sameProbability(o) {
			return number(y) + " of " + fmt.Sprint(len(o.Rows))
		}
	case o.Dist.Spec.Name == "Poisson":
		if y := total(o, first(o)); y != nil && len(o.Rows) == 1 {
			if t := exposure(o); t != nil {
				return number(y) + " in " + number(t)
			}
			return "a count of " + number(y)
		}
	}
	rows := len(o.Rows)
	if o.Table == nil {
		if rows == 1 {
			return "one reading"
		}
		return fmt.Sprintf("%d readings", rows)
	}
	if rows == 1 {
		return "one row of " + o.Table.Name
	}
	return fmt.Sprintf("the %d rows of %s", rows, o.Table.Name)
}

// Count is the total count of an observation whose rows share one probability or
// one rate, with the trials where there are trials. The count is nil for data of
// another kind.
func Count(o *model.Observation) (y, n *big.Rat, trials bool) {
	if o.Dist == nil || o.Dist.Spec == nil || o.Reading != model.Values || o.Awaited {
		return nil, nil, false
	}
	switch o.Dist.Spec.Name {
	case "Binomial":
		if sameProbability(o) {
			return total(o, first(o)), total(o, o.Dist.Arg("trials")), true
		}
	case "Bernoulli":
		if sameProbability(o) {
			return total(o, first(o)), big.NewRat(int64(len(o.Rows)), 1), true
		}
	case "Poisson":
		return total(o, first(o)), nil, false
	}
	return nil, nil, false
}

func first(o *model.Observation) model.Expr {
	if len(o.What) == 0 {
		return nil
	}
	return o.What[0]
}

// sameProbability reports whether every row has the same probability, so that
// the counts may be added up.
func sameProbability(o *model.Observation) bool {
	return len(o.Rows) == 1 || scalar(o.Dist.Arg("probability"))
}

// scalar reports whether an expression has one value for all rows.
func scalar(e model.Expr) bool {
	switch e := e.(type) {
	case *model.ColumnRef:
		return false
	case *model.UnknownRef:
		return e.Which != model.ByRow
	case *model.LetRef:
		return e.Let != nil && e.Let.Table == nil && scalar(e.Let.Value)
	case *model.Op:
		return allScalar(e.Args)
	case *model.Call:
		return allScalar(e.Args)
	case *model.Vector:
		return allScalar(e.Items)
	}
	return e != nil
}

func allScalar(list []model.Expr) bool {
	for _, e := range list {
		if !scalar(e) {
			return false
		}
	}
	return true
}

// exposure is T in Poisson(rate * T), nil when the mean has another form.
func exposure(o *model.Observation) *big.Rat {
	mean, ok := o.Dist.Arg("mean").(*model.Op)
	if !ok || mean.Op != "*" || len(mean.Args) != 2 {
		return nil
	}
	for i, a := range mean.Args {
		if u, ok := a.(*model.UnknownRef); ok && u.Unknown.Scalar() {
			return exact(mean.Args[1-i], o.Rows[0])
		}
	}
	return nil
}

// total adds an expression's exact values over the rows; nil when one of them
// has none.
func total(o *model.Observation, e model.Expr) *big.Rat {
	sum := new(big.Rat)
	for _, row := range o.Rows {
		x := exact(e, row)
		if x == nil {
			return nil
		}
		sum.Add(sum, x)
	}
	return sum
}

// exact is the value of an expression of known numbers in a row, nil when it
// depends on an unknown or is not rational.
func exact(e model.Expr, row int) *big.Rat {
	if e == nil {
		return nil
	}
	x, err := model.EvalExact(e, row)
	if err != nil {
		return nil
	}
	return x
}

// number prints an exact number: whole numbers as they are, others as a decimal
// when it ends within six places, else as a fraction.
func number(r *big.Rat) string {
	if r.IsInt() {
		return r.Num().String()
	}
	for places := 1; places <= 6; places++ {
		text := r.FloatString(places)
		if back, ok := new(big.Rat).SetString(text); ok && back.Cmp(r) == 0 {
			return text
		}
	}
	return r.RatString()
}
