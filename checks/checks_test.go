package checks

import (
	"context"
	"strings"
	"testing"

	"wellposed/checks/facts"
	"wellposed/checks/rule"
	"wellposed/parser/diag"
	"wellposed/parser/model"
	"wellposed/parser/source"
)

func TestAccepted(t *testing.T) {
	note := diag.Finding{Rule: "flat-on-unbounded", Severity: diag.Note, Target: "mu"}
	stop := diag.Finding{Rule: "posterior-does-not-exist", Severity: diag.Stop, Target: "p"}
	for _, c := range []struct {
		name       string
		acceptance model.Acceptance
		kept       int
		overridden int
	}{
		{"a note", model.Acceptance{Rule: "flat-on-unbounded", For: "mu", Because: "location"}, 1, 0},
		{"for any target", model.Acceptance{Rule: "flat-on-unbounded", Because: "location"}, 1, 0},
		{"for another target", model.Acceptance{Rule: "flat-on-unbounded", For: "nu", Because: "location"}, 2, 0},
		{"without a reason", model.Acceptance{Rule: "flat-on-unbounded", For: "mu"}, 2, 0},
		{"in time", model.Acceptance{Rule: "flat-on-unbounded", Because: "x", Until: "2027-06-30"}, 1, 0},
		{"run out", model.Acceptance{Rule: "flat-on-unbounded", Because: "x", Until: "2027-06-29"}, 2, 0},
		{"a stop can't be accepted", model.Acceptance{Rule: "posterior-does-not-exist", For: "p", Because: "x"}, 2, 0},
		{"a stop overridden stays", model.Acceptance{Rule: "posterior-does-not-exist", For: "p", Because: "x", Override: true}, 2, 1},
		{"a note overridden stays", model.Acceptance{Rule: "flat-on-unbounded", Because: "x", Override: true}, 2, 1},
	} {
		m := &model.Model{Acceptances: []*model.Acceptance{&c.acceptance}}
		kept := accepted(m, []diag.Finding{note, stop}, "2027-06-30")
		overridden := 0
		for _, d := range kept {
			if d.Overridden != "" {
				overridden++
			}
		}
		if len(kept) != c.kept || overridden != c.overridden {
			t.Errorf("%s: %d kept, %d overridden; want %d, %d", c.name, len(kept), overridden, c.kept, c.overridden)
		}
	}
}

func TestSort(t *testing.T) {
	at := func(n int) source.Span { return source.Span{Start: n, End: n} }
	found := []diag.Finding{
		{Path: "b", Rule: "a"}, {Path: "a", Span: at(9), Rule: "a"}, {Path: "a", Span: at(1), Rule: "z", Severity: diag.Note},
		{Path: "a", Span: at(1), Rule: "y", Severity: diag.Stop}, {Path: "a", Span: at(1), Rule: "b", Severity: diag.Note},
	}
	Sort(found)
	var order []string
	for _, d := range found {
		order = append(order, d.Path+d.Rule)
	}
	if got := strings.Join(order, " "); got != "ay ab az aa ba" {
		t.Errorf("order %s", got)
	}
}

// A rule that fails becomes a finding; the others still speak.
func TestAFailingRuleIsContained(t *testing.T) {
	m := &model.Model{File: source.NewFile("m.bayes", "")}
	found := contained(&rule.Rule{Name: "bad", Check: func(*facts.Facts) []diag.Finding { panic("on purpose") }}, facts.New(context.Background(), m))
	if len(found) != 1 || found[0].Rule != InternalFault || !strings.Contains(found[0].Headline, "bad") {
		t.Errorf("found %+v", found)
	}
}

func TestStrict(t *testing.T) {
	found := []diag.Finding{
		{Rule: "existence-not-decided", Severity: diag.Warn}, {Rule: "default-without-reason", Severity: diag.Note}, {Rule: "nothing-reported", Severity: diag.Note},
	}
	strict(found)
	if found[0].Severity != diag.Stop || found[1].Severity != diag.Warn || found[2].Severity != diag.Note {
		t.Errorf("severities %v %v %v", found[0].Severity, found[1].Severity, found[2].Severity)
	}
}

// The rules that --strict names exist.
func TestStrictNamesRules(t *testing.T) {
	for _, name := range []string{"existence-not-decided", "default-without-reason"} {
		if Find(name) == nil {
			t.Errorf("there is no rule %s", name)
		}
	}
}
