// Package posteriordoesnotexist reports priors and data that leave no posterior.
package posteriordoesnotexist

import (
	_ "embed"
	"fmt"
	"strings"

	"wellposed/checks/existence"
	"wellposed/checks/facts"
	"wellposed/checks/rule"
	"wellposed/checks/wording"
	"wellposed/parser/diag"
	"wellposed/parser/model"
)

//go:embed doc.md
var page string

// Rule speaks for every verdict whose story no other rule tells.
var Rule = &rule.Rule{
	Name: "posterior-does-not-exist", Severity: diag.Stop, Group: rule.Existence, Phase: rule.Exact,
	Brief:   "These data and priors leave no posterior.",
	Doc:     page,
	Sources: []string{"derivation", "Hobert and Casella 1996", "Tak, Ghosh and Ellis 2018"},
	Check:   check,
}

// told are the reasons for which a rule of its own speaks in place of this one.
var told = map[existence.Code]bool{
	existence.Separation: true, existence.Rank: true, existence.ScaleReadings: true, existence.EqualReadings: true,
	existence.SpreadAtZero: true, existence.SpreadAtInfinity: true, existence.Plateau: true, existence.OneSidedLimits: true,
	existence.Failures: true, existence.PopulationSize: true, existence.NotIdentified: true,
}

func check(f *facts.Facts) []diag.Finding {
	if !wording.Whole(f.Model) {
		return nil
	}
	var found []diag.Finding
	declared := f.Model.Declared()
	for _, v := range f.Existence(declared).Verdicts {
		if p := wording.Blamed(declared, v); p != nil && p.Form == model.ByRule {
			continue // derived-default-breaks speaks
		}
		if v.Status == existence.DoesNotExist && !told[v.Code] {
			found = append(found, wording.Story(f, "posterior-does-not-exist", v, headline(declared, v)))
		}
	}
	for _, r := range f.Model.Rivals {
		found = append(found, rival(f, declared, r)...)
	}
	return found
}

func headline(a *model.Analysis, v *existence.Verdict) string {
	data := wording.Data(wording.Seen(a, v))
	if v.Code == existence.NoSupport {
		return fmt.Sprintf("With %s the likelihood is zero wherever the prior of %s is positive: there is no posterior.", data, names(v))
	}
	what := "this prior leaves no posterior"
	if p := wording.Blamed(a, v); p == nil || len(v.Unknowns) > 1 {
		what = "there is no posterior for " + names(v)
	}
	if where := wording.Escapes(v); where != "" {
		return fmt.Sprintf("With %s %s: mass escapes to %s.", data, what, where)
	}
	return fmt.Sprintf("With %s %s.", data, what)
}

func names(v *existence.Verdict) string {
	var list []string
	for _, u := range v.Unknowns {
		list = append(list, u.Name)
	}
	if len(list) > 5 {
		return strings.Join(list[:4], ", ") + fmt.Sprintf(" and %d more unknowns", len(list)-4)
	}
	return wording.List(list)
}

// rival reports the groups that lose their posterior under a rival only.
func rival(f *facts.Facts, declared *model.Analysis, r *model.Rival) []diag.Finding {
	if len(r.Priors) == 0 {
		return nil
	}
	a := wording.Under(declared, r)
	var found []diag.Finding
	for _, v := range f.Existence(a).Verdicts {
		if v.Status != existence.DoesNotExist {
			continue
		}
		before := f.Existence(declared).Of(v.Unknowns[0])
		if before != nil && before.Status == existence.DoesNotExist {
			continue
		}
		where := wording.Escapes(v)
		if where != "" {
			where = ": mass escapes to " + where
		}
		found = append(found, diag.Finding{
			Rule: "posterior-does-not-exist", Severity: diag.Warn, Path: f.Model.File.Path, Span: wording.Place(a, v), Target: r.Name,
			Headline: fmt.Sprintf("With %s the rival %q leaves no posterior for %s%s.", wording.Data(wording.Seen(a, v)), r.Name, names(v), where),
			Notes:    wording.Reasons(v), Related: wording.Rows(v, "the data that decide"),
			Evidence: []diag.Evidence{wording.Established(v)},
		})
	}
	return found
}
