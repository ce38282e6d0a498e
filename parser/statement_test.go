package parser_test

import (
	"fmt"
	"strings"
	"testing"

	"wellposed/grammar"
	"wellposed/parser"
	"wellposed/parser/source"
)

// one reads a single statement that must be whole.
func one[T grammar.Statement](t *testing.T, text string) T {
	t.Helper()
	tree, faults := parse(text)
	if len(faults) > 0 || len(tree.Lines) != 1 {
		t.Fatalf("%s: %d lines, %v", text, len(tree.Lines), faults)
	}
	s, ok := tree.Lines[0].Statement.(T)
	if !ok {
		t.Fatalf("%s is a %T", text, tree.Lines[0].Statement)
	}
	return s
}

func TestPrecedence(t *testing.T) {
	for _, c := range []struct{ text, want string }{
		{"-x^2", "(- (x ^ 2))"},
		{"2^-1", "(2 ^ (- 1))"},
		{"a^b^c", "(a ^ (b ^ c))"},
		{"-a^-b^c", "(- (a ^ (- (b ^ c))))"},
		{"a - b - c", "((a - b) - c)"},
		{"a / b / c * d", "(((a / b) / c) * d)"},
		{"a * -b", "(a * (- b))"},
		{"-a * b", "((- a) * b)"},
		{"a + b * c", "(a + (b * c))"},
		{"--a", "(- (- a))"},
		{"+a", "a"},
		{"a < b", "(a < b)"},
		{"a < b <= c", "((a < b) & (b <= c))"},
		{"a < b < c < d", "(((a < b) & (b < c)) & (c < d))"},
		{"a == 1 and b != 2 or not c < d", "(((a == 1) and (b != 2)) or (not (c < d)))"},
		{"not a and b", "((not a) and b)"},
		{"a + 1 < b * 2", "((a + 1) < (b * 2))"},
		{"(a)", "[a]"},
		{"(a, b)", "<a,b>"},
		{"a ≤ b", "(a <= b)"}, {"a − b", "(a - b)"}, {"a × b·c ÷ d", "(((a * b) * c) / d)"},
		{"log-gamma(a)", "log-gamma{a}"}, {"log-gamma", "(log - gamma)"}, {"log - gamma(a)", "(log - gamma{a})"},
		{"half-Normal", "(half - Normal)"},
		{".5 + 1e-3", "(.5 + 1e-3)"}, {"1-2", "(1 - 2)"},
		{"b[i, j - 1].x", ""},
		{"t.c[g]", "t.c@g"},
		{"P(p < 0.05) >= 0.95", "(P{(p < 0.05)} >= 0.95)"},
		{"[1, -2]", "|1,(- 2)|"},
	} {
		tree, faults := parse("let x = " + c.text)
		if c.want == "" {
			if len(faults) == 0 {
				t.Errorf("%s was read", c.text)
			}
			continue
		}
		if len(faults) > 0 {
			t.Errorf("%s: %v", c.text, faults)
			continue
		}
		if got := bare(tree.Lines[0].Statement.(*grammar.Let).Value); got != c.want {
			t.Errorf("%s: got %s, want %s", c.text, got, c.want)
		}
	}
}

// bare writes an expression with a bracket for each node.
func bare(e grammar.Expr) string {
	all := func(items []grammar.Expr) string {
		var out []string
		for _, x := range items {
			out = append(out, bare(x))
		}
		return strings.Join(out, ",")
	}
	switch e := e.(type) {
	case *grammar.Number:
		return e.Text
	case *grammar.Quote:
		return e.Quoted
	case *grammar.Ident:
		if e.Table != "" {
			return e.Table + "." + e.Text
		}
		return e.Text
	case *grammar.Index:
		return bare(e.Of) + "@" + all(e.By)
	case *grammar.Call:
		var out []string
		for _, a := range e.Args {
			out = append(out, strings.TrimPrefix(a.Label+"="+bare(a.Value), "="))
		}
		return e.Name + "{" + strings.Join(out, ",") + "}"
	case *grammar.Unary:
		return "(" + e.Op + " " + bare(e.X) + ")"
	case *grammar.Binary:
		op := e.Op
		if e.Chained {
			op = "&"
		}
		return "(" + bare(e.X) + " " + op + " " + bare(e.Y) + ")"
	case *grammar.Paren:
		return "[" + bare(e.X) + "]"
	case *grammar.Tuple:
		return "<" + all(e.Items) + ">"
	case *grammar.List:
		return "|" + all(e.Items) + "|"
	}
	return fmt.Sprintf("%T", e)
}

