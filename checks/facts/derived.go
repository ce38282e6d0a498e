package facts

import (
	"fmt"

	"wellposed/checks/objective"
	"wellposed/parser/model"
)

// Derivation is what a rule gives about some unknowns, or why it gives nothing.
type Derivation struct {
	*objective.Derived
	Err error
}

// Derived is what the rule of a prior gives in an analysis.
func (f *Facts) Derived(a *model.Analysis, p *model.Prior) Derivation {
	return once(f, fmt.Sprintf("derived/%s/%p", a.Name, p), func() Derivation {
		d, err := objective.DerivePrior(f.ctx, a, p)
		return Derivation{d, err}
	})
}

// DerivedBy is what a rule would give about some unknowns in an analysis.
func (f *Facts) DerivedBy(a *model.Analysis, rule *model.RulePrior, about []*model.Unknown) Derivation {
	key := "derived by/" + a.Name + "/" + string(rule.Name)
	for _, u := range about {
		key += "/" + u.Name
	}
	for _, g := range rule.Order {
		key += "|"
		for _, u := range g {
			key += "," + u.Name
		}
	}
	return once(f, key, func() Derivation {
		d, err := objective.Derive(f.ctx, a, rule, about)
		return Derivation{d, err}
	})
}
