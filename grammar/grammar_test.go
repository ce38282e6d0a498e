package grammar

import (
	"bytes"
	"encoding/json"
	"flag"
	"os"
	"regexp"
	"slices"
	"strings"
	"testing"
)

var update = flag.Bool("update", false, "rewrite the golden files")

func TestTextMateIsCurrent(t *testing.T) {
	got, err := TextMate()
	if err != nil {
		t.Fatal(err)
	}
	const path = "bayes.tmLanguage.json"
	if *update {
		if err := os.WriteFile(path, got, 0o644); err != nil {
			t.Fatal(err)
		}
	}
	want, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	if !bytes.Equal(got, want) {
		t.Errorf("%s differs from the language's data; refresh it with -update", path)
	}
}

// TestTextMateMatches tries patterns on words that they must and must not
// match. Go has no look-around, so it is taken off.
func TestTextMateMatches(t *testing.T) {
	raw, err := TextMate()
	if err != nil {
		t.Fatal(err)
	}
	var g struct {
		Repository map[string]struct{ Match string }
	}
	if err := json.Unmarshal(raw, &g); err != nil {
		t.Fatal(err)
	}
	around := regexp.MustCompile(`\(\?<?[=!](?:\[[^\]]*\]|\((?:\?:)?[^()]*(?:\([^()]*\)[^()]*)*\)|\\.|[^()\\])*\)`)
	for _, c := range []struct{ pattern, text, want string }{
		{"statement", "rivals for p", "rivals"},
		{"kind", "proportions(3)", "proportions"},
		{"distribution", "HALF-Student-t(", "HALF-Student-t"},
		{"function", "log-gamma(", "log-gamma"},
		{"number", "1.5e-3%", "1.5e-3%"},
		{"name", "θ₁ x", "θ₁"},
		{"operator", "<= 3", "<="},
	} {
		re, err := regexp.Compile("^(?:" + around.ReplaceAllString(g.Repository[c.pattern].Match, "") + ")")
		if err != nil {
			t.Errorf("%s: %v", c.pattern, err)
			continue
		}
		if got := re.FindString(c.text); got != c.want {
			t.Errorf("%s matches %q of %q, want %q", c.pattern, got, c.text, c.want)
		}
	}
}

func TestStatementsFollowKeywords(t *testing.T) {
	var names []string
	for _, s := range Statements {
		names = append(names, s.Keyword)
		if s.Noun == "" || s.Doc == "" || len(s.Forms) == 0 || len(s.Examples()) == 0 {
			t.Errorf("%s lacks a noun, a line, a form or an example", s.Keyword)
		}
		for _, f := range append(slices.Clone(s.Forms), s.Examples()...) {
			if !strings.HasPrefix(f, s.Keyword+" ") {
				t.Errorf("%q does not begin with %s", f, s.Keyword)
			}
		}
	}
	if !slices.Equal(names, Keywords) {
		t.Errorf("statements %v, keywords %v", names, Keywords)
	}
}

func TestEveryArgumentHasAnExample(t *testing.T) {
	for _, d := range Distributions {
		for _, form := range d.Forms {
			for _, p := range form {
				if arguments[p.Label] == "" {
					t.Errorf("%s: no example for %q", d.Name, p.Label)
				}
			}
		}
	}
}

// TestFormsDiffer: an argument list fits one form only.
func TestFormsDiffer(t *testing.T) {
	for _, d := range Distributions {
		seen := map[string]bool{}
		for _, form := range d.Forms {
			key := ""
			for _, p := range form {
				if p.Named && !p.Optional {
					key += p.Label + ";"
				} else if !p.Optional {
					key += "_;"
				}
			}
			if seen[key] {
				t.Errorf("%s has two forms with %s", d.Name, key)
			}
			seen[key] = true
		}
	}
}

func TestSoftWords(t *testing.T) {
	words := SoftWords()
	for _, w := range []string{"as", "flat", "because", "across", "censored", "jeffreys", "posterior", "until", "standard"} {
		if !slices.Contains(words, w) {
			t.Errorf("%s is missing", w)
		}
	}
	for _, k := range Keywords {
		if slices.Contains(words, k) {
			t.Errorf("%s is a keyword", k)
		}
	}
}
