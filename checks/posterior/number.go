// Package posterior computes what an analysis says: posterior summaries,
// probabilities of conclusions, and the laws that priors mean on reported
// scales. Every number carries how it was made and an error bound.
//
// Whether a posterior exists is not judged here. Callers ask once existence is
// established; otherwise an error comes back, or a number that means nothing.
//
// Numbers come, in this order, from closed forms, from quadrature over what is
// left when normal blocks are integrated exactly (at most four unknowns), and
// from importance sampling with a fixed seed and a printed standard error.
package posterior

import (
	"errors"
	"fmt"
	"math"

	"wellposed/checks/posterior/quad"
	"wellposed/parser/diag"
	"wellposed/parser/model"
)

// Number is a value with how it was made.
type Number struct {
	Value float64
	// Error bounds |Value − truth|; for sampling it is three standard errors.
	Error  float64
	How    diag.How
	Method string
}

// Text prints the digits that hold.
func (n Number) Text() string { return diag.Figure(n.Value, n.Error, 3) }

// Interval is one that was asked for. Upper bounds have Low at the lower end of
// the range, lower bounds High at the upper one.
type Interval struct {
	model.Asked
	Low, High Number
}

// Summary is the law of a reported quantity in short.
type Summary struct {
	// Analysis is the name of the analysis.
	Analysis string
	Report   *model.Report
	// Intervals are in the order asked for.
	Intervals []Interval
	Median    Number
	// Mean and SD are NaN where they do not exist or were not found.
	Mean, SD Number
	// Law names a closed form, "Beta(0.5, 40.5)"; empty for none.
	Law string
}

// ErrAwaited: the data are not there yet.
var ErrAwaited = errors.New("the data are still awaited")

// ErrNoPosterior: the density does not integrate, as far as quadrature can tell.
var ErrNoPosterior = errors.New("the density does not fall off, so there is no posterior to summarise")

// ErrNoPrior: an unknown has no prior in force.
var ErrNoPrior = errors.New("an unknown has no prior")

// ErrImproper: the law of an improper prior was asked for.
var ErrImproper = errors.New("the prior is improper, so it has no law on any scale")

// UnresolvedError says that a prior given by rule was not derived.
type UnresolvedError struct{ Prior *model.Prior }

func (e *UnresolvedError) Error() string {
	return fmt.Sprintf("the prior %q is given by a rule that could not be carried out", e.Prior.Text)
}

// ReachError says why a number is past what this package can compute.
type ReachError struct{ Reason string }

func (e *ReachError) Error() string { return "past reach: " + e.Reason }

func reach(format string, args ...any) error { return &ReachError{fmt.Sprintf(format, args...)} }

// translated turns an error of quadrature into one of this package.
func translated(err error) error {
	switch {
	case errors.Is(err, quad.ErrNotIntegrable):
		return fmt.Errorf("%w (%v)", ErrNoPosterior, err)
	case errors.Is(err, quad.ErrEmpty), errors.Is(err, quad.ErrUnresolved):
		return reach("%v", err)
	}
	return err
}

// refusal carries an error out of deep recursion; it never leaves the package.
type refusal struct{ err error }

func refuse(format string, args ...any) { panic(refusal{reach(format, args...)}) }

// catch turns a refusal, or a panic of a numerical library, into an error.
func catch(err *error) {
	switch r := recover().(type) {
	case nil:
	case refusal:
		*err = r.err
	case error:
		*err = reach("%v", r)
	default:
		*err = reach("%v", r)
	}
}

func nan() Number { return Number{Value: math.NaN(), How: diag.NotDecided} }

func isNoPosterior(err error) bool { return errors.Is(err, ErrNoPosterior) }

// holds compares a probability with a threshold.
func holds(x float64, op string, threshold interface{ Float64() (float64, bool) }) bool {
	t, _ := threshold.Float64()
	switch op {
	case ">=":
		return x >= t
	case ">":
		return x > t
	case "<=":
		return x <= t
	}
	return x < t
}
