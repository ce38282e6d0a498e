package model

import (
	"fmt"
	"math/big"

	"wellposed/parser/diag"
)

var one = big.NewRat(1, 1)

// Laws of which every value must be a count, and of which it must be positive.
var (
	countLaws = map[string]bool{
		"Binomial": true, "beta-Binomial": true, "geometric": true, "negative-Binomial": true, "hypergeometric": true,
		"Poisson": true, "Multinomial": true, "Bernoulli": true,
	}
	positiveLaws = map[string]bool{
		"log-Normal": true, "Exponential": true, "Gamma": true, "inverse-Gamma": true, "chi-square": true, "Weibull": true,
		"Pareto": true, "inverse-Gaussian": true, "generalized-Pareto": true, "half-Normal": true, "half-Cauchy": true, "half-Student-t": true,
	}
	// zeroAllowed have a density at 0 that is not always 0.
	zeroAllowed = map[string]bool{
		"Exponential": true, "Gamma": true, "Weibull": true, "chi-square": true, "generalized-Pareto": true,
		"half-Normal": true, "half-Cauchy": true, "half-Student-t": true,
	}
	// producesAll can produce every number.
	producesAll = map[string]bool{
		"Normal": true, "Student-t": true, "Cauchy": true, "Laplace": true, "logistic": true, "skew-Normal": true, "Gumbel": true,
		"generalized-extreme-value": true, "von-Mises": true, "AR1": true, "multivariate-Normal": true,
	}
	// categoryLaws produce the categories 1, 2, … up to a number that the model
	// gives.
	categoryLaws = map[string]bool{"categorical": true, "cumulative-logit": true, "cumulative-probit": true, "multinomial-logit": true}
)

// sentinels are values that often stand for "missing" (common practice).
var sentinels = map[string]bool{"-9": true, "-99": true, "-999": true, "-9999": true, "99": true, "999": true, "9999": true, "-1": true, "-88": true, "-77": true, "88": true, "77": true}

// shownRows is how many rows a finding points at.
const shownRows = 3

// judge collects the values that a likelihood can't produce.
type judge struct {
	b     *builder
	o     *Observation
	cells []missingCell
	// why and value are of the first one.
	why, value string
	total      int
	// coded counts the values that often stand for "missing".
	coded map[string]int
	order []string
}

func (j *judge) reject(e Expr, row int, x *big.Rat, reason string) {
	text := decimalText(x)
	if j.total++; j.total == 1 {
		j.why, j.value = reason, text
	}
	if sentinels[text] {
		if j.coded[text] == 0 {
			j.order = append(j.order, text)
		}
		j.coded[text]++
	}
	if c, ok := e.(*ColumnRef); ok && len(j.cells) < shownRows {
		j.cells = append(j.cells, missingCell{c.Column, row})
	}
}

// support finds the rows whose value the likelihood cannot produce.
func (b *builder) support(o *Observation) {
	if o.Reading == Values && o.Truncated == nil && producesAll[o.Dist.Spec.Name] {
		return
	}
	j := &judge{b: b, o: o, coded: map[string]int{}}
	known := knownArgs(o.Dist)
	exposures := exposureOf(o)
	for i, row := range o.Rows {
		if i%4096 == 0 && b.ctx.Err() != nil {
			return
		}
		j.row(row, known, exposures)
	}
	if j.total == 0 {
		return
	}
	rows := "One value"
	if j.total > 1 {
		rows = counted(j.total, "value")
	}
	law := o.Dist.Spec.Name
	if o.Truncated != nil {
		law = "a truncated " + law
	}
	f := b.stop(OutsideSupport, o.WhatSpan, "%s can't come from %s: %s is seen, but %s.", rows, law, clip(j.value), j.why)
	for _, text := range j.order {
		f.Notes = append(f.Notes, fmt.Sprintf("%s, seen %s, often stands for \"missing\" (common practice); if it does here, write NA there.", text, times(j.coded[text])))
	}
	for i, c := range j.cells {
		message := "and here"
		if i == 0 {
			message = "the first such value"
		}
		f.Related = append(f.Related, cell(c.column, c.row, b.m.File.Path, message))
	}
	f.Evidence = append(f.Evidence, diag.Evidence{Name: "values outside the support", Text: fmt.Sprint(j.total), Value: float64(j.total), How: diag.Proved, Method: "row by row, exactly"})
}

func times(n int) string {
	if n == 1 {
		return "once"
	}
	return counted(n, "time")
}

