package parser

import (
	"strings"

	"github.com/alecthomas/participle/v2/lexer"

	"wellposed/grammar"
	"wellposed/parser/source"
)

// Class is what a token is, for highlighting and completion.
type Class int

// The classes of tokens.
const (
	// ClassKeyword leads a statement.
	ClassKeyword Class = iota
	// ClassWord is a word of the grammar inside a statement: as, flat, because.
	ClassWord
	ClassKind
	ClassDistribution
	ClassFunction
	// ClassLabel is the name of an argument.
	ClassLabel
	// ClassConstant is pi or inf.
	ClassConstant
	// ClassName names an unknown, a given, a column, a let or a table.
	ClassName
	ClassNumber
	ClassString
	ClassComment
	// ClassOperator is an operator.
	ClassOperator
	// ClassBracket is a bracket, a comma, a colon, a semicolon or a column rule.
	ClassBracket
	// ClassIllegal has no meaning.
	ClassIllegal
)

// String is a stable name of the class.
func (c Class) String() string {
	return [...]string{"keyword", "word", "kind", "distribution", "function", "label", "constant", "name",
		"number", "string", "comment", "operator", "bracket", "illegal"}[c]
}

// Token is one token of a file with its class. A name of several parts, as
// half-Cauchy or a rule's, is one token.
type Token struct {
	// Span is absolute.
	Span  source.Span
	Class Class
	// Text is the canonical spelling: `<=` for ≤.
	Text string
	// Declares is set where the name is being declared.
	Declares bool
}

// Tokens gives the tokens of a line in source order, comments included. A
// broken line is classed as far as its words tell.
func Tokens(l *grammar.Line) []Token {
	c := cut(l.Text, 0)
	if c.start == c.end {
		return nil
	}
	shift := l.Start + c.start
	if c.tokens[0].text == "|" { // a row without a table
		return rowTokens(l.Text[c.start:], span{0, c.end - c.start}, shift)
	}
	look := classify(l.Statement)
	at := func(start, end int, class Class, text string) Token {
		return Token{Span: source.Span{Start: start, End: end}.Shift(shift), Class: class, Text: text}
	}
	var out []Token
	rows := c.rows
	var last token
	for i := 0; i < len(c.tokens); i++ {
		t := c.tokens[i]
		for len(rows) > 0 && rows[0].start < t.start {
			out = append(out, rowTokens(l.Text[c.start:], rows[0], shift)...)
			rows = rows[1:]
		}
		if p, ok := look[t.start]; ok && t.kind != tokenComment {
			end := max(p.end, t.end)
			for i+1 < len(c.tokens) && c.tokens[i+1].start < end {
				i++
			}
			out = append(out, at(t.start, end, p.class, l.Text[c.start+t.start:c.start+end]))
			out[len(out)-1].Declares = p.declares
			last = t
			continue
		}
		out = append(out, at(t.start, t.end, c.class(i, last), t.text))
		if t.kind != tokenComment {
			last = t
		}
	}
	for _, r := range rows {
		out = append(out, rowTokens(l.Text[c.start:], r, shift)...)
	}
	return out
}

// class judges a token by its kind and its neighbours, where the tree says
// nothing.
func (c *chunk) class(i int, last token) Class {
	t := c.tokens[i]
	switch t.kind {
	case tokenKeyword:
		if i == 0 {
			return ClassKeyword
		}
		return ClassWord
	case tokenNumber:
		return ClassNumber
	case tokenString:
		return ClassString
	case tokenComment:
		return ClassComment
	case tokenOp:
		if strings.Contains("()[],:;|.", t.text) {
			return ClassBracket
		}
		return ClassOperator
	case tokenIdent:
		switch {
		case t.text == "and" || t.text == "or" || t.text == "not":
			return ClassOperator
		case last.text == "as" && grammar.FindDistribution(t.text) != nil:
			return ClassDistribution
		case last.text == ":" && c.tokens[0].text == "unknown" && grammar.FindKind(t.text) != nil:
			return ClassKind
		case c.isWord(t.text):
			return ClassWord
		}
		return ClassName
	}
	return ClassIllegal
}

// isWord reports whether a word belongs to the grammar of the statement.
func (c *chunk) isWord(word string) bool {
	if f := forms[c.tokens[0].text]; f != nil {
		for _, w := range f.words() {
			if w == word {
				return true
			}
		}
	}
	return false
}

type placed struct {
	end      int
	class    Class
	declares bool
}

