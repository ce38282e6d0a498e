package model

import (
	"errors"
	"math"
	"math/big"
	"strings"
	"testing"
)

const readings = "table t\n| x | y | g | m |\n| 1 | 0.1 | a | 1 |\n| 2 | 0.2 | b | NA |\n| 4 | -3 | a | 2 |\ngiven k = 3, v = [1, 2, 1/3], s = [\"u\", \"w\"]\nunknown p : probability\nprior p flat\n"

// let evaluates to the expression of `let q = …` in the readings model.
func let(t *testing.T, text string) Expr {
	t.Helper()
	m := build(t, readings+"let q = "+text+"\n", nil)
	if len(m.Problems) > 0 || len(m.Lets) != 1 {
		t.Fatalf("%s: %q", text, told(m))
	}
	return m.Lets[0].Value
}

func TestEvalExact(t *testing.T) {
	for text, want := range map[string]string{
		"x + y": "11/10", "x - y * k": "7/10", "x / 3": "1/3", "-x^2": "-1", "2^3^2": "512", "2^-2": "1/4", "(1/4)^(1/2)": "1/2", "(8/27)^(2/3)": "4/9",
		"0.1 + 0.2": "3/10", "1e-3": "1/1000", "abs(-x)": "1", "sqrt(9/4)": "3/2", "odds(1/4)": "1/3", "min(x, y)": "1/10", "max(x, k, y)": "3",
		"sum(x)": "7", "mean(x)": "7/3", "length(x)": "3", "max(x)": "4", "min(y)": "-3", "sum(x * y)": "-23/2", "sum(v)": "10/3", "sum((x, y))": "11/10",
		"mean((1, 2, 4))": "7/3", "length((1, 2))": "2", "x - mean(x)": "-4/3", "sum(x - mean(x))": "0", "sum(k)": "3", "max((x, 2))": "2", "length(m)": "3",
	} {
		got, err := EvalExact(let(t, text), 0)
		if err != nil || got.RatString() != want {
			t.Errorf("%s: %v %v, want %s", text, got, err, want)
		}
	}
	for text, want := range map[string]string{
		"1 / (x - 1)": "divides by zero", "0^-1": "divides by zero", "odds(x)": "divides by zero", "sqrt(-x)": "root of a negative", "log(x)": ErrInexact.Error(),
		"pi": ErrInexact.Error(), "sqrt(2)": ErrInexact.Error(), "p + 1": ErrUnknown.Error(), "sum(m)": "missing in row 2", "2^10000000": "too large",
		"2^(2^100)": ErrInexact.Error(), "(10^100000)^100": "too large",
	} {
		got, err := EvalExact(let(t, text), 0)
		if err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("%s: %v, error %v", text, got, err)
		}
	}
}

func TestEvalFloat(t *testing.T) {
	for text, want := range map[string]float64{
		"log(x + 1)": math.Log(2), "exp(y)": math.Exp(0.1), "pi / 4": math.Pi / 4, "expit(0)": 0.5, "logit(1/2)": 0, "Phi(0)": 0.5, "probit(1/2)": 0, "sqrt(2)^2": 2,
		"atan(1)": math.Pi / 4, "log-gamma(5)": math.Log(24), "cloglog(1 - exp(-1))": 0, "sum(log(x))": math.Log(8), "mean(exp(x))": (math.E + math.Exp(2) + math.Exp(4)) / 3,
		"max(log(x))": math.Log(4), "min(log(x), 5)": 0, "tanh(atanh(1/3))": 1.0 / 3, "-log(2)": -math.Ln2, "inf": math.Inf(1),
	} {
		got, err := EvalFloat(let(t, text), 0)
		if err != nil || got != want && math.Abs(got-want) > 4e-16*math.Max(1, math.Abs(want)) {
			t.Errorf("%s: %v %v, want %v", text, got, err, want)
		}
	}
	if _, err := EvalFloat(let(t, "log(p)"), 0); !errors.Is(err, ErrUnknown) {
		t.Error(err)
	}
}

func TestCondition(t *testing.T) {
	for text, want := range map[string][3]bool{
		"x > 1":                      {false, true, true},
		"y == 0.1 or g == \"b\"":     {true, true, false},
		"not g == \"a\" and x >= 2":  {false, true, false},
		"0 < y < 0.2":                {true, false, false},
		"y <= 1/5":                   {true, true, true},
		"g != \"a\"":                 {false, true, false},
		"m != \"NA\"":                {true, false, true},
		"x == 2 or x == 4 and 1 < 2": {false, true, true},
	} {
		e := let(t, text)
		for row, w := range want {
			if got, err := Condition(e, row); err != nil || got != w {
				t.Errorf("%s, row %d: %v %v", text, row, got, err)
			}
		}
	}
	if _, err := Condition(let(t, "g < \"b\""), 0); err == nil {
		t.Error("levels were ordered")
	}
	if _, err := Condition(let(t, "m > 1"), 1); err == nil {
		t.Error("a missing value was compared")
	}
}

// TestGatheredOnce: a sum over rows is one value, so that the statement has one
// row and not one for each of the table's.
func TestGatheredOnce(t *testing.T) {
	m := build(t, readings+"observe sum(x) of 100 with probability p\n", nil)
	if o := m.Observations[0]; len(o.Rows) != 1 {
		t.Errorf("rows %v", o.Rows)
	}
	m = build(t, readings+"unknown b : effect\nprior b flat\nobserve x as Normal(b * (y - mean(y)), sd = 1)\n", nil)
	if o := m.Observations[0]; len(o.Rows) != 3 || len(m.Problems) > 0 {
		t.Errorf("rows %v, %q", o.Rows, told(m))
	}
	// Long columns: the mean is taken once, not once in each row.
	var b strings.Builder
	b.WriteString("x\n")
	for range 200_000 {
		b.WriteString("1.5\n")
	}
	m = build(t, "table t from \"t.csv\"\nunknown b : effect\nobserve x as Normal(b * (x - mean(x)), sd = 1), weighted by mean(x)\nprior b flat\n", Memory{"t.csv": b.String()})
	if len(m.Problems) > 0 {
		t.Errorf("%q", told(m))
	}
	if got, err := EvalExact(m.Observations[0].Weight, 17); err != nil || got.Cmp(big.NewRat(3, 2)) != 0 {
		t.Error(got, err)
	}
}
