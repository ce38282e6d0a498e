// Package jeffreyssenseunstated reports Jeffreys' rule for several unknowns
// without its sense.
package jeffreyssenseunstated

import (
	_ "embed"
	"fmt"

	sy "wellposed/checks/objective/symbolic"

	"wellposed/checks/facts"
	"wellposed/checks/rule"
	"wellposed/checks/wording"
	"wellposed/parser/diag"
	"wellposed/parser/model"
)

//go:embed doc.md
var page string

// Rule compares the senses and is silent where they agree.
var Rule = &rule.Rule{
	Name: "jeffreys-sense-unstated", Severity: diag.Warn, Group: rule.Scale, Phase: rule.Exact,
	Brief:   "Jeffreys' rule for several unknowns has more than one sense, and which is meant is not said.",
	Doc:     page,
	Sources: []string{"Jeffreys 1961, section 3.10", "Kass and Wasserman 1996", "derivation"},
	Check:   check,
}

func check(f *facts.Facts) []diag.Finding {
	var found []diag.Finding
	for _, group := range groups(f.Model) {
		if f.Context().Err() != nil {
			break
		}
		if d, ok := compare(f, group); ok {
			found = append(found, d)
		}
	}
	return found
}

// groups are the priors by Jeffreys' rule without a sense, those together whose
// unknowns enter the same likelihood.
func groups(m *model.Model) [][]*model.Prior {
	var out [][]*model.Prior
	var single []*model.Prior
	for _, p := range m.Priors {
		if p.Form != model.ByRule || p.Rule == nil || p.Rule.Name != model.Jeffreys {
			continue
		}
		if len(p.About) > 1 {
			out = append(out, []*model.Prior{p})
		} else if len(p.About) == 1 && p.About[0].Population == nil {
			single = append(single, p)
		}
	}
	used := map[*model.Prior]bool{}
	for _, o := range m.Observations {
		var together []*model.Prior
		for _, p := range single {
			if !used[p] && wording.Touches(o, func(u *model.Unknown) bool { return u == p.About[0] }) {
				together = append(together, p)
			}
		}
		if len(together) > 1 {
			for _, p := range together {
				used[p] = true
			}
			out = append(out, together)
		}
	}
	return out
}

// compare derives both senses; ok is false where they agree or one is not
// derived.
func compare(f *facts.Facts, group []*model.Prior) (diag.Finding, bool) {
	a := f.Model.Declared()
	var about []*model.Unknown
	for _, p := range group {
		about = append(about, p.About...)
	}
	jointly := f.DerivedBy(a, &model.RulePrior{Name: model.JeffreysJointly}, about)
	separately := f.DerivedBy(a, &model.RulePrior{Name: model.JeffreysSeparately}, about)
	if jointly.Err != nil || separately.Err != nil || jointly.Kernel == nil || separately.Kernel == nil {
		return diag.Finding{}, false
	}
	var symbols []*sy.Symbol
	var names []string
	for _, p := range jointly.Parameters {
		symbols = append(symbols, p.Symbol)
	}
	for _, u := range about {
		names = append(names, u.Name)
	}
	if same, sure := sy.Proportional(jointly.Kernel, separately.Kernel, symbols); same || !sure {
		return diag.Finding{}, false
	}
	p := group[len(group)-1]
	out := diag.Finding{
		Rule: "jeffreys-sense-unstated", Severity: diag.Warn, Path: f.Model.File.Path, Span: wording.PriorPlace(p), Target: p.About[0].Name,
		Headline: fmt.Sprintf("Jeffreys for %s has 2 senses here that are different priors: %s jointly, %s separately.",
			wording.List(names), jointly.Name, separately.Name),
		Notes: []string{
			"Jointly is sqrt(det I) over all of them at once; separately is the rule for each with the others held, multiplied.",
			"To make it go away, say which is meant, or name a reference prior with its order.",
		},
		Evidence: []diag.Evidence{
			{Name: "kernel", About: "jointly", Text: jointly.Name, How: diag.Proved, Method: "closed form"},
			{Name: "kernel", About: "separately", Text: separately.Name, How: diag.Proved, Method: "closed form"},
		},
	}
	for _, q := range group[:len(group)-1] {
		out.Related = append(out.Related, diag.Related{Path: f.Model.File.Path, Span: wording.PriorPlace(q), Message: "the same rule for " + q.About[0].Name})
	}
	if len(group) == 1 && !p.FormSpan.Empty() {
		for _, sense := range []string{"jointly", "separately"} {
			d := jointly
			if sense == "separately" {
				d = separately
			}
			out.Fixes = append(out.Fixes, diag.Fix{
				Title: "Say jeffreys " + sense, Grade: diag.ChangesPosterior, Consequence: "kernel: " + d.Name,
				Edits: []diag.Edit{{Path: f.Model.File.Path, Span: p.FormSpan, Text: "jeffreys " + sense}},
			})
		}
	}
	return out, true
}
