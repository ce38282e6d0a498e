package model

import (
	"context"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"wellposed/parser/source"
)

func build(t testing.TB, text string, files Memory) *Model {
	t.Helper()
	return Build(context.Background(), source.NewFile("model.bayes", text), Options{Loader: files})
}

// TestCorpusBuilds builds every case of the corpus of existence: each is a
// sound model, so nothing may be reported.
func TestCorpusBuilds(t *testing.T) {
	n := 0
	err := filepath.Walk("../../testdata/existence", func(path string, info os.FileInfo, err error) error {
		if err != nil || !strings.HasSuffix(path, ".bayes") {
			return err
		}
		text, err := os.ReadFile(path)
		if err != nil {
			return err
		}
		n++
		m := Build(context.Background(), source.NewFile(path, string(text)), Options{})
		for _, f := range m.Problems {
			t.Errorf("%s: %s: %s %v (%q)", path, f.Rule, f.Headline, f.Notes, m.File.Slice(f.Span))
		}
		return nil
	})
	if err != nil || n < 150 {
		t.Fatalf("%d cases, %v", n, err)
	}
}
