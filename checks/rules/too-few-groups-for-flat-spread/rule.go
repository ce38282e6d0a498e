// Package toofewgroupsforflatspread reports spreads between groups that too few
// groups hold.
package toofewgroupsforflatspread

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

// Rule counts groups against the power of the spread.
var Rule = &rule.Rule{
	Name: "too-few-groups-for-flat-spread", Severity: diag.Stop, Group: rule.Existence, Phase: rule.Exact,
	Brief:   "There are too few groups for this prior on the spread between them.",
	Doc:     page,
	Sources: []string{"Gelman 2006", "Hobert and Casella 1996", "derivation"},
	Check:   check,
}

func check(f *facts.Facts) []diag.Finding {
	var found []diag.Finding
	for _, v := range wording.Failing(f, existence.SpreadAtInfinity) {
		where := wording.Escapes(v)
		if where == "" {
			where = "an infinite spread"
		}
		headline := fmt.Sprintf("With %s this prior leaves no posterior: mass escapes to %s.", groups(v), where)
		found = append(found, wording.Story(f, "too-few-groups-for-flat-spread", v, headline))
	}
	return found
}

// groups counts the components of the varying effect in the verdict's group.
func groups(v *existence.Verdict) string {
	for _, u := range v.Unknowns {
		if u.Population != nil {
			return count(u)
		}
	}
	return "so few groups"
}

func count(u *model.Unknown) string {
	n := u.Components()
	switch n {
	case 1:
		return "one group"
	case 2:
		return "two groups"
	case 3:
		return "three groups"
	}
	return fmt.Sprintf("%d groups", n)
}
