package model

import (
	"math"
	"math/big"
	"math/rand/v2"
	"strconv"
	"testing"
)

func TestParseDecimal(t *testing.T) {
	for text, want := range map[string]string{
		"0": "0", "-0": "0", "40": "40", "-0.86": "-43/50", "0.1": "1/10", "1e-3": "1/1000", "+2.50": "5/2", ".5": "1/2", "5.": "5", "1E2": "100",
	} {
		if got := ParseDecimal(text); got == nil || got.RatString() != want {
			t.Errorf("%s: %v", text, got)
		}
	}
	for _, text := range []string{"", "-", ".", "1e", "e3", "1.2.3", "1,5", "NaN", "Inf", "0x10", "1_000", "1/2", " 1", "1e10001", "--1", "+-1", "1e+", "٣"} {
		if got := ParseDecimal(text); got != nil {
			t.Errorf("%q is read as %v", text, got)
		}
		if x, ok := decimalFloat(text); ok {
			t.Errorf("%q is read as %v", text, x)
		}
	}
}

// checkFloat compares decimalFloat with the nearest double, bit by bit, and
// decimalParts with the exact value.
func checkFloat(t *testing.T, text string) {
	t.Helper()
	x, ok := decimalFloat(text)
	if ok != isDecimal(text) {
		t.Fatalf("%q: %v, isDecimal %v", text, ok, !ok)
	}
	if !ok {
		return
	}
	want, _ := strconv.ParseFloat(text, 64)
	if math.Float64bits(x) != math.Float64bits(want) {
		t.Errorf("%q: %v, the nearest double is %v", text, x, want)
	}
	long, _ := new(big.Rat).SetString(text)
	if got := ParseDecimal(text); got == nil || got.Cmp(long) != 0 {
		t.Errorf("%q: %v, want %v", text, got, long)
	}
	if m, e, ok := decimalParts(text); ok && e > -400 && e < 400 {
		ten := new(big.Rat).SetInt(new(big.Int).Exp(big.NewInt(10), big.NewInt(int64(abs(e))), nil))
		value := new(big.Rat).SetInt64(m)
		if e < 0 {
			value.Quo(value, ten)
		} else {
			value.Mul(value, ten)
		}
		if value.Cmp(ParseDecimal(text)) != 0 {
			t.Errorf("%q: %d × 10^%d", text, m, e)
		}
	}
}

func TestDecimalFloat(t *testing.T) {
	r := rand.New(rand.NewPCG(3, 4))
	for range 200_000 {
		x := math.Float64frombits(r.Uint64())
		switch r.IntN(4) {
		case 0:
			x = r.NormFloat64()
		case 1:
			x = math.Round(r.NormFloat64()*1e6) / math.Pow(10, float64(r.IntN(12)))
		case 2:
			x = float64(r.Int64())
		}
		if math.IsNaN(x) || math.IsInf(x, 0) {
			continue
		}
		format := []byte{'e', 'f', 'g'}[r.IntN(3)]
		if format == 'f' && (math.Abs(x) > 1e25 || math.Abs(x) < 1e-25) {
			format = 'e'
		}
		checkFloat(t, strconv.FormatFloat(x, format, r.IntN(20)-1, 64))
	}
	for _, s := range []string{"-0", "0.000000000000000", "0.0000000000000001", "999999999999999", "9999999999999999", "1e400", "-1e400", "1e-400", "00000000000000000001", "123456789012345.", ".123456789012345"} {
		checkFloat(t, s)
	}
}

func FuzzDecimal(f *testing.F) {
	for _, s := range []string{"0", "-0.86", "1e-3", "1e308", "9.99999999999999999", "5e-324", "+.5", "1/3"} {
		f.Add(s)
	}
	f.Fuzz(checkFloat)
}

func TestDecimalText(t *testing.T) {
	r := rand.New(rand.NewPCG(5, 6))
	for range 5000 {
		x := big.NewRat(r.Int64N(2000001)-1000000, []int64{1, 2, 3, 5, 7, 8, 10, 100, 1000, 125, 1 << 40}[r.IntN(11)])
		text := decimalText(x)
		back := ParseDecimal(text)
		if back == nil {
			back, _ = fraction(text)
		}
		if back == nil || back.Cmp(x) != 0 {
			t.Fatalf("%v is written %s", x, text)
		}
	}
}
