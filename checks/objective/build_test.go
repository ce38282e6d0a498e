package objective

import (
	"context"
	"testing"

	"wellposed/parser/diag"
	"wellposed/parser/model"
	"wellposed/parser/source"
)

// build reads a model text; anything that stops reading fails the test.
func build(t *testing.T, text string) *model.Model {
	t.Helper()
	m := model.Build(context.Background(), source.NewFile("test.bayes", text), model.Options{})
	for _, p := range m.Problems {
		if p.Severity == diag.Stop {
			t.Fatalf("%s %v\n%s", p.Headline, p.Notes, text)
		}
	}
	return m
}
