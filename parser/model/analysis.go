package model

// Analysis is a model with the priors under which it is examined: the declared
// ones, a rival's, or a standard choice. Checks take an Analysis.
type Analysis struct {
	*Model
	// Name is "declared", a rival's name, or the text of a standard choice.
	Name string
	// Use are the priors in force, one for each unknown that needs one.
	Use []*Prior
}

// Declared is the analysis with the declared priors.
func (m *Model) Declared() *Analysis { return &Analysis{m, "declared", m.Priors} }

// With returns the analysis in which the given priors replace those in force
// that speak about any of the same unknowns.
func (a *Analysis) With(name string, priors ...*Prior) *Analysis {
	replaced := map[*Unknown]bool{}
	for _, p := range priors {
		for _, u := range p.About {
			replaced[u] = true
		}
	}
	use := append([]*Prior(nil), priors...)
	for _, p := range a.Use {
		keep := true
		for _, u := range p.About {
			keep = keep && !replaced[u]
		}
		if keep {
			use = append(use, p)
		}
	}
	return &Analysis{a.Model, name, use}
}

// PriorOf returns the prior in force for an unknown, nil when there is none.
func (a *Analysis) PriorOf(u *Unknown) *Prior {
	for _, p := range a.Use {
		for _, v := range p.About {
			if u == v {
				return p
			}
		}
	}
	return nil
}
