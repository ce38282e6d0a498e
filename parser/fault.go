package parser

import (
	"fmt"
	"slices"
	"strconv"
	"strings"
	"unicode"

	"github.com/alecthomas/participle/v2/lexer"

	"wellposed/grammar"
	"wellposed/parser/diag"
	"wellposed/parser/near"
	"wellposed/parser/source"
)

// fault is something that could not be read, at a place relative to the start
// of the statement. It satisfies participle's Error.
type fault struct {
	rule       string
	start, end int
	headline   string
	notes      []string
	fixes      []fix
}

type fix struct {
	title      string
	start, end int
	text       string
}

func (f *fault) Error() string   { return f.headline }
func (f *fault) Message() string { return f.headline }
func (f *fault) Position() lexer.Position {
	return lexer.Position{Offset: f.start}
}

// finding makes the fault absolute.
func (f *fault) finding(path string, at int) diag.Finding {
	out := diag.Finding{Rule: f.rule, Severity: diag.Stop, Path: path,
		Span: source.Span{Start: at + f.start, End: at + f.end}, Headline: f.headline, Notes: f.notes}
	for _, x := range f.fixes {
		out.Fixes = append(out.Fixes, diag.Fix{Title: x.title, Grade: diag.Same,
			Edits: []diag.Edit{{Path: path, Span: source.Span{Start: at + x.start, End: at + x.end}, Text: x.text}}})
	}
	return out
}

// faultAt is a fault at a token of participle's, whose extent is set later.
func faultAt(t *lexer.Token, headline string, notes ...string) *fault {
	return &fault{rule: RuleStatement, start: t.Pos.Offset, end: -1, headline: headline, notes: notes}
}

// missing says that something must stand where the next token is.
func (r *reader) missing(after *lexer.Token, what string) *fault {
	t := r.lex.Peek()
	at := &fault{rule: RuleStatement, start: t.Pos.Offset, end: -1}
	where := ""
	if after != nil {
		where = " after " + code(after.Value)
	}
	switch {
	case t.EOF():
		at.headline = fmt.Sprintf("The statement ends where %s should follow%s.", what, where)
	case t.Type == tokenKeyword:
		at.headline = fmt.Sprintf("%s is reserved, so it can't stand where %s should follow%s.", code(t.Value), what, where)
	case t.Type == tokenOp && t.Value == "*" && after != nil && after.Value == "*":
		at.headline, at.notes = "`**` is not read here.", []string{"A power is written `^`."}
	default:
		at.headline = fmt.Sprintf("Unexpected %s where %s should follow%s.", code(t.Value), what, where)
	}
	return at
}

// unclosed says that a bracket is not closed, or what stands in its way.
func (r *reader) unclosed(open *lexer.Token, close string) *fault {
	t := r.lex.Peek()
	if t.EOF() {
		return &fault{rule: RuleStatement, start: open.Pos.Offset, end: open.Pos.Offset + len(open.Value),
			headline: fmt.Sprintf("%s is not closed: %s is missing.", code(open.Value), code(close))}
	}
	f := faultAt(t, fmt.Sprintf("Unexpected %s where %s or %s should follow.", code(t.Value), code(","), code(close)))
	switch {
	case t.Type == tokenOp && t.Value == "=":
		f.notes = []string{"An argument's name has one or two words before `=`, separated by a blank: `log sd = 1`. Equality in a condition is `==`."}
	case t.Type == tokenIdent || t.Type == tokenNumber || t.Type == tokenOp && t.Value == "(":
		f.notes = []string{"A product needs its sign: `2 * x`."}
	}
	return f
}

// needsArguments says that a distribution came without brackets.
func (r *reader) needsArguments(d *grammar.Dist) *fault {
	t := r.lex.Peek()
	f := faultAt(t, fmt.Sprintf("The distribution %s has no arguments.", code(d.Name)),
		"They follow in brackets: `Normal(0, sd = 1)`.")
	if t.EOF() {
		f.start, f.end = d.Pos.Offset, d.NameEnd.Offset
	}
	if t.Type == tokenOp && t.Value == "-" {
		f.notes = []string{"A distribution's name is written without blanks around its hyphens: `half-Normal`."}
	}
	return f
}

// code sets a piece of source between backquotes, cut when it is long.
func code(text string) string {
	if runes := []rune(text); len(runes) > 40 {
		text = string(runes[:39]) + "…"
	}
	return "`" + text + "`"
}

func thousands(n int) string {
	s := strconv.Itoa(n)
	for i := len(s) - 3; i > 0; i -= 3 {
		s = s[:i] + "," + s[i:]
	}
	return s
}

// Suggest returns the known word that a mistyped one was probably meant to be,
// "" when none is near.
func Suggest(typed string, known []string) string { return near.Word(typed, known) }

// reads lists the forms of a statement that are nearest to what was written,
// at most four.
func (c *chunk) reads(spec *grammar.StatementSpec) string {
	written := map[string]bool{}
	for _, t := range c.tokens {
		written[t.text] = true
	}
	var near []string
	best := 0
	for _, f := range spec.Forms {
		score := 0
		for _, word := range strings.FieldsFunc(f, func(r rune) bool { return !unicode.IsLower(r) }) {
			if written[word] {
				score++
			}
		}
		if score > best {
			best, near = score, nil
		}
		if score == best {
			near = append(near, "`"+f+"`")
		}
	}
	noun := strings.ToUpper(spec.Noun[:1]) + spec.Noun[1:]
	return noun + " reads " + orList(near[:min(len(near), 4)]) + "."
}

func orList(items []string) string {
	if len(items) < 2 {
		return strings.Join(items, "")
	}
	return strings.Join(items[:len(items)-1], ", ") + " or " + items[len(items)-1]
}

// unexpected describes a token that does not fit into its statement.
func (c *chunk) unexpected(keyword string, offset int) *fault {
	spec := grammar.FindStatement(keyword)
	i := 0
	for i < len(c.tokens) && (c.tokens[i].start < offset || c.tokens[i].kind == tokenComment) {
		i++
	}
	before := token{text: keyword}
	for j := i - 1; j >= 0; j-- {
		if c.tokens[j].kind != tokenComment {
			before = c.tokens[j]
			break
		}
	}
	if i == len(c.tokens) {
		f := &fault{rule: RuleStatement, start: before.start, end: before.end,
			headline: fmt.Sprintf("The statement ends too early, after %s.", code(before.text))}
		f.notes = []string{c.reads(spec)}
		return f
	}
	t := c.tokens[i]
	f := &fault{rule: RuleStatement, start: t.start, end: t.end,
		headline: fmt.Sprintf("Unexpected %s after %s.", code(t.text), code(before.text))}
	switch {
	case t.kind == tokenKeyword && (before.kind == tokenKeyword || before.text == "for" || before.kind == tokenOp && !strings.Contains(")]%", before.text)):
		f.headline = fmt.Sprintf("%s is a reserved word, so it can't be a name.", code(t.text))
	case t.kind == tokenKeyword:
		f.notes = append(f.notes, "Each statement begins on a line of its own.")
	case t.kind == tokenIdent:
		words := slices.DeleteFunc(slices.Clone(forms[keyword].words()), func(w string) bool { return w == before.text || w == t.text })
		if w := Suggest(t.text, words); w != "" {
			f.notes = append(f.notes, "Did you mean "+code(w)+"?")
			f.fixes = append(f.fixes, fix{"Write " + w, t.start, t.end, w})
		}
	}
	f.notes = append(f.notes, c.reads(spec))
	return f
}
