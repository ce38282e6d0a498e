package parser

import (
	"fmt"

	"github.com/alecthomas/participle/v2"
	"github.com/alecthomas/participle/v2/lexer"

	"wellposed/grammar"
)

// Bounds on the shape of an expression. They keep every walk over a tree
// within a small stack.
const (
	// MaxNesting is how deep brackets and signs may be nested.
	MaxNesting = 200
	// MaxOperators is how many operators may stand in one chain.
	MaxOperators = 2000
)

// The binding strength of the operators; a higher number binds tighter.
const (
	strengthOr = iota + 1
	strengthAnd
	strengthNot
	strengthCompare
	strengthSum
	strengthProduct
	strengthMinus
	strengthPower
)

func strength(t *lexer.Token) int {
	switch t.Type {
	case tokenOp:
		switch t.Value {
		case "+", "-":
			return strengthSum
		case "*", "/":
			return strengthProduct
		case "^":
			return strengthPower
		case "==", "!=", "<", "<=", ">", ">=":
			return strengthCompare
		}
	case tokenIdent:
		switch t.Value {
		case "and":
			return strengthAnd
		case "or":
			return strengthOr
		}
	}
	return 0
}

// reader is the operator-precedence parser over participle's tokens.
type reader struct {
	lex       *lexer.PeekingLexer
	depth     int
	operators int
}

// readExpr reads a whole expression, conditions included.
func readExpr(lex *lexer.PeekingLexer) (grammar.Expr, error) {
	return (&reader{lex: lex}).whole(strengthOr)
}

// readArithmetic reads an expression without `and`, `or`, `not` and
// comparisons, for the places where `and` joins bindings.
func readArithmetic(lex *lexer.PeekingLexer) (grammar.Expr, error) {
	return (&reader{lex: lex}).whole(strengthSum)
}

// readDist reads a distribution with its arguments.
func readDist(lex *lexer.PeekingLexer) (grammar.Law, error) {
	d, err := (&reader{lex: lex}).dist()
	if err != nil {
		return nil, err
	}
	return d, nil
}

func (r *reader) whole(least int) (grammar.Expr, error) {
	if !starts(r.lex.Peek()) {
		return nil, participle.NextMatch
	}
	return r.expr(least)
}

// starts reports whether an expression can begin with the token.
func starts(t *lexer.Token) bool {
	switch t.Type {
	case tokenIdent, tokenNumber, tokenString:
		return true
	case tokenOp:
		switch t.Value {
		case "-", "+", "(", "[":
			return true
		}
	}
	return false
}

func mark(p lexer.Position) grammar.Mark { return grammar.Mark{Offset: p.Offset} }

// end is the end of the last token taken.
func (r *reader) end() grammar.Mark { return mark(r.lex.RawPeek().Pos) }

func (r *reader) peekOp(op string) bool {
	t := r.lex.Peek()
	return t.Type == tokenOp && t.Value == op
}

// adjacent reports whether the next token touches the last one.
func (r *reader) adjacent() bool { return r.lex.RawPeek().Type != tokenSpace }

func (r *reader) expr(least int) (grammar.Expr, error) {
	left, err := r.unary(least)
	if err != nil {
		return nil, err
	}
	for {
		op := r.lex.Peek()
		s := strength(op)
		if s == 0 || s < least || s == strengthPower {
			return left, nil
		}
		if s == strengthCompare {
			left, err = r.comparison(left)
		} else {
			left, err = r.binary(left, s+1)
		}
		if err != nil {
			return nil, err
		}
	}
}

// binary reads an operator and its right side, which binds at least as tight
// as `least`.
func (r *reader) binary(left grammar.Expr, least int) (*grammar.Binary, error) {
	op := *r.lex.Next()
	if r.operators++; r.operators > MaxOperators {
		return nil, faultAt(&op, fmt.Sprintf("More than %s operators stand in one expression.", thousands(MaxOperators)),
			"Split it with `let`.")
	}
	right, err := r.operand(&op, least)
	if err != nil {
		return nil, err
	}
	start, _ := left.Span()
	return &grammar.Binary{Pos: start, EndPos: r.end(), Op: op.Value, OpPos: mark(op.Pos), X: left, Y: right}, nil
}

// operand is expr where one must follow a token.
func (r *reader) operand(after *lexer.Token, least int) (grammar.Expr, error) {
	if !starts(r.lex.Peek()) {
		return nil, r.missing(after, "a value")
	}
	return r.expr(least)
}

