package model

import (
	"errors"
	"fmt"
	"math"
	"math/big"
	"strings"
)

// ErrUnknown is returned by the evaluators for an expression with unknowns.
var ErrUnknown = errors.New("it depends on an unknown")

// ErrInexact is returned by EvalExact for a value that is no rational.
var ErrInexact = errors.New("its value is not a fraction of whole numbers")

// MissingError says that a value is missing in the data.
type MissingError struct {
	Column *Column
	Row    int
}

func (e *MissingError) Error() string {
	return fmt.Sprintf("the value of %s is missing in row %d", e.Column.Name, e.Row+1)
}

// maxBits bounds the size of exact results.
const maxBits = 1 << 20

// EvalExact evaluates an expression of data and known numbers in a row, exactly.
// The functions are those that keep rationals rational.
func EvalExact(e Expr, row int) (*big.Rat, error) {
	switch e := e.(type) {
	case *Number:
		return e.Value, nil
	case *GivenRef:
		if e.Given.Value == nil {
			return nil, fmt.Errorf("%s is not there yet", e.Given.Name)
		}
		return e.Given.Value, nil
	case *ColumnRef:
		return columnValue(e.Column, row)
	case *LetRef:
		return EvalExact(e.Let.Value, row)
	case *UnknownRef:
		return nil, ErrUnknown
	case *Op:
		return evalOp(e, row)
	case *Call:
		return evalCall(e, row)
	case *Constant:
		return nil, ErrInexact
	}
	return nil, errors.New("it is no number")
}

func columnValue(c *Column, row int) (*big.Rat, error) {
	if row < 0 || row >= c.Rows() || c.missing(row) {
		return nil, &MissingError{c, row}
	}
	x := c.Exact(row)
	if x == nil {
		return nil, fmt.Errorf("%q in %s is no number", clip(c.Texts[row]), c.Name)
	}
	return x, nil
}

func evalOp(e *Op, row int) (*big.Rat, error) {
	switch e.Op {
	case "neg", "+", "-", "*", "/", "^":
	default:
		ok, err := Condition(e, row)
		if err != nil {
			return nil, err
		}
		if ok {
			return big.NewRat(1, 1), nil
		}
		return new(big.Rat), nil
	}
	x, err := EvalExact(e.Args[0], row)
	if err != nil {
		return nil, err
	}
	if e.Op == "neg" {
		return new(big.Rat).Neg(x), nil
	}
	y, err := EvalExact(e.Args[1], row)
	if err != nil {
		return nil, err
	}
	if size(x)+size(y) > maxBits {
		return nil, errors.New("the number is too large")
	}
	switch e.Op {
	case "+":
		return new(big.Rat).Add(x, y), nil
	case "-":
		return new(big.Rat).Sub(x, y), nil
	case "*":
		return new(big.Rat).Mul(x, y), nil
	case "/":
		if y.Sign() == 0 {
			return nil, errors.New("it divides by zero")
		}
		return new(big.Rat).Quo(x, y), nil
	}
	return Power(x, y)
}

func size(x *big.Rat) int { return x.Num().BitLen() + x.Denom().BitLen() }

// Power is x^y when that is rational: y whole, or x a perfect power.
func Power(x, y *big.Rat) (*big.Rat, error) {
	if !y.Num().IsInt64() || !y.Denom().IsInt64() || y.Denom().Int64() > 64 {
		return nil, ErrInexact
	}
	if root := y.Denom().Int64(); root > 1 {
		num, ok1 := exactRoot(x.Num(), root)
		den, ok2 := exactRoot(x.Denom(), root)
		if !ok1 || !ok2 {
			return nil, ErrInexact
		}
		x = new(big.Rat).SetFrac(num, den)
	}
	n := y.Num().Int64()
	if x.Sign() == 0 && n < 0 {
		return nil, errors.New("it divides by zero")
	}
	abs := n
	if abs < 0 {
		abs = -abs
	}
	if isOne(x) {
		return x, nil
	}
	if abs > maxBits || int64(size(x))*abs > maxBits {
		return nil, errors.New("the number is too large")
	}
	num := new(big.Int).Exp(x.Num(), big.NewInt(abs), nil)
	den := new(big.Int).Exp(x.Denom(), big.NewInt(abs), nil)
	if n < 0 {
		num, den = den, num
	}
	return new(big.Rat).SetFrac(num, den), nil
}

