package posterior

import (
	"context"
	"errors"
	"fmt"
	"math"
	"math/rand/v2"
	"testing"
)

// On random inputs quadrature differs from the closed form by no more than the
// two claim together.
func TestClaimedErrorsHold(t *testing.T) {
	random := rand.New(rand.NewPCG(11, 11))
	for range 40 {
		a, b := math.Exp(random.NormFloat64()*2-1), math.Exp(random.NormFloat64()*2-1)
		n := 1 + random.IntN(200)
		y := random.IntN(n + 1)
		for _, c := range []struct{ head, closed, kernel string }{
			{fmt.Sprintf("unknown x : probability\nobserve %d of %d with probability x\n", y, n),
				fmt.Sprintf("prior x as Beta(%.6f, %.6f)\n", a+1e-3, b+1e-3), fmt.Sprintf("prior x ∝ x^(%.6f - 1) * (1 - x)^(%.6f - 1)\n", a+1e-3, b+1e-3)},
			{fmt.Sprintf("unknown x : rate\nobserve %d in %d at rate x\n", y, n),
				fmt.Sprintf("prior x as Gamma(shape = %.6f, rate = %.6f)\n", a+1e-3, b), fmt.Sprintf("prior x ∝ x^(%.6f - 1) * exp(-%.6f * x)\n", a+1e-3, b)},
		} {
			law := func(prior string) *Law {
				m := build(t, c.head+prior+"report x, central 95%\n")
				l, err := LawOf(context.Background(), m.Declared(), m.Reports[0].Value)
				if err != nil {
					t.Fatalf("%s%s%v", c.head, prior, err)
				}
				return l
			}
			exact, drawn := law(c.closed), law(c.kernel)
			for range 3 {
				p := random.Float64()
				q, _ := exact.Quantile(p)
				r, _ := drawn.Quantile(p)
				if e := math.Abs(q.Value - r.Value); e > q.Error+r.Error {
					t.Errorf("%s%squantile %g: %.15g and %.15g differ by %.1e, claimed %.1e", c.head, c.closed, p, q.Value, r.Value, e, q.Error+r.Error)
				}
				u, _ := exact.Below(q.Value)
				v, _ := drawn.Below(q.Value)
				if e := math.Abs(u.Value - v.Value); e > u.Error+v.Error {
					t.Errorf("%s%sP below %g: %.15g and %.15g differ by %.1e, claimed %.1e", c.head, c.closed, q.Value, u.Value, v.Value, e, u.Error+v.Error)
				}
			}
		}
	}
}

// What can't be computed is refused with a reason, and nothing hangs.
func TestRefusals(t *testing.T) {
	ctx := context.Background()
	m := build(t, "await y\nunknown p : probability\nobserve y of 40 with probability p\nprior p flat\nreport p, central 95%\n")
	if _, err := Summarize(ctx, m.Declared(), m.Reports[0]); !errors.Is(err, ErrAwaited) {
		t.Errorf("awaited: %v", err)
	}
	m = build(t, "unknown p : probability\nobserve 0 of 40 with probability p\nprior p as Beta(0, 0)\nreport p, upper 95%\n")
	if _, err := Summarize(ctx, m.Declared(), m.Reports[0]); !errors.Is(err, ErrNoPosterior) {
		t.Errorf("closed form without posterior: %v", err)
	}
	m = build(t, "unknown p : probability\nobserve 0 of 40 with probability p\nprior logit(p) flat\nreport p, upper 95%\n")
	if _, err := Summarize(ctx, m.Declared(), m.Reports[0]); !errors.Is(err, ErrNoPosterior) {
		t.Errorf("flat log odds: %v", err)
	}
	if _, err := Induced(ctx, m.Declared(), m.Reports[0].Value); !errors.Is(err, ErrImproper) {
		t.Errorf("law of an improper prior: %v", err)
	}
	m = build(t, "unknown p : probability\nobserve 0 of 40 with probability p\nprior p jeffreys\nreport p, upper 95%\n")
	var unresolved *UnresolvedError
	if _, err := Summarize(ctx, m.Declared(), m.Reports[0]); !errors.As(err, &unresolved) {
		t.Errorf("unresolved rule: %v", err)
	}
}
