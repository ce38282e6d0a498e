package lsp

import (
	"encoding/json"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"wellposed/lsp/internal/fake"
)

const greek = "given n = 40, y = 3\nunknown θ : probability \"𝛂 and θ\"\nobserve y as Binomial(n, θ)\nprior θ as Beta(1, 1) because \"θ\"\nreport θ\n"

func place(at string, line, character int) map[string]any {
	return map[string]any{"textDocument": map[string]string{"uri": at}, "position": fake.Position{Line: line, Character: character}}
}

func TestNames(t *testing.T) {
	e := start(t)
	e.Initialize("", markdown)
	at := "file:///models/names.bayes"
	e.Open(at, 1, greek)
	var definition fake.Location
	if err := json.Unmarshal(e.Request("textDocument/definition", place(at, 2, 25)), &definition); err != nil {
		t.Fatal(err)
	}
	if want := (fake.Position{Line: 1, Character: 8}); definition.URI != at || definition.Range.Start != want {
		t.Errorf("definition: %+v", definition)
	}
	ask := place(at, 2, 25)
	ask["context"] = map[string]bool{"includeDeclaration": true}
	var references []fake.Location
	if err := json.Unmarshal(e.Request("textDocument/references", ask), &references); err != nil || len(references) != 4 {
		t.Errorf("references: %v %+v", err, references)
	}
	rename := place(at, 4, 7)
	rename["newName"] = "chance"
	var edit struct {
		Changes map[string][]struct {
			Range   fake.Range
			NewText string
		}
	}
	if err := json.Unmarshal(e.Request("textDocument/rename", rename), &edit); err != nil || len(edit.Changes[at]) != 4 {
		t.Errorf("rename: %v %+v", err, edit)
	}
	for _, name := range []string{"n", "log", "prior", "2x", "Beta"} {
		rename["newName"] = name
		if m := e.Call("textDocument/rename", rename).Wait(); m.Error == nil {
			t.Errorf("θ may be renamed to %s", name)
		}
	}
}

func TestDefinitionInDataFile(t *testing.T) {
	dir := t.TempDir()
	if err := os.WriteFile(filepath.Join(dir, "d.csv"), []byte("id,deaths,n\n1,2,5\n"), 0o600); err != nil {
		t.Fatal(err)
	}
	e := start(t)
	e.Initialize("", markdown)
	at := "file://" + filepath.Join(dir, "m.bayes")
	e.Open(at, 1, "table d from \"d.csv\"\nunknown p : probability\nobserve deaths as Binomial(n, p)\nprior p as Beta(1, 1)\nreport p\n")
	var definition fake.Location
	if err := json.Unmarshal(e.Request("textDocument/definition", place(at, 2, 10)), &definition); err != nil {
		t.Fatal(err)
	}
	want := fake.Range{Start: fake.Position{Line: 0, Character: 3}, End: fake.Position{Line: 0, Character: 9}}
	if !strings.HasSuffix(definition.URI, "/d.csv") || definition.Range != want {
		t.Errorf("got %+v", definition)
	}
}

func TestStructure(t *testing.T) {
	e := start(t)
	e.Initialize("", markdown)
	at := "file:///models/structure.bayes"
	e.Open(at, 1, "table a\n| n | y |\n| 5 | 0 |\nunknown   p : probability\nobserve y as Binomial(n, p)\nprior logit(p) flat\nreport p\n")
	document := map[string]any{"textDocument": map[string]string{"uri": at}}
	var symbols []struct{ Name, Detail string }
	if err := json.Unmarshal(e.Request("textDocument/documentSymbol", document), &symbols); err != nil || len(symbols) != 3 {
		t.Errorf("symbols: %v %+v", err, symbols)
	}
	var folds []struct{ StartLine, EndLine int }
	if err := json.Unmarshal(e.Request("textDocument/foldingRange", document), &folds); err != nil || len(folds) != 1 || folds[0].EndLine != 2 {
		t.Errorf("folds: %v %+v", err, folds)
	}
	document["options"] = map[string]any{"tabSize": 4, "insertSpaces": true}
	var edits []struct{ NewText string }
	if err := json.Unmarshal(e.Request("textDocument/formatting", document), &edits); err != nil || len(edits) != 1 || !strings.Contains(edits[0].NewText, "unknown p : probability") {
		t.Errorf("formatting: %v %+v", err, edits)
	}
	document["range"] = fake.Range{End: fake.Position{Line: 99}}
	var hints []struct {
		Label    string
		Position fake.Position
	}
	if err := json.Unmarshal(e.Request("textDocument/inlayHint", document), &hints); err != nil || len(hints) != 2 || !strings.HasPrefix(hints[1].Label, "no posterior") {
		t.Errorf("hints: %v %+v", err, hints)
	}
}
