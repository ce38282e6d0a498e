package main

import (
	"os"
	"path/filepath"
	"strings"
	"testing"
)

const undeclared = "unknown p : probability\nobserve 3 of 40 with probability p\nprior p as Beta(1, 1)\nrival \"other\" p as Beta(1/2, 1/2)\nreport p\n"

func repository(t *testing.T, files map[string]string) string {
	t.Helper()
	root := t.TempDir()
	for name, text := range files {
		path := filepath.Join(root, name)
		if err := os.MkdirAll(filepath.Dir(path), 0o755); err != nil {
			t.Fatal(err)
		}
		if err := os.WriteFile(path, []byte(text), 0o600); err != nil {
			t.Fatal(err)
		}
	}
	return root
}

func output(args ...string) (string, int) {
	var out, errs strings.Builder
	code := Main(args, strings.NewReader(""), &out, &errs)
	return out.String() + errs.String(), code
}

func TestConfigurationHoldsInLint(t *testing.T) {
	root := repository(t, map[string]string{
		"wellposed.toml":      "[severity]\ndefault-without-reason = \"stop\"\n[[paths]]\nmatch = \"old/\"\nseverity = { default-without-reason = \"off\" }\n[[paths]]\nmatch = \"skip/\"\nskip = true\n",
		"a.bayes":             undeclared,
		"old/b.bayes":         undeclared,
		"skip/c.bayes":        "not a model\n",
		"near/d.bayes":        undeclared,
		"near/wellposed.toml": "level = \"note\"\n[severity]\ndefault-without-reason = \"note\"\n",
	})
	if text, code := output("lint", "--format", "line", filepath.Join(root, "a.bayes")); code != exitFindings || !strings.Contains(text, "stop: ") {
		t.Errorf("%d %s", code, text)
	}
	if text, code := output("lint", "--format", "line", filepath.Join(root, "old"), filepath.Join(root, "skip")); code != exitClean || text != "" {
		t.Errorf("%d %s", code, text)
	}
	if text, code := output("lint", "--format", "line", filepath.Join(root, "near")); code != exitFindings || !strings.Contains(text, "note: ") {
		t.Errorf("%d %s", code, text)
	}
	if _, code := output("lint", "--level", "warn", filepath.Join(root, "near")); code != exitClean {
		t.Errorf("the command line does not win: %d", code)
	}
}

func TestConfigurationMistakesAreFindings(t *testing.T) {
	root := repository(t, map[string]string{"wellposed.toml": "strct = true\n", "a.bayes": undeclared})
	if text, _ := output("lint", "--format", "line", root); !strings.Contains(text, "wellposed.toml:1:1: warn: There is no setting `strct` here; did you mean strict?") {
		t.Errorf("%s", text)
	}
	text, code := output("config", filepath.Join(root, "a.bayes"))
	if code != exitFindings || !strings.Contains(text, "the nearest one, going up") || !strings.Contains(text, "did you mean strict?") {
		t.Errorf("%d %s", code, text)
	}
}
