// Package parser turns the text of a model file into its syntax tree, statement
// by statement, and writes it back in its canonical form.
//
// A broken statement never hides what is wrong in another one: each is read on
// its own. Reading never fails and never panics; what can't be read is a
// finding, and the statement's Line is Broken.
package parser

import (
	"errors"
	"fmt"
	"strings"

	"github.com/alecthomas/participle/v2"
	"github.com/alecthomas/participle/v2/lexer"

	"wellposed/grammar"
	"wellposed/parser/diag"
	"wellposed/parser/source"
)

// Bounds within which a model file is read.
const (
	// MaxText is the largest model file, in bytes.
	MaxText = 4 << 20
	// MaxStatement is the longest statement, in bytes.
	MaxStatement = 1 << 20
	// MaxStatements is the largest number of statements and comments.
	MaxStatements = 50000
)

// line is one statement as it was read, with places relative to its start. It
// is shared between versions of a file and never changed.
type line struct {
	statement grammar.Statement
	broken    bool
	comments  []grammar.Comment
	faults    []*fault
}

// Parse reads a model file. The tree has a Line for each statement and for each
// comment that stands alone. The findings are in source order.
func Parse(file *source.File) (*grammar.File, []diag.Finding) {
	return new(Cache).Parse(file)
}

// read reads one chunk of text.
func (c *chunk) read(text string) *line {
	l := &line{}
	text = text[c.start:c.end]
	if len(text) > MaxStatement {
		l.fail(&fault{rule: RuleLong, end: c.tokens[0].end,
			headline: fmt.Sprintf("The statement is %s bytes long; at most %s are read.", thousands(len(text)), thousands(MaxStatement)),
			notes:    []string{"Move its numbers to a data file: `table NAME from \"FILE\"`."}})
		return l
	}
	for _, t := range c.tokens {
		if t.kind == tokenComment {
			l.comments = append(l.comments, grammar.Comment{Pos: grammar.Mark{Offset: t.start}, Text: text[t.start:t.end]})
		} else if t.flaw != flawNone {
			f, fatal := flawed(t, text)
			l.faults = append(l.faults, f)
			l.broken = l.broken || fatal
		}
	}
	head := c.tokens[0]
	switch {
	case head.kind == tokenComment:
	case l.broken:
		if head.kind == tokenKeyword {
			l.statement, _ = c.statement(text)
		}
	case head.kind == tokenKeyword:
		var err error
		if l.statement, err = c.statement(text); err != nil {
			l.fail(c.explain(head.text, err))
		}
	default:
		l.fail(c.headless(text))
	}
	if isNil(l.statement) {
		l.statement = nil
	}
	return l
}

func (l *line) fail(f *fault) {
	l.broken = true
	l.faults = append(l.faults, f)
}

// statement hands the chunk's tokens to the parser of its keyword.
func (c *chunk) statement(text string) (s grammar.Statement, err error) {
	defer func() {
		if p := recover(); p != nil {
			s, err = nil, fmt.Errorf("reading broke down: %v", p)
		}
	}()
	end := len(text)
	if len(c.rows) > 0 { // rows are no tokens
		end = c.rows[0].start
	}
	lex, err := lexer.Upgrade(&feed{tokens: c.tokens, end: end}, tokenSpace)
	if err != nil {
		return nil, err
	}
	s, err = forms[c.tokens[0].text].read(lex)
	if t, ok := s.(*grammar.Table); ok && t != nil {
		for _, r := range c.rows {
			t.Rows = append(t.Rows, readRow(text, r))
			t.EndPos.Offset = r.end
		}
	}
	if err == nil {
		err = undotted(s)
	}
	return s, err
}

// explain turns an error into words for the reader.
func (c *chunk) explain(keyword string, err error) *fault {
	var f *fault
	if errors.As(err, &f) {
		if f.end < 0 {
			f.end = f.start
			for _, t := range c.tokens {
				if t.start == f.start {
					f.end = t.end
				}
			}
			if f.end == f.start { // past the last token: show that one
				for _, t := range c.tokens {
					if t.kind != tokenComment {
						f.start, f.end = t.start, t.end
					}
				}
			}
		}
		return f
	}
	var at participle.Error
	if errors.As(err, &at) {
		return c.unexpected(keyword, at.Position().Offset)
	}
	return &fault{rule: RuleStatement, end: c.tokens[0].end, headline: "The statement can't be read."}
}