// knownArgs are the arguments that depend on data only.
func knownArgs(d *Dist) map[string]Expr {
	out := map[string]Expr{}
	for label, e := range d.Args {
		if e != nil && Known(e) {
			out[label] = e
		}
	}
	return out
}

// exposureOf is the known factor of a Poisson mean rate × exposure; nil when the
// mean has another form, or the other factor may be negative.
func exposureOf(o *Observation) Expr {
	op, ok := o.Dist.Args["mean"].(*Op)
	if o.Dist.Spec.Name != "Poisson" || !ok || op.Op != "*" {
		return nil
	}
	for i, e := range op.Args {
		ref, ok := op.Args[1-i].(*UnknownRef)
		if ok && Known(e) && ref.Unknown.Support.Low != nil && ref.Unknown.Support.Low.Sign() >= 0 {
			return e
		}
	}
	return nil
}

// row judges one row.
func (j *judge) row(row int, known map[string]Expr, exposures Expr) {
	o := j.o
	arg := func(label string) *big.Rat {
		e := known[label]
		if e == nil {
			return nil
		}
		v, err := EvalExact(e, row)
		if err != nil {
			return nil
		}
		return v
	}
	switch o.Reading {
	case Between:
		low, err1 := EvalExact(o.Low, row)
		high, err2 := EvalExact(o.High, row)
		switch {
		case err1 != nil || err2 != nil:
		case low.Cmp(high) >= 0:
			j.reject(o.Low, row, low, "the lower limit must be below the upper one, "+decimalText(high))
		case positiveLaws[o.Dist.Spec.Name] && o.Dist.Args["origin"] == nil && high.Sign() <= 0:
			j.reject(o.High, row, high, "the whole interval lies below 0")
		}
		return
	case Summary:
		if x, err := EvalExact(o.SD, row); err == nil && x.Sign() < 0 {
			j.reject(o.SD, row, x, "a standard deviation is not negative")
		}
		if x, err := EvalExact(o.N, row); err == nil && (x.Sign() <= 0 || !x.IsInt()) {
			j.reject(o.N, row, x, "the number of readings is a whole number above 0")
		}
		return
	}
	sum, summed := new(big.Rat), true
	for _, e := range o.What {
		x, err := EvalExact(e, row)
		if err != nil {
			summed = false
			continue
		}
		sum.Add(sum, x)
		if reason := impossible(o.Dist, x, arg); reason != "" {
			j.reject(e, row, x, reason)
		} else if reason := o.cutOff(x, row); reason != "" {
			j.reject(e, row, x, reason)
		}
	}
	if o.Dist.Spec.Name == "Multinomial" && summed && len(o.What) > 1 {
		if n := arg("trials"); n != nil && n.Cmp(sum) != 0 {
			j.reject(nil, row, sum, "the counts must add up to "+decimalText(n)+" trials")
		}
	}
	if exposures != nil {
		if x, err := EvalExact(exposures, row); err == nil {
			if x.Sign() < 0 {
				j.reject(exposures, row, x, "an exposure is not negative")
			} else if x.Sign() == 0 && sum.Sign() > 0 {
				j.reject(o.What[0], row, sum, "its exposure is 0")
			}
		}
	}
}

// cutOff says why a truncation leaves no room for a value, or "". An end that
// is not included has no probability for a continuous law and belongs to the
// range of a count, so a value at an end passes.
func (o *Observation) cutOff(x *big.Rat, row int) string {
	if o.Truncated == nil {
		return ""
	}
	if e := o.Truncated.Low; e != nil {
		if low, err := EvalExact(e, row); err == nil && x.Cmp(low) < 0 {
			return "values below " + decimalText(low) + " are cut off"
		}
	}
	if e := o.Truncated.High; e != nil {
		if high, err := EvalExact(e, row); err == nil && x.Cmp(high) > 0 {
			return "values above " + decimalText(high) + " are cut off"
		}
	}
	return ""
}

// numeric reports whether the law produces numbers, not levels.
func (o *Observation) numeric() bool { return numericLaw(o.Dist) }

func numericLaw(d *Dist) bool {
	switch d.Spec.Name {
	case "categorical", "Point":
		return false
	case "Mixture":
		for _, p := range d.Parts {
			if numericLaw(p.Dist) {
				return true
			}
		}
		return false
	}
	return true
}

