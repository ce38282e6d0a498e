package existence

import (
	"bytes"
	"context"
	"fmt"
	"math"
	"math/rand/v2"
	"testing"
	"time"

	"wellposed/parser/model"
	"wellposed/parser/source"
)

type inMemory map[string][]byte

func (l inMemory) Load(_, name string) ([]byte, string, error) { return l[name], name, nil }

// largeLogistic is an overlapped logistic regression of rows × columns.
func largeLogistic(t testing.TB, rows, columns int) *model.Analysis {
	t.Helper()
	r := rand.New(rand.NewPCG(3, 4))
	var b bytes.Buffer
	names := ""
	for j := range columns - 1 {
		fmt.Fprintf(&b, "x%d,", j)
		if j > 0 {
			names += ", "
		}
		names += fmt.Sprintf("x%d", j)
	}
	b.WriteString("y\n")
	for range rows {
		eta := 0.0
		for j := range columns - 1 {
			v := math.Round(r.NormFloat64()*1000) / 1000
			if j%5 == 4 {
				v = float64(r.IntN(2))
			}
			eta += 0.2 * v
			fmt.Fprintf(&b, "%v,", v)
		}
		y := 0
		if r.Float64() < 1/(1+math.Exp(-eta)) {
			y = 1
		}
		fmt.Fprintf(&b, "%d\n", y)
	}
	text := fmt.Sprintf("table d from \"d.csv\"\nunknown alpha : effect\nunknown beta for (%s) : effect\nobserve y as Bernoulli(expit(alpha + linear(beta)))\nprior alpha flat\nprior beta flat\nreport beta\n", names)
	m := model.Build(context.Background(), source.NewFile("d.bayes", text), model.Options{Loader: inMemory{"d.csv": b.Bytes()}})
	for _, p := range m.Problems {
		t.Fatal(p.Headline)
	}
	return m.Declared()
}

func TestLarge(t *testing.T) {
	a := largeLogistic(t, 5000, 8)
	r := Decide(context.Background(), a)
	if s, _ := r.Overall(); s != Exists {
		t.Fatalf("%s: %s", s, r.Verdicts[0].Claim)
	}
	if err := throughJSON(r.Verdicts[0]); err != nil {
		t.Fatal(err)
	}
}

// TestCancel ends the context while a large model is at work.
func TestCancel(t *testing.T) {
	a := largeLogistic(t, 20000, 8)
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	r := Decide(ctx, a)
	if s, _ := r.Overall(); s != NotDecided {
		t.Fatalf("%s after the context ended", s)
	}
	ctx, cancel = context.WithTimeout(context.Background(), time.Millisecond)
	defer cancel()
	r = Decide(ctx, a)
	if s, _ := r.Overall(); s == DoesNotExist {
		t.Fatalf("%s after the context ended", s)
	}
}

func BenchmarkLogistic(b *testing.B) {
	for _, size := range [][2]int{{10000, 20}, {100000, 20}} {
		a := largeLogistic(b, size[0], size[1])
		b.Run(fmt.Sprintf("%dx%d", size[0], size[1]), func(b *testing.B) {
			for b.Loop() {
				if s, _ := Decide(context.Background(), a).Overall(); s != Exists {
					b.Fatal(s)
				}
			}
		})
	}
}

func BenchmarkSmall(b *testing.B) {
	for name, text := range map[string]string{
		"binomial": "given n = 40, y = 3\nunknown p : probability\nobserve y as Binomial(n, p)\nprior p as Beta(0, 0)\nreport p\n",
		"normal":   "given y = [1.2, 1.3, 1.9, 1.4]\nunknown mu : location\nunknown sigma : scale\nobserve y as Normal(mu, sd = sigma)\nprior mu flat\nprior sigma flat\nreport mu\n",
		"meta":     "given est = [0.28, 0.51, -0.05], se = [0.2, 0.25, 0.3]\nunknown mu : location\nunknown tau : scale\nobserve est as Normal(mu, sd = sqrt(tau^2 + se^2))\nprior mu flat\nprior tau flat\nreport mu\n",
	} {
		a := read(b, text).Declared()
		b.Run(name, func(b *testing.B) {
			for b.Loop() {
				Decide(context.Background(), a)
			}
		})
	}
}
