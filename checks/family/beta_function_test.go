package family

import (
	"errors"
	"math"
	"testing"
)

func TestBetaQuantiles(t *testing.T) {
	for _, c := range []struct{ a, b, p, want, relative float64 }{
		{0.5, 40.5, 0.95, 0.0466, 2e-3},
		{1, 41, 0.95, -math.Expm1(math.Log(0.05) / 41), 1e-12},
		{1, 41, 0.95, 0.0705, 1e-3},
		{1.0 / 3, 40 + 1.0/3, 0.95, 0.0362, 2e-3},
		{8.5, 254.5, 0.5, 0.03114, 2e-4},
	} {
		near(t, "Beta quantile", Beta{c.a, c.b}.Quantile(c.p), c.want, c.relative)
	}
	d := Beta{8.5, 254.5}
	near(t, "5 %", d.Quantile(0.05), 0.01665, 4e-4)
	near(t, "95 %", d.Quantile(0.95), 0.05202, 2e-4)
}

func TestBetaMirror(t *testing.T) {
	for _, a := range []float64{1e-3, 0.5, 3, 200, 1e5} {
		for _, b := range []float64{1e-3, 0.5, 7, 1e4} {
			for _, p := range []float64{1e-9, 0.2, 0.75, 0.999} {
				v := Beta{a, b}.LogitQuantile(p)
				lower, upper := logBetaTails(a, b, v)
				near(t, "I at its quantile", math.Exp(lower), p, 1e-8)
				mirroredLower, mirroredUpper := logBetaTails(b, a, -v)
				near(t, "mirror", mirroredUpper, lower, 1e-6)
				near(t, "mirror", mirroredLower, upper, 1e-6)
			}
		}
	}
}

func TestBetaParameters(t *testing.T) {
	if _, err := NewBeta(0, 0); !errors.Is(err, ErrImproper) {
		t.Error("Beta(0, 0):", err)
	}
	if _, err := NewBeta(math.NaN(), 1); !errors.Is(err, ErrInvalid) {
		t.Error("Beta(NaN, 1):", err)
	}
}