// classify is what the tree says about the tokens, by offset.
func classify(s grammar.Statement) map[int]placed {
	look := map[int]placed{}
	grammar.Walk(s, func(node any) bool {
		switch n := node.(type) {
		case *grammar.Dist:
			look[n.Pos.Offset] = placed{end: n.NameEnd.Offset, class: ClassDistribution}
		case *grammar.Call:
			class := ClassName
			if grammar.FindFunction(n.Name) != nil {
				class = ClassFunction
			}
			look[n.Pos.Offset] = placed{end: n.NameEnd.Offset, class: class}
		case *grammar.Ident:
			class := ClassName
			for _, k := range grammar.Constants {
				if n.Text == k && n.Table == "" {
					class = ClassConstant
				}
			}
			if n.Table == "" {
				look[n.Pos.Offset] = placed{end: n.EndPos.Offset, class: class}
			} else {
				look[n.Pos.Offset] = placed{end: n.Pos.Offset, class: class}
				look[n.EndPos.Offset-len(n.Text)] = placed{end: n.EndPos.Offset, class: class}
			}
		case *grammar.Arg:
			if n.Label != "" {
				look[n.Pos.Offset] = placed{end: n.LabelEnd.Offset, class: ClassLabel}
			}
		}
		return true
	})
	name := func(declares bool, names ...*grammar.Name) {
		for _, n := range names {
			if n != nil && n.EndPos.Offset > 0 {
				look[n.Pos.Offset] = placed{end: n.EndPos.Offset, class: ClassName, declares: declares}
			}
		}
	}
	words := func(w *grammar.Words) {
		if w != nil && w.EndPos.Offset > 0 {
			look[w.Pos.Offset] = placed{end: w.EndPos.Offset, class: ClassName}
		}
	}
	date := func(d *grammar.Date) {
		if d != nil && d.EndPos.Offset > 0 {
			look[d.Pos.Offset] = placed{end: d.EndPos.Offset, class: ClassNumber}
		}
	}
	subject := func(s *grammar.Subject) {
		if s != nil {
			name(false, s.Name)
		}
	}
	switch s := s.(type) {
	case *grammar.Given:
		for _, b := range s.Bindings {
			name(true, b.Name)
		}
	case *grammar.Table:
		name(true, s.Name)
	case *grammar.Unknown:
		for _, d := range s.Declared {
			name(true, d.Name)
			name(false, d.Per...)
			name(false, d.Either...)
			name(false, d.For...)
		}
		if s.Kind != nil {
			look[s.Kind.Pos.Offset] = placed{end: s.Kind.Pos.Offset, class: ClassKind}
		}
	case *grammar.Vary:
		name(true, s.Name)
		name(false, s.Across...)
	case *grammar.Let:
		name(true, s.Name)
	case *grammar.Report:
		name(true, s.Name)
	case *grammar.Rivals:
		name(false, s.For...)
	case *grammar.Await:
		name(false, s.Names...)
	case *grammar.Require:
		switch {
		case s.Coverage != nil:
			name(false, s.Coverage.Of)
			for _, p := range s.Coverage.Parts {
				name(false, p.Unknown)
			}
		case s.Chance != nil:
			for _, b := range s.Chance.When {
				name(false, b.Name)
			}
		case s.Agree != nil:
			name(false, s.Agree.On)
		}
	case *grammar.Accept:
		words(s.Rule)
		subject(s.For)
		date(s.Until)
	case *grammar.Override:
		words(s.Rule)
		subject(s.For)
		date(s.Until)
	}
	return look
}

// rowTokens are the rules and cells of a row of a table in place.
func rowTokens(text string, at span, shift int) []Token {
	var out []Token
	put := func(start, end int, class Class) {
		out = append(out, Token{Span: source.Span{Start: start, End: end}.Shift(shift), Class: class, Text: text[start:end]})
	}
	put(at.start, at.start+1, ClassBracket)
	for _, cell := range readRow(text, at).Cells {
		if cell.EndPos.Offset > cell.Pos.Offset {
			class := ClassString
			if isNumber(cell.Text) {
				class = ClassNumber
			}
			put(cell.Pos.Offset, cell.EndPos.Offset, class)
		}
		if end, closed := cellEnd(text, cell.EndPos.Offset, at.end); closed {
			put(end, end+1, ClassBracket)
		}
	}
	return out
}

func isNumber(text string) bool {
	s := newScanner(strings.TrimLeft(text, "+-"), 0)
	t := s.next()
	return t.kind == tokenNumber && s.next().kind == lexer.EOF
}
