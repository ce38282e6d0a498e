package model

import (
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
	if d.Spec.Name == "Mixture" {
		b.mixtureWeights(d)
		return
	}
	for _, p := range d.Spec.Forms[d.Form] {
		e := d.Args[p.Label]
		if e == nil || !Known(e) {
			continue
		}
		if len(columnsOf(e)) == 0 && len(rows) > 1 {
			b.parameter(d, p.Label, e, rows[:1])
			continue
		}
		b.parameter(d, p.Label, e, rows)
	}
	switch d.Spec.Name {
	case "Uniform", "discrete-Uniform", "triangular":
		b.ends(d, rows)
	}
}

// parameter checks one known parameter in the rows used.
func (b *builder) parameter(d *Dist, label string, e Expr, rows []int) {
	for i, row := range rows {
		if i%4096 == 0 && b.ctx.Err() != nil {
			return
		}
		x, err := EvalExact(e, row)
		if err != nil {
			return
		}
		what := parameterFault(d.Spec.Name, label, x)
		if what == "" {
			continue
		}
		f := b.stop(ParameterOutside, place(e, d.Span), "%s has %s = %s; it must be %s.", d.Spec.Name, label, clip(decimalText(x)), what)
		if c, ok := e.(*ColumnRef); ok {
			f.Related = append(f.Related, cell(c.Column, row, b.m.File.Path, "this value"))
		}
		return
	}
}

// ends checks the ends of an interval law in every row.
func (b *builder) ends(d *Dist, rows []int) {
	arg := func(label string, row int) *big.Rat {
		e := d.Args[label]
		if e == nil || !Known(e) {
			return nil
		}
		x, err := EvalExact(e, row)
		if err != nil {
			return nil
		}
		return x
	}
	for _, row := range rows {
		low, mode, high := arg("low", row), arg("mode", row), arg("high", row)
		switch {
		case low != nil && high != nil && (low.Cmp(high) > 0 || low.Cmp(high) == 0 && d.Spec.Name != "discrete-Uniform"):
			b.stop(ParameterOutside, d.Span, "The lower end %s is not below the upper end %s.", decimalText(low), decimalText(high))
			return
		case mode != nil && (low != nil && mode.Cmp(low) < 0 || high != nil && mode.Cmp(high) > 0):
			b.stop(ParameterOutside, d.Span, "The mode %s does not lie between the ends.", decimalText(mode))
			return
		}
	}
}

// mixtureWeights checks weights that are all known numbers.
func (b *builder) mixtureWeights(d *Dist) {
	sum := new(big.Rat)
	for _, p := range d.Parts {
		if !Known(p.Weight) || len(columnsOf(p.Weight)) > 0 {
			return
		}
		x, err := EvalExact(p.Weight, 0)
		if err != nil {
			return
		}
		if x.Sign() < 0 {
			b.stop(ParameterOutside, place(p.Weight, d.Span), "The weight %s is below 0.", decimalText(x))
			return
		}
		sum.Add(sum, x)
	}
	if sum.Cmp(one) != 0 {
		f := b.problem(ParameterOutside, diag.Stop, d.Span, "The weights of the Mixture add up to "+decimalText(sum)+", not to 1.")
		f.Notes = append(f.Notes, "Weights are exact: a third is written 1/3.")
	}
}

// parameterFault says what a parameter must be, or "" when it is that.
func parameterFault(law, label string, x *big.Rat) string {
	switch label {
	case "sd", "variance", "log sd", "precision":
		if x.Sign() <= 0 {
			return "positive"
		}
	case "scale":
		// inverse-Gamma(0, 0) and its matrix forms are kernels in use.
		if x.Sign() < 0 || x.Sign() == 0 && law != "inverse-Gamma" && law != "inverse-Wishart" {
			return "positive"
		}
	case "rate":
		if x.Sign() < 0 {
			return "0 or more"
		}
	case "shape":
		if x.Sign() <= 0 && law == "Weibull" {
			return "positive"
		}
	case "trials", "population", "marked", "drawn":
		if x.Sign() < 0 || !x.IsInt() {
			return "a whole number, 0 or more"
		}
	case "probability":
		if x.Sign() < 0 || x.Cmp(one) > 0 {
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
	case "minimum", "median":
		if x.Sign() <= 0 {
			return "positive"
		}
	case "coefficient":
		if new(big.Rat).Abs(x).Cmp(one) >= 0 {
			return "between −1 and 1"
		}
	case "concentration":
		if x.Sign() < 0 {
			return "0 or more"
		}
	case "mean":
		switch law {
		case "Poisson", "negative-Binomial":
			if x.Sign() < 0 {
				return "0 or more"
			}
		case "Exponential", "inverse-Gaussian", "Gamma":
			if x.Sign() <= 0 {
				return "positive"
			}
		case "Beta", "beta-Binomial":
			if x.Sign() < 0 || x.Cmp(one) > 0 {
				return "between 0 and 1"
			}
		}
	}
	return ""
}
