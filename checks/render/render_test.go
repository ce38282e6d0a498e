package render

import (
	"bytes"
	"encoding/json"
	"encoding/xml"
	"flag"
	"math"
	"os"
	"path/filepath"
	"regexp"
	"strings"
	"testing"

	"github.com/santhosh-tekuri/jsonschema/v6"

	"wellposed/parser/diag"
	"wellposed/parser/source"
)

var update = flag.Bool("update", false, "rewrite the golden files")

const demo = "title \"Relay\"\n" +
	"unknown θ : probability\t# Greek\n" +
	"observe 0 of 40 with probability θ\n" +
	"let 𝜓e\u0301 = θ   prior   # astral, combining\n" +
	"prior θ as Beta(0, 0) because \"let the data speak\" from \"a plan whose name is long enough that the line is wider than any page\"\n"

// span finds the nth occurrence (from 0) of a text in the demo.
func span(text string, nth int) source.Span {
	at := -1
	for i := 0; i <= nth; i++ {
		at += 1 + strings.Index(demo[at+1:], text)
	}
	return source.Span{Start: at, End: at + len(text)}
}

// statements cuts the demo at its line ends.
func statements() []source.Span {
	var out []source.Span
	start := 0
	for i, b := range demo {
		if b == '\n' {
			out = append(out, source.Span{Start: start, End: i})
			start = i + 1
		}
	}
	return out
}

// sample is a report with every feature of a finding.
func sample() *Report {
	return &Report{
		Version: "(test)", Level: diag.Warn,
		Rules: []Rule{
			{Name: "posterior-does-not-exist", Severity: diag.Stop, Group: "existence of the posterior", Brief: "The posterior has no finite integral.", Page: "# posterior-does-not-exist\n"},
			{Name: "flat-on-unbounded", Severity: diag.Note, Brief: "A flat prior sits on an unbounded scale."},
			{Name: "nothing-reported", Severity: diag.Note, Brief: "No report statement."},
		},
		Files: []*File{
			{Path: "models/relay one.bayes", Source: source.NewFile("models/relay one.bayes", demo), Statements: statements(),
				Findings: []diag.Finding{
					{Rule: "flat-on-unbounded", Severity: diag.Note, Path: "models/relay one.bayes", Span: span("prior", 0), Target: "𝜓e\u0301", Headline: "A note on an astral name; 100% of it: a, b."},
					{Rule: "posterior-does-not-exist", Severity: diag.Stop, Path: "models/relay one.bayes", Span: span("Beta(0, 0)", 0), Target: "θ",
						Headline: "With 0 of 40 this prior leaves no posterior: mass escapes to θ = 0.",
						Notes:    []string{"a + y = 0 + 0 is not positive, so the kernel θ^(−1) has no integral at θ = 0, however many trials are added as long as none of them fails.", "It goes away with a + y > 0."},
						Evidence: []diag.Evidence{
							{Name: "upper 95%", About: "declared prior", Text: "undefined", Value: math.NaN(), How: diag.Proved, Method: "closed form"},
							{Name: "upper 95%", About: "Beta(1, 1)", Text: "0.0705", Value: 0.07049784, Error: 1e-12, How: diag.Proved, Method: "closed form"},
						},
						Related: []diag.Related{
							{Span: span("0 of 40", 0), Message: "the data"},
							{Path: "models/trials.csv", Row: 3, Column: 2, Message: "a zero count"},
						},
						Sketch: "density ▁▁▂▄█\n        0    1\n",
						Fixes: []diag.Fix{
							{Title: "Use Beta(1/2, 1/2) (Jeffreys)", Grade: diag.ChangesPosterior, Consequence: "upper 95 %: none → 0.0466",
								Edits: []diag.Edit{{Span: span("Beta(0, 0)", 0), Text: "Beta(1/2, 1/2)"}}},
							{Title: "Say it in another file", Edits: []diag.Edit{{Path: "other.bayes", Text: "x"}}},
						}},
					{Rule: "posterior-does-not-exist", Severity: diag.Stop, Path: "models/relay one.bayes", Span: source.Span{Start: span("observe", 0).Start, End: span("because", 0).Start},
						Headline: "A finding that spans lines.", Overridden: "agreed in the plan"},
				},
				Verdicts: []Verdict{{Analysis: "declared", Unknowns: []string{"θ"}, Status: "does not exist", How: "proved", Reason: "conjugate", Claim: "a + y = 0",
					Conditions: []Condition{{"a + y > 0", "0 + 0 > 0", false}}, Escape: []Escape{{Unknown: "θ", Toward: "0"}}, Certificate: map[string]any{"kind": "order"}}},
				Promises: []Promise{{"a posterior for every outcome", span("title", 0), "broken", "y = 0 has none"}},
			},
			{Path: "clean.bayes", Source: source.NewFile("clean.bayes", "title \"x\"\n")},
			{Path: "missing.bayes", Trouble: "no such file"},
			{Path: "empty.bayes", Source: source.NewFile("empty.bayes", ""), Findings: []diag.Finding{{Rule: "nothing-reported", Headline: "The file is empty."}}},
		},
	}
}

