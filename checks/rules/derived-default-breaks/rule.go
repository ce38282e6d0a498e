// Package deriveddefaultbreaks reports priors by rule that leave no posterior or
// that the rule does not give.
package deriveddefaultbreaks

import (
	_ "embed"
	"fmt"

	"wellposed/checks/existence"
	"wellposed/checks/facts"
	"wellposed/checks/rule"
	"wellposed/checks/wording"
	"wellposed/parser/diag"
	"wellposed/parser/model"
)

//go:embed doc.md
var page string

// Rule speaks for priors by rule only.
var Rule = &rule.Rule{
	Name: "derived-default-breaks", Severity: diag.Stop, Group: rule.Existence, Phase: rule.Exact,
	Brief:   "A prior derived by rule leaves no posterior, or the rule gives none here.",
	Doc:     page,
	Sources: []string{"derivation", "Northrop and Attalides 2016", "Vallejos and Steel 2013"},
	Check:   check,
}

func check(f *facts.Facts) []diag.Finding {
	if !wording.Whole(f.Model) {
		return nil
	}
	var found []diag.Finding
	a := f.Model.Declared()
	verdicts := f.Existence(a)
	for _, p := range a.Use {
		if p.Form != model.ByRule || len(p.About) == 0 {
			continue
		}
		if f.Context().Err() != nil {
			return found
		}
		d := f.Derived(a, p)
		if d.Err != nil {
			found = append(found, diag.Finding{
				Rule: "derived-default-breaks", Severity: diag.Warn, Path: f.Model.File.Path, Span: wording.PriorPlace(p), Target: p.About[0].Name,
				Headline: fmt.Sprintf("This rule gives no prior for %s here, so the analysis has none.", names(p.About)),
				Notes:    []string{wording.Sentence(d.Err.Error())},
			})
			continue
		}
		v := verdicts.Of(p.About[0])
		if v == nil || v.Status != existence.DoesNotExist || wording.Blamed(a, v) != p {
			continue
		}
		found = append(found, broken(f, a, p, d, v))
	}
	return found
}

func broken(f *facts.Facts, a *model.Analysis, p *model.Prior, d facts.Derivation, v *existence.Verdict) diag.Finding {
	headline := fmt.Sprintf("With %s the derived prior of %s, %s, leaves no posterior", wording.Data(wording.Seen(a, v)), names(p.About), d.Name)
	if where := wording.Escapes(v); where != "" {
		headline += ": mass escapes to " + where
	}
	out := diag.Finding{
		Rule: "derived-default-breaks", Severity: diag.Stop, Path: f.Model.File.Path, Span: wording.PriorPlace(p), Target: p.About[0].Name,
		Headline: headline + ".",
		Notes:    append([]string{wording.Sentence("the rule gives " + d.Prior.Text + " (" + d.Source + ")")}, wording.Reasons(v)...),
		Related:  wording.Rows(v, "the data that decide"),
		Evidence: []diag.Evidence{wording.Established(v)},
	}
	for _, alternative := range alternatives(p) {
		if f.Context().Err() != nil {
			break
		}
		e := f.DerivedBy(a, alternative.rule, p.About)
		if e.Err != nil {
			continue
		}
		other := a.With("by rule: "+alternative.text, e.Prior)
		w := f.Existence(other).Of(p.About[0])
		if w == nil || w.Status != existence.Exists || p.FormSpan.Empty() {
			continue
		}
		out.Fixes = append(out.Fixes, diag.Fix{
			Title: fmt.Sprintf("Use %s: %s", alternative.text, e.Name), Grade: diag.ChangesPosterior,
			Consequence: fmt.Sprintf("posterior: none → exists (%s)", w.How),
			Edits:       []diag.Edit{{Path: f.Model.File.Path, Span: p.FormSpan, Text: alternative.text}},
		})
	}
	return out
}

type alternative struct {
	text string
	rule *model.RulePrior
}

// alternatives are the other senses of a rule about several unknowns.
func alternatives(p *model.Prior) []alternative {
	if len(p.About) < 2 {
		return nil
	}
	var out []alternative
	if p.Rule.Name != model.JeffreysSeparately {
		out = append(out, alternative{"jeffreys separately", &model.RulePrior{Name: model.JeffreysSeparately}})
	}
	if p.Rule.Name != model.ReferencePrior {
		r := &model.RulePrior{Name: model.ReferencePrior}
		text := "reference "
		for i, u := range p.About {
			if i > 0 {
				text += " before "
			}
			text += u.Name
			r.Order = append(r.Order, []*model.Unknown{u})
		}
		out = append(out, alternative{text, r})
	}
	return out
}

func names(us []*model.Unknown) string {
	list := make([]string, len(us))
	for i, u := range us {
		list[i] = u.Name
	}
	return wording.List(list)
}