// exactRoot is the k-th root of a whole number that is not negative, when it is
// whole.
func exactRoot(n *big.Int, k int64) (*big.Int, bool) {
	if n.Sign() < 0 {
		return nil, false
	}
	if n.BitLen() <= 1 {
		return n, true
	}
	low, high := big.NewInt(1), new(big.Int).Lsh(big.NewInt(1), uint(n.BitLen()/int(k)+1))
	one, exp := big.NewInt(1), big.NewInt(k)
	for low.Cmp(high) < 0 {
		mid := new(big.Int).Add(low, high)
		mid.Rsh(mid, 1)
		if new(big.Int).Exp(mid, exp, nil).Cmp(n) < 0 {
			low = mid.Add(mid, one)
		} else {
			high = mid
		}
	}
	return low, new(big.Int).Exp(low, exp, nil).Cmp(n) == 0
}

func evalCall(e *Call, row int) (*big.Rat, error) {
	if gathers(e.Func, len(e.Args)) {
		return gathered(e, row)
	}
	switch e.Func {
	case "previous":
		if c, ok := e.Args[0].(*ColumnRef); ok {
			return columnValue(c.Column, row-1)
		}
	case "linear":
		return nil, ErrUnknown
	}
	var args []*big.Rat
	for _, a := range e.Args {
		x, err := EvalExact(a, row)
		if err != nil {
			return nil, err
		}
		args = append(args, x)
	}
	switch e.Func {
	case "abs":
		return new(big.Rat).Abs(args[0]), nil
	case "sqrt":
		if args[0].Sign() < 0 {
			return nil, errors.New("it is the root of a negative number")
		}
		return Power(args[0], big.NewRat(1, 2))
	case "odds":
		rest := new(big.Rat).Sub(big.NewRat(1, 1), args[0])
		if rest.Sign() == 0 {
			return nil, errors.New("it divides by zero")
		}
		return rest.Quo(args[0], rest), nil
	case "min", "max":
		best := args[0]
		for _, x := range args[1:] {
			if (e.Func == "max") == (x.Cmp(best) > 0) {
				best = x
			}
		}
		return best, nil
	}
	return nil, ErrInexact
}

// Condition evaluates a condition on data in a row, exactly.
func Condition(e Expr, row int) (bool, error) {
	switch e := e.(type) {
	case *LetRef:
		return Condition(e.Let.Value, row)
	case *Op:
		switch e.Op {
		case "and", "or":
			x, err := Condition(e.Args[0], row)
			if err != nil || x == (e.Op == "or") {
				return x, err
			}
			return Condition(e.Args[1], row)
		case "not":
			x, err := Condition(e.Args[0], row)
			return !x, err
		case "==", "!=", "<", "<=", ">", ">=":
			return compare(e, row)
		}
	}
	x, err := EvalExact(e, row)
	if err != nil {
		return false, err
	}
	return x.Sign() != 0, nil
}

func compare(e *Op, row int) (bool, error) {
	if asLevels(e.Args[0], e.Args[1]) {
		x, okX := levelText(e.Args[0], row)
		y, okY := levelText(e.Args[1], row)
		if okX && okY {
			switch e.Op {
			case "==":
				return x == y, nil
			case "!=":
				return x != y, nil
			}
			return false, errors.New("levels have no order")
		}
	}
	x, err := EvalExact(e.Args[0], row)
	if err != nil {
		return false, err
	}
	y, err := EvalExact(e.Args[1], row)
	if err != nil {
		return false, err
	}
	c := x.Cmp(y)
	switch e.Op {
	case "==":
		return c == 0, nil
	case "!=":
		return c != 0, nil
	case "<":
		return c < 0, nil
	case "<=":
		return c <= 0, nil
	case ">":
		return c > 0, nil
	}
	return c >= 0, nil
}