func rendered(t *testing.T, format string, r *Report, o Options) []byte {
	t.Helper()
	var b bytes.Buffer
	if err := Write(&b, format, r, o); err != nil {
		t.Fatal(err)
	}
	return b.Bytes()
}

func golden(t *testing.T, name string, got []byte) {
	t.Helper()
	path := filepath.Join("testdata", name)
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
		t.Errorf("%s differs; run with -update and look at the difference.\ngot:\n%s", path, got)
	}
}

func TestGoldens(t *testing.T) {
	for _, f := range Formats {
		golden(t, "sample."+f.Name, rendered(t, f.Name, sample(), Options{Width: 80}))
	}
	golden(t, "sample-narrow.text", rendered(t, "text", sample(), Options{Width: 44, Verbose: true}))
	golden(t, "sample-colour.text", rendered(t, "text", sample(), Options{Width: 100, Colour: true}))
}

func TestUnknownFormat(t *testing.T) {
	if err := Write(&bytes.Buffer{}, "pdf", sample(), Options{}); err == nil {
		t.Error("no error for an unknown format")
	}
}

// Colour must add nothing but escapes.
func TestColourAddsNoWords(t *testing.T) {
	escape := regexp.MustCompile("\x1b\\[[0-9;]*m")
	plain := rendered(t, "text", sample(), Options{Width: 90})
	coloured := escape.ReplaceAll(rendered(t, "text", sample(), Options{Width: 90, Colour: true}), nil)
	if !bytes.Equal(plain, coloured) {
		t.Errorf("with colour removed:\n%s\nplain:\n%s", coloured, plain)
	}
}

func TestCleanRunIsSilent(t *testing.T) {
	r := &Report{Files: []*File{{Path: "clean.bayes", Source: source.NewFile("clean.bayes", "title \"x\"\n")}}}
	if got := rendered(t, "text", r, Options{}); len(got) != 0 {
		t.Errorf("a clean run prints %q", got)
	}
	if got := string(rendered(t, "text", r, Options{Verbose: true})); !strings.Contains(got, "nothing found in 1 model") {
		t.Errorf("a verbose clean run prints %q", got)
	}
}

