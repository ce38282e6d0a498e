package lsp

import (
	"context"
	"encoding/json"
	"io"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"wellposed/lsp/internal/fake"
)

func start(t testing.TB) *fake.Editor {
	return fake.Start(t, func(in io.Reader, out io.Writer) int {
		return Serve(context.Background(), in, out, Options{Version: "test", Log: testLog{t}})
	})
}

// testLog fails the test on a contained fault.
type testLog struct{ t testing.TB }

func (l testLog) Write(b []byte) (int, error) {
	l.t.Errorf("the server reported: %s", b)
	return len(b), nil
}

const markdown = `{"general":{"positionEncodings":["utf-16"]},"textDocument":{"hover":{"contentFormat":["markdown","plaintext"]}}}`

const relay = `given n = 40, y = 0
unknown p : probability
observe y as Binomial(n, p)
prior p as Beta(0, 0) because "a" from "b"
rival "uniform" p as Beta(1, 1)
report p, upper 95%
`

func has(rule string) func([]fake.Diagnostic) bool {
	return func(list []fake.Diagnostic) bool {
		for _, d := range list {
			if d.Code == rule {
				return true
			}
		}
		return false
	}
}

func find(list []fake.Diagnostic, rule string) *fake.Diagnostic {
	for i := range list {
		if list[i].Code == rule {
			return &list[i]
		}
	}
	return nil
}

func TestFindingHoverAndFix(t *testing.T) {
	e := start(t)
	e.Initialize("", markdown)
	at := "file:///models/relay.bayes"
	e.Open(at, 1, relay)
	d := find(e.Diagnostics(at, 1, has("posterior-does-not-exist")), "posterior-does-not-exist")
	if want := (fake.Range{Start: fake.Position{Line: 3, Character: 8}, End: fake.Position{Line: 3, Character: 21}}); d.Range != want {
		t.Errorf("the finding stands at %+v, want %+v", d.Range, want)
	}
	if d.Severity != 1 || !strings.Contains(d.Message, "p = 0") {
		t.Errorf("got %+v", d)
	}
	var hover struct {
		Contents struct{ Kind, Value string }
	}
	position := map[string]any{"textDocument": map[string]string{"uri": at}, "position": fake.Position{Line: 3, Character: 12}}
	if err := json.Unmarshal(e.Request("textDocument/hover", position), &hover); err != nil {
		t.Fatal(err)
	}
	if hover.Contents.Kind != "markdown" || !strings.Contains(hover.Contents.Value, "No posterior") || !strings.Contains(hover.Contents.Value, "proved") {
		t.Errorf("hover: %+v", hover)
	}
	var actions []struct {
		Title string
		Edit  struct {
			Changes map[string][]struct {
				Range   fake.Range
				NewText string
			}
		}
	}
	request := map[string]any{"textDocument": map[string]string{"uri": at}, "range": d.Range, "context": map[string]any{"diagnostics": []any{}}}
	if err := json.Unmarshal(e.Request("textDocument/codeAction", request), &actions); err != nil {
		t.Fatal(err)
	}
	version := 1
	for _, a := range actions {
		if !strings.Contains(a.Title, "Beta(1/2, 1/2)") {
			continue
		}
		for _, edit := range a.Edit.Changes[at] {
			version++
			e.Edit(at, version, edit.Range, edit.NewText)
		}
	}
	if version == 1 {
		t.Fatalf("no fix offers Beta(1/2, 1/2): %+v", actions)
	}
	e.Diagnostics(at, int32(version), func(list []fake.Diagnostic) bool { return find(list, "posterior-does-not-exist") == nil })
}

// TestEditsInOrder sends edits without waiting and looks at the last version.
func TestEditsInOrder(t *testing.T) {
	e := start(t)
	e.Initialize("", markdown)
	at := "file:///models/relay.bayes"
	e.Open(at, 1, relay)
	// y = 0 becomes 1, 2, … one keystroke each.
	for i := 1; i <= 9; i++ {
		y := fake.Range{Start: fake.Position{Line: 0, Character: 18}, End: fake.Position{Line: 0, Character: 19}}
		e.Edit(at, i+1, y, string(rune('0'+i)))
	}
	e.Diagnostics(at, 10, func(list []fake.Diagnostic) bool { return find(list, "posterior-does-not-exist") == nil })
	last := int32(0)
	for _, p := range e.Published(at) {
		if *p.Version < last {
			t.Errorf("version %d was published after %d", *p.Version, last)
		}
		last = *p.Version
	}
}

