package model

import (
	"errors"
	"fmt"
	"math/big"

	"wellposed/parser/diag"
)

// parameters checks the parameters of a distribution that are known numbers.
// Improper kernels, such as Beta(0, 0), are legal: they are what many priors
// are, and the checks say what they do.
func (b *builder) parameters(d *Dist, rows []int) {
	if d == nil {
		return
	}
	for _, p := range d.Parts {
		b.parameters(p.Dist, rows)
	}
	for _, p := range d.Spec.Forms[d.Form] {
		e := d.Args[p.Label]
		if e == nil || !Known(e) {
			continue
		}
		for _, row := range rows {
			x, err := EvalExact(e, row)
			if err != nil {
				break
			}
			if what := parameterFault(d.Spec.Name, p.Label, x); what != "" {
				f := b.stop(ParameterOutside, place(e, d.Span), "%s has %s = %s; it must be %s.", d.Spec.Name, p.Label, decimalText(x), what)
				if c, ok := e.(*ColumnRef); ok {
					f.Related = append(f.Related, cell(c.Column, row, b.m.File.Path, "this value"))
				}
				break
			}
		}
	}
	if d.Spec.Name == "Uniform" || d.Spec.Name == "discrete-Uniform" {
		low, err1 := EvalExact(d.Args["low"], rows[0])
		high, err2 := EvalExact(d.Args["high"], rows[0])
		if err1 == nil && err2 == nil && low.Cmp(high) >= 0 && (d.Spec.Name == "Uniform" || low.Cmp(high) > 0) {
			b.stop(ParameterOutside, d.Span, "The lower end %s is not below the upper end %s.", decimalText(low), decimalText(high))
		}
	}
}

// parameterFault says what a parameter must be, or "" when it is that.
func parameterFault(law, label string, x *big.Rat) string {
	switch label {
	case "sd", "variance", "precision", "log sd":
		if x.Sign() <= 0 {
			return "positive"
		}
	case "scale":
		if x.Sign() < 0 || x.Sign() == 0 && law != "inverse-Gamma" && law != "Wishart" && law != "inverse-Wishart" && law != "Gamma" {
			return "positive"
		}
	case "trials", "population", "marked", "drawn":
		if x.Sign() < 0 || !x.IsInt() {
			return "a whole number, 0 or more"
		}
	case "probability":
		if x.Sign() < 0 || x.Cmp(big.NewRat(1, 1)) > 0 {
			return "between 0 and 1"
		}
	case "first":
		if x.Sign() != 0 && !isOne(x) {
			return "0 or 1"
		}
	case "degrees":
		if x.Sign() <= 0 && (law == "Student-t" || law == "half-Student-t") {
			return "positive"
		}
	case "minimum":
		if x.Sign() <= 0 {
			return "positive"
		}
	case "coefficient":
		if new(big.Rat).Abs(x).Cmp(big.NewRat(1, 1)) >= 0 {
			return "between −1 and 1"
		}
	case "mean":
		if x.Sign() < 0 && (law == "Poisson" || law == "negative-Binomial" || law == "Exponential" || law == "inverse-Gaussian") {
			return "0 or more"
		}
	}
	return ""
}

