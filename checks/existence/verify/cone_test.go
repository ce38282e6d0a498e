package verify

import (
	"math/big"
	"testing"
)

func rats(v ...int64) []*big.Rat {
	out := make([]*big.Rat, len(v))
	for i := range v {
		out[i] = big.NewRat(v[i], 1)
	}
	return out
}

// Rows (1, 2), (1, 5), (1, 3) with senses ≥, ≤, =.
func small() *Cone {
	return &Cone{
		Columns: []ConeColumn{{Mantissa: []int64{1, 1, 1}}, {Mantissa: []int64{20, 50, 30}, Exponent: -1}},
		Senses:  []int8{1, -1, 0},
	}
}

func TestConeDirection(t *testing.T) {
	c := small()
	if err := ConeDirection(c, rats(3, -1), nil); err != nil {
		t.Error(err)
	}
	for name, bad := range map[string]struct {
		d        []*big.Rat
		touching []int
	}{
		"zero":            {rats(0, 0), []int{0, 1}},
		"equation":        {rats(4, -1), nil},
		"opposite":        {rats(-3, 1), nil},
		"too short":       {rats(3), nil},
		"touching listed": {rats(3, -1), []int{0}},
		"missing entry":   {[]*big.Rat{big.NewRat(3, 1), nil}, nil},
	} {
		if ConeDirection(c, bad.d, bad.touching) == nil {
			t.Errorf("%s: accepted", name)
		}
	}
	c.Senses[0] = -1
	if ConeDirection(c, rats(3, -1), nil) == nil {
		t.Error("violated row: accepted")
	}
}

func TestConeNull(t *testing.T) {
	c := &Cone{Columns: []ConeColumn{
		{Rational: []*big.Rat{big.NewRat(1, 3), big.NewRat(2, 7)}},
		{Rational: []*big.Rat{big.NewRat(1, 6), big.NewRat(1, 7)}},
		{Rows: []int32{1}, Mantissa: []int64{9}},
	}, Senses: []int8{1, 0}}
	if err := ConeNull(c, rats(1, -2, 0)); err != nil {
		t.Error(err)
	}
	if ConeNull(c, rats(1, -2, 1)) == nil || ConeNull(c, rats(0, 0, 0)) == nil || ConeNull(c, rats(1, -1, 0)) == nil {
		t.Error("accepted")
	}
}

func TestConeOverlap(t *testing.T) {
	c := small()
	c.Senses = []int8{1, 1, -1}
	// 2·(1, 2) + (1, 5) − 3·(1, 3) = 0.
	if err := ConeOverlap(c, []int{0, 1, 2}, rats(2, 1, 3)); err != nil {
		t.Error(err)
	}
	for name, bad := range map[string]struct {
		rows    []int
		weights []*big.Rat
	}{
		"changed":    {[]int{0, 1, 2}, rats(2, 1, 4)},
		"zero":       {[]int{0, 1, 2}, rats(0, 0, 0)},
		"negative":   {[]int{0, 1, 2}, rats(-2, -1, -3)},
		"none":       {nil, nil},
		"twice":      {[]int{0, 0}, rats(1, -1)},
		"range":      {[]int{0, 1, 3}, rats(2, 1, 3)},
		"short":      {[]int{0, 1, 2}, rats(2, 1)},
		"nil weight": {[]int{0, 1, 2}, []*big.Rat{big.NewRat(2, 1), nil, nil}},
	} {
		if ConeOverlap(c, bad.rows, bad.weights) == nil {
			t.Errorf("%s: accepted", name)
		}
	}
	// Sums to 0, but the rank is 1.
	low := &Cone{Columns: []ConeColumn{{Mantissa: []int64{1, 1}}, {Mantissa: []int64{2, 2}}}, Senses: []int8{1, -1}}
	if ConeOverlap(low, []int{0, 1}, rats(1, 1)) == nil {
		t.Error("low rank: accepted")
	}
	// A multiple of the prime of the residues is not 0.
	q := new(big.Rat).SetInt(new(big.Int).SetUint64(1<<63 - 25))
	high := &Cone{Columns: []ConeColumn{{Rational: []*big.Rat{q, q}}}, Senses: []int8{1, -1}}
	if err := ConeOverlap(high, []int{0, 1}, rats(1, 1)); err != nil {
		t.Error(err)
	}
}
