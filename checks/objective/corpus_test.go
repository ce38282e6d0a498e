package objective

import (
	"context"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"wellposed/parser/model"
	"wellposed/parser/source"
)

// TestCorpus derives by every rule for every unknown of the model files in the
// tree (every fifth of the large corpus on existence): nothing panics, kernels are
// numbers inside the support, and texts are read back.
func TestCorpus(t *testing.T) {
	var files []string
	for _, pattern := range []string{"../../testdata/*/*.bayes", "../../testdata/*/*/*.bayes"} {
		found, err := filepath.Glob(pattern)
		if err != nil {
			t.Fatal(err)
		}
		for i, f := range found {
			if i%5 == 0 || !strings.Contains(f, "existence") {
				files = append(files, f)
			}
		}
	}
	if len(files) < 10 {
		t.Fatalf("%d model files", len(files))
	}
	rules := []model.RuleName{model.Jeffreys, model.JeffreysJointly, model.JeffreysSeparately, model.ReferencePrior, model.MatchingPrior, model.MaximalData}
	derived := 0
	for _, file := range files {
		text, err := os.ReadFile(file)
		if err != nil {
			t.Fatal(err)
		}
		ctx := context.Background()
		m := model.Build(ctx, source.NewFile(file, string(text)), model.Options{})
		a := m.Declared()
		var groups [][]*model.Unknown
		for i, u := range m.Unknowns {
			groups = append(groups, []*model.Unknown{u})
			if i+1 < len(m.Unknowns) {
				groups = append(groups, []*model.Unknown{u, m.Unknowns[i+1]})
			}
			for _, c := range Standard(ctx, a, u) {
				if _, err := model.PriorFromText(m, c.Text); err != nil {
					t.Errorf("%s: the choice %q is not read: %v", file, c.Text, err)
				}
			}
		}
		for _, about := range groups {
			for _, name := range rules {
				if len(about) == 1 && (name == model.JeffreysJointly || name == model.JeffreysSeparately || name == model.ReferencePrior) {
					continue // the same as Jeffreys' rule
				}
				rule := &model.RulePrior{Name: name}
				if name == model.ReferencePrior {
					for _, u := range about {
						rule.Order = append(rule.Order, []*model.Unknown{u})
					}
				}
				d, err := Derive(ctx, a, rule, about)
				if err != nil {
					if err.Error() == "" || strings.Contains(err.Error(), "%!") {
						t.Errorf("%s: %q", file, err)
					}
					continue
				}
				derived++
				checkDerived(t, file, m, d)
			}
		}
	}
	if derived < 50 {
		t.Errorf("%d priors derived in the corpus, want at least 50", derived)
	}
}

func checkDerived(t *testing.T, file string, m *model.Model, d *Derived) {
	t.Helper()
	for _, v := range []float64{0.2, 0.45} {
		x := make([]float64, len(d.Parameters))
		total := 0.0
		for i, p := range d.Parameters {
			x[i] = v / float64(1+i%3)
			if p.Unknown.Kind.Name == "proportions" {
				x[i] = 1 / float64(p.Unknown.Size)
			}
			if p.Unknown.Kind.Name == "cutpoints" {
				x[i] = v + float64(p.Component)
			}
			total += x[i]
		}
		if len(x) == 0 { // a covariance
			return
		}
		if l := d.LogKernel(x); math.IsNaN(l) || math.IsInf(l, 1) {
			t.Errorf("%s: the kernel of %s is %v at %v: %s", file, names(d.About), l, x, d.Name)
		}
	}
	if _, err := model.PriorFromText(m, d.Prior.Text); err != nil && len(d.Parameters) == len(d.About) {
		t.Errorf("%s: %q is not read: %v", file, d.Prior.Text, err)
	}
	for _, l := range d.Lines() {
		if strings.Contains(l, "%!") {
			t.Errorf("%s: %q", file, l)
		}
	}
}
