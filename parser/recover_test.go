package parser_test

import (
	"fmt"
	"strings"
	"testing"

	"wellposed/grammar"
	"wellposed/parser"
	"wellposed/parser/source"
)

func TestBrokenStatementsHideNothing(t *testing.T) {
	tree, faults := parse("given n = 40\nprior p as Beta(1, \nunknown p : probability\nobserve y as\n")
	if len(tree.Lines) != 4 {
		t.Fatalf("%d lines", len(tree.Lines))
	}
	if len(faults) != 2 {
		t.Errorf("findings: %v", faults)
	}
	for i, broken := range []bool{false, true, false, true} {
		if tree.Lines[i].Broken != broken {
			t.Errorf("line %d broken: %v", i, tree.Lines[i].Broken)
		}
	}
	if _, ok := tree.Lines[2].Statement.(*grammar.Unknown); !ok {
		t.Errorf("line 2 is %T", tree.Lines[2].Statement)
	}
}

// TestMessages holds what is said of broken statements, and where.
func TestMessages(t *testing.T) {
	for _, c := range []struct{ text, rule, at, says string }{
		{"prior p flaat", parser.RuleStatement, "flaat", "Unexpected `flaat` after `p`. Did you mean `flat`? A prior reads `prior NAME as DISTRIBUTION`, `prior NAME flat`,"},
		{"prior p", parser.RuleStatement, "p", "The statement ends too early, after `p`."},
		{"prior p as Beta(1, 1", parser.RuleStatement, "(", "`(` is not closed: `)` is missing."},
		{"prior p as Beta(1 2)", parser.RuleStatement, "2", "Unexpected `2` where `,` or `)` should follow. A product needs its sign"},
		{"prior p as Beta", parser.RuleStatement, "Beta", "The distribution `Beta` has no arguments."},
		{"prior s as half - Normal(sd = 1)", parser.RuleStatement, "-", "without blanks around its hyphens"},
		{"prior s as log-Normal(log-mean = 1)", parser.RuleStatement, "=", "`log sd = 1`"},
		{"priro p flat", parser.RuleKeyword, "priro", "No statement begins with `priro`. Did you mean `prior`?"},
		{"Prior p flat", parser.RuleKeyword, "Prior", "Did you mean `prior`?"},
		{"zzzzzzzz p flat", parser.RuleKeyword, "zzzzzzzz", "A statement begins with title, note,"},
		{"let a = b\n  + c", parser.RuleKeyword, "+", "put it at the end of the line above"},
		{"let a = b +", parser.RuleStatement, "+", "The statement ends where a value should follow after `+`."},
		{"let a = b ** 2", parser.RuleStatement, "*", "A power is written `^`."},
		{"let a = 2x", parser.RuleCharacter, "2x", "A product needs its sign: `2 * x`."},
		{"let a = b ~ c", parser.RuleCharacter, "~", "A distribution follows `as`"},
		{"let a = b²", parser.RuleCharacter, "²", "A square is written `^2`."},
		{"let a = (b + c", parser.RuleStatement, "(", "`(` is not closed"},
		{"let a = b)", parser.RuleStatement, ")", "Unexpected `)` after `b`."},
		{"let prior = 1", parser.RuleStatement, "prior", "`prior` is a reserved word, so it can't be a name."},
		{"let a = prior", parser.RuleStatement, "prior", "`prior` is a reserved word"},
		{"let a.b = 1", parser.RuleStatement, "a.b", "a name has no point in it"},
		{"let a = trials. x", parser.RuleStatement, "x", "a column"},
		{"title \"x", parser.RuleText, "\"x", "no closing quote"},
		{"title “x”", parser.RuleCharacter, "“x”", "typographic quotes"},
		{"title 'x'", parser.RuleCharacter, "'", "double quotes"},
		{"let a = 1\xff\xfe", parser.RuleEncoding, "\xff\xfe", "2 bytes here are not UTF-8."},
		{"| 1 | 2 |", parser.RuleRow, "| 1 | 2 |", "A row stands under no table."},
		{"prior p flat prior q flat", parser.RuleStatement, "prior", "Each statement begins on a line of its own."},
		{"unknown p probability", parser.RuleStatement, "probability", "Unexpected `probability` after `p`. An unknown reads `unknown NAME : KIND`"},
		{"prior x ∝ 1/x because", parser.RuleStatement, "because", "ends too early, after `because`"},
		{"require a posterior for each outcome", parser.RuleStatement, "each", "`require a posterior for every outcome`"},
		{"report p, upper", parser.RuleStatement, "upper", "ends too early"},
		{"vary th acros study as Normal(0, sd = 1)", parser.RuleStatement, "acros", "Did you mean `across`?"},
		{"accept x until 2027-06", parser.RuleStatement, "06", "ends too early"},
		{"observe 𝒚 in θ at rat λ", parser.RuleStatement, "rat", "Did you mean `rate`?"},
	} {
		file := source.NewFile("m", "given ok = 1\n"+c.text)
		tree, findings := parser.Parse(file)
		if tree.Lines[0].Broken {
			t.Errorf("%s: the statement before is broken", c.text)
		}
		if len(findings) == 0 {
			t.Errorf("%s: no finding", c.text)
			continue
		}
		f := findings[0]
		says := strings.Join(append([]string{f.Headline}, f.Notes...), " ")
		if f.Rule != c.rule || !strings.Contains(says, c.says) {
			t.Errorf("%s:\n got %s %s\nwant %s … %s", c.text, f.Rule, says, c.rule, c.says)
		}
		at := file.Slice(f.Span)
		if at != c.at || strings.LastIndex(file.Text[:f.Span.End], at) != f.Span.Start || f.Span.Start < len("given ok = 1\n") {
			t.Errorf("%s: at %q (%v), want %q", c.text, at, f.Span, c.at)
		}
	}
}

