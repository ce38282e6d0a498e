package family

import (
	"errors"
	"math"
	"testing"
)

func near(t *testing.T, what string, got, want, relative float64) {
	t.Helper()
	if !(math.Abs(got-want) <= relative*math.Abs(want)) {
		t.Errorf("%s = %.17g, want %.17g", what, got, want)
	}
}

func TestGammaQuantiles(t *testing.T) {
	g, err := NewGamma(10.5, 6)
	if err != nil {
		t.Fatal(err)
	}
	for p, want := range map[float64]float64{0.05: 0.9659, 0.5: 1.6948, 0.95: 2.7225} {
		near(t, "Gamma(10.5, 6)", g.Quantile(p), want, 6e-5)
	}
	near(t, "Gamma(0.001, 1500.001)", Gamma{0.001, 1500.001}.Quantile(0.95), 2e-26, 0.3)
}

func TestGammaRoundTrip(t *testing.T) {
	for _, a := range []float64{1e-3, 0.1, 0.5, 1, 10.5, 1e3, 1e5} {
		for _, p := range []float64{1e-12, 1e-3, 0.4, 0.6, 0.95, 0.999} {
			u := Gamma{a, 1}.LogQuantile(p)
			lower, _ := logGammaTails(a, u)
			near(t, "P at its quantile", math.Exp(lower), p, 1e-8)
		}
	}
}

func TestGammaExponentialTail(t *testing.T) {
	for _, x := range []float64{1e-9, 0.3, 1.9, 2.1, 40, 700} {
		lower, upper := Gamma{1, 1}.LogTails(x)
		near(t, "log survival", upper, -x, 1e-6)
		near(t, "CDF", math.Exp(lower), -math.Expm1(-x), 1e-12)
	}
}

func TestGammaParameters(t *testing.T) {
	if _, err := NewGamma(0, 0); !errors.Is(err, ErrImproper) {
		t.Error("Gamma(0, 0):", err)
	}
	if _, err := NewGamma(-1, 0); !errors.Is(err, ErrInvalid) {
		t.Error("Gamma(-1, 0):", err)
	}
}
