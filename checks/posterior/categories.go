package posterior

import (
	"math"

	"wellposed/checks/posterior/special"
	"wellposed/parser/model"
)

// special compiles laws of categories and of several values together.
func (c *compiler) special(o *model.Observation) []factor {
	if o.Right != nil || o.Left != nil || o.Truncated != nil || o.Reading != model.Values {
		refuse("limits on %s", o.Dist.Spec.Name)
	}
	var out []factor
	for _, row := range o.Rows {
		w := 1.0
		if o.Weight != nil {
			w = float(o.Weight, row)
		}
		out = append(out, c.touching(func() fn {
			one := c.category(o, row)
			return func(s *state) float64 { return w * one(s) }
		}))
	}
	return out
}

// category is the log-likelihood of one row of categories.
func (c *compiler) category(o *model.Observation, row int) fn {
	d := o.Dist
	switch d.Spec.Name {
	case "Multinomial":
		p := c.vector(d.Arg("proportions"), row)
		var counts []float64
		for _, e := range o.What {
			if v, ok := e.(*model.ColumnRef); ok && len(o.What) == 1 {
				counts = append(counts, v.Column.Floats...)
				continue
			}
			counts = append(counts, float(e, row))
		}
		if len(counts) != len(p) {
			refuse("%d counts for %d proportions", len(counts), len(p))
		}
		return func(s *state) float64 {
			t := 0.0
			for i := range p {
				t += product(counts[i], p[i].log(s))
			}
			return t
		}
	case "categorical":
		p := c.vector(d.Arg("proportions"), row)
		k := c.level(o, row, len(p))
		return func(s *state) float64 { return p[k].log(s) }
	case "multinomial-logit":
		p := c.vector(d.Arg("predictors"), row)
		k := c.level(o, row, len(p))
		return func(s *state) float64 {
			total := -inf
			for i := range p {
				total = special.LogSum(total, p[i].value(s))
			}
			return p[k].value(s) - total
		}
	case "cumulative-logit", "cumulative-probit":
		eta, cuts := c.compile(d.Arg("predictor"), row).value, c.vector(d.Arg("cutpoints"), row)
		k := c.level(o, row, len(cuts)+1)
		link := standardLogistic
		if d.Spec.Name == "cumulative-probit" {
			link = standardNormal
		}
		l := law{tails: func(s *state, y val) (float64, float64) { return link.tails(s, y.v) }}
		return func(s *state) float64 {
			e := eta(s)
			switch {
			case k == 0:
				v, _ := link.tails(s, cuts[0].value(s)-e)
				return v
			case k == len(cuts):
				_, v := link.tails(s, cuts[k-1].value(s)-e)
				return v
			}
			return between(&l, s, val{v: cuts[k-1].value(s) - e}, val{v: cuts[k].value(s) - e})
		}
	}
	refuse("the law %s is not computed here", d.Spec.Name)
	return nil
}

// level is the category observed in a row, from 0.
func (c *compiler) level(o *model.Observation, row, count int) int {
	if len(o.What) != 1 {
		refuse("several values of one category")
	}
	if col, ok := o.What[0].(*model.ColumnRef); ok && !col.Column.Numeric {
		for i, l := range col.Column.Levels {
			if l == col.Column.Texts[row] {
				return i
			}
		}
	}
	v := float(o.What[0], row)
	if v != math.Floor(v) || v < 1 || int(v) > count {
		refuse("category %v of %d", v, count)
	}
	return int(v) - 1
}
