package existence

import (
	"wellposed/checks/existence/certificate"
	"wellposed/parser/model"
)

// lineCode refines the reason of a one-unknown verdict: where the likelihood
// itself tends to a positive constant as the unknown grows without bound, it
// levels off, or every reading is a limit on that side.
func (g *group) lineCode(c *certificate.Ends) Code {
	for _, e := range c.Ends {
		if e.Finite || e.At != "inf" && e.At != "-inf" {
			continue
		}
		for _, p := range e.Parts {
			if p.From != "likelihood" || p.Power != "0" {
				continue
			}
			if g.onlyLimits() {
				return OneSidedLimits
			}
			return Plateau
		}
	}
	return TailOrder
}

// onlyLimits reports whether every row of the group is censored.
func (g *group) onlyLimits() bool {
	for _, f := range g.rows {
		limit := false
		for _, e := range []model.Expr{f.obs.Right, f.obs.Left} {
			if e == nil {
				continue
			}
			if ok, err := model.Condition(e, f.row); err == nil && ok {
				limit = true
			}
		}
		if !limit {
			return false
		}
	}
	return len(g.rows) > 0
}
