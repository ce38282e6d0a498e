package parser_test

import (
	"os"
	"path/filepath"
	"strings"
	"testing"

	"wellposed/grammar"
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
		if filepath.Base(path) == "broken.bayes" {
			if len(findings) != 8 {
				t.Errorf("%s: %d findings", path, len(findings))
			}
			continue
		}
		for _, f := range findings {
			t.Errorf("%s: %q: %s %v", path, file.Slice(f.Span), f.Headline, f.Notes)
		}
		if len(tree.Lines) == 0 {
			t.Errorf("%s: no statement", path)
		}
	}
}

// TestCorpusUsesTheLanguage: every keyword, kind, distribution and function is
// used somewhere.
func TestCorpusUsesTheLanguage(t *testing.T) {
	used := map[string]bool{}
	for _, path := range corpus(t) {
		tree, _ := parser.Parse(read(t, path))
		for _, l := range tree.Lines {
			for _, tok := range parser.Tokens(l) {
				text := tok.Text
				if tok.Class == parser.ClassDistribution {
					text = strings.ToLower(text)
				}
				used[tok.Class.String()+" "+text] = true
			}
		}
	}
	expect := func(class parser.Class, name string) {
		if !used[class.String()+" "+name] {
			t.Errorf("%s %s is used nowhere", class, name)
		}
	}
	for _, k := range grammar.Keywords {
		expect(parser.ClassKeyword, k)
	}
	for _, k := range grammar.Kinds {
		expect(parser.ClassKind, k.Name)
	}
	for _, d := range grammar.Distributions {
		expect(parser.ClassDistribution, strings.ToLower(d.Name))
	}
	for _, f := range grammar.Functions {
		expect(parser.ClassFunction, f.Name)
	}
}
