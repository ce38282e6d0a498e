package grammar

// The syntax tree. The struct tags of the statements *are* the grammar: the
// parser hands these types to participle. Expressions and distributions are
// read by an operator-precedence parser (see parser/expression.go), because
// their depth must be bounded.
//
// Positions inside a statement are relative to the start of the statement, so
// that a tree can be kept when text before it changes. Line.Start is the
// absolute offset: absolute = Line.Start + Mark.Offset.

// Mark is a place in a statement. Only Offset (bytes) is meaningful.
type Mark struct {
	Filename     string
	Offset       int
	Line, Column int
}

// File is a whole model file, statement by statement, in source order.
type File struct {
	Lines []*Line
}

// Line is one statement with the text it was made from.
type Line struct {
	// Start is the absolute byte offset of Text in the file.
	Start int
	// Text is the statement's text including the comments inside and after it.
	Text string
	// Statement is nil when the text could not be read at all; it may be
	// partial when Broken.
	Statement Statement
	Broken    bool
	Comments  []Comment
}

// Comment is a comment inside a Line or standing alone.
type Comment struct {
	Pos  Mark
	Text string // with the leading #
}

// Statement is one of the statement nodes below.
type Statement interface{ statement() }

// Name is an identifier that declares or names something. A column may be
// written table.column; Text then has the point.
type Name struct {
	Pos    Mark
	Text   string `parser:"@Ident ( @'.' @(Ident | Keyword) )?"`
	EndPos Mark
}

// Words is a name that may have hyphens: a rule or a level of strictness.
type Words struct {
	Pos    Mark
	Parts  []string `parser:"@(Ident | Keyword) ( @'-' @(Ident | Keyword | Number) )*"`
	EndPos Mark
}

// Text is a quoted text. Quoted holds it with its quotes and escapes.
type Text struct {
	Pos    Mark
	Quoted string `parser:"@String"`
	EndPos Mark
}

// Share is a proportion: `10%`, `0.1` or `1/10`.
type Share struct {
	Pos     Mark
	Value   Expr `parser:"@@"`
	Percent bool `parser:"@'%'?"`
	EndPos  Mark
}

// Reason is the justification that may end many statements.
type Reason struct {
	Because *Text `parser:"( 'because' @@ )?"`
	From    *Text `parser:"( 'from' @@ )?"`
}

// Title: title "Relay endurance demonstration"
type Title struct {
	Pos    Mark
	Text   *Text `parser:"'title' @@"`
	EndPos Mark
}

// Note: note "Printed in the evidence page."
type Note struct {
	Pos    Mark
	Text   *Text `parser:"'note' @@"`
	EndPos Mark
}

// Field: field "reliability" chooses the words of a trade.
type Field struct {
	Pos    Mark
	Text   *Text `parser:"'field' @@"`
	EndPos Mark
}

// Matters: matters 10%
type Matters struct {
	Pos    Mark
	Share  *Share `parser:"'matters' @@"`
	EndPos Mark
}

// Given: given n = 40, y = [1.2, 0.7]
type Given struct {
	Pos      Mark
	Bindings []*Binding `parser:"'given' @@ ( ',' @@ )*"`
	EndPos   Mark
}

// Binding is name = value.
type Binding struct {
	Pos    Mark
	Name   *Name `parser:"@@ '='"`
	Value  Expr  `parser:"@@"`
	EndPos Mark
}

// Table: table trials from "trials.csv", or rows in place. Rows are cut out by
// the parser; the first is the header.
type Table struct {
	Pos    Mark
	Name   *Name `parser:"'table' @@"`
	From   *Text `parser:"( 'from' @@ )?"`
	EndPos Mark
	Rows   []*Row
}

// Row is one line of an inline table.
type Row struct {
	Pos    Mark
	Cells  []Cell
	EndPos Mark
}

// Cell is one trimmed cell of an inline table.
type Cell struct {
	Pos    Mark
	Text   string
	EndPos Mark
}