// categories is the number of categories that a law has, 0 when it is not known.
func categories(d *Dist) int {
	sized := func(label string) int {
		switch e := d.Args[label].(type) {
		case *UnknownRef:
			if e.Which == Whole {
				return e.Unknown.Size
			}
		case *Vector:
			return len(e.Items)
		}
		return 0
	}
	switch d.Spec.Name {
	case "categorical":
		return sized("proportions")
	case "cumulative-logit", "cumulative-probit":
		if n := sized("cutpoints"); n > 0 {
			return n + 1
		}
	case "multinomial-logit":
		if n := sized("predictors"); n > 1 {
			return n
		}
	}
	return 0
}

// impossible says why a law can't produce a value, or "". arg gives the known
// arguments of the law.
func impossible(d *Dist, x *big.Rat, arg func(label string) *big.Rat) string {
	law := d.Spec.Name
	if countLaws[law] && (!x.IsInt() || x.Sign() < 0) {
		return "a count is a whole number, 0 or more"
	}
	if categoryLaws[law] {
		if !x.IsInt() || x.Sign() <= 0 {
			return "categories are numbered 1, 2, …"
		}
		if n := categories(d); n > 0 && x.Cmp(big.NewRat(int64(n), 1)) > 0 {
			return fmt.Sprintf("there are only %d categories", n)
		}
	}
	switch law {
	case "Bernoulli":
		if x.Cmp(one) > 0 {
			return "it must be 0 or 1"
		}
	case "Binomial", "beta-Binomial", "Multinomial":
		if n := arg("trials"); n != nil && x.Cmp(n) > 0 {
			if isOne(n) {
				return "there is only 1 trial"
			}
			return "there are only " + decimalText(n) + " trials"
		}
	case "hypergeometric":
		for _, label := range []string{"marked", "drawn"} {
			if n := arg(label); n != nil && x.Cmp(n) > 0 {
				return "only " + decimalText(n) + " are " + label
			}
		}
		if n, k, m := arg("population"), arg("marked"), arg("drawn"); n != nil && k != nil && m != nil {
			rest := new(big.Rat).Sub(n, k) // the unmarked ones
			if least := new(big.Rat).Sub(m, rest); x.Cmp(least) < 0 {
				return "only " + decimalText(rest) + " are not marked, and " + decimalText(m) + " were drawn"
			}
		}
	case "geometric":
		if n := arg("first"); n != nil && x.Cmp(n) < 0 {
			return "the smallest value is " + decimalText(n)
		}
	case "Beta":
		if x.Sign() < 0 || x.Cmp(one) > 0 {
			return "a proportion lies between 0 and 1"
		}
	case "Cox":
		if x.Sign() < 0 {
			return "a time is not negative"
		}
	case "Uniform", "triangular", "discrete-Uniform":
		if law == "discrete-Uniform" && !x.IsInt() {
			return "it must be a whole number"
		}
		if low := arg("low"); low != nil && x.Cmp(low) < 0 {
			return "the lower end is " + decimalText(low)
		}
		if high := arg("high"); high != nil && x.Cmp(high) > 0 {
			return "the upper end is " + decimalText(high)
		}
	case "Mixture":
		return impossibleMixture(d, x)
	}
	if !positiveLaws[law] {
		return ""
	}
	from := arg("origin")
	if from == nil {
		if d.Args["origin"] != nil {
			return "" // an unknown origin
		}
		from = new(big.Rat)
	}
	if c := x.Cmp(from); c < 0 || c == 0 && !zeroAllowed[law] {
		if zeroAllowed[law] {
			return "it must not be below " + decimalText(from)
		}
		return "it must be above " + decimalText(from)
	}
	if law == "Pareto" {
		if m := arg("minimum"); m != nil && x.Cmp(m) < 0 {
			return "the minimum is " + decimalText(m)
		}
	}
	return ""
}

// impossibleMixture says why no part of a mixture can produce a value. Parts
// whose arguments are not plain numbers are taken to be able to.
func impossibleMixture(d *Dist, x *big.Rat) string {
	why := ""
	for _, p := range d.Parts {
		if p.Dist.Spec.Name == "Point" {
			v, ok := p.Dist.Args["value"].(*Number)
			if !ok || v.Value.Cmp(x) == 0 {
				return ""
			}
			continue
		}
		reason := impossible(p.Dist, x, func(label string) *big.Rat {
			if n, ok := p.Dist.Args[label].(*Number); ok {
				return n.Value
			}
			return nil
		})
		if reason == "" {
			return ""
		}
		if why == "" {
			why = "none of its parts gives it; " + reason
		}
	}
	return why
}
