package grammar

// Expr is one of the expression nodes below.
type Expr interface {
	// Span returns the marks of the first and the byte after the last character.
	Span() (Mark, Mark)
}

// Number is a literal; Text is as written: 0.1, 1e-3, 40.
type Number struct {
	Pos, EndPos Mark
	Text        string
}

// Quote is a quoted level, as in flag == "<" or gamma["north"].
type Quote struct {
	Pos, EndPos Mark
	Quoted      string
}

// Ident names an unknown, a given, a column or a let. Table is set when it was
// written table.column.
type Ident struct {
	Pos, EndPos Mark
	Table       string
	Text        string
}

// Index is theta[study] or beta[site, year].
type Index struct {
	Pos, EndPos Mark
	Of          *Ident
	By          []Expr
}

// Call is a function, P(…), between(…) or summary(…). Name may be log-gamma.
type Call struct {
	Pos, EndPos Mark
	NameEnd     Mark
	Name        string
	Args        []*Arg
}

// Arg is an argument of a call or a distribution. Label is empty for a
// positional argument and has single spaces between its words: "log sd".
type Arg struct {
	Pos, EndPos Mark
	Label       string
	LabelEnd    Mark
	Value       Expr
	// Dist is set instead of Value where an argument is a distribution: a
	// component of a Mixture, whose Weight stands before the colon.
	Dist   *Dist
	Weight Expr
}

// Unary is - or `not`.
type Unary struct {
	Pos, EndPos Mark
	Op          string
	X           Expr
}

// Binary is + - * / ^ == != < <= > >= and or. A chain a < b < c is
// (a < b) and (b < c) with Chained set on the `and`.
type Binary struct {
	Pos, EndPos Mark
	Op          string
	OpPos       Mark
	X, Y        Expr
	Chained     bool
}

// Paren keeps a pair of brackets, for the formatter.
type Paren struct {
	Pos, EndPos Mark
	X           Expr
}

// Tuple is (a, b, c).
type Tuple struct {
	Pos, EndPos Mark
	Items       []Expr
}

// List is [1.2, 0.7, 3.1].
type List struct {
	Pos, EndPos Mark
	Items       []Expr
}

// Dist is a distribution with its arguments. Name is as written, hyphens
// joined without spaces.
type Dist struct {
	Pos, EndPos Mark
	NameEnd     Mark
	Name        string
	Args        []*Arg
	// Law hands the distribution over from the operator-precedence parser while
	// a statement is read; it is nil in a tree.
	Law Law `parser:"@@"`
}

// Law is a *Dist. It is an interface because participle accepts a hand-written
// parser for interfaces only.
type Law interface {
	Span() (Mark, Mark)
	law()
}

func (*Dist) law() {}

func (e *Number) Span() (Mark, Mark) { return e.Pos, e.EndPos }
func (e *Quote) Span() (Mark, Mark)  { return e.Pos, e.EndPos }
func (e *Ident) Span() (Mark, Mark)  { return e.Pos, e.EndPos }
func (e *Index) Span() (Mark, Mark)  { return e.Pos, e.EndPos }
func (e *Call) Span() (Mark, Mark)   { return e.Pos, e.EndPos }
func (e *Unary) Span() (Mark, Mark)  { return e.Pos, e.EndPos }
func (e *Binary) Span() (Mark, Mark) { return e.Pos, e.EndPos }
func (e *Paren) Span() (Mark, Mark)  { return e.Pos, e.EndPos }
func (e *Tuple) Span() (Mark, Mark)  { return e.Pos, e.EndPos }
func (e *List) Span() (Mark, Mark)   { return e.Pos, e.EndPos }
func (e *Dist) Span() (Mark, Mark)   { return e.Pos, e.EndPos }
