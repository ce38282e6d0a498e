package model

import (
	"fmt"

	"wellposed/parser/diag"
	"wellposed/parser/source"
)

// Names of the problems of building a model.
const (
	NeverDeclared    = "name-never-declared"
	DeclaredTwice    = "name-declared-twice"
	Ambiguous        = "name-is-ambiguous"
	Shadows          = "name-shadows-function"
	PriorOnObserved  = "prior-on-observed"
	NoPrior          = "unknown-without-prior"
	TwoPriors        = "two-priors-on-one-unknown"
	SpreadUnnamed    = "spread-argument-unnamed"
	ArgumentUnnamed  = "argument-unnamed"
	ArgumentUnknown  = "argument-not-known"
	ArgumentMissing  = "argument-missing"
	KindUnknown      = "kind-not-known"
	LawUnknown       = "distribution-not-known"
	FunctionUnknown  = "function-not-known"
	NoColumn         = "column-not-in-table"
	TwoTables        = "columns-of-two-tables"
	RowsDiffer       = "rows-do-not-match"
	TableUnreadable  = "table-unreadable"
	ValueMissing     = "value-missing"
	OutsideSupport   = "observation-outside-support"
	NotALevel        = "index-not-a-level"
	ParameterOutside = "parameter-outside-support"
	DoesNotFit       = "expression-does-not-fit"
	TooLarge         = "model-too-large"
)

// ProblemDoc is one line about a problem of building.
type ProblemDoc struct{ Name, Doc string }

// ProblemDocs lists the problems of building a model.
var ProblemDocs = []ProblemDoc{
	{NeverDeclared, "A name is used that no given, table, unknown, vary or let declares."},
	{DeclaredTwice, "Two statements declare the same name."},
	{Ambiguous, "A bare name could mean two things, such as columns of two tables; write table.column."},
	{Shadows, "A declared name is that of a function, a distribution or a constant."},
	{PriorOnObserved, "A prior is stated on something that is known, not on an unknown."},
	{NoPrior, "An unknown has no prior, no population model and no rule; none is assumed silently."},
	{TwoPriors, "Two statements give one unknown a prior."},
	{SpreadUnnamed, "A spread is given without saying whether it is a standard deviation, a variance or a precision: three different analyses."},
	{ArgumentUnnamed, "An argument for which the field has rival conventions is given without its name."},
	{ArgumentUnknown, "A distribution has no argument of this name."},
	{ArgumentMissing, "A distribution lacks an argument, or its arguments fit none of its parametrisations."},
	{KindUnknown, "An unknown is declared with a kind that does not exist."},
	{LawUnknown, "There is no distribution of this name."},
	{FunctionUnknown, "There is no function of this name, or it takes another number of arguments."},
	{NoColumn, "A table has no column of this name."},
	{TwoTables, "One statement uses columns of two tables, whose rows have nothing to do with each other."},
	{RowsDiffer, "Vectors of one statement have different lengths."},
	{TableUnreadable, "A data table is missing, ragged, too large or no UTF-8 text."},
	{ValueMissing, "A model uses a value that is missing in the data."},
	{OutsideSupport, "The data hold a value that the likelihood cannot produce."},
	{NotALevel, "An index is no level of the unknown's columns."},
	{ParameterOutside, "A parameter has a value for which the distribution does not exist."},
	{DoesNotFit, "An expression has the wrong form for its place."},
	{TooLarge, "The model has more components than are examined."},
}

// problem records a finding.
func (b *builder) problem(rule string, severity diag.Severity, span source.Span, headline string, notes ...string) *diag.Finding {
	b.m.Problems = append(b.m.Problems, diag.Finding{
		Rule: rule, Severity: severity, Path: b.m.File.Path, Span: span, Headline: headline, Notes: notes,
	})
	return &b.m.Problems[len(b.m.Problems)-1]
}

// stop records a finding that ends the analysis.
func (b *builder) stop(rule string, span source.Span, format string, args ...any) *diag.Finding {
	return b.problem(rule, diag.Stop, span, fmt.Sprintf(format, args...))
}
