package facts

import (
	"wellposed/checks/existence"
	"wellposed/checks/objective"
	"wellposed/parser/diag"
	"wellposed/parser/model"
)

// Choice is a standard default prior for an unknown, ready to stand in an
// analysis. Listing one is no recommendation.
type Choice struct {
	objective.Choice
	Prior *model.Prior
	// Analysis is the declared one with this prior in place of the unknown's own.
	Analysis *model.Analysis
}

// Standard lists the standard choices for an unknown in this likelihood.
func (f *Facts) Standard(u *model.Unknown) []Choice {
	return once(f, "standard/"+u.Name, func() []Choice {
		declared := f.Model.Declared()
		var out []Choice
		for _, c := range objective.Standard(f.ctx, declared, u) {
			p, err := model.PriorFromText(f.Model, c.Text)
			if err != nil || len(p.About) != 1 || p.About[0] != u {
				continue
			}
			out = append(out, Choice{c, p, declared.With(c.Text, p)})
		}
		return out
	})
}

// Sound reports whether the posterior of an unknown's group exists under an
// analysis, proved or bounded.
func (f *Facts) Sound(a *model.Analysis, u *model.Unknown) bool {
	v := f.Existence(a).Of(u)
	return v != nil && v.Status == existence.Exists && (v.How == diag.Proved || v.How == diag.Bounded)
}