func TestUnknown(t *testing.T) {
	u := one[*grammar.Unknown](t, `unknown θ, d per site by year relative to "north" : effect in [0, 1) limited to θ >= 0 by nature "label" because "why" from "where"`)
	if len(u.Declared) != 2 || u.Declared[0].Name.Text != "θ" || len(u.Declared[0].Per) != 0 {
		t.Errorf("declared %+v", u.Declared)
	}
	d := u.Declared[1]
	if len(d.Per) != 2 || d.Per[1].Text != "year" || d.Relative.Quoted != `"north"` {
		t.Errorf("%+v", d)
	}
	if u.Kind.Name != "effect" || u.In.Open != "[" || u.In.Close != ")" || bare(u.Limited) != "(θ >= 0)" || !u.Nature ||
		u.Label.Quoted != `"label"` || u.Reason.Because.Quoted != `"why"` || u.Reason.From.Quoted != `"where"` {
		t.Errorf("%+v", u)
	}
	if e := one[*grammar.Unknown](t, "unknown a per (winner, loser) : effect").Declared[0].Either; len(e) != 2 || e[1].Text != "loser" {
		t.Errorf("either %v", e)
	}
	if f := one[*grammar.Unknown](t, "unknown b for (age, trials.dose) : effect").Declared[0].For; len(f) != 2 || f[1].Text != "trials.dose" {
		t.Errorf("for %v", f)
	}
	if k := one[*grammar.Unknown](t, "unknown w : proportions(k + 1)").Kind; k.Name != "proportions" || bare(k.Size) != "(k + 1)" {
		t.Errorf("kind %+v", k)
	}
}

func TestObserve(t *testing.T) {
	o := one[*grammar.Observe](t, "observe 0 of 40 with probability p")
	if bare(o.What) != "0" || bare(o.Of) != "40" || bare(o.Prob) != "p" || o.Dist != nil || o.In != nil {
		t.Errorf("%+v", o)
	}
	o = one[*grammar.Observe](t, "observe y in t at rate exp(eta)")
	if bare(o.In) != "t" || bare(o.Rate) != "exp{eta}" {
		t.Errorf("%+v", o)
	}
	o = one[*grammar.Observe](t, "observe t as Weibull(shape = k, scale = s), right-censored where d == 0 and e > 1, left-censored where f, truncated to (0, inf), weighted by w, only where u == 1")
	if len(o.Mods) != 5 || bare(o.Mods[0].Right) != "((d == 0) and (e > 1))" || bare(o.Mods[1].Left) != "f" ||
		bare(o.Mods[2].Truncated.High) != "inf" || bare(o.Mods[3].Weighted) != "w" || bare(o.Mods[4].Only) != "(u == 1)" {
		t.Errorf("%+v", o.Mods)
	}
	d := one[*grammar.Observe](t, "observe y as Mixture(w: half-Student-t(degrees = 3, scale = 1), 1 - w: LOG-normal(log mean = 0, log sd = s))").Dist
	if d.Name != "Mixture" || len(d.Args) != 2 || d.Args[0].Dist.Name != "half-Student-t" || bare(d.Args[1].Weight) != "(1 - w)" ||
		d.Args[1].Dist.Args[1].Label != "log sd" || bare(d.Args[1].Dist.Args[1].Value) != "s" || d.Law != nil {
		t.Errorf("%+v", d)
	}
}