// The underline starts and ends under the marked text, counted in cells.
func TestUnderline(t *testing.T) {
	for _, c := range []struct {
		before, part, after string
		width               int
	}{
		{"prior ", "θ", " flat", 80},
		{"漢字 ", "é", " b", 80},
		{"𝜓 = ", "α + β", "", 80},
		{"\t", "x", "", 80},
		{strings.Repeat("a ", 60), "mark", strings.Repeat(" b", 60), 40},
		{"", strings.Repeat("m", 100), "", 30},
		{strings.Repeat("漢", 50), "字", strings.Repeat("漢", 50), 31},
	} {
		shown, under := underline(c.before+c.part+c.after, len(c.before), len(c.before+c.part), c.width)
		if w := source.Width(shown); w > c.width {
			t.Errorf("%q: %d cells wide, allowed %d", shown, w, c.width)
		}
		start := len(under) - len(strings.TrimLeft(under, " "))
		cells := strings.Count(under, "‾")
		left := cut(shown, start)
		if source.Width(left) != start {
			t.Errorf("%q: the underline begins inside a wide character", shown)
			continue
		}
		marked := cut(shown[len(left):], cells)
		if marked != expand(c.part) && !strings.HasSuffix(marked, "…") {
			t.Errorf("%q: %q is underlined, want %q", shown, marked, c.part)
		}
	}
}

func TestWrapKeepsEveryWord(t *testing.T) {
	text := "one two three-four  five 漢字漢字 /a/very/long/path/that/is/wider/than/the/page end"
	lines := wrap(text, 12)
	if got, want := strings.Fields(strings.Join(lines, " ")), strings.Fields(text); strings.Join(got, " ") != strings.Join(want, " ") {
		t.Errorf("wrapped to %q", lines)
	}
	for _, l := range lines {
		if source.Width(l) > 12 && strings.Contains(l, " ") {
			t.Errorf("line %q is too wide", l)
		}
	}
}

// Control characters in a headline, a path or a source line never reach the
// terminal.
func TestNoControlCharacters(t *testing.T) {
	text := "title \"\x1b[31mred\u202e\"\n"
	r := &Report{Files: []*File{{Path: "a\x1b[2J.bayes", Source: source.NewFile("a", text), Findings: []diag.Finding{{
		Rule: "x", Headline: "bad \x1b]0;title\x07 text", Notes: []string{"line\nbreak"}, Span: source.Span{Start: 0, End: 5}}}}}}
	for _, format := range []string{"text", "line"} {
		if got := string(rendered(t, format, r, Options{})); strings.ContainsAny(got, "\x1b\x07\u202e") {
			t.Errorf("%s prints %q", format, got)
		}
	}
}

func validate(t *testing.T, schemaText string, raw []byte) error {
	t.Helper()
	schema, err := jsonschema.UnmarshalJSON(strings.NewReader(schemaText))
	if err != nil {
		t.Fatal(err)
	}
	c := jsonschema.NewCompiler()
	if err := c.AddResource("memory:schema.json", schema); err != nil {
		t.Fatal(err)
	}
	s, err := c.Compile("memory:schema.json")
	if err != nil {
		t.Fatal(err)
	}
	value, err := jsonschema.UnmarshalJSON(bytes.NewReader(raw))
	if err != nil {
		t.Fatal(err)
	}
	return s.Validate(value)
}

func TestJSONFollowsItsSchema(t *testing.T) {
	raw := rendered(t, "json", sample(), Options{})
	if err := validate(t, Schema, raw); err != nil {
		t.Error(err)
	}
	for _, broken := range [][2]string{
		{`"severity": "stop"`, `"severity": "fatal"`}, {`"line": 5`, `"line": 0`}, {`"how": "proved"`, `"how": "sure"`}, {`"rule":`, `"ruel":`},
	} {
		if validate(t, Schema, bytes.Replace(raw, []byte(broken[0]), []byte(broken[1]), 1)) == nil {
			t.Errorf("the schema accepts %s", broken[1])
		}
	}
	var back struct {
		Files []struct {
			Findings []struct {
				Range struct {
					Start, End struct{ Offset, Line, Column int }
				}
			}
		}
	}
	if err := json.Unmarshal(raw, &back); err != nil {
		t.Fatal(err)
	}
	// `let 𝜓é = θ   prior`: the combining accent makes one character with its e.
	if at := back.Files[0].Findings[0].Range.Start; at.Line != 4 || at.Column != 14 {
		t.Errorf("the astral line's finding is at %d:%d, want 4:14", at.Line, at.Column)
	}
}

