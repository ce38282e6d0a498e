package posterior

import (
	"context"
	"testing"
)

func benchmarkSummary(b *testing.B, text string) {
	m := build(b, text)
	a := m.Declared()
	b.ReportAllocs()
	for b.Loop() {
		if _, err := Summarize(context.Background(), a, m.Reports[0]); err != nil {
			b.Fatal(err)
		}
	}
}

func BenchmarkClosedForm(b *testing.B) {
	benchmarkSummary(b, "unknown x : probability\nobserve 1 of 20 with probability x\nprior x as Beta(1/2, 1/2)\nreport x, central 95%\n")
}

func BenchmarkOneUnknown(b *testing.B) {
	benchmarkSummary(b, "unknown x : probability\nobserve 1 of 20 with probability x\nprior logit(x) as Normal(0, sd = 1.5)\nreport x, central 95%\n")
}

func BenchmarkThreeStudiesMean(b *testing.B) {
	benchmarkSummary(b, clinics+"prior tau as half-Normal(sd = 1/2)\nreport mu, central 95%\n")
}

func BenchmarkThreeStudiesSpread(b *testing.B) {
	benchmarkSummary(b, clinics+"prior tau as half-Cauchy(scale = 25)\nreport tau, upper 95%\n")
}

const assay = `table assay
| dose  | n | deaths |
| -0.86 | 5 | 0      |
| -0.30 | 5 | 1      |
| -0.05 | 5 | 3      |
| 0.73  | 5 | 5      |
unknown alpha, slope : effect
observe deaths as Binomial(n, expit(alpha + slope * dose))
prior alpha flat
prior slope flat
`

func BenchmarkAssaySlope(b *testing.B) { benchmarkSummary(b, assay+"report slope, central 95%\n") }

func BenchmarkAssayDose(b *testing.B) {
	benchmarkSummary(b, assay+"report -alpha / slope, central 95%\n")
}

func BenchmarkNormalMean(b *testing.B) {
	benchmarkSummary(b, "unknown m : location\nunknown s : scale\nobserve summary(n = 20, mean = 3, sd = 2) as Normal(m, sd = s)\nprior m flat\nprior log(s) flat\nreport m, central 95%\n")
}

func BenchmarkTwoArms(b *testing.B) {
	benchmarkSummary(b, "unknown p, q : probability\nobserve 0 of 20 with probability p\nobserve 5 of 20 with probability q\nprior p as Beta(1/2, 1/2)\nprior q as Beta(1/2, 1/2)\nreport log(odds(q) / odds(p)), central 95%\n")
}
