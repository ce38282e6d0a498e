package posterior

import (
	"context"
	"math"
	"testing"

	"wellposed/parser/model"
	"wellposed/parser/source"
)

// Counts that are seen only from 1 on: with λ ~ Gamma(1, 1) and one count of 1
// the kernel is λ e^(−λ) / (1 − e^(−λ)) · e^(−λ). Its mean is
// Σ_k k!-type sums: ∫λ²e^(−2λ)/(1 − e^(−λ)) / ∫λe^(−2λ)/(1 − e^(−λ))
// = 2 Σ 1/(k + 2)³ / Σ 1/(k + 2)², k = 0, 1, … (derivation).
func TestTruncatedCountsIncludeTheirEnds(t *testing.T) {
	for _, bracket := range []string{"(1, inf)", "[1, inf)", "(0.5, inf)"} {
		text := "given y = 1\nunknown m : rate\nobserve y as Poisson(m), truncated to " + bracket + "\nprior m as Exponential(rate = 1)\nreport m, mean, upper 95%\n"
		m := model.Build(context.Background(), source.NewFile("m.bayes", text), model.Options{})
		if len(m.Problems) > 0 {
			t.Fatal(m.Problems)
		}
		s, err := Summarize(context.Background(), m.Declared(), m.Reports[0])
		if err != nil {
			t.Fatal(err)
		}
		second, third := 0.0, 0.0
		for k := 2_000_000; k >= 2; k-- {
			x := float64(k)
			second += 1 / (x * x)
			third += 1 / (x * x * x)
		}
		second += 1 / 2_000_000.5 // the rest of the sum
		if want := 2 * third / second; math.Abs(s.Mean.Value-want) > 1e-6 {
			t.Errorf("%s: mean %v, want %v", bracket, s.Mean.Value, want)
		}
	}
}
