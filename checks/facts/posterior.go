package facts

import (
	"fmt"

	"wellposed/checks/posterior"
	"wellposed/parser/model"
)

// Summary is the posterior summary of a report, or why there is none.
type Summary struct {
	*posterior.Summary
	// Widths are, for each interval, the width that shifts of its ends are held
	// against: its own, and for a bound that of the central interval at its level
	// where that is shorter.
	Widths []posterior.Number
	Err    error
}

// Chance is the posterior probability of a conclusion's first clause, and
// whether the conclusion is drawn, or why neither is known.
type Chance struct {
	posterior.Number
	Drawn bool
	Err   error
}

// Law is the law of a quantity, or why there is none.
type Law struct {
	*posterior.Law
	Err error
}

// existing is an error when the unknowns of an expression have no posterior that
// was shown to exist.
func (f *Facts) existing(a *model.Analysis, list ...model.Expr) error {
	for _, u := range model.UnknownsIn(list...) {
		if !f.Sound(a, u) {
			return fmt.Errorf("%w: that of %s was not shown to exist", posterior.ErrNoPosterior, u.Name)
		}
	}
	return nil
}

// Posterior summarises a report under an analysis, once existence is shown.
func (f *Facts) Posterior(a *model.Analysis, r *model.Report) Summary {
	return once(f, fmt.Sprintf("posterior/%s/%p", a.Name, r), func() Summary {
		if err := f.existing(a, r.Value); err != nil {
			return Summary{Err: err}
		}
		s, err := posterior.Summarize(f.ctx, f.Resolved(a), twoSided(r))
		if err != nil {
			return Summary{Err: err}
		}
		widths := make([]posterior.Number, len(r.Intervals))
		for i, next := 0, len(r.Intervals); i < len(widths); i++ {
			widths[i] = width(s.Intervals[i])
			if oneSided(s.Intervals[i].Asked) {
				if central := width(s.Intervals[next]); !(widths[i].Value < central.Value) {
					widths[i] = central
				}
				next++
			}
		}
		s.Report, s.Intervals = r, s.Intervals[:len(r.Intervals)]
		return Summary{s, widths, nil}
	})
}

func width(in posterior.Interval) posterior.Number {
	n := in.High
	n.Value, n.Error = n.Value-in.Low.Value, n.Error+in.Low.Error
	return n
}

// twoSided asks for the central interval at the level of every bound as well.
func twoSided(r *model.Report) *model.Report {
	full := *r
	full.Intervals = append([]model.Asked(nil), r.Intervals...)
	for _, asked := range r.Intervals {
		if oneSided(asked) {
			full.Intervals = append(full.Intervals, model.Asked{Kind: model.Central, Level: asked.Level})
		}
	}
	return &full
}

func oneSided(a model.Asked) bool { return a.Kind == model.Upper || a.Kind == model.Lower }

// Probability is the chance of a conclusion under an analysis, once existence is
// shown.
func (f *Facts) Probability(a *model.Analysis, c *model.Conclusion) Chance {
	return once(f, fmt.Sprintf("probability/%s/%p", a.Name, c), func() Chance {
		list := []model.Expr{c.Event}
		for _, m := range c.More {
			list = append(list, m.Event)
		}
		if err := f.existing(a, list...); err != nil {
			return Chance{Err: err}
		}
		drawn, n, err := posterior.Drawn(f.ctx, f.Resolved(a), c)
		return Chance{n, drawn, err}
	})
}

// PosteriorLaw is the posterior law of an expression under an analysis, once
// existence is shown.
func (f *Facts) PosteriorLaw(a *model.Analysis, e model.Expr) Law {
	return once(f, "posterior law/"+a.Name+"/"+model.Text(e), func() Law {
		if err := f.existing(a, e); err != nil {
			return Law{nil, err}
		}
		l, err := posterior.LawOf(f.ctx, f.Resolved(a), e)
		return Law{l, err}
	})
}

// PriorLaw is what the priors of an analysis mean for an expression before any
// data; an error for improper ones.
func (f *Facts) PriorLaw(a *model.Analysis, e model.Expr) Law {
	return once(f, "prior law/"+a.Name+"/"+model.Text(e), func() Law {
		l, err := posterior.Induced(f.ctx, f.Resolved(a), e)
		return Law{l, err}
	})
}