// TestFixesRead applies the fix of a finding; what it was offered for is gone.
func TestFixesRead(t *testing.T) {
	for _, text := range []string{"priro p flat", "prior p flaat", "title “x”", "title \"x", "vary th acros s as Normal(0, sd = 1)"} {
		file := source.NewFile("m", text)
		_, findings := parser.Parse(file)
		if len(findings) != 1 || len(findings[0].Fixes) != 1 {
			t.Errorf("%s: %v", text, findings)
			continue
		}
		e := findings[0].Fixes[0].Edits[0]
		fixed := text[:e.Span.Start] + e.Text + text[e.Span.End:]
		if _, faults := parse(fixed); len(faults) > 0 {
			t.Errorf("%s, fixed: %v", fixed, faults)
		}
	}
}

func TestRulesAreListed(t *testing.T) {
	listed := map[string]bool{}
	for _, r := range parser.Rules {
		if r.Doc == "" || strings.ToLower(r.Name) != r.Name || listed[r.Name] {
			t.Errorf("rule %q", r.Name)
		}
		listed[r.Name] = true
	}
	_, findings := parser.Parse(source.NewFile("m", "x\n|\nlet a = \xff~\ntitle \"\nlet b"))
	for _, f := range findings {
		if !listed[f.Rule] {
			t.Errorf("%s is not listed", f.Rule)
		}
	}
}