// Unknown: unknown p : probability "failure within one mission"
type Unknown struct {
	Pos      Mark
	Declared []*Declared `parser:"'unknown' @@ ( ',' @@ )* ':'"`
	Kind     *Kind       `parser:"@@"`
	In       *Interval   `parser:"( 'in' @@ )?"`
	Limited  Expr        `parser:"( 'limited' 'to' @@ )?"`
	Nature   bool        `parser:"( @'by' 'nature' )?"`
	Label    *Text       `parser:"@@?"`
	Reason   Reason      `parser:"@@?"`
	EndPos   Mark
}

// Declared is one declared name and what it has a component for.
type Declared struct {
	Pos      Mark
	Name     *Name   `parser:"@@"`
	Per      []*Name `parser:"( 'per' ( @@ ( 'by' @@ )*"`
	Either   []*Name `parser:"         | '(' @@ ( ',' @@ )* ')' ) )?"`
	Relative *Text   `parser:"( 'relative' 'to' @@ )?"`
	For      []*Name `parser:"( 'for' ( '(' @@ ( ',' @@ )* ')' | @@ ) )?"`
	EndPos   Mark
}

// Kind is the kind of an unknown, with a size where it needs one.
type Kind struct {
	Pos    Mark
	Name   string `parser:"@Ident"`
	Size   Expr   `parser:"( '(' @@ ')' )?"`
	EndPos Mark
}

// Interval is (a, b), [a, b), …
type Interval struct {
	Pos    Mark
	Open   string `parser:"@( '(' | '[' )"`
	Low    Expr   `parser:"@@ ','"`
	High   Expr   `parser:"@@"`
	Close  string `parser:"@( ')' | ']' )"`
	EndPos Mark
}

// Vary: vary theta across study as Normal(mu, sd = tau)
type Vary struct {
	Pos    Mark
	Name   *Name       `parser:"'vary' @@ 'across'"`
	Across []*Name     `parser:"@@ ( 'by' @@ )*"`
	Dist   *Dist       `parser:"'as' @@"`
	Mods   []*Modifier `parser:"( ',' @@ )*"`
	Label  *Text       `parser:"@@?"`
	Reason Reason      `parser:"@@?"`
	EndPos Mark
}

// Let: let eta = alpha + slope * dose
type Let struct {
	Pos    Mark
	Name   *Name `parser:"'let' @@ '='"`
	Value  Expr  `parser:"@@"`
	EndPos Mark
}

// Observe: observe y as Binomial(n, p), or one of the two sentences.
type Observe struct {
	Pos    Mark
	What   Expr        `parser:"'observe' @@"`
	Of     Expr        `parser:"( 'of' @@ 'with' 'probability'"`
	Prob   Expr        `parser:"  @@"`
	In     Expr        `parser:"| 'in' @@ 'at' 'rate'"`
	Rate   Expr        `parser:"  @@"`
	Dist   *Dist       `parser:"| 'as' @@ )"`
	Mods   []*Modifier `parser:"( ',' @@ )*"`
	EndPos Mark
}

// Modifier follows a comma after an observation, a prior or a varying effect.
// Exactly one field beside the marks is set.
type Modifier struct {
	Pos       Mark
	Right     Expr      `parser:"  'right' '-' 'censored' 'where' @@"`
	Left      Expr      `parser:"| 'left' '-' 'censored' 'where' @@"`
	Truncated *Interval `parser:"| 'truncated' 'to' @@"`
	Weighted  Expr      `parser:"| 'weighted' 'by' @@"`
	Only      Expr      `parser:"| 'only' 'where' @@"`
	EndPos    Mark
}

// Prior: prior p as Beta(0, 0) because "…" from "…"
type Prior struct {
	Pos    Mark
	Spec   *PriorSpec `parser:"'prior' @@"`
	Reason Reason     `parser:"@@?"`
	EndPos Mark
}

