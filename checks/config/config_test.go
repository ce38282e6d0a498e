package config

import (
	"strings"
	"testing"

	"wellposed/parser/diag"
	"wellposed/parser/source"
)

var rules = []Known{
	{Name: "posterior-does-not-exist", Severity: diag.Stop, Firm: true},
	{Name: "no-rival-declared", Severity: diag.Note},
	{Name: "default-without-reason", Severity: diag.Note},
}

func TestParse(t *testing.T) {
	c, found := Parse(source.NewFile("wellposed.toml", `
matters = "5%"
strict = true
level = "note"
severity.no-rival-declared = "off"

[limits]
rows = 1_000

[[paths]]
match = ["archive/**", "old-*.bayes"]
strict = false
severity = { default-without-reason = "warn", no-rival-declared = "note" }

[[paths]]
match = "archive/skip/"
skip = true
`), rules)
	if len(found) > 0 {
		t.Fatalf("findings: %+v", found)
	}
	if c.Matters.RatString() != "1/20" || c.Level != diag.Note || c.Limits.Rows != 1000 {
		t.Errorf("got %+v", c)
	}
	plain := c.For("model.bayes")
	if !plain.Strict || !plain.Severity["no-rival-declared"].Off {
		t.Errorf("got %+v", plain)
	}
	old := c.For("archive/deep/a.bayes")
	if old.Strict || old.Skip || old.Severity["no-rival-declared"].Off || old.Severity["default-without-reason"].Severity != diag.Warn {
		t.Errorf("got %+v", old)
	}
	if !c.For("archive/skip/a/b.bayes").Skip || c.For("old-1.bayes").Strict {
		t.Error("patterns do not select")
	}
}

func TestParseRefuses(t *testing.T) {
	for text, want := range map[string]string{
		"maters = \"5%\"":                                "did you mean matters?",
		"matters = 0":                                    "takes a share",
		"matters = \"1e999999999\"":                      "takes a share",
		"level = \"warning\"":                            `"note", "warn" or "stop"`,
		"strict = 1":                                     "true or false",
		"[severity]\nno-rival-declred = \"off\"":         "did you mean no-rival-declared?",
		"[severity]\nposterior-does-not-exist = \"off\"": "can't be lowered",
		"[severity]\nno-rival-declared = \"loud\"":       "takes one of",
		"[limits]\nrows = -1":                            "whole number",
		"[paths]\nmatch = \"a\"":                         "[[paths]]",
		"[[paths]]\nmatch = 3":                           "list of patterns",
		"[sevrity]\na = 1":                               "did you mean severity?",
		"strict = true\nstrict = false":                  "set twice",
		"strict = ":                                      "can't be read",
		"strict = true\nλ = [1, 2":                       "can't be read",
	} {
		_, found := Parse(source.NewFile("wellposed.toml", text), rules)
		if len(found) != 1 || !strings.Contains(found[0].Headline, want) {
			t.Errorf("%q: got %+v, want one finding with %q", text, found, want)
		}
	}
}

func TestMatch(t *testing.T) {
	for _, c := range []struct {
		pattern, path string
		want          bool
	}{
		{"*.bayes", "a.bayes", true}, {"*.bayes", "b/a.bayes", false}, {"**/*.bayes", "a.bayes", true},
		{"**/*.bayes", "x/y/a.bayes", true}, {"a/", "a/b/c", true}, {"a/**/z", "a/z", true}, {"a/?", "a/bc", false}, {"[", "[", false},
	} {
		if got := Match(c.pattern, c.path); got != c.want {
			t.Errorf("Match(%q, %q) = %v", c.pattern, c.path, got)
		}
	}
}

func FuzzParse(f *testing.F) {
	f.Add("matters = \"5%\"\n[[paths]]\nmatch = [\"a\"]\nseverity = { no-rival-declared = \"off\" }\n")
	f.Add("[paths.severity]\na = 1")
	f.Fuzz(func(t *testing.T, text string) {
		c, _ := Parse(source.NewFile("wellposed.toml", text), rules)
		c.For("a/b.bayes")
	})
}
