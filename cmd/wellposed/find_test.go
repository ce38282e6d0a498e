package main

import (
	"os"
	"path/filepath"
	"strings"
	"testing"
)

func TestFindModels(t *testing.T) {
	t.Chdir(t.TempDir())
	for _, p := range []string{"a.bayes", "b.txt", "sub/c.bayes", "sub/deep/d.bayes", ".hidden/e.bayes", "sub/x.y.bayes"} {
		if err := os.MkdirAll(filepath.Dir(p), 0o755); err != nil {
			t.Fatal(err)
		}
		if err := os.WriteFile(p, nil, 0o644); err != nil {
			t.Fatal(err)
		}
	}
	if err := os.Mkdir("empty", 0o755); err != nil {
		t.Fatal(err)
	}
	for _, c := range []struct{ args, want, trouble string }{
		{".", "a.bayes sub/c.bayes sub/deep/d.bayes sub/x.y.bayes", ""},
		{"a.bayes ./a.bayes", "a.bayes", ""},
		{"sub a.bayes", "sub/c.bayes sub/deep/d.bayes sub/x.y.bayes a.bayes", ""},
		{"*.bayes", "a.bayes", ""},
		{"**/*.bayes", "a.bayes sub/c.bayes sub/deep/d.bayes sub/x.y.bayes", ""},
		{"sub/**/d*.bayes", "sub/deep/d.bayes", ""},
		{"b.txt -", "b.txt -", ""},
		{"missing.bayes", "missing.bayes", ""},
		{"empty a.bayes", "a.bayes", "no model file"},
		{"q*.bayes", "", "no file matches"},
		{"**/**/x", "", "** once"},
		{"[", "", "syntax error"},
	} {
		got, trouble := findModels(strings.Fields(c.args))
		if strings.Join(got, " ") != c.want {
			t.Errorf("%s: found %q, want %q", c.args, got, c.want)
		}
		if (len(trouble) > 0) != (c.trouble != "") || len(trouble) > 0 && !strings.Contains(trouble[0].Error(), c.trouble) {
			t.Errorf("%s: trouble %v, want %q", c.args, trouble, c.trouble)
		}
	}
}
