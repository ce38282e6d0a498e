package main

import (
	"go/ast"
	"go/parser"
	"go/token"
	"io/fs"
	"path/filepath"
	"strconv"
	"strings"
	"testing"
)

// rooms says which of our packages a room may import: itself and what begins
// with one of the listed paths. The longest room that is a prefix of a package's
// path holds. The picture with the reasons is in DEVELOPERS.md.
var rooms = map[string][]string{
	"grammar":       {},
	"parser/source": {},
	"parser/near":   {},
	"parser/diag":   {"parser/source"},
	"parser":        {"grammar", "parser/source", "parser/diag", "parser/near"},
	"parser/model":  {"grammar", "parser"},

	"checks/family":                {},
	"checks/existence/certificate": {},
	"checks/existence/verify":      {"checks/existence/certificate"},
	"checks/existence":             {"checks/existence", "grammar", "parser/source", "parser/diag", "parser/model", "checks/family"},
	"checks/objective":             {"grammar", "parser/source", "parser/diag", "parser/model", "checks/family"},
	"checks/posterior":             {"grammar", "parser/source", "parser/diag", "parser/model", "checks/family"},
	"checks/design":                {"grammar", "parser/source", "parser/diag", "parser/model", "checks/family", "checks/existence", "checks/objective", "checks/posterior"},
	"checks/facts":                 {"grammar", "parser/source", "parser/diag", "parser/model", "checks/family", "checks/existence", "checks/objective", "checks/posterior", "checks/design"},
	"checks/wording":               {"grammar", "parser/source", "parser/diag", "parser/model", "checks/facts", "checks/existence", "checks/objective", "checks/posterior"},
	"checks/rule":                  {"parser/diag", "checks/facts"},
	// Rules see results through the facts; they name the engine's types but
	// start no computation of their own.
	"checks/rules":          {"grammar", "parser/source", "parser/near", "parser/diag", "parser/model", "checks/facts", "checks/rule", "checks/wording", "checks/existence", "checks/objective", "checks/posterior", "checks/design"},
	"checks/rules/ruletest": {"grammar", "parser", "checks/facts", "checks/rule"},
	"checks/render":         {"parser/source", "parser/diag"},
	// The page collects what the facts hold; it is rendered without them.
	"checks/evidence": {"grammar", "parser/source", "parser/diag", "parser/model", "checks/facts", "checks/wording", "checks/existence", "checks/objective", "checks/posterior", "checks/design", "checks/render"},
	"checks":          {"grammar", "parser", "checks"},
	"lsp":             {"grammar", "parser", "checks", "lsp"},
	"cmd":             {"grammar", "parser", "checks", "lsp", "cmd"},
	"editors":         {"grammar", "parser", "checks", "lsp"},
}

// outside says which rooms alone may import a module of others.
var outside = map[string][]string{
	"github.com/alecthomas/participle": {"parser"},
	"gonum.org/v1/gonum":               {"checks/family", "checks/objective", "checks/posterior", "checks/existence"},
	"go.lsp.dev":                       {"lsp"},
	"unicode/utf16":                    {"lsp", "parser/source"},
	"golang.org/x/term":                {"cmd"},
}

// owner is the room that a package stands in: the longest listed prefix.
func owner(pkg string) string {
	best := ""
	for room := range rooms {
		if within(pkg, room) && len(room) > len(best) {
			best = room
		}
	}
	return best
}

func within(pkg, room string) bool { return pkg == room || strings.HasPrefix(pkg, room+"/") }

// allowed reports whether a room may import one of our packages. A listed path
// without a slash-separated child opens the whole path; a room's own packages
// are always open, except that one rule never imports another.
func allowed(pkg, imported string) bool {
	room := owner(pkg)
	if room == "checks/rules" && owner(imported) == "checks/rules" && pkg != imported {
		return false
	}
	if owner(imported) == room {
		return true
	}
	for _, open := range rooms[room] {
		if within(imported, open) {
			return true
		}
	}
	return false
}

// TestLayers holds every import of non-test code against the table.
func TestLayers(t *testing.T) {
	root := filepath.Join("..", "..")
	files := 0
	err := filepath.WalkDir(root, func(path string, d fs.DirEntry, err error) error {
		if err != nil {
			return err
		}
		if d.IsDir() {
			if name := d.Name(); path != root && (strings.HasPrefix(name, ".") || name == "testdata" || name == "node_modules") {
				return filepath.SkipDir
			}
			return nil
		}
		if !strings.HasSuffix(path, ".go") || strings.HasSuffix(path, "_test.go") {
			return nil
		}
		rel, err := filepath.Rel(root, filepath.Dir(path))
		if err != nil {
			return err
		}
		files++
		checkFile(t, path, filepath.ToSlash(rel))
		return nil
	})
	if err != nil {
		t.Fatal(err)
	}
	if files < 20 {
		t.Errorf("only %d files were looked at", files)
	}
}

func checkFile(t *testing.T, path, pkg string) {
	file, err := parser.ParseFile(token.NewFileSet(), path, nil, parser.SkipObjectResolution)
	if err != nil {
		t.Error(err)
		return
	}
	if owner(pkg) == "" {
		t.Errorf("%s stands in no room", path)
		return
	}
	for _, spec := range file.Imports {
		imported, _ := strconv.Unquote(spec.Path.Value)
		if ours, ok := strings.CutPrefix(imported, "wellposed/"); ok {
			if !allowed(pkg, ours) {
				t.Errorf("%s imports %s, which %s may not", path, ours, owner(pkg))
			}
			continue
		}
		for module, only := range outside {
			if !within(imported, module) {
				continue
			}
			ok := false
			for _, room := range only {
				ok = ok || within(pkg, room)
			}
			if !ok {
				t.Errorf("%s imports %s, which only %s may", path, imported, strings.Join(only, ", "))
			}
		}
	}
	if !within(pkg, "lsp") && pkg != "parser/source" {
		ast.Inspect(file, func(n ast.Node) bool {
			if s, ok := n.(*ast.SelectorExpr); ok && s.Sel.Name == "UTF16" {
				t.Errorf("%s counts in UTF-16 units, which only lsp may", path)
			}
			return true
		})
	}
}

// The table itself must refuse what the picture forbids.
func TestLayersRefuse(t *testing.T) {
	for _, c := range [][2]string{
		{"grammar", "parser"}, {"parser/source", "parser/diag"}, {"parser/model", "checks"}, {"checks/family", "parser/model"},
		{"checks/existence", "checks/facts"}, {"checks/existence/verify", "checks/existence"}, {"checks/rules/a-b", "checks/rules/c-d"},
		{"checks/rules/a-b", "checks"}, {"checks/render", "checks/facts"}, {"checks", "lsp"}, {"lsp", "cmd/wellposed"},
	} {
		if allowed(c[0], c[1]) {
			t.Errorf("%s may import %s", c[0], c[1])
		}
	}
	for _, c := range [][2]string{
		{"checks", "checks/rules/a-b"}, {"checks/rules/a-b", "checks/facts"}, {"lsp", "checks"}, {"parser/model", "parser"}, {"checks/objective/symbolic", "parser/model"},
	} {
		if !allowed(c[0], c[1]) {
			t.Errorf("%s may not import %s", c[0], c[1])
		}
	}
}