// Laws of which every value must be a count, and of which it must be positive.
var (
	countLaws = map[string]bool{
		"Binomial": true, "beta-Binomial": true, "geometric": true, "negative-Binomial": true, "hypergeometric": true,
		"Poisson": true, "Multinomial": true, "discrete-Uniform": true, "Bernoulli": true,
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
)

// sentinels are values that often stand for "missing" (common practice).
var sentinels = map[string]bool{"-9": true, "-99": true, "-999": true, "-9999": true, "99": true, "999": true, "9999": true, "-1": true}

// support finds the rows whose value the likelihood cannot produce.
func (b *builder) support(o *Observation) {
	var bad []missingCell
	var why, value string
	total := 0
	report := func(e Expr, row int, x *big.Rat, reason string) {
		total++
		if total == 1 {
			why, value = reason, decimalText(x)
		}
		if c, ok := e.(*ColumnRef); ok && len(bad) < 3 {
			bad = append(bad, missingCell{c.Column, row})
		}
	}
	for _, row := range o.Rows {
		sum := new(big.Rat)
		summed := true
		for _, e := range o.values() {
			x, err := EvalExact(e, row)
			if err != nil {
				summed = false
				var gone *MissingError
				if !errors.As(err, &gone) && !errors.Is(err, ErrInexact) && o.numeric() {
					b.stop(OutsideSupport, o.WhatSpan, "What is observed is no number in row %d: %v.", row+1, err)
					return
				}
				continue
			}
			sum.Add(sum, x)
			if reason := o.impossible(x, row); reason != "" {
				report(e, row, x, reason)
			}
		}
		if o.Dist.Spec.Name == "Multinomial" && summed && len(o.What) > 1 {
			if n, err := EvalExact(o.Dist.Args["trials"], row); err == nil && n.Cmp(sum) != 0 {
				report(nil, row, sum, "the counts must add up to "+decimalText(n)+" trials")
			}
		}
		if o.Reading == Between {
			low, err1 := EvalExact(o.Low, row)
			high, err2 := EvalExact(o.High, row)
			if err1 == nil && err2 == nil && low.Cmp(high) >= 0 {
				report(o.Low, row, low, "the lower limit must be below the upper one")
			}
		}
		if o.Reading == Summary {
			if x, err := EvalExact(o.SD, row); err == nil && x.Sign() < 0 {
				report(o.SD, row, x, "a standard deviation is not negative")
			}
			if x, err := EvalExact(o.N, row); err == nil && (x.Sign() <= 0 || !x.IsInt()) {
				report(o.N, row, x, "the number of readings is a whole number above 0")
			}
		}
	}
	if total == 0 {
		return
	}
	rows := "One value can"
	if total > 1 {
		rows = fmt.Sprintf("%d values can", total)
	}
	f := b.stop(OutsideSupport, o.WhatSpan, "%s't come from %s: %s is seen, but %s.", rows, o.Dist.Spec.Name, value, why)
	if sentinels[value] {
		f.Notes = append(f.Notes, fmt.Sprintf("%s often stands for \"missing\" (common practice); write NA there, or `only where …`.", value))
	}
	for i, c := range bad {
		message := "and here"
		if i == 0 {
			message = "the first such value"
		}
		f.Related = append(f.Related, cell(c.column, c.row, b.m.File.Path, message))
	}
	f.Evidence = append(f.Evidence, diag.Evidence{Name: "values outside the support", Text: fmt.Sprint(total), Value: float64(total), How: diag.Proved, Method: "row by row, exactly"})
}

// values are the expressions whose values the law must be able to produce.
func (o *Observation) values() []Expr {
	if o.Reading == Values {
		return o.What
	}
	return nil
}

// numeric reports whether the law produces numbers, not levels.
func (o *Observation) numeric() bool {
	switch o.Dist.Spec.Name {
	case "categorical", "cumulative-logit", "cumulative-probit", "multinomial-logit", "Point", "Mixture":
		return false
	}
	return true
}

// impossible says why the law can't produce a value in a row, or "".
func (o *Observation) impossible(x *big.Rat, row int) string {
	law := o.Dist.Spec.Name
	arg := func(label string) *big.Rat {
		e := o.Dist.Args[label]
		if e == nil || !Known(e) {
			return nil
		}
		v, err := EvalExact(e, row)
		if err != nil {
			return nil
		}
		return v
	}
	if countLaws[law] && law != "discrete-Uniform" {
		if !x.IsInt() || x.Sign() < 0 {
			return "a count is a whole number, 0 or more"
		}
	}
	switch law {
	case "Bernoulli":
		if x.Cmp(big.NewRat(1, 1)) > 0 {
			return "it must be 0 or 1"
		}
	case "Binomial", "beta-Binomial", "Multinomial":
		if n := arg("trials"); n != nil && x.Cmp(n) > 0 {
			return "there are only " + decimalText(n) + " trials"
		}
	case "hypergeometric":
		for _, label := range []string{"marked", "drawn"} {
			if n := arg(label); n != nil && x.Cmp(n) > 0 {
				return "only " + decimalText(n) + " are " + label
			}
		}
	case "geometric":
		if n := arg("first"); n != nil && x.Cmp(n) < 0 {
			return "the smallest value is " + decimalText(n)
		}
	case "Beta":
		if x.Sign() < 0 || x.Cmp(big.NewRat(1, 1)) > 0 {
			return "a proportion lies between 0 and 1"
		}
	}
	if positiveLaws[law] {
		from := arg("origin")
		if from == nil && o.Dist.Args["origin"] != nil {
			return ""
		}
		if from == nil {
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
	}
	return ""
}
