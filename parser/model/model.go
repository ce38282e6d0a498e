// Package model is the typed model: names resolved, kinds and shapes known,
// data tables read, every literal an exact rational. It is what the checks see.
//
// A Model is immutable once built. Problems that were met while reading stay in
// Problems; whatever could be understood is there nevertheless.
package model

import (
	"math/big"

	"wellposed/grammar"
	"wellposed/parser/diag"
	"wellposed/parser/source"
)

// Model is one model file with its data.
type Model struct {
	File *source.File
	Tree *grammar.File

	Title string
	Notes []string
	Field string
	// Matters is the share of the reference interval's width above which a
	// shift counts; 1/10 when the file does not say.
	Matters *big.Rat

	Givens       []*Given
	Tables       []*Table
	Unknowns     []*Unknown
	Lets         []*Let
	Observations []*Observation
	Populations  []*Population
	// Priors are the declared priors. An unknown with a population model has
	// none of its own.
	Priors      []*Prior
	Rivals      []*Rival
	Standard    []*Unknown // those with `rivals for … : standard`
	Reports     []*Report
	Conclusions []*Conclusion
	Awaited     []*Awaited
	Supposed    []*Supposed
	Promises    []*Promise
	Acceptances []*Acceptance

	// Problems are findings of reading: syntax, names, shapes, data.
	Problems []diag.Finding
	// Uses are all places where a name is declared or used, in source order.
	Uses []Use
}

// Bounds of a support. Nil means the end is infinite.
type Bounds struct {
	Low, High         *big.Rat
	LowOpen, HighOpen bool
}

// Unknown is a declared unknown, with one component or many.
type Unknown struct {
	Name     string
	Kind     *grammar.KindSpec
	Label    string
	Span     source.Span // of the name
	StmtSpan source.Span

	// Support of each component: that of the kind, narrowed by `in` and
	// `limited to`.
	Support Bounds
	// Limit is set when the support was narrowed by `limited to`.
	Limit *Limit

	// Size is the declared size of proportions(k), covariance(k), cutpoints(k);
	// otherwise 0.
	Size int
	// Per are the columns whose combinations of levels make components.
	Per []*Column
	// Either is set when a component is made for each level that occurs in any
	// of the Per columns.
	Either bool
	// For are the columns of `unknown beta for (…)`: one component each.
	For []*Column
	// Levels labels the components: levels (joined with " / "), columns, or
	// numbers from 1. A scalar has one component labelled "".
	Levels []string
	// Relative is the component that is fixed at zero, or -1.
	Relative int

	// Population is set for a varying effect.
	Population *Population
	Reason     Reason

	componentOf map[string]int // the component of each label
	// lost is set when the columns of its components could not be found.
	lost bool
}

// Limit is `limited to x >= 0 by nature`.
type Limit struct {
	Span   source.Span
	Nature bool
}

// Scalar reports whether the unknown is a single number.
func (u *Unknown) Scalar() bool { return u.Size == 0 && len(u.Per) == 0 && len(u.For) == 0 }

// Components is the number of components, the one fixed at zero included.
func (u *Unknown) Components() int { return len(u.Levels) }

// Reason is why a choice was made and where that is written.
type Reason struct {
	Because, From string
	Span          source.Span
}

// Given is a known number.
type Given struct {
	Name  string
	Span  source.Span
	Value *big.Rat // nil when it could not be evaluated, or is awaited
	// Vector is set instead of Value for a list; it is a column without table.
	Vector  *Column
	Awaited bool
}

// Let is a named expression.
type Let struct {
	Name  string
	Span  source.Span
	Value Expr
	// Table is the table over whose rows it runs, nil when it has one value.
	Table *Table

	terms int // parts of Value, definitions put in
}

// Observation is a likelihood factor: every row contributes one term.
type Observation struct {
	Span source.Span // of the statement
	// What is observed, one expression for each value that the law produces.
	What     []Expr
	WhatSpan source.Span
	// Reading is Values, Between or Summary.
	Reading Reading
	// Low and High for Between; N, Mean, SD for Summary.
	Low, High   Expr
	N, Mean, SD Expr
	Dist        *Dist
	// Table gives the rows; nil for given numbers and vectors.
	Table *Table
	// Rows are the indices of the rows used, in order; a statement without
	// columns has the one row 0.
	Rows []int
	// Right and Left are the conditions of censoring, nil when there is none.
	Right, Left Expr
	// Truncated is nil or the ends of the truncation (nil ends are infinite).
	Truncated *Range
	// Weight is nil or the weight of each row.
	Weight Expr
	// Awaited is set when some observed value is not there yet.
	Awaited bool
}

// Reading is how values were recorded.
type Reading int

const (
	// Values are exact readings, unless censored.
	Values Reading = iota
	// Between are interval-censored readings.
	Between
	// Summary is n, mean and sd.
	Summary
)

// Range is an interval whose ends are expressions; a nil end is infinite.
type Range struct {
	Span              source.Span
	Low, High         Expr
	LowOpen, HighOpen bool
}

// Population is the population model of a varying effect.
type Population struct {
	Span      source.Span
	Unknown   *Unknown
	Dist      *Dist
	Truncated *Range
	Reason    Reason
}

// Dist is a distribution with its arguments in place.
type Dist struct {
	Span source.Span
	Spec *grammar.Distribution
	// Form is the index into Spec.Forms of the parametrisation that was used.
	Form int
	// Args holds the arguments by label. A vector argument made of several
	// positional ones (Dirichlet) is a Vector expression.
	Args map[string]Expr
	// Parts are the parts of a Mixture.
	Parts []Part
}

// Arg returns the argument with that label, nil when absent.
func (d *Dist) Arg(label string) Expr { return d.Args[label] }