// comparison reads a chain a < b < c as (a < b) and (b < c).
func (r *reader) comparison(left grammar.Expr) (grammar.Expr, error) {
	first, err := r.binary(left, strengthSum)
	if err != nil {
		return nil, err
	}
	var all grammar.Expr = first
	for between := first.Y; strength(r.lex.Peek()) == strengthCompare; {
		next, err := r.binary(between, strengthSum)
		if err != nil {
			return nil, err
		}
		start, _ := all.Span()
		all = &grammar.Binary{Pos: start, EndPos: next.EndPos, Op: "and", OpPos: next.OpPos, X: all, Y: next, Chained: true}
		between = next.Y
	}
	return all, nil
}

func (r *reader) unary(least int) (grammar.Expr, error) {
	t := r.lex.Peek()
	sign := t.Type == tokenOp && (t.Value == "-" || t.Value == "+")
	not := t.Type == tokenIdent && t.Value == "not" && least <= strengthNot
	if !sign && !not {
		return r.power()
	}
	if err := r.enter(t); err != nil {
		return nil, err
	}
	defer r.leave()
	op := *r.lex.Next()
	bind := strengthMinus
	if not {
		bind = strengthNot
	}
	x, err := r.operand(&op, bind)
	if err != nil {
		return nil, err
	}
	if op.Value == "+" { // +x is x
		return x, nil
	}
	return &grammar.Unary{Pos: mark(op.Pos), EndPos: r.end(), Op: op.Value, X: x}, nil
}

// power reads x ^ y, which binds tighter than a sign before x and takes a
// signed y: -x^2 is -(x^2), 2^-1 is 1/2, a^b^c is a^(b^c).
func (r *reader) power() (grammar.Expr, error) {
	x, err := r.atom()
	if err != nil || !r.peekOp("^") {
		return x, err
	}
	if err := r.enter(r.lex.Peek()); err != nil {
		return nil, err
	}
	defer r.leave()
	return r.binary(x, strengthMinus)
}

func (r *reader) enter(t *lexer.Token) error {
	if r.depth++; r.depth > MaxNesting {
		return faultAt(t, fmt.Sprintf("Brackets, signs and powers are nested more than %d deep.", MaxNesting),
			"Give an inner part a name with `let`.")
	}
	return nil
}

func (r *reader) leave() { r.depth-- }

func (r *reader) atom() (grammar.Expr, error) {
	t := *r.lex.Peek()
	switch t.Type {
	case tokenNumber:
		r.lex.Next()
		return &grammar.Number{Pos: mark(t.Pos), EndPos: r.end(), Text: t.Value}, nil
	case tokenString:
		r.lex.Next()
		return &grammar.Quote{Pos: mark(t.Pos), EndPos: r.end(), Quoted: t.Value}, nil
	case tokenIdent:
		return r.named()
	case tokenOp:
		switch t.Value {
		case "(":
			return r.bracketed()
		case "[":
			return r.list()
		}
	}
	return nil, r.missing(nil, "a value")
}

// named reads a name, table.column, an indexed name or a call.
func (r *reader) named() (grammar.Expr, error) {
	t := *r.lex.Next()
	id := &grammar.Ident{Pos: mark(t.Pos), EndPos: r.end(), Text: t.Value}
	switch {
	case r.peekOp("(") && r.adjacent(), r.peekOp("(") && grammar.FindFunction(t.Value) != nil:
		args, err := r.arguments()
		if err != nil {
			return nil, err
		}
		return &grammar.Call{Pos: id.Pos, NameEnd: id.EndPos, EndPos: r.end(), Name: t.Value, Args: args}, nil
	case r.peekOp(".") && r.adjacent():
		r.lex.Next()
		c := r.lex.Peek()
		if c.Type != tokenIdent && c.Type != tokenKeyword || !r.adjacent() {
			return nil, r.missing(nil, "a column")
		}
		r.lex.Next()
		id.Table, id.Text, id.EndPos = t.Value, c.Value, r.end()
	}
	if !r.peekOp("[") {
		return id, nil
	}
	if err := r.enter(r.lex.Peek()); err != nil {
		return nil, err
	}
	defer r.leave()
	by, err := r.items("]")
	if err != nil {
		return nil, err
	}
	return &grammar.Index{Pos: id.Pos, EndPos: r.end(), Of: id, By: by}, nil
}

// bracketed reads (a) or (a, b, c).
func (r *reader) bracketed() (grammar.Expr, error) {
	open := *r.lex.Peek()
	if err := r.enter(&open); err != nil {
		return nil, err
	}
	defer r.leave()
	items, err := r.items(")")
	if err != nil {
		return nil, err
	}
	if len(items) == 1 {
		return &grammar.Paren{Pos: mark(open.Pos), EndPos: r.end(), X: items[0]}, nil
	}
	return &grammar.Tuple{Pos: mark(open.Pos), EndPos: r.end(), Items: items}, nil
}