// PriorSpec is a target and what is said of it. Exactly one of Dist, Flat,
// Kernel, Rule is set. A joint target is a Tuple.
type PriorSpec struct {
	Pos    Mark
	Target Expr        `parser:"@@"`
	Dist   *Dist       `parser:"( 'as' @@"`
	Mods   []*Modifier `parser:"    ( ',' @@ )*"`
	Flat   bool        `parser:"| @'flat'"`
	Kernel Expr        `parser:"| ( '∝' | 'proportional' 'to' ) @@"`
	Rule   *PriorRule  `parser:"| @@ )"`
	EndPos Mark
}

// PriorRule is a default prior named by the rule that derives it.
type PriorRule struct {
	Pos         Mark
	Jeffreys    bool   `parser:"( @( 'jeffreys' | 'Jeffreys' )"`
	Sense       string `parser:"    @( 'jointly' | 'separately' )?"`
	Reference   []Expr `parser:"| 'reference' @@ ( 'before' @@ )*"`
	Matching    bool   `parser:"| @'matching'"`
	Constrained Expr   `parser:"| 'constrained' 'to' 'mean' @@"`
	MaxInfo     bool   `parser:"| @( 'maximal' '-' 'data' '-' 'information' ) )"`
	EndPos      Mark
}

// Rival: rival "sceptical": p as Beta(2, 20); q as Beta(2, 20)
type Rival struct {
	Pos    Mark
	Name   *Text        `parser:"'rival' @@ ':'?"`
	Specs  []*PriorSpec `parser:"@@ ( ';' @@ )*"`
	Reason Reason       `parser:"@@?"`
	EndPos Mark
}

// Rivals: rivals for p: standard
type Rivals struct {
	Pos    Mark
	For    []*Name `parser:"'rivals' 'for' @@ ( ',' @@ )* ':' 'standard'"`
	EndPos Mark
}

// Report: report odds = p / (1 - p), central 95%
type Report struct {
	Pos       Mark
	Name      *Name           `parser:"'report' ( (?= Ident '=') @@ '=' )?"`
	Value     Expr            `parser:"@@"`
	Summaries []*ReportedForm `parser:"( ',' @@ )*"`
	EndPos    Mark
}

// ReportedForm is an interval with its levels, or a point summary.
type ReportedForm struct {
	Pos    Mark
	Kind   string   `parser:"( @( 'central' | 'shortest' | 'upper' | 'lower' )"`
	Levels []*Share `parser:"    @@ ( ','? (?= Number) @@ )*"`
	Point  string   `parser:"| @( 'mean' | 'median' | 'sd' | 'variance' ) )"`
	EndPos Mark
}

// Conclude: conclude "meets 0.05" when P(p < 0.05) >= 0.95
type Conclude struct {
	Pos    Mark
	Name   *Text `parser:"'conclude' @@ 'when'"`
	When   Expr  `parser:"@@"`
	EndPos Mark
}

// Await: await y
type Await struct {
	Pos    Mark
	Names  []*Name `parser:"'await' @@ ( ',' @@ )*"`
	EndPos Mark
}

// Suppose: suppose p in 0.01, 0.02; suppose p from 0.01 to 0.2; suppose p as
// Beta(2, 60). A joint target is a Tuple, its values Tuples.
type Suppose struct {
	Pos    Mark
	Target Expr   `parser:"'suppose' @@"`
	Values []Expr `parser:"( ( 'in' | '=' ) @@ ( ',' @@ )*"`
	From   Expr   `parser:"| 'from' @@"`
	To     Expr   `parser:"    'to' @@"`
	Dist   *Dist  `parser:"| 'as' @@ )"`
	Reason Reason `parser:"@@?"`
	EndPos Mark
}

// Require is a promise. Exactly one of the fields beside the marks is set.
type Require struct {
	Pos      Mark
	Every    bool             `parser:"'require' ( @( 'a' 'posterior' 'for' 'every' 'outcome' )"`
	With     *PosteriorChance `parser:"| @@"`
	Coverage *Coverage        `parser:"| @@"`
	Chance   *Chance          `parser:"| @@"`
	Agree    *Agree           `parser:"| @@ )"`
	EndPos   Mark
}

