package objective

import (
	"context"
	"encoding/json"
	"math"
	"os"
	"strings"
	"testing"

	"wellposed/parser/model"
)

// published is a default prior, in two parametrisations.
type published struct {
	id     string
	source string
	in     [2]parametrisation
}

// parametrisation is a model text with its prior by rule, the published kernel
// there, and the name under which the engine prints it ("" when it has none).
type parametrisation struct {
	name   string
	text   string
	kernel func(x []float64) float64
	shown  string
}

const (
	yangBerger = "Yang & Berger (1998), A catalog of noninformative priors; from memory, recomputed in testdata/catalogue.py"
	jeffreys61 = "Jeffreys (1961), Theory of Probability; from memory, recomputed in testdata/catalogue.py"
	boxTiao    = "Box & Tiao (1973), Bayesian Inference in Statistical Analysis, section 1.3; from memory, recomputed in testdata/catalogue.py"
	bernSmith  = "Bernardo & Smith (1994), Bayesian Theory, section 5.4; from memory, recomputed in testdata/catalogue.py"
	bergBern   = "Berger & Bernardo (1992), Bayesian Statistics 4; from memory, recomputed in testdata/catalogue.py"
	derivation = "derivation; recomputed in testdata/catalogue.py"
)

func powerOf(q float64) func(x []float64) float64 {
	return func(x []float64) float64 { return math.Pow(x[0], q) }
}

func constant([]float64) float64 { return 1 }

// second is x[1]^q.
func second(q float64) func(x []float64) float64 {
	return func(x []float64) float64 { return math.Pow(x[1], q) }
}

// oneOf declares one unknown and one observation of the number 1.
func oneOf(kind, law string) string {
	return "unknown t : " + kind + "\ngiven y = 1\nobserve y as " + law + "\nprior t jeffreys\n"
}

// twoOf declares two unknowns in the order of interest.
func twoOf(kinds, laws, rule string) string {
	var b strings.Builder
	for i, k := range strings.Split(kinds, " ") {
		b.WriteString("unknown " + string("tu"[i]) + " : " + k + "\n")
	}
	b.WriteString("given y = 1\n")
	for _, l := range strings.Split(laws, " ; ") {
		b.WriteString("observe y as " + l + "\n")
	}
	return b.String() + "prior (t, u) " + rule + "\n"
}

func reference(names string) string {
	return "reference " + strings.Join(strings.Split(names, " "), " before ")
}

type generated struct {
	ID     string     `json:"id"`
	Points [][]string `json:"points"`
	Log    []string   `json:"log"`
}

func readGenerated(t *testing.T) map[string]generated {
	t.Helper()
	data, err := os.ReadFile("testdata/catalogue.json")
	if err != nil {
		t.Fatal(err)
	}
	var list []generated
	if err := json.Unmarshal(data, &list); err != nil {
		t.Fatal(err)
	}
	out := map[string]generated{}
	for _, g := range list {
		out[g.ID] = g
	}
	return out
}

// derive builds a model text and derives its first prior.
func derive(t *testing.T, text string) *Derived {
	t.Helper()
	d, err := tryDerive(t, text)
	if err != nil {
		t.Fatalf("%v\n%s", err, text)
	}
	return d
}

func tryDerive(t *testing.T, text string) (*Derived, error) {
	t.Helper()
	m := build(t, text)
	var p *model.Prior
	for _, q := range m.Priors {
		if q.Form == model.ByRule {
			p = q
		}
	}
	if p == nil {
		t.Fatalf("no prior by rule in\n%s", text)
	}
	return Derive(context.Background(), m.Declared(), p.Rule, p.About)
}

func TestCatalogue(t *testing.T) {
	values := readGenerated(t)
	counts := map[string]int{}
	for _, e := range catalogue() {
		for _, in := range e.in {
			t.Run(e.id+"/"+in.name, func(t *testing.T) {
				d := derive(t, in.text)
				g, ok := values[e.id+"/"+in.name]
				if !ok {
					t.Fatal("no independent values")
				}
				if in.shown != "" && d.Name != in.shown {
					t.Errorf("printed as %q, want %q", d.Name, in.shown)
				}
				var first, firstWant float64
				for i, point := range g.Points {
					x := make([]float64, len(point))
					sum := 0.0
					for j, s := range point {
						x[j] = float(t, s)
						sum += x[j]
					}
					if len(x) == len(d.Parameters)-1 { // proportions
						x = append(x, 1-sum)
					}
					got, want := d.LogKernel(x), math.Log(in.kernel(x))
					if i == 0 {
						first, firstWant = got, want
					}
					const tolerance = 1e-8
					if e := math.Abs((got - first) - (want - firstWant)); !(e <= tolerance) {
						t.Errorf("at %v: log kernel %v from the first point, published %v", x, got-first, want-firstWant)
					}
					if independent := float(t, g.Log[i]); !(math.Abs((got-first)-independent) <= tolerance) {
						t.Errorf("at %v: log kernel %v from the first point, independently %v", x, got-first, independent)
					}
				}
			})
		}
		switch {
		case strings.HasPrefix(e.id, "ref-"):
			counts["reference"]++
		default:
			counts["jeffreys"]++
		}
		if e.source == "" {
			t.Errorf("%s has no source", e.id)
		}
	}
	if counts["jeffreys"] < 40 || counts["reference"] < 15 {
		t.Errorf("%d Jeffreys and %d reference priors, want 40 and 15", counts["jeffreys"], counts["reference"])
	}
}