// Part is one part of a mixture. Exactly the written weight is kept.
type Part struct {
	Weight Expr
	Dist   *Dist
}

// PriorForm says how a prior was stated.
type PriorForm int

const (
	// ByDist: as Normal(0, sd = 10).
	ByDist PriorForm = iota
	// ByFlat: flat on the target.
	ByFlat
	// ByKernel: ∝ expression.
	ByKernel
	// ByRule: named by the rule that derives it.
	ByRule
)

// Prior is one prior statement, a part of a rival, or a standard choice.
type Prior struct {
	Span source.Span // of the statement or the part
	// TargetSpan is the span of the target, FormSpan of what follows it up to
	// the reasons: what a fix replaces.
	TargetSpan, FormSpan source.Span
	// About are the unknowns whose law it states. An unknown with components
	// gets the law on each component, independently.
	About []*Unknown
	// Joint is set when the target was written as a tuple.
	Joint bool
	// Target is the expression that the law is stated on: an UnknownRef, a
	// transform of one unknown, a function of several, or a Vector for a tuple.
	Target Expr

	Form      PriorForm
	Dist      *Dist
	Truncated *Range
	Kernel    Expr
	Rule      *RulePrior
	Reason    Reason
	// Text is the statement without keyword and reasons, in canonical form.
	Text string
}

// RuleName names a rule that derives a prior.
type RuleName string

// The rules that derive priors.
const (
	Jeffreys           RuleName = "jeffreys"
	JeffreysJointly    RuleName = "jeffreys jointly"
	JeffreysSeparately RuleName = "jeffreys separately"
	ReferencePrior     RuleName = "reference"
	MatchingPrior      RuleName = "matching"
	ConstrainedMean    RuleName = "constrained to mean"
	MaximalData        RuleName = "maximal-data-information"
)

// RulePrior is a prior given by its rule.
type RulePrior struct {
	Name RuleName
	// Order holds the groups of a reference prior, most interesting first.
	Order [][]*Unknown
	// Mean of a constrained prior.
	Mean Expr
	// LogKernel is the logarithm of the derived kernel up to a constant, where
	// it cannot be written in the language; checks/objective sets it. Its
	// arguments are the components of the prior's About, in order.
	LogKernel func(x []float64) float64
}

// Rival is a named alternative.
type Rival struct {
	Name   string
	Span   source.Span
	Priors []*Prior
	Reason Reason
}

// IntervalKind is central, shortest, upper or lower.
type IntervalKind string

// Interval kinds. Upper is an upper bound (0 to the quantile), lower a lower one.
const (
	Central  IntervalKind = "central"
	Shortest IntervalKind = "shortest"
	Upper    IntervalKind = "upper"
	Lower    IntervalKind = "lower"
)

// Asked is one interval that a report asks for.
type Asked struct {
	Kind  IntervalKind
	Level *big.Rat
	// Default is set when the file did not ask and central 95 % is meant.
	Default bool
}

// Report is a reported quantity.
type Report struct {
	// Name as given, or the expression's text.
	Name      string
	Span      source.Span
	ValueSpan source.Span
	Value     Expr
	Intervals []Asked
	// Points are the asked point summaries: mean, median, sd, variance.
	Points []string
}

// Conclusion is `conclude NAME when P(event) >= threshold`.
type Conclusion struct {
	Name string
	Span source.Span
	// Event is a condition on unknowns; the conclusion is drawn when its
	// posterior probability compares by Op (">=", ">", "<=", "<") with Threshold.
	Event     Expr
	Op        string
	Threshold *big.Rat
	// More holds further clauses that must hold too (joined by `and`).
	More []Clause
}

// Clause is a further clause of a conclusion.
type Clause struct {
	Event     Expr
	Op        string
	Threshold *big.Rat
}

// Awaited is a name whose value is not there yet.
type Awaited struct {
	Name   string
	Span   source.Span
	Given  *Given  // one of the two
	Column *Column //
}

// Supposed are planning values.
type Supposed struct {
	Span     source.Span
	Unknowns []*Unknown
	// Points are value tuples; or From and To a range; or Dist a planning prior.
	Points   [][]*big.Rat
	From, To *big.Rat
	Dist     *Dist
	Reason   Reason
}

// PromiseKind says what a promise is about.
type PromiseKind int

// Kinds of promises.
const (
	EveryOutcome PromiseKind = iota
	PosteriorChance
	LongRunCoverage
	ConclusionChance
	RivalsAgree
)

// Promise is a `require` statement.
type Promise struct {
	Span source.Span
	Kind PromiseKind
	// Bound: the least chance, the limit on a conclusion's chance, or the share
	// within which rivals agree. Op is ">=" or "<=".
	Bound *big.Rat
	Op    string
	// Lowest and Average bound the coverage; nil when not promised.
	Lowest, Average *big.Rat
	Report          *Report
	Conclusion      *Conclusion
	// Over is the range of the unknown for coverage.
	Over     *Unknown
	From, To *big.Rat
	// At fixes unknowns for a conclusion's chance.
	At []Setting
}

// Setting is unknown = value.
type Setting struct {
	Unknown *Unknown
	Value   *big.Rat
}

// Acceptance is an `accept` or `override` statement.
type Acceptance struct {
	Span     source.Span
	Override bool
	Rule     string
	RuleSpan source.Span
	For      string
	Because  string
	By       string
	Until    string // 2027-06-30, or empty
}

// Use is a place where a name stands.
type Use struct {
	Span source.Span
	// Symbol is *Unknown, *Given, *Column, *Table, *Let, *Report, *Conclusion.
	Symbol     any
	Definition bool
}
