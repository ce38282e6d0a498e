package parser_test

import (
	"os"
	"path/filepath"
	"testing"

	"wellposed/parser"
	"wellposed/parser/source"
)

// corpus lists the model files below testdata.
func corpus(t testing.TB) []string {
	t.Helper()
	var files []string
	for _, pattern := range []string{"language", "demo", "published"} {
		found, err := filepath.Glob(filepath.Join("..", "testdata", pattern, "*.bayes"))
		if err != nil {
			t.Fatal(err)
		}
		files = append(files, found...)
	}
	if len(files) < 10 {
		t.Fatalf("only %d model files found", len(files))
	}
	return files
}

func read(t testing.TB, path string) *source.File {
	t.Helper()
	text, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	return source.NewFile(filepath.Base(path), string(text))
}

func TestCorpusIsRead(t *testing.T) {
	for _, path := range corpus(t) {
		file := read(t, path)
		tree, findings := parser.Parse(file)
		for _, f := range findings {
			t.Errorf("%s: %q: %s %v", path, file.Slice(f.Span), f.Headline, f.Notes)
		}
		if len(tree.Lines) == 0 {
			t.Errorf("%s: no statement", path)
		}
	}
}
