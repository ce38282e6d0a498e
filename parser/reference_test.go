package parser

import (
	"bytes"
	"flag"
	"fmt"
	"os"
	"regexp"
	"strings"
	"testing"

	"wellposed/grammar"
	"wellposed/parser/source"
)

var update = flag.Bool("update", false, "rewrite the golden files")

const (
	referencePath = "../grammar/REFERENCE.md"
	ebnfPath      = "../grammar/grammar.ebnf"
)

// section fills what stands between a begin and an end comment of a page.
func section(t *testing.T, page, name, body string) string {
	t.Helper()
	begin, end := "<!-- begin "+name+" -->\n", "<!-- end "+name+" -->"
	i, j := strings.Index(page, begin), strings.Index(page, end)
	if i < 0 || j < i {
		t.Fatalf("the page has no section %s", name)
	}
	return page[:i+len(begin)] + body + page[j:]
}

func golden(t *testing.T, path, got string) {
	t.Helper()
	if *update {
		if err := os.WriteFile(path, []byte(got), 0o644); err != nil {
			t.Fatal(err)
		}
		return
	}
	want, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	if !bytes.Equal([]byte(got), want) {
		t.Errorf("%s is not what the language's data say; refresh it with -update", path)
	}
}

func TestReferenceIsCurrent(t *testing.T) {
	raw, err := os.ReadFile(referencePath)
	if err != nil {
		t.Fatal(err)
	}
	page := section(t, string(raw), "statements", statementsSection())
	page = section(t, page, "kinds", kindsSection())
	page = section(t, page, "distributions", distributionsSection())
	page = section(t, page, "functions", functionsSection())
	page = section(t, page, "bounds", fmt.Sprintf("| what | bound |\n|---|---|\n| a model file | %d MiB |\n| a statement | %d MiB |\n| statements and comments | %s |\n| brackets, signs and powers in one another | %d |\n| operators in one chain | %s |\n",
		MaxText>>20, MaxStatement>>20, thousands(MaxStatements), MaxNesting, thousands(MaxOperators)))
	findings := "| finding | meaning |\n|---|---|\n"
	for _, r := range Rules {
		findings += fmt.Sprintf("| `%s` | %s |\n", r.Name, strings.ReplaceAll(r.Doc, "|", `\|`))
	}
	golden(t, referencePath, section(t, page, "findings", findings))
}

func statementsSection() string {
	var b strings.Builder
	for _, s := range grammar.Statements {
		fmt.Fprintf(&b, "### %s\n\n`%s` %s.\n\n```bayes\n%s\n```\n\n", s.Keyword, s.Keyword, s.Doc, strings.Join(s.Examples(), "\n"))
	}
	return b.String()
}

func kindsSection() string {
	b := "| kind | support | meaning | example |\n|---|---|---|---|\n"
	for _, k := range grammar.Kinds {
		support := ""
		if k.Low != "" {
			support = k.Low + " to " + k.High
		}
		b += fmt.Sprintf("| %s | %s | %s | `%s` |\n", k.Name, support, k.Doc, k.Example())
	}
	return b
}

func distributionsSection() string {
	b := "| distribution | produces | meaning | ways to write it |\n|---|---|---|---|\n"
	for _, d := range grammar.Distributions {
		ways := ""
		for _, e := range d.Examples() {
			if ways != "" {
				ways += "<br>"
			}
			ways += "`" + e + "`"
		}
		optional := ""
		for _, form := range d.Forms[:1] {
			for _, p := range form {
				if p.Optional {
					optional += fmt.Sprintf("; `%s =` %s", p.Label, p.Doc)
				}
			}
		}
		b += fmt.Sprintf("| %s | %s | %s%s | %s |\n", d.Name, d.On, d.Doc, optional, ways)
	}
	return b
}

func functionsSection() string {
	b := "| function | meaning | example |\n|---|---|---|\n"
	for _, f := range grammar.Functions {
		b += fmt.Sprintf("| %s | %s | `%s` |\n", f.Name, f.Doc, f.Example())
	}
	return b
}

func mustRead(t *testing.T, text string) {
	t.Helper()
	file := source.NewFile("m", text)
	if _, findings := Parse(file); len(findings) > 0 {
		t.Errorf("%s: %s (%q)", text, findings[0].Headline, file.Slice(findings[0].Span))
	}
}