func TestGreekColumns(t *testing.T) {
	e := start(t)
	e.Initialize("", markdown)
	at := "file:///models/greek.bayes"
	e.Open(at, 1, "given 𝛂βγ = 3, y = 4\nunknown θ : location\nobserve y as Normal(θ, 2)\nprior θ flat because \"a\" from \"b\"\nreport θ\n")
	d := find(e.Diagnostics(at, 1, has("spread-argument-unnamed")), "spread-argument-unnamed")
	if want := (fake.Position{Line: 2, Character: 23}); d.Range.Start != want {
		t.Errorf("the finding starts at %+v, want %+v", d.Range.Start, want)
	}
	e.Edit(at, 2, fake.Range{Start: fake.Position{Line: 0, Character: 6}, End: fake.Position{Line: 0, Character: 10}}, "x")
	e.Edit(at, 3, fake.Range{Start: fake.Position{Line: 2, Character: 23}, End: fake.Position{Line: 2, Character: 24}}, "sd = 2")
	e.Diagnostics(at, 3, func(list []fake.Diagnostic) bool {
		return len(list) == 0 || find(list, "spread-argument-unnamed") == nil
	})
}

// TestDataFile changes a data file in the editor and wants its reader checked.
func TestDataFile(t *testing.T) {
	dir := t.TempDir()
	data := filepath.Join(dir, "d.csv")
	if err := os.WriteFile(data, []byte("y,n\n0,10\n"), 0o600); err != nil {
		t.Fatal(err)
	}
	e := start(t)
	e.Initialize("", markdown)
	at := "file://" + filepath.Join(dir, "m.bayes")
	e.Open(at, 1, "table d from \"d.csv\"\nunknown p : probability\nobserve y as Binomial(n, p)\nprior p as Beta(0, 0) because \"a\" from \"b\"\nreport p\n")
	e.Diagnostics(at, 1, has("posterior-does-not-exist"))
	csv := "file://" + data
	e.Notify("textDocument/didOpen", map[string]any{"textDocument": map[string]any{"uri": csv, "languageId": "csv", "version": 1, "text": "y,n\n3,10\n"}})
	e.Diagnostics(at, 1, func(list []fake.Diagnostic) bool { return find(list, "posterior-does-not-exist") == nil })
	e.Notify("textDocument/didClose", map[string]any{"textDocument": map[string]any{"uri": csv}})
	e.Diagnostics(at, 1, has("posterior-does-not-exist"))
}

// TestNumbersOfMessages pins that a request with a number for its id is answered
// once and that a cancelled one is answered too.
func TestCancel(t *testing.T) {
	e := start(t)
	e.Initialize("", markdown)
	at := "file:///models/relay.bayes"
	e.Open(at, 1, relay)
	pending := e.Call("textDocument/hover", map[string]any{"textDocument": map[string]string{"uri": at}, "position": fake.Position{Line: 3, Character: 12}})
	pending.Cancel()
	if m := pending.Wait(); m.Error != nil && m.Error.Code != -32800 {
		t.Errorf("a cancelled request is answered with %v", m.Error)
	}
	if m := e.Call("wellposed/nothing", struct{}{}).Wait(); m.Error == nil || m.Error.Code != -32601 {
		t.Errorf("an unknown method is answered with %+v", m)
	}
}

// TestConfiguration changes the configuration on disk and wants its models
// checked again.
func TestConfiguration(t *testing.T) {
	dir := t.TempDir()
	settings := filepath.Join(dir, "wellposed.toml")
	if err := os.WriteFile(settings, []byte("[severity]\nno-rival-declared = \"off\"\n"), 0o600); err != nil {
		t.Fatal(err)
	}
	e := start(t)
	e.Initialize("", markdown)
	at := "file://" + filepath.Join(dir, "m.bayes")
	e.Open(at, 1, "unknown p : probability\nobserve 3 of 40 with probability p\nprior p as Beta(1, 1)\nreport p\n")
	e.Diagnostics(at, 1, has("default-without-reason"))
	for _, p := range e.Published(at) {
		if find(p.Diagnostics, "no-rival-declared") != nil {
			t.Error("a rule that is off speaks")
		}
	}
	if err := os.WriteFile(settings, nil, 0o600); err != nil {
		t.Fatal(err)
	}
	e.Notify("workspace/didChangeWatchedFiles", map[string]any{"changes": []any{map[string]any{"uri": "file://" + settings, "type": 2}}})
	e.Diagnostics(at, 1, has("no-rival-declared"))
}