// headless explains a chunk that begins with no keyword.
func (c *chunk) headless(text string) *fault {
	t := c.tokens[0]
	f := &fault{rule: RuleKeyword, start: t.start, end: t.end}
	switch {
	case t.text == "|":
		f.rule, f.end = RuleRow, len(text)
		f.headline = "A row stands under no table."
		f.notes = []string{"Rows follow directly under `table NAME`."}
	case t.kind == tokenIdent:
		f.headline = fmt.Sprintf("No statement begins with %s.", code(t.text))
		if w := Suggest(t.text, grammar.Keywords); w != "" {
			f.notes = append(f.notes, "Did you mean "+code(w)+"?")
			f.fixes = append(f.fixes, fix{"Write " + w, t.start, t.end, w})
		} else {
			f.notes = append(f.notes, "A statement begins with "+orList(grammar.Keywords)+".")
		}
	case t.kind == tokenOp && goesOnAfter[t.text]:
		f.headline = fmt.Sprintf("A line can't begin with %s.", code(t.text))
		f.notes = []string{"A statement goes on over a line break after an operator or a comma: put it at the end of the line above."}
	default:
		f.headline = fmt.Sprintf("A line can't begin with %s.", code(t.text))
		f.notes = []string{"A statement begins with " + orList(grammar.Keywords) + "."}
	}
	return f
}

// flawed describes a token that is wrong in itself, and says whether the
// statement is lost by it.
func flawed(t token, text string) (*fault, bool) {
	raw := text[t.start:t.end]
	f := &fault{rule: RuleCharacter, start: t.start, end: t.end}
	switch t.flaw {
	case flawUnterminated:
		f.rule, f.headline = RuleText, "The text has no closing quote on its line."
		f.fixes = []fix{{"Close the text", t.end, t.end, `"`}}
		return f, false
	case flawQuotes:
		f.headline = "The text stands between typographic quotes."
		f.notes = []string{`A text stands between straight quotes: ` + code(t.text) + "."}
		f.fixes = []fix{{"Write straight quotes", t.start, t.end, t.text}}
		return f, false
	case flawBytes:
		f.rule, f.headline = RuleEncoding, fmt.Sprintf("%s here %s not UTF-8.", plural(t.end-t.start, "byte"), isAre(t.end-t.start))
		f.notes = []string{"Save the file as UTF-8."}
		return f, true
	case flawJoined:
		f.headline = fmt.Sprintf("The number runs into letters: %s.", code(raw))
		digits := strings.TrimRight(raw, "_abcdefghijklmnopqrstuvwxyzABCDEFGHIJKLMNOPQRSTUVWXYZ")
		if digits != "" && digits != raw {
			f.notes = []string{"A product needs its sign: " + code(digits+" * "+raw[len(digits):]) + "."}
		}
		return f, true
	}
	f.headline = fmt.Sprintf("The character %s has no meaning here.", code(raw))
	if hint := hints[raw]; hint != "" {
		f.notes = []string{hint}
	}
	return f, true
}

// hints say what to write instead of a character that has no meaning.
var hints = map[string]string{
	"~": "A distribution follows `as`: `prior mu as Normal(0, sd = 1)`.",
	"'": "A text stands between double quotes: `\"text\"`.",
	"‘": "A text stands between double quotes: `\"text\"`.",
	"’": "A text stands between double quotes: `\"text\"`.",
	"–": "A minus is written `-`.",
	"—": "A minus is written `-`.",
	"{": "Statements have no braces; each stands on its own line.",
	"}": "Statements have no braces; each stands on its own line.",
	"&": "Conditions are joined with `and`.",
	"!": "A condition is turned round with `not`; unequal is `!=`.",
	"²": "A square is written `^2`.",
	"³": "A cube is written `^3`.",
	"½": "A half is written `1/2`.",
	"¼": "A quarter is written `1/4`.",
	"∞": "Infinity is written `inf`.",
	"√": "A root is written `sqrt(x)`.",
	"$": "A column of a table is written `table.column`.",
	"∼": "A distribution follows `as`: `prior mu as Normal(0, sd = 1)`.",
}

func plural(n int, noun string) string {
	if n == 1 {
		return "1 " + noun
	}
	return thousands(n) + " " + noun + "s"
}

func isAre(n int) string {
	if n == 1 {
		return "is"
	}
	return "are"
}
