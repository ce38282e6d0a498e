package diag

import (
	"math"
	"testing"
)

func TestFigure(t *testing.T) {
	for _, c := range []struct {
		value, bound float64
		most         int
		want         string
	}{
		{0.0465712, 1e-12, 0, "0.0466"},
		{0.0704978, 0, 0, "0.0705"},
		{2.0e-26, 0, 2, "2.0·10⁻²⁶"},
		{-0.2361, 0, 2, "−0.24"},
		{1964.2, 0, 4, "1964"},
		{12345.6, 0, 0, "12,300"},
		{0.123456, 0.004, 5, "0.12"},
		{0.123456, 0.4, 5, "about 0.1"},
		{9.999, 0, 2, "10"},
		{0, 0, 0, "0"},
		{math.Inf(-1), 0, 0, "−∞"},
		{math.NaN(), 0, 0, "undefined"},
		{221, 0, 0, "221"},
		{999.6, 0, 3, "1000"},
	} {
		if got := Figure(c.value, c.bound, c.most); got != c.want {
			t.Errorf("Figure(%v, %v, %d) = %q, want %q", c.value, c.bound, c.most, got, c.want)
		}
	}
}