// TestReferenceExamplesAreRead reads every example of the page.
func TestReferenceExamplesAreRead(t *testing.T) {
	raw, err := os.ReadFile(referencePath)
	if err != nil {
		t.Fatal(err)
	}
	page := string(raw)
	blocks := regexp.MustCompile("(?s)```bayes\n(.*?)```").FindAllStringSubmatch(page, -1)
	if len(blocks) < len(grammar.Keywords) {
		t.Errorf("only %d examples", len(blocks))
	}
	for _, m := range blocks {
		mustRead(t, m[1])
	}
	cells := func(name string) (out []string) {
		_, rest, _ := strings.Cut(page, "<!-- begin "+name+" -->")
		rest, _, _ = strings.Cut(rest, "<!-- end "+name+" -->")
		for _, row := range strings.Split(rest, "\n") {
			if i := strings.LastIndex(row, "| `"); i >= 0 {
				for _, m := range regexp.MustCompile("`([^`]+)`").FindAllStringSubmatch(row[i:], -1) {
					out = append(out, m[1])
				}
			}
		}
		return out
	}
	for _, c := range []struct {
		name, before string
		least        int
	}{
		{"kinds", "", len(grammar.Kinds)},
		{"distributions", "observe y as ", len(grammar.Distributions)},
		{"functions", "let z = ", len(grammar.Functions)},
	} {
		all := cells(c.name)
		if len(all) < c.least {
			t.Errorf("%s: only %d examples", c.name, len(all))
		}
		for _, e := range all {
			mustRead(t, c.before+e)
		}
	}
}

// TestFormsAreRead reads each form of each statement with something put in for
// the words in capitals.
func TestFormsAreRead(t *testing.T) {
	fill := strings.NewReplacer(`"TEXT"`, `"x"`, `"NAME"`, `"x"`, `"FILE"`, `"x.csv"`, `"LEVEL"`, `"x"`, `"CONCLUSION"`, `"x"`, `"REASON"`, `"x"`, `"WHO"`, `"x"`,
		"YEAR-MONTH-DAY", "2027-06-30", "P(CONDITION)", "P(x < 1)", "CONDITION", "x > 0", "DISTRIBUTION", "Beta(1, 1)", "EXPRESSION", "1/x",
		"EXPOSURE", "t", "KIND", "real", "RULE", "some-rule", "SHARE", "95%", "NUMBER", "1", "TRIALS", "40", "COUNT", "3", "COLUMN", "c",
		"VALUE", "0.1", "LOW", "0", "HIGH", "1", "DATA", "y", "NAME", "x", "LEVEL", "0.95")
	for _, s := range grammar.Statements {
		for _, f := range s.Forms {
			text := fill.Replace(f)
			if regexp.MustCompile(`[A-Z]{2}`).MatchString(text) {
				t.Errorf("%s: a word is left in %s", f, text)
			}
			mustRead(t, text)
		}
	}
}

// TestGrammarIsCurrent derives the productions of the statements from the
// parsers that read them.
func TestGrammarIsCurrent(t *testing.T) {
	raw, err := os.ReadFile(ebnfPath)
	if err != nil {
		t.Fatal(err)
	}
	const border = "(* Statements, made from the tags of the syntax tree. *)\n"
	head, _, found := strings.Cut(string(raw), border)
	if !found {
		t.Fatal("the border is missing")
	}
	var rules []string
	seen := map[string]bool{"Dist = Law .": true}
	for _, k := range grammar.Keywords {
		for _, r := range strings.Split(strings.TrimSpace(forms[k].rules()), "\n") {
			if !seen[r] {
				seen[r] = true
				rules = append(rules, r)
			}
		}
	}
	body := strings.ReplaceAll(strings.Join(rules, "\n"), " Law ", " Dist ")
	for _, k := range grammar.Keywords { // the production of every keyword is among the alternatives
		name, _, _ := strings.Cut(forms[k].rules(), " ")
		if !regexp.MustCompile(`\b` + name + `\b`).MatchString(head) {
			t.Errorf("Statement does not offer %s", name)
		}
	}
	golden(t, ebnfPath, head+border+"\n"+body+"\n")
}