// asLevels says whether two sides compare as texts: when one is quoted, or when
// a column does not hold numbers.
func asLevels(x, y Expr) bool {
	for _, e := range []Expr{x, y} {
		switch e := e.(type) {
		case *Level:
			return true
		case *ColumnRef:
			if !e.Column.Numeric {
				return true
			}
		}
	}
	return false
}

// levelText is the text of a quoted level or of a column's cell.
func levelText(e Expr, row int) (string, bool) {
	switch e := e.(type) {
	case *Level:
		return e.Text, true
	case *ColumnRef:
		if row >= 0 && row < e.Column.Rows() {
			return e.Column.Texts[row], true
		}
	}
	return "", false
}

// EvalFloat evaluates an expression of data and known numbers in a row as the
// nearest double that ordinary arithmetic gives.
func EvalFloat(e Expr, row int) (float64, error) {
	if x, err := EvalExact(e, row); err == nil {
		f, _ := x.Float64()
		return f, nil
	} else if !errors.Is(err, ErrInexact) {
		return math.NaN(), err
	}
	switch e := e.(type) {
	case *Constant:
		switch e.Name {
		case "pi":
			return math.Pi, nil
		case "inf":
			return math.Inf(1), nil
		}
		return math.Inf(-1), nil
	case *LetRef:
		return EvalFloat(e.Let.Value, row)
	case *Op:
		args, err := floats(e.Args, row)
		if err != nil {
			return math.NaN(), err
		}
		switch e.Op {
		case "neg":
			return -args[0], nil
		case "+":
			return args[0] + args[1], nil
		case "-":
			return args[0] - args[1], nil
		case "*":
			return args[0] * args[1], nil
		case "/":
			return args[0] / args[1], nil
		case "^":
			return math.Pow(args[0], args[1]), nil
		}
	case *Call:
		if gathers(e.Func, len(e.Args)) {
			return gatheredFloat(e, row)
		}
		args, err := floats(e.Args, row)
		if err != nil {
			return math.NaN(), err
		}
		if len(args) > 1 && (e.Func == "min" || e.Func == "max") {
			best := args[0]
			for _, x := range args[1:] {
				if e.Func == "min" {
					best = min(best, x)
				} else {
					best = max(best, x)
				}
			}
			return best, nil
		}
		if f := scalarFunctions[e.Func]; f != nil && len(args) == 1 {
			return f(args[0]), nil
		}
	}
	return math.NaN(), ErrInexact
}

func floats(list []Expr, row int) ([]float64, error) {
	out := make([]float64, len(list))
	for i, e := range list {
		x, err := EvalFloat(e, row)
		if err != nil {
			return nil, err
		}
		out[i] = x
	}
	return out, nil
}

// scalarFunctions are the functions of one number.
var scalarFunctions = map[string]func(float64) float64{
	"log": math.Log, "exp": math.Exp, "sqrt": math.Sqrt, "abs": math.Abs, "atan": math.Atan, "tanh": math.Tanh, "atanh": math.Atanh,
	"logit":     func(p float64) float64 { return math.Log(p) - math.Log1p(-p) },
	"expit":     func(x float64) float64 { return 1 / (1 + math.Exp(-x)) },
	"odds":      func(p float64) float64 { return p / (1 - p) },
	"Phi":       func(x float64) float64 { return math.Erfc(-x/math.Sqrt2) / 2 },
	"probit":    func(p float64) float64 { return -math.Sqrt2 * math.Erfcinv(2*p) },
	"cloglog":   func(p float64) float64 { return math.Log(-math.Log1p(-p)) },
	"log-gamma": func(x float64) float64 { v, _ := math.Lgamma(x); return v },
}

// Text writes an expression in its canonical form.
func Text(e Expr) string {
	var b strings.Builder
	write(&b, e, 0)
	return b.String()
}
