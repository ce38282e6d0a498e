package existence

import (
	"context"
	"encoding/json"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"wellposed/checks/existence/certificate"
	"wellposed/checks/existence/verify"
	"wellposed/parser/diag"
	"wellposed/parser/model"
	"wellposed/parser/source"
)

// TestCorpus reads testdata/existence: each model states in its first line
// what is expected ("# expect: exists" or "# expect: does not exist") and
// where that is known from. A verdict of the other kind is an error; a "not
// decided" only lowers the share that is printed.
func TestCorpus(t *testing.T) {
	paths, err := filepath.Glob("../../testdata/existence/*.bayes")
	// A second collection, by another hand, lies in folders by family.
	more, err2 := filepath.Glob("../../testdata/existence/*/*.bayes")
	if err != nil || err2 != nil || len(paths) == 0 || len(more) == 0 {
		t.Fatalf("no corpus: %v %v", err, err2)
	}
	paths = append(paths, more...)
	decided := 0
	for _, path := range paths {
		content, err := os.ReadFile(path)
		if err != nil {
			t.Fatal(err)
		}
		text := string(content)
		head, _, _ := strings.Cut(text, "\n")
		want, ok := strings.CutPrefix(head, "# expect: ")
		if !ok || !strings.Contains(text, "# source: ") {
			t.Errorf("%s: needs its expectation and its source", path)
			continue
		}
		m := model.Build(context.Background(), source.NewFile(path, text), model.Options{})
		for _, p := range m.Problems {
			t.Errorf("%s: %s", path, p.Headline)
		}
		r := Decide(context.Background(), m.Declared())
		got, _ := r.Overall()
		if got == NotDecided {
			why := ""
			for _, v := range r.Verdicts {
				if v.Status == NotDecided {
					why = v.Claim
				}
			}
			t.Logf("%s: not decided (wants %s): %s", filepath.Base(path), want, why)
			continue
		}
		decided++
		for _, v := range r.Verdicts {
			if v.How != diag.Proved {
				continue
			}
			if err := throughJSON(v); err != nil {
				t.Errorf("%s: certificate refused: %v", path, err)
			}
		}
		if string(got) != strings.TrimSpace(want) {
			t.Errorf("%s: %s, want %s", path, got, want)
			for _, v := range r.Verdicts {
				t.Logf("   %s %s: %s", v.Status, v.Code, v.Claim)
			}
		}
	}
	t.Logf("%d of %d decided (%.0f %%)", decided, len(paths), 100*float64(decided)/float64(len(paths)))
}

// throughJSON verifies a certificate as a reader of the JSON output would.
func throughJSON(v *Verdict) error {
	text, err := json.Marshal(v.Certificate)
	if err != nil {
		return err
	}
	var c certificate.Certificate
	if err := json.Unmarshal(text, &c); err != nil {
		return err
	}
	return verify.Verify(&c, v.Status == Exists)
}

// TestMethodsAgree runs every method on every group of the corpus, also those
// that come after the one that decides: no two may contradict each other.
func TestMethodsAgree(t *testing.T) {
	paths, _ := filepath.Glob("../../testdata/*/*.bayes")
	more, _ := filepath.Glob("../../testdata/existence/*/*.bayes")
	pairs := 0
	for i, path := range append(paths, more...) {
		if *oracleRuns < 2000 && i%12 != 0 {
			continue // the slices take long on models that do exist; -oracle 2000 runs all
		}
		content, err := os.ReadFile(path)
		if err != nil {
			t.Fatal(err)
		}
		m := model.Build(context.Background(), source.NewFile(path, string(content)), model.Options{})
		for _, g := range split(m.Declared()) {
			if g.unready != "" || len(g.rows) > 60 {
				continue
			}
			var first *Verdict
			for _, method := range methods {
				v := g.attempt(context.Background(), method)
				if v == nil || v.Status == NotDecided {
					continue
				}
				if err := throughJSON(v); err != nil {
					t.Errorf("%s: certificate refused: %v", path, err)
				}
				if first == nil {
					first = v
					continue
				}
				pairs++
				if v.Status != first.Status {
					t.Errorf("%s: %s (%s) against %s (%s)", path, first.Status, first.Claim, v.Status, v.Claim)
				}
			}
		}
	}
	t.Logf("%d pairs of methods agree", pairs)
}
