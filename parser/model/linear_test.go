package model

import (
	"context"
	"errors"
	"fmt"
	"math/big"
	"math/rand/v2"
	"strings"
	"testing"
	"time"
)

const regions = `table t
| y | n | dose  | w   | g | h |
| 1 | 4 | -0.86 | 1/3 | a | b |
| 0 | 3 | 0     | 2   | b | a |
| 2 | 9 | 1e-3  | 0   | c | c |
| 2 | 9 | 12    | 7   | a | c |
unknown alpha, slope : effect
unknown gamma per g relative to "b" : effect
unknown ability per (g, h) : effect
unknown beta for (dose, n) : effect
given k = 2.5
let eta = alpha + slope * dose
prior (alpha, slope, gamma, ability, beta) flat
`

// valueOf evaluates an expression with numbers in place of unknowns, straight
// from its definition.
func valueOf(e Expr, row int, at func(u *Unknown, c int) *big.Rat) *big.Rat {
	arg := func(i int) *big.Rat {
		switch x := e.(type) {
		case *Op:
			return valueOf(x.Args[i], row, at)
		case *Call:
			return valueOf(x.Args[i], row, at)
		}
		return nil
	}
	switch x := e.(type) {
	case *LetRef:
		return valueOf(x.Let.Value, row, at)
	case *UnknownRef:
		switch x.Which {
		case Fixed:
			return at(x.Unknown, x.Component)
		case ByRow:
			return at(x.Unknown, x.Unknown.ComponentOf(x.By, row))
		}
		return at(x.Unknown, 0)
	case *Op:
		switch x.Op {
		case "neg":
			return new(big.Rat).Neg(arg(0))
		case "+":
			return new(big.Rat).Add(arg(0), arg(1))
		case "-":
			return new(big.Rat).Sub(arg(0), arg(1))
		case "*":
			return new(big.Rat).Mul(arg(0), arg(1))
		case "/":
			return new(big.Rat).Quo(arg(0), arg(1))
		}
	case *Call:
		switch x.Func {
		case "linear":
			u, total := x.Args[0].(*UnknownRef).Unknown, new(big.Rat)
			for i, c := range u.For {
				total.Add(total, new(big.Rat).Mul(at(u, i), c.Exact(row)))
			}
			return total
		case "sum", "mean":
			if ref, ok := x.Args[0].(*UnknownRef); ok {
				total := new(big.Rat)
				for i := range ref.Unknown.Components() {
					total.Add(total, at(ref.Unknown, i))
				}
				if x.Func == "mean" {
					total.Quo(total, big.NewRat(int64(ref.Unknown.Components()), 1))
				}
				return total
			}
		}
	}
	v, err := EvalExact(e, row)
	if err != nil {
		panic(err)
	}
	return v
}

// TestLinearForm compares offset + Σ coefficient × component with the value of
// the expression, exactly, at random points.
func TestLinearForm(t *testing.T) {
	r := rand.New(rand.NewPCG(7, 8))
	for _, text := range []string{
		"alpha", "eta", "-eta / k + n", "alpha + slope * (dose - mean(dose))", "gamma[g]", "alpha + gamma[g] * dose - gamma[g]",
		"ability[g] - ability[h]", "linear(beta)", "alpha - 2 * linear(beta) + beta[dose]", "sum(gamma) - mean(ability) * w",
		"gamma[\"a\"] + gamma[\"b\"] + gamma[g]", "(alpha + slope) * w / 3 - (slope - alpha) * dose", "1/7 * slope", "dose * w",
		"alpha * max(n) + min(n, dose)",
	} {
		m := build(t, regions+"observe y as Normal("+text+", sd = 1)\n", nil)
		if len(m.Problems) > 0 {
			t.Errorf("%s: %q", text, told(m))
			continue
		}
		e := m.Observations[0].Dist.Arg("mean")
		rows := []int{0, 1, 2, 3}
		if r.IntN(2) == 0 {
			rows = []int{3, 1}
		}
		l, err := m.LinearForm(context.Background(), e, rows)
		if err != nil {
			t.Errorf("%s: %v", text, err)
			continue
		}
		values := map[string]*big.Rat{}
		at := func(u *Unknown, c int) *big.Rat {
			if c == u.Relative {
				return new(big.Rat)
			}
			key := fmt.Sprint(u.Name, c)
			if values[key] == nil {
				values[key] = big.NewRat(r.Int64N(1000)-500, r.Int64N(30)+1)
			}
			return values[key]
		}
		for i, row := range rows {
			got := new(big.Rat).Set(l.Offset.At(i))
			last := -1
			for _, term := range l.Terms {
				got.Add(got, new(big.Rat).Mul(term.At(i), at(term.Unknown, term.Component)))
				order := 0
				for k, u := range m.Unknowns {
					if u == term.Unknown {
						order = k*1000 + term.Component
					}
				}
				if order <= last {
					t.Errorf("%s: terms are not in order", text)
				}
				last = order
			}
			if want := valueOf(e, row, at); got.Cmp(want) != 0 {
				t.Errorf("%s, row %d: %v, want %v", text, row, got, want)
			}
		}
	}
	for _, text := range []string{"exp(alpha)", "alpha * slope", "alpha^2", "1 / alpha", "alpha / slope", "gamma[g] * alpha", "abs(alpha)", "max(alpha, slope)"} {
		m := build(t, regions+"observe y as Normal("+text+", sd = 1)\n", nil)
		if _, err := m.LinearForm(context.Background(), m.Observations[0].Dist.Arg("mean"), []int{0}); !errors.Is(err, ErrNotLinear) {
			t.Errorf("%s: %v", text, err)
		}
	}
}

