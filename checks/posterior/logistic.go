package posterior

import (
	"math"
	"slices"

	"wellposed/parser/model"
)

// logistic fuses the rows of a logistic regression into one loop, when the
// predictor is linear in the same unknowns in every row.
func (p *problem) logistic(list []factor, o *model.Observation) []factor {
	if len(list) < 8 || o.Reading != model.Values || o.Right != nil || o.Left != nil || o.Truncated != nil || len(o.What) != 1 {
		return list
	}
	e := o.Dist.Arg("probability")
	for {
		l, ok := e.(*model.LetRef)
		if !ok {
			break
		}
		e = l.Let.Value
	}
	call, ok := e.(*model.Call)
	if !ok || call.Func != "expit" || len(call.Args) != 1 {
		return list
	}
	predictor := call.Args[0]
	slots := list[0].slots
	in := map[int]bool{}
	for _, f := range list {
		if !slices.Equal(f.slots, slots) {
			return list
		}
	}
	for _, s := range slots {
		in[s] = true
	}
	d := len(slots)
	scratch := newState(len(p.vars))
	// Each row: successes, trials, offset and coefficients.
	rows := make([]float64, 0, len(o.Rows)*(3+d))
	for _, row := range o.Rows {
		bad := map[int]bool{}
		if p.linearity(predictor, row, in, bad); len(bad) > 0 {
			return list
		}
		w, trials := 1.0, 1.0
		if o.Weight != nil {
			w = float(o.Weight, row)
		}
		if o.Dist.Spec.Name == "Binomial" {
			if !model.Known(o.Dist.Arg("trials")) {
				return list
			}
			trials = float(o.Dist.Arg("trials"), row)
		}
		eta := p.compiler.compile(predictor, row).value
		for _, s := range slots {
			scratch.x[s] = 0
		}
		base := eta(scratch)
		rows = append(rows, w*float(o.What[0], row), w*trials, base)
		for _, s := range slots {
			scratch.x[s] = 1
			rows = append(rows, eta(scratch)-base)
			scratch.x[s] = 0
		}
	}
	x := make([]float64, d)
	return []factor{{slots: slots, weight: len(o.Rows) / 4, log: func(s *state) float64 {
		for j, i := range slots {
			x[j] = s.x[i]
		}
		total := 0.0
		for at := 0; at < len(rows); at += 3 + d {
			eta := rows[at+2]
			for j, c := range rows[at+3 : at+3+d] {
				eta += c * x[j]
			}
			a := math.Abs(eta)
			total += rows[at]*eta - rows[at+1]*(math.Max(eta, 0)+math.Log1p(math.Exp(-a)))
		}
		return total
	}}}
}