func TestBounds(t *testing.T) {
	deep := func(open, x, close string) string {
		return "let a = " + strings.Repeat(open, 10000) + x + strings.Repeat(close, 10000)
	}
	for _, c := range []struct{ name, text, rule string }{
		{"round brackets", deep("(", "1", ")"), parser.RuleStatement},
		{"square brackets", deep("[", "1", "]"), parser.RuleStatement},
		{"unclosed brackets", deep("(", "", ""), parser.RuleStatement},
		{"calls", deep("exp(", "1", ")"), parser.RuleStatement},
		{"indices", deep("a[", "1", "]"), parser.RuleStatement},
		{"signs", deep("-", "1", ""), parser.RuleStatement},
		{"negations", deep("not ", "1", ""), parser.RuleStatement},
		{"powers", deep("a^", "1", ""), parser.RuleStatement},
		{"sum", deep("1 + ", "1", ""), parser.RuleStatement},
		{"comparisons", deep("1 < ", "1", ""), parser.RuleStatement},
		{"mixtures", "observe y as " + strings.Repeat("Mixture(1: ", 10000), parser.RuleStatement},
		{"long statement", "given y = [" + strings.Repeat("1, ", parser.MaxStatement/3) + "1]", parser.RuleLong},
		{"many statements", strings.Repeat("# c\n", parser.MaxStatements+10), parser.RuleStatements},
		{"large file", strings.Repeat(" ", parser.MaxText+1), parser.RuleFile},
	} {
		_, findings := parser.Parse(source.NewFile("m", c.text))
		if len(findings) != 1 || findings[0].Rule != c.rule {
			t.Errorf("%s: %d findings, %.300s", c.name, len(findings), fmt.Sprint(findings))
		}
	}
	// What is long but not deep is read.
	for name, text := range map[string]string{
		"vector":  "given y = [" + strings.Repeat("-1/3, ", 20000) + "1]",
		"nesting": "let a = " + strings.Repeat("(", parser.MaxNesting) + "1" + strings.Repeat(")", parser.MaxNesting),
		"sum":     "let a = " + strings.Repeat("b + ", parser.MaxOperators) + "1",
	} {
		if _, faults := parse(text); len(faults) > 0 {
			t.Errorf("%s: %v", name, faults)
		}
	}
}

func TestUnreadableBytesLeaveTheRest(t *testing.T) {
	tree, faults := parse("title \"a\"\nlet a = \xff\nprior p flat\n")
	if len(faults) != 1 || len(tree.Lines) != 3 || tree.Lines[2].Broken {
		t.Errorf("%d lines, %v", len(tree.Lines), faults)
	}
}

func TestStatementBorders(t *testing.T) {
	for _, c := range []struct {
		text string
		want []string
	}{
		{"let a = b +\n  c", []string{"let a = b +\n  c"}},
		{"let a = b and\nc", []string{"let a = b and\nc"}},
		{"given a = 1,\n\n  b = 2", []string{"given a = 1,\n\n  b = 2"}},
		{"let a = exp(\nb\n)", []string{"let a = exp(\nb\n)"}},
		{"let a = exp(\nprior p flat", []string{"let a = exp(", "prior p flat"}},
		{"prior p flat\nbecause \"x\"\n from \"y\"", []string{"prior p flat\nbecause \"x\"\n from \"y\""}},
		{"# a\nbecause \"x\"", []string{"# a", "because \"x\""}},
		{"let a = b # c\n# d\n\n# e", []string{"let a = b # c", "# d", "# e"}},
		{"let a = (b # c\n# d\n)", []string{"let a = (b # c\n# d\n)"}},
		{"let a = (b # c\n# d\nlet e = 1", []string{"let a = (b # c", "# d", "let e = 1"}},
		{"table t\n| a |\n\n# c\n  | 1 | # d\n# e\nlet x = 1", []string{"table t\n| a |\n\n# c\n  | 1 | # d", "# e", "let x = 1"}},
		{"table t from \"x\"\n# c\nlet x = 1", []string{"table t from \"x\"", "# c", "let x = 1"}},
		{"let a = 1\r\nlet b = 2\rlet c = 3", []string{"let a = 1", "let b = 2", "let c = 3"}},
		{"\ufefftitle \"x\"", []string{"title \"x\""}},
		{"foo bar\nlet a = 1", []string{"foo bar", "let a = 1"}},
	} {
		tree, _ := parse(c.text)
		var got []string
		for _, l := range tree.Lines {
			got = append(got, l.Text)
			if c.text[l.Start:l.Start+len(l.Text)] != l.Text {
				t.Errorf("%q: line %q starts at %d", c.text, l.Text, l.Start)
			}
		}
		if fmt.Sprintf("%q", got) != fmt.Sprintf("%q", c.want) {
			t.Errorf("%q:\n got %q\nwant %q", c.text, got, c.want)
		}
	}
}
