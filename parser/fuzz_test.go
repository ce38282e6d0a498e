package parser_test

import (
	"testing"
	"unicode/utf8"

	"wellposed/grammar"
	"wellposed/parser"
	"wellposed/parser/source"
)

func seed(f *testing.F) {
	for _, path := range corpus(f) {
		f.Add(read(f, path).Text)
	}
	for _, s := range snippets {
		f.Add("prior p as " + s + "Beta(1, 1)" + s)
	}
	f.Add("table t\n| a | \\| |\n#\n| \"x\" # c\n|")
	f.Add("let x = -+-a^-b(c)[d]\n+ e\r| 1")
	f.Add("prior a as B(x: C(y: D(1), 2), not a < b < c)")
}

// FuzzParse: reading never panics, findings and nodes lie in the text, lines
// do not overlap, and the incremental reading agrees with the fresh one.
func FuzzParse(f *testing.F) {
	seed(f)
	f.Fuzz(func(t *testing.T, text string) {
		file := source.NewFile("m.bayes", text)
		tree, findings := parser.Parse(file)
		for _, d := range findings {
			if d.Span.Start < 0 || d.Span.End > len(text) || d.Span.End < d.Span.Start {
				t.Errorf("%s at %v in a text of %d bytes", d.Headline, d.Span, len(text))
			}
			for _, fix := range d.Fixes {
				for _, e := range fix.Edits {
					if e.Span.Start < 0 || e.Span.End > len(text) || e.Span.End < e.Span.Start {
						t.Errorf("%s: edit at %v", d.Headline, e.Span)
					}
				}
			}
		}
		end := 0
		for _, l := range tree.Lines {
			if l.Start < end || text[l.Start:l.Start+len(l.Text)] != l.Text {
				t.Fatalf("line at %d of %q", l.Start, text)
			}
			end = l.Start + len(l.Text)
			grammar.Walk(l.Statement, func(node any) bool {
				if e, ok := node.(grammar.Expr); ok && !l.Broken {
					a, b := e.Span()
					if a.Offset < 0 || b.Offset <= a.Offset || b.Offset > len(l.Text) {
						t.Errorf("%T at %d to %d of %q", e, a.Offset, b.Offset, l.Text)
					}
				}
				return true
			})
		}
		if len(text) > 0 {
			var cache parser.Cache
			cache.Parse(source.NewFile("m.bayes", text[:len(text)/2]))
			again, _ := cache.Parse(file)
			if len(again.Lines) != len(tree.Lines) {
				t.Errorf("%d lines after an edit, %d afresh: %q", len(again.Lines), len(tree.Lines), text)
			}
		}
	})
}

// FuzzFormat: formatting is idempotent and keeps the tree and the comments.
func FuzzFormat(f *testing.F) {
	seed(f)
	f.Fuzz(func(t *testing.T, text string) {
		if !utf8.ValidString(text) {
			return
		}
		checkFormat(t, text)
	})
}

// FuzzPrint: a printed expression reads as the same expression.
func FuzzPrint(f *testing.F) {
	for _, s := range []string{"a", "-a^2^-b", "a < b < c and not d", "(a, b)", "[1/2, -3]", "f(x = 1, y)[2]", "t.c[i, j]", "\"q\"", "1/x - -y"} {
		f.Add(s)
	}
	f.Fuzz(func(t *testing.T, text string) {
		tree, faults := parse("let x = " + text)
		if len(faults) > 0 || len(tree.Lines) != 1 {
			return
		}
		let, ok := tree.Lines[0].Statement.(*grammar.Let)
		if !ok || let.Value == nil {
			return
		}
		printed := parser.Print(let.Value)
		again, faults := parse("let x = " + printed)
		if len(faults) > 0 || len(again.Lines) != 1 {
			t.Fatalf("%q prints as %q: %v", text, printed, faults)
		}
		if a, b := outline(t, let.Value), outline(t, again.Lines[0].Statement.(*grammar.Let).Value); a != b {
			t.Errorf("%q prints as %q:\n%s\n%s", text, printed, a, b)
		}
	})
}
