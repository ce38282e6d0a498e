package wording

import (
	"wellposed/checks/existence"
	"wellposed/checks/facts"
	"wellposed/parser/diag"
	"wellposed/parser/model"
)

// Fixes are the standard choices that would give a posterior in place of the
// prior that a verdict is about, each with its consequence.
func Fixes(f *facts.Facts, a *model.Analysis, v *existence.Verdict) []diag.Fix {
	return nil
}