func TestPrior(t *testing.T) {
	if s := one[*grammar.Prior](t, "prior logit(p) flat").Spec; !s.Flat || bare(s.Target) != "logit{p}" {
		t.Errorf("%+v", s)
	}
	for _, text := range []string{"prior s ∝ 1/s", "prior s proportional to 1/s"} {
		if s := one[*grammar.Prior](t, text).Spec; bare(s.Kernel) != "(1 / s)" || s.Flat {
			t.Errorf("%+v", s)
		}
	}
	if r := one[*grammar.Prior](t, "prior (a, b) jeffreys separately").Spec.Rule; !r.Jeffreys || r.Sense != "separately" {
		t.Errorf("%+v", r)
	}
	if r := one[*grammar.Prior](t, "prior (a, b) reference a before b because \"x\"").Spec.Rule; len(r.Reference) != 2 || r.Jeffreys {
		t.Errorf("%+v", r)
	}
	if r := one[*grammar.Prior](t, "prior p constrained to mean 0.05").Spec.Rule; bare(r.Constrained) != "0.05" {
		t.Errorf("%+v", r)
	}
	if r := one[*grammar.Prior](t, "prior p maximal-data-information").Spec.Rule; !r.MaxInfo {
		t.Errorf("%+v", r)
	}
	if r := one[*grammar.Prior](t, "prior p matching").Spec.Rule; !r.Matching {
		t.Errorf("%+v", r)
	}
	if m := one[*grammar.Prior](t, "prior m as Normal(0, sd = 10), truncated to (0, 50) because \"x\"").Spec.Mods; len(m) != 1 || bare(m[0].Truncated.High) != "50" {
		t.Errorf("%+v", m)
	}
	r := one[*grammar.Rival](t, `rival "x": p as Beta(2, 20); q flat because "y"`)
	if len(r.Specs) != 2 || !r.Specs[1].Flat || r.Specs[0].Dist.Name != "Beta" || r.Reason.Because == nil {
		t.Errorf("%+v", r)
	}
}

func TestRequire(t *testing.T) {
	if !one[*grammar.Require](t, "require a posterior for every outcome").Every {
		t.Error("every")
	}
	if w := one[*grammar.Require](t, "require a posterior with probability ≥ 99.9%").With; bare(w.Least.Value) != "99.9" || !w.Least.Percent {
		t.Errorf("%+v", w)
	}
	c := one[*grammar.Require](t, "require long-run coverage of p: lowest >= 88%, average >= 0.94, p from 0.01 to 0.2").Coverage
	if c.Of.Text != "p" || len(c.Parts) != 3 || c.Parts[1].Least.Percent || c.Parts[2].Unknown.Text != "p" || bare(c.Parts[2].To) != "0.2" {
		t.Errorf("%+v", c)
	}
	if h := one[*grammar.Require](t, `require chance of "m" <= 5% when p = 0.05 and q = 1/2`).Chance; len(h.When) != 2 || bare(h.When[0].Value) != "0.05" || h.Op != "<=" {
		t.Errorf("%+v", h)
	}
	if a := one[*grammar.Require](t, "require rivals agree on odds within 10%").Agree; a.On.Text != "odds" || bare(a.Within.Value) != "10" {
		t.Errorf("%+v", a)
	}
}

func TestOtherStatements(t *testing.T) {
	if s := one[*grammar.Suppose](t, "suppose (a, b) in (0, 1), (2, 3)"); len(s.Values) != 2 || bare(s.Values[1]) != "<2,3>" {
		t.Errorf("%+v", s)
	}
	if s := one[*grammar.Suppose](t, "suppose p from -1 to 0.2"); bare(s.From) != "(- 1)" || bare(s.To) != "0.2" {
		t.Errorf("%+v", s)
	}
	if s := one[*grammar.Suppose](t, "suppose p as Beta(2, 60)"); s.Dist.Name != "Beta" {
		t.Errorf("%+v", s)
	}
	r := one[*grammar.Report](t, "report odds = p / (1 - p), central 50% 95%, upper 0.9, 1/2, median")
	if r.Name.Text != "odds" || len(r.Summaries) != 3 || len(r.Summaries[0].Levels) != 2 || len(r.Summaries[1].Levels) != 2 || r.Summaries[2].Point != "median" {
		t.Errorf("%+v", r)
	}
	if r := one[*grammar.Report](t, "report p"); r.Name != nil || bare(r.Value) != "p" {
		t.Errorf("%+v", r)
	}
	a := one[*grammar.Accept](t, `accept flat-on-unbounded-2 for "meets" because "x" by "y" until 2027-06-30`)
	if strings.Join(a.Rule.Parts, "") != "flat-on-unbounded-2" || a.For.Text == nil || strings.Join(a.Until.Parts, "-") != "2027-06-30" {
		t.Errorf("%+v", a)
	}
	if o := one[*grammar.Override](t, `override note-title for p because "x"`); strings.Join(o.Rule.Parts, "") != "note-title" || o.For.Name.Text != "p" {
		t.Errorf("%+v", o)
	}
	if v := one[*grammar.Vary](t, "vary d across site by year as Normal(0, sd = s)"); len(v.Across) != 2 || v.Dist.Name != "Normal" {
		t.Errorf("%+v", v)
	}
	if g := one[*grammar.Given](t, "given n = 40, y = [1, -2]"); len(g.Bindings) != 2 || bare(g.Bindings[1].Value) != "|1,(- 2)|" {
		t.Errorf("%+v", g)
	}
	if m := one[*grammar.Matters](t, "matters 1/10"); bare(m.Share.Value) != "(1 / 10)" || m.Share.Percent {
		t.Errorf("%+v", m)
	}
	if n := one[*grammar.Rivals](t, "rivals for p, q: standard").For; len(n) != 2 {
		t.Errorf("%+v", n)
	}
	if s := one[*grammar.Title](t, `title "a \"b\" \\ c"`); parser.Unquote(s.Text.Quoted) != `a "b" \ c` || parser.Quote(`a "b" \ c`) != s.Text.Quoted {
		t.Errorf("%+v", s.Text)
	}
}

