package family

import (
	"math"
	"testing"
)

func TestNormalTails(t *testing.T) {
	// The square is a Gamma: 2 Φ(−z) = Q(1/2, z²/2).
	for _, z := range []float64{0.1, 1, 5, 9.9, 10.1, 30, 100} {
		lower, upper := Normal{2, 3}.LogTails(2 + 3*z)
		half, tail := Gamma{0.5, 1}.LogTails(z * z / 2)
		near(t, "log survival", upper, tail-math.Ln2, 1e-11)
		near(t, "CDF", math.Exp(lower), (1+math.Exp(half))/2, 1e-12)
	}
}

func TestNormalScore(t *testing.T) {
	d, h := Normal{1, 2}, 1e-5
	mean, sd := d.Score(4)
	near(t, "score of the mean", mean, (Normal{1 + h, 2}.LogDensity(4)-Normal{1 - h, 2}.LogDensity(4))/(2*h), 1e-8)
	near(t, "score of the sd", sd, (Normal{1, 2 + h}.LogDensity(4)-Normal{1, 2 - h}.LogDensity(4))/(2*h), 1e-8)
	var gotMean, gotSD float64
	const step = 1e-3
	for x := -25.0; x < 27; x += step {
		m, s := d.Score(x)
		w := math.Exp(d.LogDensity(x)) * step
		gotMean += m * m * w
		gotSD += s * s * w
	}
	mean, sd = d.Information()
	near(t, "information of the mean", gotMean, mean, 1e-9)
	near(t, "information of the sd", gotSD, sd, 1e-9)
}
