package parser_test

import (
	"math/rand"
	"reflect"
	"strings"
	"testing"

	"wellposed/parser"
	"wellposed/parser/source"
)

// snippets are what random edits put in: pieces that move the borders of
// statements.
var snippets = []string{"", "\n", "(", ")", ",", "\nprior p flat\n", "| 1 | 2 |\n", "# c\n", "\"", " because \"x\"", "table t\n",
	"\nbecause \"y\"", "+", "x", "θ", "\r\n", "[", "∝", "\n\n", "|"}

// TestCacheAgreesWithParse edits model files at random and holds the
// incremental reading against a fresh one.
func TestCacheAgreesWithParse(t *testing.T) {
	random := rand.New(rand.NewSource(1))
	for _, path := range corpus(t) {
		text := read(t, path).Text
		var cache parser.Cache
		for step := range 150 {
			a := random.Intn(len(text) + 1)
			b := min(len(text), a+random.Intn(12)*random.Intn(2))
			text = text[:a] + snippets[random.Intn(len(snippets))] + text[b:]
			if step%20 == 19 {
				text = text[:len(text)/2] + read(t, path).Text
			}
			file := source.NewFile("m.bayes", text)
			wantTree, wantFindings := parser.Parse(file)
			tree, findings := cache.Parse(file)
			if !reflect.DeepEqual(tree, wantTree) {
				t.Fatalf("%s, step %d: another tree after an edit at %d of\n%s", path, step, a, text)
			}
			if !reflect.DeepEqual(findings, wantFindings) {
				t.Fatalf("%s, step %d: other findings:\n%v\n%v", path, step, findings, wantFindings)
			}
		}
	}
}

func TestCacheKeepsStatements(t *testing.T) {
	text := "given n = 1\nlet a = n\nlet b = n\n"
	var cache parser.Cache
	before, _ := cache.Parse(source.NewFile("m", text))
	after, _ := cache.Parse(source.NewFile("m", strings.Replace(text, "n = 1", "n = 22", 1)))
	if before.Lines[0].Statement == after.Lines[0].Statement {
		t.Error("the edited statement was kept")
	}
	for i := 1; i < 3; i++ {
		if before.Lines[i].Statement != after.Lines[i].Statement {
			t.Errorf("statement %d was read again", i)
		}
		if after.Lines[i].Start != before.Lines[i].Start+1 {
			t.Errorf("statement %d starts at %d", i, after.Lines[i].Start)
		}
	}
}

// thousand is a model file of a thousand different statements.
func thousand() string {
	var b strings.Builder
	for i := range 125 {
		n := string(rune('a'+i%26)) + strings.Repeat("x", i/26)
		b.WriteString("given n" + n + " = 40, y" + n + " = [1, 2, 3.5]\n" +
			"unknown p" + n + " : probability \"failure within one mission\"\n" +
			"unknown g" + n + " per region relative to \"north\" : effect\n" +
			"let eta" + n + " = alpha + slope * dose - g" + n + "[region]\n" +
			"observe y" + n + " as Binomial(n" + n + ", expit(eta" + n + "))\n" +
			"prior p" + n + " as Beta(1/2, 1/2) because \"no earlier study\" from \"plan 4.2\"\n" +
			"report odds" + n + " = p" + n + " / (1 - p" + n + "), central 95%\n" +
			"conclude \"meets " + n + "\" when P(p" + n + " < 0.05) >= 0.95\n")
	}
	return b.String()
}

func BenchmarkParseThousandLines(b *testing.B) {
	file := source.NewFile("m.bayes", thousand())
	parser.Parse(file)
	b.SetBytes(int64(len(file.Text)))
	for b.Loop() {
		parser.Parse(file)
	}
}

func BenchmarkReparseOneStatement(b *testing.B) {
	text := thousand()
	at := strings.Index(text, "slope * dose - gkx")
	versions := []*source.File{source.NewFile("m", text), source.NewFile("m", text[:at]+"z"+text[at:])}
	var cache parser.Cache
	cache.Parse(versions[0])
	i := 0
	for b.Loop() {
		i++
		cache.Parse(versions[i%2])
	}
}
