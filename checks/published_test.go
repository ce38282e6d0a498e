package checks

import (
	"context"
	"os"
	"testing"

	"wellposed/checks/existence"
	"wellposed/checks/existence/verify"
	"wellposed/checks/facts"
	"wellposed/parser/diag"
	"wellposed/parser/model"
	"wellposed/parser/source"
)

// The verdicts on the demos and the published data, each with the rule that tells
// its story. The exact conditions are in the pages of the rules.
func TestVerdictsOnDemosAndPublishedData(t *testing.T) {
	for _, c := range []struct {
		path   string
		status existence.Status
		rule   string
	}{
		{"demo/relay.bayes", existence.DoesNotExist, "posterior-does-not-exist"},
		{"demo/relay-three-failures.bayes", existence.Exists, ""},
		{"demo/germination.bayes", existence.Exists, ""},
		{"demo/clinics.bayes", existence.Exists, ""},
		{"demo/clinics-variance.bayes", existence.DoesNotExist, "too-few-groups-for-flat-spread"},
		{"demo/clinics-log-flat.bayes", existence.DoesNotExist, "log-flat-spread-between-groups"},
		{"demo/assay-first.bayes", existence.DoesNotExist, "separated-responses"},
		{"demo/assay-redo.bayes", existence.Exists, ""},
		{"published/bioassay.bayes", existence.Exists, ""},
		{"published/coaching.bayes", existence.Exists, ""},
		{"published/insect-sprays.bayes", existence.Exists, ""},
		{"published/esoph.bayes", existence.Exists, ""},
		{"published/infert.bayes", existence.Exists, ""},
		{"published/plant-growth.bayes", existence.Exists, ""},
		{"published/warpbreaks.bayes", existence.Exists, ""},
		{"published/esoph-cells.bayes", existence.DoesNotExist, "likelihood-plateau-at-infinity"},
	} {
		t.Run(c.path, func(t *testing.T) {
			path := "../testdata/" + c.path
			raw, err := os.ReadFile(path)
			if err != nil {
				t.Fatal(err)
			}
			f := facts.New(context.Background(), model.Build(context.Background(), source.NewFile(path, string(raw)), model.Options{}))
			result := f.Existence(f.Model.Declared())
			if status, how := result.Overall(); status != c.status || how != diag.Proved {
				t.Errorf("%s, %s; want %s, proved", status, how, c.status)
			}
			for _, v := range result.Verdicts {
				if v.How != diag.Proved {
					continue
				}
				if v.Certificate == nil {
					t.Errorf("the verdict on %s has no certificate", v.Unknowns[0].Name)
				} else if err := verify.Verify(v.Certificate, v.Status == existence.Exists); err != nil {
					t.Errorf("the certificate on %s is refused: %v", v.Unknowns[0].Name, err)
				}
			}
			told := ""
			for _, d := range Run(f, Options{ExactOnly: true}) {
				if d.Severity == diag.Stop {
					told = d.Rule
				}
				if d.Severity == diag.Warn {
					t.Errorf("a warning: %s: %s", d.Rule, d.Headline)
				}
			}
			if told != c.rule {
				t.Errorf("told by %q, want %q", told, c.rule)
			}
		})
	}
}