func (r *reader) list() (grammar.Expr, error) {
	open := *r.lex.Peek()
	if err := r.enter(&open); err != nil {
		return nil, err
	}
	defer r.leave()
	items, err := r.items("]")
	if err != nil {
		return nil, err
	}
	return &grammar.List{Pos: mark(open.Pos), EndPos: r.end(), Items: items}, nil
}

// items reads expressions between commas, from the opening bracket, which is
// next, to the closing one. There is at least one.
func (r *reader) items(close string) ([]grammar.Expr, error) {
	open := *r.lex.Next()
	var items []grammar.Expr
	before := r.operators
	for after := &open; ; {
		r.operators = before
		x, err := r.operand(after, strengthOr)
		if err != nil {
			return nil, err
		}
		items = append(items, x)
		done, comma, err := r.separator(&open, close)
		if err != nil {
			return nil, err
		}
		if done {
			r.operators = before
			return items, nil
		}
		after = comma
	}
}

// separator takes a comma or the closing bracket.
func (r *reader) separator(open *lexer.Token, close string) (done bool, comma *lexer.Token, err error) {
	switch {
	case r.peekOp(close):
		r.lex.Next()
		return true, nil, nil
	case r.peekOp(","):
		t := *r.lex.Next()
		return false, &t, nil
	}
	return false, nil, r.unclosed(open, close)
}

// arguments reads the arguments of a call or a distribution, from the opening
// bracket, which is next.
func (r *reader) arguments() ([]*grammar.Arg, error) {
	open := *r.lex.Next()
	if err := r.enter(&open); err != nil {
		return nil, err
	}
	defer r.leave()
	before := r.operators
	var args []*grammar.Arg
	if r.peekOp(")") {
		r.lex.Next()
		return args, nil
	}
	for after := &open; ; {
		r.operators = before
		a, err := r.argument(after)
		if err != nil {
			return nil, err
		}
		args = append(args, a)
		done, comma, err := r.separator(&open, ")")
		if err != nil {
			return nil, err
		}
		if done {
			r.operators = before
			return args, nil
		}
		after = comma
	}
}

// argument reads `value`, `label = value`, `two words = value` or
// `weight: distribution`.
func (r *reader) argument(after *lexer.Token) (*grammar.Arg, error) {
	a := &grammar.Arg{Pos: mark(r.lex.Peek().Pos)}
	if label, end, ok := r.label(); ok {
		equals := *r.lex.Next()
		a.Label, a.LabelEnd = label, end
		x, err := r.operand(&equals, strengthOr)
		if err != nil {
			return nil, err
		}
		a.Value, a.EndPos = x, r.end()
		return a, nil
	}
	x, err := r.operand(after, strengthOr)
	if err != nil {
		return nil, err
	}
	if !r.peekOp(":") {
		a.Value, a.EndPos = x, r.end()
		return a, nil
	}
	colon := *r.lex.Next()
	if r.lex.Peek().Type != tokenIdent {
		return nil, r.missing(&colon, "a distribution")
	}
	d, err := r.dist()
	if err != nil {
		return nil, err
	}
	a.Weight, a.Dist, a.EndPos = x, d, r.end()
	return a, nil
}

// label takes one or two words before an equals sign, which it leaves.
func (r *reader) label() (label string, end grammar.Mark, ok bool) {
	before := r.lex.MakeCheckpoint()
	for range 2 {
		t := r.lex.Peek()
		if t.Type != tokenIdent && t.Type != tokenKeyword {
			break
		}
		if label != "" {
			label += " "
		}
		label += r.lex.Next().Value
		end = r.end()
		if r.peekOp("=") {
			return label, end, true
		}
	}
	r.lex.LoadCheckpoint(before)
	return "", end, false
}

// dist reads a distribution. Its name may have hyphens, without blanks.
func (r *reader) dist() (*grammar.Dist, error) {
	t := *r.lex.Peek()
	if t.Type != tokenIdent {
		return nil, participle.NextMatch
	}
	r.lex.Next()
	d := &grammar.Dist{Pos: mark(t.Pos), Name: t.Value}
	for r.peekOp("-") && r.adjacent() {
		before := r.lex.MakeCheckpoint()
		r.lex.Next()
		part := r.lex.Peek()
		if !r.adjacent() || part.Type != tokenIdent && part.Type != tokenKeyword {
			r.lex.LoadCheckpoint(before)
			break
		}
		d.Name += "-" + r.lex.Next().Value
	}
	d.NameEnd = r.end()
	if !r.peekOp("(") {
		return nil, r.needsArguments(d)
	}
	args, err := r.arguments()
	if err != nil {
		return nil, err
	}
	d.Args, d.EndPos = args, r.end()
	return d, nil
}
