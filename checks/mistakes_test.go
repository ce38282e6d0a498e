package checks

import (
	"context"
	"os"
	"path/filepath"
	"testing"

	"wellposed/checks/rules/ruletest"
	"wellposed/parser/model"
	"wellposed/parser/source"
)

// Models with mistakes carry what is to be said about them; nothing else may be.
func TestMistakes(t *testing.T) {
	paths, err := filepath.Glob("../testdata/mistakes/*.bayes")
	if err != nil || len(paths) == 0 {
		t.Fatal("no models", err)
	}
	for _, path := range paths {
		raw, err := os.ReadFile(path)
		if err != nil {
			t.Fatal(err)
		}
		f := source.NewFile(path, string(raw))
		found := Check(context.Background(), model.Build(context.Background(), f, model.Options{}), Options{})
		for _, complaint := range ruletest.Compare(f, found) {
			t.Errorf("%s: %s", path, complaint)
		}
	}
}

// Every finding's place is right with Greek and astral names in the line.
func TestColumnsWithGreek(t *testing.T) {
	raw, err := os.ReadFile("../testdata/mistakes/five.bayes")
	if err != nil {
		t.Fatal(err)
	}
	f := source.NewFile("five.bayes", string(raw))
	want := map[string][2]int{
		"unknown-keyword": {1, 1}, "spread-argument-unnamed": {5, 26}, "two-priors-on-one-unknown": {7, 1}, "distribution-not-known": {8, 12}, "name-never-declared": {9, 8},
	}
	for _, d := range Check(context.Background(), model.Build(context.Background(), f, model.Options{}), Options{}) {
		line, column := f.Locate(d.Span.Start, source.Characters)
		if at := [2]int{line + 1, column + 1}; at != want[d.Rule] {
			t.Errorf("%s at %v, want %v", d.Rule, at, want[d.Rule])
		}
	}
}
