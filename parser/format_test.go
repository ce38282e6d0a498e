package parser_test

import (
	"strings"
	"testing"

	"wellposed/grammar"
	"wellposed/parser"
	"wellposed/parser/source"
)

// checkFormat holds the two laws of the formatter on a text.
func checkFormat(t *testing.T, text string) {
	t.Helper()
	file := source.NewFile("m.bayes", text)
	once := parser.Format(file)
	twice := parser.Format(source.NewFile("m.bayes", once))
	if once != twice {
		t.Errorf("not idempotent:\n%q\nthen\n%q\nof\n%q", once, twice, text)
	}
	before, _ := parser.Parse(file)
	after, _ := parser.Parse(source.NewFile("m.bayes", once))
	if a, b := shape(t, before), shape(t, after); a != b {
		t.Errorf("another tree:\n%s\nthen\n%s\nof\n%q\nto\n%q", a, b, text, once)
	}
}

func TestFormatKeepsCorpus(t *testing.T) {
	for _, path := range corpus(t) {
		checkFormat(t, read(t, path).Text)
	}
}

func TestFormat(t *testing.T) {
	for _, c := range []struct{ name, text, want string }{
		{"spaces", "given   n=40,y = 0", "given n = 40, y = 0\n"},
		{"operators", "let x=-a^2 ^-3*( 4+b )/c", "let x = -a^2^-3 * (4 + b) / c\n"},
		{"fractions", "prior p as Beta( 1 / 2,1/ 2 )", "prior p as Beta(1/2, 1/2)\n"},
		{"one over sigma", "prior s ∝ 1 / s", "prior s ∝ 1/s\n"},
		{"kernel in words", "prior (a, b)  proportional to (a+b)^(-5/2)", "prior (a, b) ∝ (a + b)^(-5/2)\n"},
		{"Unicode operators", "conclude \"x\" when P(p ≤ 0.05) ≥ 0.9 − 1", "conclude \"x\" when P(p <= 0.05) >= 0.9 - 1\n"},
		{"name of a distribution", "prior s as HALF-cauchy( scale=1 )", "prior s as half-Cauchy(scale = 1)\n"},
		{"name in a mixture", "observe y as mixture(w:normal(0,sd=1),1-w:point(0))", "observe y as Mixture(w: Normal(0, sd = 1), 1 - w: Point(0))\n"},
		{"modifiers", "observe t as Weibull(shape=k,scale=s),right - censored where f==0,truncated to(0,inf)",
			"observe t as Weibull(shape = k, scale = s), right-censored where f == 0, truncated to (0, inf)\n"},
		{"unknown", "unknown a,b per(x,y):effect in(-1,1]\"label\"", "unknown a, b per (x, y) : effect in (-1, 1] \"label\"\n"},
		{"size", "unknown w : proportions (4)", "unknown w : proportions(4)\n"},
		{"index", "let e = b [ site,year ]", "let e = b[site, year]\n"},
		{"percent", "report p, central 50 % 95 %", "report p, central 50% 95%\n"},
		{"rule", "prior p Jeffreys", "prior p jeffreys\n"},
		{"information rule", "prior p maximal - data - information", "prior p maximal-data-information\n"},
		{"promise", "require long - run coverage of p:lowest>=88%", "require long-run coverage of p: lowest >= 88%\n"},
		{"acceptance", "accept a - b for mu until 2027 - 06 - 30", "accept a-b for mu until 2027-06-30\n"},
		{"blank lines", "\n\ntitle \"x\"\n\n\n\nnote \"y\"\nnote \"z\"\n\n", "title \"x\"\n\nnote \"y\"\nnote \"z\"\n"},
		{"line ends", "title \"x\"\r\nnote \"y\"\r\n\r\nnote \"z\"", "title \"x\"\nnote \"y\"\n\nnote \"z\"\n"},
		{"comments", "given n=1 # one\ngiven other = 2# two\n   # alone\n", "given n = 1      # one\ngiven other = 2  # two\n# alone\n"},
		{"comment inside", "let a = b + # why\n# because\nc", "let a = b +  # why\n    # because\n    c\n"},
		{"table", "table a\n|x|yy| # head\n# all\n|-1.5|2|\n| θ | b", "table a\n| x    | yy |  # head\n# all\n| -1.5 | 2  |\n| θ    | b  |\n"},
		{"broken", "prior  p  as\ngiven n=1", "prior  p  as\ngiven n = 1\n"},
		{"joined again", "given y = [1,\n 2,\n 3]", "given y = [1, 2, 3]\n"},
		{"composed names", "let e\u0301 = 1", "let é = 1\n"},
		{"empty", " \n\n", ""},
	} {
		t.Run(c.name, func(t *testing.T) {
			if got := parser.Format(source.NewFile("m.bayes", c.text)); got != c.want {
				t.Errorf("got\n%q, want\n%q", got, c.want)
			}
			checkFormat(t, c.text)
		})
	}
}

