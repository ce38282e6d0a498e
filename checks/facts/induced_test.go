package facts

import (
	"context"
	"testing"

	"wellposed/parser/model"
	"wellposed/parser/source"
)

// The induced priors that have a name, by change of variable (derivation).
func TestInduced(t *testing.T) {
	for _, c := range []struct{ kind, prior, report, want string }{
		{"probability", "logit(x) flat", "x", "Beta(0, 0)"},
		{"probability", "odds(x) flat", "x", "Beta(1, −1)"},
		{"probability", "x flat", "x", "Beta(1, 1)"},
		{"probability", "x flat", "odds(x)", "1/(1 + odds(x))^2"},
		{"probability", "x flat", "x / (1 - x)", "1/(1 + (x / (1 - x)))^2"},
		{"scale", "log(x) flat", "x", "1/x"},
		{"scale", "x^2 flat", "x", "x"},
		{"scale", "x flat", "log(x)", "exp(log(x))"},
		{"scale", "x flat", "1 / x", "1/(1 / x)^2"},
		{"scale", "x flat", "x + 1", ""},
	} {
		text := "unknown x : " + c.kind + "\nprior " + c.prior + "\nreport " + c.report + "\n"
		m := model.Build(context.Background(), source.NewFile("m.bayes", text), model.Options{})
		if len(m.Priors) != 1 || len(m.Reports) != 1 {
			t.Fatalf("%s: %v", text, m.Problems)
		}
		if got := New(context.Background(), m).Induced(m.Priors[0], m.Reports[0].Value); got != c.want {
			t.Errorf("%s, reported as %s: %q, want %q", c.prior, c.report, got, c.want)
		}
	}
}

func TestStandardChoicesAreSound(t *testing.T) {
	m := model.Build(context.Background(), source.NewFile("m.bayes", "unknown p : probability\nobserve 0 of 40 with probability p\nprior p as Beta(0, 0)\n"), model.Options{})
	f := New(context.Background(), m)
	sound := map[string]bool{}
	for _, c := range f.Standard(m.Unknowns[0]) {
		sound[c.Text] = f.Sound(c.Analysis, m.Unknowns[0])
	}
	for text, want := range map[string]bool{"p as Beta(1, 1)": true, "p as Beta(1/2, 1/2)": true, "p as Beta(1/3, 1/3)": true, "p as Beta(0, 0)": false} {
		if got, listed := sound[text]; !listed || got != want {
			t.Errorf("%s: listed %v, sound %v; want %v", text, listed, got, want)
		}
	}
}
