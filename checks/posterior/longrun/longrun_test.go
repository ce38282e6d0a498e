package longrun

import (
	"context"
	"math"
	"testing"
)

func near(t *testing.T, what string, got, want, within float64) {
	t.Helper()
	if !(math.Abs(got-want) <= within) {
		t.Errorf("%s: %.10g, want %.10g within %g", what, got, want, within)
	}
}

// Sizes of the success run: ln(1−C)/ln R for the classical one; the others from
// the Beta distribution function, made with SciPy's beta.cdf.
func TestSuccessRun(t *testing.T) {
	ctx := context.Background()
	for _, c := range []struct {
		name     string
		k        Kernel
		x, level float64
		want     int
	}{
		{"uniform 95/95", Kernel{1, 1}, 0.05, 0.95, 58},
		{"Jeffreys 95/95", Kernel{0.5, 0.5}, 0.05, 0.95, 38},
		{"third 95/95", Kernel{1. / 3, 1. / 3}, 0.05, 0.95, 29},
		{"tenth 95/95", Kernel{0.1, 0.1}, 0.05, 0.95, 12},
		{"hundredth 95/95", Kernel{0.01, 0.01}, 0.05, 0.95, 1},
		{"uniform 99/95", Kernel{1, 1}, 0.01, 0.95, 298},
		{"Jeffreys 99/95", Kernel{0.5, 0.5}, 0.01, 0.95, 191},
		{"uniform 90/90", Kernel{1, 1}, 0.1, 0.9, 21},
		{"Jeffreys 90/90", Kernel{0.5, 0.5}, 0.1, 0.9, 13},
		{"no posterior without a failure", Kernel{0, 0}, 0.05, 0.95, 0},
	} {
		if got := c.k.SuccessRun(ctx, c.x, c.level, 2000); got != c.want {
			t.Errorf("%s: %d, want %d", c.name, got, c.want)
		}
	}
	for _, c := range []struct {
		x, level float64
		want     int
	}{{0.05, 0.95, 59}, {0.01, 0.95, 299}, {0.1, 0.9, 22}} {
		if got := ClassicalRun(c.x, c.level); got != c.want {
			t.Errorf("classical run %v %v: %d, want %d", c.x, c.level, got, c.want)
		}
	}
}

// P(Y = 0 or Y = 40) for p = 0.02, and a product at the boundary passing the
// 38-unit plan, by hand: 0.98^40 + 0.02^40, 0.95^38.
func TestChance(t *testing.T) {
	v, _, err := Chance(Count{Trials: 40}, func(y int) bool { return y == 0 || y == 40 }, 0.02)
	if err != nil {
		t.Fatal(err)
	}
	near(t, "breaks", v, math.Pow(0.98, 40), 1e-12)
	v, _, _ = Chance(Count{Trials: 38}, func(y int) bool { return y == 0 }, 0.05)
	near(t, "consumer's risk", v, 0.1424, 5e-5)
	v, _, _ = Chance(Count{Trials: 40}, func(y int) bool { return y != 3 }, 0.1)
	near(t, "all but one", v, 1-Count{Trials: 40}.Mass(3, 0.1), 1e-10)
	v, _, _ = Chance(Count{Exposure: 1500}, func(y int) bool { return y < 2 }, 0.001)
	near(t, "Poisson", v, 2.5*math.Exp(-1.5), 1e-12)
}

// Lowest and average long-run coverage for n = 40, central 95 %, p from 0.01 to
// 0.2; the average was computed with SciPy on 20001 points (0.952 for both), the
// lowest there is 0.886 (Jeffreys) and 0.875 (uniform), and lies beside a jump.
func TestCover(t *testing.T) {
	ctx := context.Background()
	for _, c := range []struct {
		name            string
		k               Kernel
		n               int
		lowest, average float64
	}{
		{"Jeffreys 40", Kernel{0.5, 0.5}, 40, 0.886, 0.952},
		{"uniform 40", Kernel{1, 1}, 40, 0.875, 0.952},
		{"Jeffreys 160", Kernel{0.5, 0.5}, 160, 0.879, math.NaN()},
		{"uniform 160", Kernel{1, 1}, 160, 0.919, math.NaN()},
	} {
		plan := Count{Trials: c.n}
		r, err := Cover(ctx, plan, c.k.Intervals(plan, Tails{0.025, 0.025}, c.n+1), 0.01, 0.2)
		if err != nil {
			t.Fatal(err)
		}
		near(t, c.name+" lowest", r.Lowest, c.lowest, 6e-4)
		if !math.IsNaN(c.average) {
			near(t, c.name+" average", r.Average, c.average, 6e-4)
		}
		if r.Error > 1e-8 {
			t.Errorf("%s: error %g", c.name, r.Error)
		}
		brute(t, c.name, plan, c.k.Intervals(plan, Tails{0.025, 0.025}, c.n+1), r)
	}
}

