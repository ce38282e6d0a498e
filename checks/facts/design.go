package facts

import (
	"strconv"

	"wellposed/checks/design"
	"wellposed/checks/posterior"
	"wellposed/parser/model"
)

// Rivals are the analyses to compare the declared one with: the rivals of the
// file, then the standard choices of the unknowns for which it asks for them.
func (f *Facts) Rivals() []*model.Analysis {
	return once(f, "rivals", func() []*model.Analysis {
		var out []*model.Analysis
		for _, r := range f.Model.Rivals {
			out = append(out, f.Model.Declared().With("rival "+strconv.Quote(r.Name), r.Priors...))
		}
		for _, u := range f.Model.Standard {
			for _, c := range f.Standard(u) {
				if p := f.Model.Declared().PriorOf(u); p == nil || p.Text != c.Prior.Text {
					out = append(out, c.Analysis)
				}
			}
		}
		return out
	})
}

// Subject is what the promises of the file are judged on.
func (f *Facts) Subject() *design.Subject {
	return once(f, "subject", func() *design.Subject {
		declared := f.Model.Declared()
		s := &design.Subject{Model: f.Model, Declared: f.Resolved(declared), Verdict: f.Existence(declared)}
		for _, a := range f.Rivals() {
			s.Rivals = append(s.Rivals, f.Resolved(a))
		}
		s.Planned = f.Prospective(declared)
		s.Breaks, s.BreaksErr = f.breaks(s.Planned)
		return s
	})
}

// Prospective is an analysis as it stood before the counts were seen, its rules
// resolved.
func (f *Facts) Prospective(a *model.Analysis) *model.Analysis {
	return once(f, "prospective/"+a.Name, func() *model.Analysis {
		resolved := f.Resolved(a)
		return &model.Analysis{Model: design.Prospective(f.Model), Name: a.Name, Use: resolved.Use}
	})
}

type breaks struct {
	*design.Breaks
	err error
}

func (f *Facts) breaks(a *model.Analysis) (*design.Breaks, error) {
	b := once(f, "breaks/"+a.Name, func() breaks {
		b, err := design.Breaking(f.ctx, a)
		return breaks{b, err}
	})
	return b.Breaks, b.err
}

// Breaks are the outcomes that leave no posterior under an analysis of the plan.
func (f *Facts) Breaks(a *model.Analysis) (*design.Breaks, error) {
	return f.breaks(f.Prospective(a))
}

// Promises says how the promises of the file came out.
func (f *Facts) Promises() []design.Result {
	return once(f, "promises", func() []design.Result {
		if len(f.Model.Promises) == 0 {
			return nil
		}
		return design.Judge(f.ctx, f.Subject())
	})
}

// Covers is a long-run coverage, or why there is none.
type Covers struct {
	*design.Coverage
	Err error
}

// Coverage is the long-run coverage of a report under an analysis of the plan.
func (f *Facts) Coverage(a *model.Analysis, r *model.Report, over *model.Unknown, from, to float64) Covers {
	key := "coverage/" + a.Name + "/" + r.Name + "/" + strconv.FormatFloat(from, 'g', -1, 64) + "/" + strconv.FormatFloat(to, 'g', -1, 64)
	return once(f, key, func() Covers {
		c, how, err := design.Covering(f.ctx, f.Prospective(a), r, over, from, to)
		if err != nil {
			return Covers{Err: err}
		}
		return Covers{&design.Coverage{Coverage: c, How: how}, nil}
	})
}

// Claims says which outcomes lead to a conclusion.
type Claims struct {
	*design.Claims
	Err error
}

// Claims are the outcomes of the plan that lead to a conclusion under an analysis.
func (f *Facts) Claims(a *model.Analysis, c *model.Conclusion) Claims {
	return once(f, "claims/"+a.Name+"/"+c.Name, func() Claims {
		b, err := f.Breaks(a)
		if err != nil {
			return Claims{Err: err}
		}
		r, err := design.Deciding(f.ctx, f.Prospective(a), b, c)
		return Claims{r, err}
	})
}

// PriorProbability is the chance of an event before any data under an analysis; an
// error for improper priors.
func (f *Facts) PriorProbability(a *model.Analysis, event model.Expr) Chance {
	return once(f, "prior probability/"+a.Name+"/"+model.Text(event), func() Chance {
		n, err := posterior.PriorProbability(f.ctx, f.Resolved(a), event)
		return Chance{Number: n, Err: err}
	})
}
