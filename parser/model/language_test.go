package model

import (
	"context"
	"os"
	"path/filepath"
	"testing"

	"wellposed/parser/source"
)

// TestLanguageResolves builds the models that use the whole language: names,
// shapes, tables and arguments must resolve without a problem. broken.bayes is
// broken on purpose, and design.bayes is the list of all statements, which
// repeats names.
func TestLanguageResolves(t *testing.T) {
	paths, err := filepath.Glob("../../testdata/language/*.bayes")
	if err != nil || len(paths) < 20 {
		t.Fatalf("%d models, %v", len(paths), err)
	}
	for _, path := range paths {
		if name := filepath.Base(path); name == "broken.bayes" || name == "design.bayes" {
			continue
		}
		text, err := os.ReadFile(path)
		if err != nil {
			t.Fatal(err)
		}
		m := Build(context.Background(), source.NewFile(path, string(text)), Options{})
		for _, p := range m.Problems {
			t.Errorf("%s: %s: %s (%q)", path, p.Rule, p.Headline, m.File.Slice(p.Span))
		}
	}
}