// brute compares with the plain sum over outcomes on a grid: never below Lowest,
// and the mean of the midpoints near Average.
func brute(t *testing.T, name string, c Count, limits []Limits, r *Coverage) {
	t.Helper()
	const steps = 4000
	sum := 0.0
	for i := range steps {
		x := r.From + (r.To-r.From)*(float64(i)+0.5)/steps
		v := 0.0
		for y, l := range limits {
			if !l.None && l.Low <= x && x <= l.High {
				v += c.Mass(y, x)
			}
		}
		if v < r.Lowest-1e-9 {
			t.Fatalf("%s: coverage %v at %v is below the lowest, %v", name, v, x, r.Lowest)
		}
		sum += v
	}
	near(t, name+" average on a grid", r.Average, sum/steps, 2e-4)
}

func TestCoverPoissonAndGaps(t *testing.T) {
	ctx := context.Background()
	plan := Count{Exposure: 100}
	n, err := plan.Outcomes(0.2, MaxOutcomes)
	if err != nil {
		t.Fatal(err)
	}
	limits := Kernel{0.5, 0}.Intervals(plan, Tails{0.025, 0.025}, n)
	r, err := Cover(ctx, plan, limits, 0.01, 0.2)
	if err != nil {
		t.Fatal(err)
	}
	brute(t, "Poisson", plan, limits, r)
	// An outcome in the middle without a posterior leaves two runs.
	binomial := Count{Trials: 20}
	limits = Kernel{1, 1}.Intervals(binomial, Tails{0.025, 0.025}, 21)
	limits[5].None = true
	if r, err = Cover(ctx, binomial, limits, 0.1, 0.5); err != nil {
		t.Fatal(err)
	}
	if r.Error < 1e-6 {
		t.Errorf("two runs of outcomes: error %g", r.Error)
	}
}

// The acceptance number agrees with a scan.
func TestMostFailures(t *testing.T) {
	for _, k := range []Kernel{{1, 1}, {0.5, 0.5}, {0, 0}, {0.01, 0.01}} {
		for _, n := range []int{1, 10, 59, 200} {
			plan := Count{Trials: n}
			want := -1
			for y := 0; y <= n; y++ {
				if v, ok := k.Below(plan, y, 0.1); ok && v >= 0.9 {
					want = y
				}
			}
			if got := k.MostFailures(plan, 0.1, 0.9, n); got != want {
				t.Errorf("%v, n = %d: %d, want %d", k, n, got, want)
			}
		}
	}
}

func TestEnumerate(t *testing.T) {
	total := 0.0
	arms := []Arm{{Count{Trials: 3}, 0.2}, {Count{Trials: 2}, 0.7}}
	masses := Masses(arms)
	n, err := Enumerate(context.Background(), []Count{arms[0].Count, arms[1].Count}, 100, func(y []int) error {
		total += Product(masses, y)
		return nil
	})
	if err != nil || n != 12 {
		t.Fatal(n, err)
	}
	near(t, "all outcomes", total, 1, 1e-12)
	if _, err := Enumerate(context.Background(), []Count{{Trials: 200}, {Trials: 200}}, 1000, nil); err == nil {
		t.Error("an enumeration past the limit was begun")
	}
}

func BenchmarkCover40(b *testing.B) {
	plan := Count{Trials: 40}
	for b.Loop() {
		if _, err := Cover(context.Background(), plan, Kernel{0.5, 0.5}.Intervals(plan, Tails{0.025, 0.025}, 41), 0.01, 0.2); err != nil {
			b.Fatal(err)
		}
	}
}

// P(X > Y) against quadrature of f_X F_Y with SciPy, and the complement.
func TestGreater(t *testing.T) {
	for _, c := range []struct{ a, b, c, d, want float64 }{
		{1, 1, 1, 1, 0.5},
		{6, 16, 1, 21, 0.9896556969727701},
		{5.5, 15.5, 0.5, 20.5, 0.9954703276365275},
		{2, 1, 1, 1, 2. / 3},
		{1, 2, 1, 1, 1. / 3},
	} {
		v, bound, ok := Greater(c.a, c.b, c.c, c.d)
		if !ok || bound > 1e-9 {
			t.Fatal(ok, bound)
		}
		near(t, "greater", v, c.want, 1e-9)
		w, _, _ := Greater(c.c, c.d, c.a, c.b)
		near(t, "complement", v+w, 1, 1e-11)
	}
	if _, _, ok := Greater(0, 1, 1, 1); ok {
		t.Error("an improper law was compared")
	}
}