func TestLinearFormStops(t *testing.T) {
	m := build(t, regions+"observe y as Normal(alpha + slope * (dose * w), sd = 1)\n", nil)
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	if _, err := m.LinearForm(ctx, m.Observations[0].Dist.Arg("mean"), []int{0, 1}); !errors.Is(err, context.Canceled) {
		t.Error(err)
	}
}

// wideModel is a logistic regression on that many rows and columns.
func wideModel(rows, columns int) (string, Memory) {
	var b strings.Builder
	b.WriteString("table t from \"wide.csv\"\nunknown alpha : effect\nunknown beta for (")
	for j := range columns {
		if j > 0 {
			b.WriteString(", ")
		}
		fmt.Fprintf(&b, "x%d", j+1)
	}
	b.WriteString(") : effect\nobserve x0 as Normal(alpha + linear(beta), sd = 1)\nprior (alpha, beta) flat\nreport alpha\n")
	return b.String(), Memory{"wide.csv": numbersCSV(rows, columns+1)}
}

// smallModel is a model of about that many lines without tables.
func smallModel(lines int) string {
	var b strings.Builder
	b.WriteString("title \"many\"\ngiven n = 40\n")
	for i := 0; i < lines/5; i++ {
		fmt.Fprintf(&b, "given y%d = %d\nunknown p%d : probability \"arm %d\"\nobserve y%d as Binomial(n, p%d)\nprior p%d as Beta(1/2, 1/2) because \"plan\"\nreport odds%d = p%d / (1 - p%d), central 95%%\n", i, i%40, i, i, i, i, i, i, i, i)
	}
	return b.String()
}

func BenchmarkBuild(b *testing.B) {
	for _, n := range []int{50, 1000} {
		b.Run(fmt.Sprintf("%d_lines", n), func(b *testing.B) {
			text := smallModel(n)
			m := build(b, text, nil)
			if len(m.Problems) > 0 {
				b.Fatal(told(m)[0])
			}
			b.ReportAllocs()
			for b.Loop() {
				BuildTree(context.Background(), m.File, m.Tree, nil, Options{Loader: Memory{}})
			}
		})
	}
	b.Run("100000_rows_50_columns", func(b *testing.B) {
		text, files := wideModel(100_000, 50)
		b.ReportAllocs()
		for b.Loop() {
			if m := build(b, text, files); len(m.Problems) > 0 {
				b.Fatal(told(m)[0])
			}
		}
	})
	b.Run("linear_form_100000_rows_50_columns", func(b *testing.B) {
		text, files := wideModel(100_000, 50)
		m := build(b, text, files)
		o := m.Observations[0]
		b.ReportAllocs()
		for b.Loop() {
			if _, err := m.LinearForm(context.Background(), o.Dist.Arg("mean"), o.Rows); err != nil {
				b.Fatal(err)
			}
		}
	})
}

// TestCancelledBuildReturns: a build whose context has ended does no work.
func TestCancelledBuildReturns(t *testing.T) {
	text, files := wideModel(200, 3)
	ctx, cancel := context.WithTimeout(context.Background(), -time.Second)
	defer cancel()
	if m := Build(ctx, build(t, text, files).File, Options{Loader: files}); len(m.Observations) != 0 {
		t.Error("built")
	}
}
