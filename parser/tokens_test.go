package parser_test

import (
	"strings"
	"testing"

	"wellposed/parser"
	"wellposed/parser/source"
)

func TestTokens(t *testing.T) {
	for _, c := range []struct{ text, want string }{
		{"unknown phi per region : effect in (-1, 1) \"x\" # c",
			"keyword:unknown name:phi! word:per name:region bracket:: kind:effect word:in bracket:( operator:- number:1 bracket:, number:1 bracket:) string:\"x\" comment:# c"},
		{"prior s as half-Cauchy(scale = pi), truncated to (0, inf)",
			"keyword:prior name:s word:as distribution:half-Cauchy bracket:( label:scale operator:= constant:pi bracket:) bracket:, word:truncated word:to bracket:( number:0 bracket:, constant:inf bracket:)"},
		{"let θ = trials.x + log-gamma(θ)^2",
			"keyword:let name:θ! operator:= name:trials bracket:. name:x operator:+ function:log-gamma bracket:( name:θ bracket:) operator:^ number:2"},
		{"accept flat-on-unbounded for mu until 2027-06-30",
			"keyword:accept name:flat-on-unbounded word:for name:mu word:until number:2027-06-30"},
		{"table a\n| x | -1 |", "keyword:table name:a! bracket:| string:x bracket:| number:-1 bracket:|"},
		{"prior s as Normal(", "keyword:prior name:s word:as distribution:Normal bracket:("},
		{"prior s ~ 3", "keyword:prior name:s illegal:~ number:3"},
		{"observe y as log-Normal(log mean = m, log sd = s)",
			"keyword:observe name:y word:as distribution:log-Normal bracket:( label:log mean operator:= name:m bracket:, label:log sd operator:= name:s bracket:)"},
	} {
		file := source.NewFile("m", "title \"\"\n"+c.text)
		tree, _ := parser.Parse(file)
		var got []string
		for _, tok := range parser.Tokens(tree.Lines[1]) {
			s := tok.Class.String() + ":" + file.Slice(tok.Span)
			if tok.Declares {
				s += "!"
			}
			got = append(got, s)
		}
		if s := strings.Join(got, " "); s != c.want {
			t.Errorf("%s\n got %s\nwant %s", c.text, s, c.want)
		}
	}
}

// TestTokensCoverTheLine: tokens are in order, do not overlap, and leave only
// blanks out.
func TestTokensCoverTheLine(t *testing.T) {
	for _, path := range corpus(t) {
		file := read(t, path)
		tree, _ := parser.Parse(file)
		for _, l := range tree.Lines {
			end := l.Start
			for _, tok := range parser.Tokens(l) {
				if tok.Span.Start < end || strings.TrimSpace(file.Text[end:tok.Span.Start]) != "" {
					t.Errorf("%s: %q before token %q", path, file.Text[end:tok.Span.Start], file.Slice(tok.Span))
				}
				end = tok.Span.End
			}
			if rest := file.Text[end : l.Start+len(l.Text)]; strings.TrimSpace(rest) != "" {
				t.Errorf("%s: %q has no token", path, rest)
			}
		}
	}
}
