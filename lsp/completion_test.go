package lsp

import (
	"encoding/json"
	"slices"
	"strings"
	"testing"

	"wellposed/lsp/internal/fake"
)

func TestCompletionKnowsItsPlace(t *testing.T) {
	e := start(t)
	e.Initialize("", markdown)
	at := "file:///models/complete.bayes"
	base := "given n = 40, y = 3\nunknown p : probability\nunknown mu : location\nobserve y as Binomial(n, p)\nprior mu flat because \"a\"\n"
	for i, c := range []struct {
		line        string
		want, avoid string
	}{
		{"pri", "prior", "Beta"},
		{"unknown q : pro", "probability", "prior"},
		{"observe y as Bin", "Binomial", "prior"},
		{"prior ", "p", "Binomial"},
		{"prior p ", "as Beta(1, 1)", "Binomial"},
		{"observe y as Normal(mu, s", "sd =", "prior"},
		{"accept flat", "flat-on-unbounded", "prior"},
		{"report lo", "logit", "prior"},
		{"report m", "mu", "prior"},
		{"# pri", "", "prior"},
		{"title \"pri", "", "prior"},
	} {
		e.Open(at, i+1, base+c.line)
		var list struct{ Items []struct{ Label string } }
		answer := e.Request("textDocument/completion", map[string]any{
			"textDocument": map[string]string{"uri": at}, "position": fake.Position{Line: strings.Count(base, "\n"), Character: len(c.line)}})
		if err := json.Unmarshal(answer, &list); err != nil {
			t.Fatal(err)
		}
		var labels []string
		for _, item := range list.Items {
			labels = append(labels, item.Label)
		}
		if c.want != "" && !slices.Contains(labels, c.want) || slices.Contains(labels, c.avoid) {
			t.Errorf("after %q: %v", c.line, labels)
		}
		if c.line == "prior " && labels[0] != "p" {
			t.Errorf("the unknown without a prior is not first: %v", labels)
		}
	}
}