// PosteriorChance: a posterior with probability >= 99.9%
type PosteriorChance struct {
	Pos    Mark
	Least  *Share `parser:"'a' 'posterior' 'with' 'probability' '>=' @@"`
	EndPos Mark
}

// Coverage: long-run coverage of p: lowest >= 88%, average >= 94%, p from 0.01 to 0.2
type Coverage struct {
	Pos    Mark
	Of     *Name           `parser:"'long' '-' 'run' 'coverage' 'of' @@ ':'"`
	Parts  []*CoveragePart `parser:"@@ ( ',' @@ )*"`
	EndPos Mark
}

// CoveragePart is a bound on the lowest or the average, or a range.
type CoveragePart struct {
	Pos     Mark
	Which   string `parser:"( @( 'lowest' | 'average' )"`
	Least   *Share `parser:"    '>=' @@"`
	Unknown *Name  `parser:"| @@"`
	From    Expr   `parser:"    'from' @@"`
	To      Expr   `parser:"    'to' @@ )"`
	EndPos  Mark
}

// Chance: chance of "meets 0.05" <= 5% when p = 0.05
type Chance struct {
	Pos    Mark
	Of     *Text      `parser:"'chance' 'of' @@"`
	Op     string     `parser:"@( '<=' | '>=' )"`
	Bound  *Share     `parser:"@@"`
	When   []*Binding `parser:"'when' @@ ( 'and' @@ )*"`
	EndPos Mark
}

// Agree: rivals agree on odds within 10%
type Agree struct {
	Pos    Mark
	On     *Name  `parser:"'rivals' 'agree' 'on' @@"`
	Within *Share `parser:"'within' @@"`
	EndPos Mark
}

// Accept: accept flat-on-unbounded for mu because "…" by "…" until 2027-06-30
type Accept struct {
	Pos     Mark
	Rule    *Words   `parser:"'accept' @@"`
	For     *Subject `parser:"( 'for' @@ )?"`
	Because *Text    `parser:"( 'because' @@ )?"`
	By      *Text    `parser:"( 'by' @@ )?"`
	Until   *Date    `parser:"( 'until' @@ )?"`
	EndPos  Mark
}

// Override: as Accept, for findings that can't be accepted away.
type Override struct {
	Pos     Mark
	Rule    *Words   `parser:"'override' @@"`
	For     *Subject `parser:"( 'for' @@ )?"`
	Because *Text    `parser:"( 'because' @@ )?"`
	By      *Text    `parser:"( 'by' @@ )?"`
	Until   *Date    `parser:"( 'until' @@ )?"`
	EndPos  Mark
}

// Subject is what an acceptance is for: a name, or a conclusion's quoted text.
type Subject struct {
	Pos    Mark
	Name   *Name `parser:"  @@"`
	Text   *Text `parser:"| @@"`
	EndPos Mark
}

// Date is a calendar day, 2027-06-30.
type Date struct {
	Pos    Mark
	Parts  []string `parser:"@Number '-' @Number '-' @Number"`
	EndPos Mark
}

func (*Title) statement()    {}
func (*Note) statement()     {}
func (*Field) statement()    {}
func (*Matters) statement()  {}
func (*Given) statement()    {}
func (*Table) statement()    {}
func (*Unknown) statement()  {}
func (*Vary) statement()     {}
func (*Let) statement()      {}
func (*Observe) statement()  {}
func (*Prior) statement()    {}
func (*Rival) statement()    {}
func (*Rivals) statement()   {}
func (*Report) statement()   {}
func (*Conclude) statement() {}
func (*Await) statement()    {}
func (*Suppose) statement()  {}
func (*Require) statement()  {}
func (*Accept) statement()   {}
func (*Override) statement() {}