func TestRows(t *testing.T) {
	s := one[*grammar.Table](t, "table a # c\n| x | \"y z\" |\n\n# d\n|-1.5|\\|2 \\# | # e\n||last")
	var got [][]string
	for _, r := range s.Rows {
		var cells []string
		for _, c := range r.Cells {
			cells = append(cells, c.Text)
		}
		got = append(got, cells)
	}
	if want := `[["x" "y z"] ["-1.5" "|2 #"] ["" "last"]]`; fmt.Sprintf("%q", got) != want {
		t.Errorf("got %q, want %s", got, want)
	}
}

// TestSpans: the places of nodes, with Greek and astral characters before them.
func TestSpans(t *testing.T) {
	file := source.NewFile("m", "title \"𝒳 θ\"\n  let θ₁ = 𝒙 + trials.β[σ]  # 𝒳\nprior θ₁ as half-Normal( sd = 1 )  because \"x\"")
	tree, findings := parser.Parse(file)
	if len(findings) > 0 {
		t.Fatal(findings)
	}
	at := func(i int, from, to grammar.Mark) string {
		return file.Text[tree.Lines[i].Start+from.Offset : tree.Lines[i].Start+to.Offset]
	}
	let := tree.Lines[1].Statement.(*grammar.Let)
	sum := let.Value.(*grammar.Binary)
	index := sum.Y.(*grammar.Index)
	prior := tree.Lines[2].Statement.(*grammar.Prior)
	for _, c := range []struct{ got, want string }{
		{at(1, let.Pos, let.EndPos), "let θ₁ = 𝒙 + trials.β[σ]"},
		{at(1, let.Name.Pos, let.Name.EndPos), "θ₁"},
		{at(1, sum.Pos, sum.EndPos), "𝒙 + trials.β[σ]"},
		{at(1, index.Pos, index.EndPos), "trials.β[σ]"},
		{at(1, index.Of.Pos, index.Of.EndPos), "trials.β"},
		{at(2, prior.Pos, prior.EndPos), "prior θ₁ as half-Normal( sd = 1 )  because \"x\""},
		{at(2, prior.Spec.Pos, prior.Spec.EndPos), "θ₁ as half-Normal( sd = 1 )"},
		{at(2, prior.Spec.Dist.Pos, prior.Spec.Dist.NameEnd), "half-Normal"},
		{at(2, prior.Spec.Dist.Pos, prior.Spec.Dist.EndPos), "half-Normal( sd = 1 )"},
		{at(2, prior.Spec.Dist.Args[0].Pos, prior.Spec.Dist.Args[0].EndPos), "sd = 1"},
		{at(2, prior.Spec.Dist.Args[0].Pos, prior.Spec.Dist.Args[0].LabelEnd), "sd"},
	} {
		if c.got != c.want {
			t.Errorf("got %q, want %q", c.got, c.want)
		}
	}
	if c := tree.Lines[1].Comments; len(c) != 1 || c[0].Text != "# 𝒳" || file.Text[tree.Lines[1].Start+c[0].Pos.Offset:][:1] != "#" {
		t.Errorf("comments %+v", c)
	}
}

// TestNamesAreComposed: two spellings that look alike are one name.
func TestNamesAreComposed(t *testing.T) {
	for _, c := range [][2]string{{"e\u0301", "\u00e9"}, {"\u00b5", "\u03bc"}, {"\u2126", "\u03a9"}} {
		if got := one[*grammar.Let](t, "let "+c[0]+" = 1").Name.Text; got != c[1] {
			t.Errorf("%q reads as %q", c[0], got)
		}
	}
}
