package model

import (
	"math/big"

	"wellposed/parser/source"
)

// Expr is a resolved expression. It has one value, or one for each row of the
// observation or let that it belongs to.
type Expr interface{ Place() source.Span }

// Number is an exact literal.
type Number struct {
	Span  source.Span
	Value *big.Rat
}

// Constant is pi, inf or -inf.
type Constant struct {
	Span source.Span
	Name string
}

// Level is a quoted level.
type Level struct {
	Span source.Span
	Text string
}

// GivenRef is a known scalar.
type GivenRef struct {
	Span  source.Span
	Given *Given
}

// ColumnRef is the value of a column in the row at hand; also a given vector.
type ColumnRef struct {
	Span   source.Span
	Column *Column
}

// Which says which components of an unknown a reference means.
type Which int

const (
	// Whole is all components: a scalar's one, or the vector.
	Whole Which = iota
	// Fixed is one component.
	Fixed
	// ByRow is the component of the row at hand, found through the columns By.
	ByRow
)

// UnknownRef is an unknown or some of its components.
type UnknownRef struct {
	Span      source.Span
	Unknown   *Unknown
	Which     Which
	Component int       // for Fixed
	By        []*Column // for ByRow
}

// LetRef is a named expression.
type LetRef struct {
	Span source.Span
	Let  *Let
}

// Op is an operator: + - * / ^ neg == != < <= > >= and or not.
type Op struct {
	Span source.Span
	Op   string
	Args []Expr
}

// Call is a function of the grammar. linear(beta) keeps its UnknownRef. sum,
// mean, length, min and max of one argument run over all its items, components
// or rows, and have one value whatever the row at hand.
type Call struct {
	Span source.Span
	Func string
	Args []Expr

	memo *memo
}

// Vector is a tuple or a list.
type Vector struct {
	Span  source.Span
	Items []Expr
}

// Place returns where the expression stands.
func (e *Number) Place() source.Span     { return e.Span }
func (e *Constant) Place() source.Span   { return e.Span }
func (e *Level) Place() source.Span      { return e.Span }
func (e *GivenRef) Place() source.Span   { return e.Span }
func (e *ColumnRef) Place() source.Span  { return e.Span }
func (e *UnknownRef) Place() source.Span { return e.Span }
func (e *LetRef) Place() source.Span     { return e.Span }
func (e *Op) Place() source.Span         { return e.Span }
func (e *Call) Place() source.Span       { return e.Span }
func (e *Vector) Place() source.Span     { return e.Span }
