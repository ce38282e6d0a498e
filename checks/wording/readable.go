package wording

import (
	"strings"

	"wellposed/checks/existence"
	"wellposed/checks/facts"
	"wellposed/grammar"
	"wellposed/parser/diag"
	"wellposed/parser/model"
)

// harmless statements say nothing about the likelihood or the prior in force: a
// mistake in one of them leaves the verdicts as they are.
var harmless = map[string]bool{
	"title": true, "note": true, "field": true, "matters": true, "rival": true, "rivals": true, "report": true, "conclude": true,
	"suppose": true, "require": true, "accept": true, "override": true,
}

// Whole reports whether everything that makes the posterior was read. Where a
// statement of the likelihood or the prior is broken, a verdict would be about
// another model, so the rules on existence stay silent.
func Whole(m *model.Model) bool {
	for _, p := range m.Problems {
		if p.Severity == diag.Stop && !harmless[keyword(m, p.Span.Start)] {
			return false
		}
	}
	return true
}

// Tidy reports whether reading found nothing to stop at, so that what is missing
// is missing and not only misread.
func Tidy(m *model.Model) bool {
	for _, p := range m.Problems {
		if p.Severity == diag.Stop {
			return false
		}
	}
	return true
}

// keyword is the first word of the statement at an offset.
func keyword(m *model.Model, offset int) string {
	if m.Tree == nil {
		return ""
	}
	var line *grammar.Line
	for _, l := range m.Tree.Lines {
		if l.Start > offset {
			break
		}
		line = l
	}
	if line == nil {
		return ""
	}
	word := strings.FieldsFunc(line.Text, func(r rune) bool { return r == ' ' || r == '\t' || r == '\n' || r == '\r' })
	if len(word) == 0 {
		return ""
	}
	return strings.ToLower(word[0])
}

// Failing lists the verdicts under the declared priors that no posterior exists
// for one of the given reasons; none when the model was not read whole.
func Failing(f *facts.Facts, codes ...existence.Code) []*existence.Verdict {
	if !Whole(f.Model) {
		return nil
	}
	var list []*existence.Verdict
	for _, v := range f.Existence(f.Model.Declared()).Verdicts {
		if v.Status != existence.DoesNotExist {
			continue
		}
		for _, c := range codes {
			if v.Code == c {
				list = append(list, v)
				break
			}
		}
	}
	return list
}

// Lost reports whether an unknown has no posterior under the declared priors, or
// none that is decided.
func Lost(f *facts.Facts, u *model.Unknown) bool {
	v := f.Existence(f.Model.Declared()).Of(u)
	return v == nil || v.Status != existence.Exists
}
