package wording

import (
	"strings"

	"wellposed/checks/existence"
	"wellposed/checks/facts"
	"wellposed/parser/diag"
	"wellposed/parser/model"
)

// Fixes are the standard choices that give a posterior in place of the prior
// that a verdict is about, each checked for existence and with what it does.
// They are listed in the order in which they are published, not of merit.
func Fixes(f *facts.Facts, a *model.Analysis, v *existence.Verdict) []diag.Fix {
	p := Blamed(a, v)
	if p == nil || p.Joint || len(p.About) != 1 {
		return nil
	}
	u := p.About[0]
	var fixes []diag.Fix
	for _, c := range f.Standard(u) {
		if f.Context().Err() != nil {
			break
		}
		if !f.Sound(c.Analysis, u) {
			continue
		}
		said := strings.TrimPrefix(c.Text, u.Name+" ")
		fixes = append(fixes, diag.Fix{
			Title: "Say " + quoted(c.Text) + " (" + c.Label + ")", Grade: diag.ChangesPosterior, Consequence: consequence(Preview(f, a, c.Analysis, u), c.Note),
			Edits: edits(f.Model, p, u, said),
		})
	}
	return fixes
}

func quoted(s string) string { return "`" + s + "`" }

// edits replace what the prior says. One that was stated on a transform of its
// unknown is restated on the unknown itself.
func edits(m *model.Model, p *model.Prior, u *model.Unknown, said string) []diag.Edit {
	list := []diag.Edit{{Path: m.File.Path, Span: PriorPlace(p), Text: said}}
	if _, plain := p.Target.(*model.UnknownRef); !plain {
		list = append([]diag.Edit{{Path: m.File.Path, Span: p.TargetSpan, Text: u.Name}}, list...)
	}
	return list
}