func TestSARIFFollowsTheStandard(t *testing.T) {
	schema, err := os.ReadFile("testdata/sarif-schema-2.1.0.json")
	if err != nil {
		t.Fatal(err)
	}
	raw := rendered(t, "sarif", sample(), Options{})
	if err := validate(t, string(schema), raw); err != nil {
		t.Error(err)
	}
	if err := validate(t, string(schema), rendered(t, "sarif", &Report{}, Options{})); err != nil {
		t.Error("empty report:", err)
	}
	if validate(t, string(schema), bytes.Replace(raw, []byte(`"level": "error"`), []byte(`"level": "stop"`), 1)) == nil {
		t.Error("the schema accepts level stop")
	}
	// Code points: the astral letter is one, the combining accent another.
	if !regexp.MustCompile(`"startLine": 4,\s+"startColumn": 15`).Match(raw) {
		t.Error("the astral line's region does not start at code point 15")
	}
}

func TestFingerprintsIgnoreLineNumbers(t *testing.T) {
	first := sample().Files[0]
	moved := sample().Files[0]
	lead := "# a comment\n\n"
	moved.Source = source.NewFile(moved.Path, lead+demo)
	for i := range moved.Statements {
		moved.Statements[i] = moved.Statements[i].Shift(len(lead))
	}
	for i := range moved.Findings {
		moved.Findings[i].Span = moved.Findings[i].Span.Shift(len(lead))
	}
	a, b := fingerprints(first), fingerprints(moved)
	seen := map[string]bool{}
	for i := range a {
		if a[i] != b[i] {
			t.Errorf("finding %d: the fingerprint changes when lines move", i)
		}
		if seen[a[i]] {
			t.Errorf("finding %d: its fingerprint is taken", i)
		}
		seen[a[i]] = true
	}
	changed := sample().Files[0]
	changed.Source = source.NewFile(changed.Path, strings.Replace(demo, "Beta(0, 0)", "Beta(0, 1)", 1))
	if fingerprints(changed)[1] == a[1] {
		t.Error("the fingerprint ignores the statement's content")
	}
	twice := &File{Path: "a", Source: source.NewFile("a", "x\n"), Findings: []diag.Finding{{Rule: "r"}, {Rule: "r"}}}
	if p := fingerprints(twice); p[0] == p[1] {
		t.Error("two findings share a fingerprint")
	}
}

// Every format names every finding's rule, and the numbers are the same.
func TestFormatsAgree(t *testing.T) {
	r := sample()
	for _, f := range Formats {
		out := string(rendered(t, f.Name, r, Options{Width: 120}))
		for _, d := range r.Files[0].Findings {
			if !strings.Contains(out, d.Rule) {
				t.Errorf("%s does not name %s", f.Name, d.Rule)
			}
		}
	}
}

func TestJUnitIsXML(t *testing.T) {
	r := sample()
	r.Files[0].Findings[1].Headline += " \x00 < & \" ]]>"
	var back junitSuites
	if err := xml.Unmarshal(rendered(t, "junit", r, Options{}), &back); err != nil {
		t.Fatal(err)
	}
	if back.Tests == 0 || back.Failures != 2 || back.Errors != 1 {
		t.Errorf("tests %d, failures %d, errors %d; want some, 2 (a rule and a promise), 1", back.Tests, back.Failures, back.Errors)
	}
}

func TestURI(t *testing.T) {
	for path, want := range map[string]string{
		"models/relay one.bayes": "models/relay%20one.bayes", "./a.bayes": "a.bayes", "/x/é.bayes": "file:///x/%C3%A9.bayes", "a:b.bayes": "./a:b.bayes",
	} {
		if got := uri(path); got != want {
			t.Errorf("uri(%q) = %q, want %q", path, got, want)
		}
	}
}
