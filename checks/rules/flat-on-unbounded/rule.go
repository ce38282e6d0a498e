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
	Name: "flat-on-unbounded", Severity: diag.Note, Group: rule.Scale, Phase: rule.Numeric,
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
		if f.Context().Err() != nil {
			break
		}
		d := diag.Finding{
			Rule: "flat-on-unbounded", Severity: diag.Note, Path: f.Model.File.Path, Span: wording.PriorPlace(p), Target: u.Name,
			Headline: fmt.Sprintf("Flat on %s has no bound, and %s: the scale on which it is flat may show in the answer.", target(f, p), counted(u, rows)),
		}
		if shown, tried := otherScales(f, p, u, &d); shown || !tried {
			found = append(found, d)
		}
	}
	return found
}

// otherScales calls the prior flat on other scales of a positive unknown or of a
// probability, and looks at
// the reports: tried when there was one to compare with, shown when a report moves by
// more than what matters.
func otherScales(f *facts.Facts, p *model.Prior, u *model.Unknown, d *diag.Finding) (shown, tried bool) {
	m := f.Model
	if !wording.Whole(m) || !u.Scalar() || u.Support.Low == nil || u.Support.Low.Sign() != 0 {
		return false, false
	}
	forms := []string{"log(%s) flat", "%s flat", "%s^2 flat"}
	if u.Support.High != nil {
		if !u.Support.High.IsInt() || u.Support.High.Num().Int64() != 1 {
			return false, false
		}
		forms = []string{"logit(%s) flat", "%s flat", "odds(%s) flat"}
	}
	declared := m.Declared()
	var worst wording.Shift
	var about *model.Report
	var by string
	for _, form := range forms {
		other, err := model.PriorFromText(m, fmt.Sprintf(form, u.Name))
		if err != nil || other.Text == p.Text {
			continue
		}
		a := declared.With(other.Text, other)
		if !f.Sound(a, u) {
			continue
		}
		for _, r := range m.Reports {
			s, ok := wording.ShiftOf(f, declared, a, r)
			if !ok {
				continue
			}
			tried = true
			if wording.Matters(m, s) && (about == nil || s.Sure > worst.Sure) {
				worst, about, by = s, r, other.Text
			}
		}
	}
	if about == nil {
		return false, tried
	}
	end := wording.EndText(worst, about.Intervals[worst.Interval], about.Name)
	d.Severity = diag.Warn
	d.Headline = fmt.Sprintf("Flat on %s has no bound, and its scale shows in the answer: with `%s` instead, %s goes from %s to %s (%s).", target(f, p), by, end, worst.From.Text(), worst.To.Text(), wording.Moved(worst))
	d.Related = []diag.Related{{Span: about.Span, Message: "the report that moves"}}
	d.Evidence = []diag.Evidence{wording.Measured(end, "as declared", worst.From), wording.Measured(end, by, worst.To)}
	return true, true
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
