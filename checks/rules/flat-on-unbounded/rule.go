// Package flatonunbounded reports flat priors over unbounded ranges.
package flatonunbounded

import (
	_ "embed"
	"fmt"

	"wellposed/checks/facts"
	"wellposed/checks/rule"
	"wellposed/checks/wording"
	"wellposed/parser/diag"
	"wellposed/parser/model"
)

//go:embed doc.md
var page string

// Rule notes a flat prior over an unbounded range where it is not customary.
var Rule = &rule.Rule{
	Name: "flat-on-unbounded", Severity: diag.Note, Group: rule.Scale, Phase: rule.Exact,
	Brief:   "A prior is flat over an unbounded range.",
	Doc:     page,
	Sources: []string{"Kass and Wasserman 1996", "common practice"},
	Check:   check,
}

// enough rows for each component make a flat prior on a location unremarkable.
const enough = 10

func check(f *facts.Facts) []diag.Finding {
	var found []diag.Finding
	for _, p := range f.Model.Priors {
		if !wording.Flat(p) || !wording.Unbounded(p) {
			continue
		}
		u := p.About[0]
		rows := wording.Informing(f.Model, u)
		if wording.Lost(f, u) || customary(u, p) && rows >= enough {
			continue
		}
		found = append(found, diag.Finding{
			Rule: "flat-on-unbounded", Severity: diag.Note, Path: f.Model.File.Path, Span: wording.PriorPlace(p), Target: u.Name,
			Headline: fmt.Sprintf("Flat on %s has no bound, and %s: the scale on which it is flat may show in the answer.", target(f, p), counted(u, rows)),
		})
	}
	return found
}

// customary is a flat prior on an unknown that shifts the data, or on the
// logarithm of a positive one.
func customary(u *model.Unknown, p *model.Prior) bool {
	switch e := p.Target.(type) {
	case *model.UnknownRef:
		return u.Kind.Name == "location" || u.Kind.Name == "effect" || u.Kind.Name == "real"
	case *model.Call:
		return e.Func == "log" && u.Support.Low != nil && u.Support.Low.Sign() == 0
	}
	return false
}

func target(f *facts.Facts, p *model.Prior) string {
	if text := f.Model.File.Slice(p.TargetSpan); text != "" {
		return text
	}
	return p.About[0].Name
}

// counted says how much bears on the unknown.
func counted(u *model.Unknown, rows int) string {
	each := u.Name
	if !u.Scalar() {
		each = "each component"
	}
	if rows == 1 {
		return "one reading bears on " + each
	}
	return fmt.Sprintf("%d readings bear on %s", rows, each)
}