func TestFormatBreaksLongStatements(t *testing.T) {
	long := "given y = [" + strings.Repeat("1234567, ", 40) + "1]\n" +
		"let eta = alpha_zero + " + strings.Repeat("slope_of_the_dose * dose_in_mg_per_litre + ", 6) + "1\n" +
		"prior theta as Beta(1/2, 1/2) because \"" + strings.Repeat("reason ", 9) + "\" from \"plan, section 4.2\"\n"
	checkFormat(t, long)
	got := parser.Format(source.NewFile("m.bayes", long))
	for _, l := range strings.Split(got, "\n") {
		if len(l) > parser.Width {
			t.Errorf("a line of %d columns: %s", len(l), l)
		}
	}
	if !strings.Contains(got, "\n    from \"plan") {
		t.Errorf("no break before `from`:\n%s", got)
	}
}

func TestPrintReadsBack(t *testing.T) {
	for _, path := range corpus(t) {
		tree, _ := parser.Parse(read(t, path))
		for _, l := range tree.Lines {
			grammar.Walk(l.Statement, func(node any) bool {
				switch e := node.(type) {
				case *grammar.Dist:
					again, faults := parse("prior x as " + parser.Print(e))
					if len(faults) > 0 {
						t.Fatalf("%s: %v", parser.Print(e), faults)
					}
					if d := again.Lines[0].Statement.(*grammar.Prior).Spec.Dist; outline(t, d) != outline(t, e) {
						t.Errorf("%s reads as %s", parser.Print(e), outline(t, d))
					}
				case grammar.Expr:
					again, faults := parse("let x = " + parser.Print(e))
					if len(faults) > 0 {
						t.Fatalf("%s: %v", parser.Print(e), faults)
					}
					if v := again.Lines[0].Statement.(*grammar.Let).Value; outline(t, v) != outline(t, e) {
						t.Errorf("%s reads as %s", parser.Print(e), outline(t, v))
					}
				}
				return true
			})
		}
	}
}

// TestPrintAddsBrackets prints trees that no text without brackets has.
func TestPrintAddsBrackets(t *testing.T) {
	a, b := &grammar.Ident{Text: "a"}, &grammar.Ident{Text: "b"}
	bin := func(op string, x, y grammar.Expr) grammar.Expr { return &grammar.Binary{Op: op, X: x, Y: y} }
	minus := func(x grammar.Expr) grammar.Expr { return &grammar.Unary{Op: "-", X: x} }
	for _, c := range []struct {
		e    grammar.Expr
		want string
	}{
		{bin("*", bin("+", a, b), a), "(a + b) * a"},
		{bin("-", a, bin("-", b, a)), "a - (b - a)"},
		{bin("^", minus(a), b), "(-a)^b"},
		{minus(bin("^", a, b)), "-a^b"},
		{bin("^", bin("^", a, b), a), "(a^b)^a"},
		{bin("^", a, minus(b)), "a^-b"},
		{bin("/", a, bin("/", a, b)), "a / (a / b)"},
		{bin("<", bin("<", a, b), a), "(a < b) < a"},
		{bin("and", bin("or", a, b), a), "(a or b) and a"},
		{minus(bin("*", a, b)), "-(a * b)"},
	} {
		if got := parser.Print(c.e); got != c.want {
			t.Errorf("got %s, want %s", got, c.want)
		}
	}
}
