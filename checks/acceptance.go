package checks

import (
	"wellposed/parser/diag"
	"wellposed/parser/model"
)

// accepted applies the model's `accept` and `override` statements: an accepted
// note or warning is left out; a stop can't be accepted away, an override keeps
// it listed with its reason. A statement without a reason, or one that has run
// out, does nothing.
func accepted(m *model.Model, found []diag.Finding, today string) []diag.Finding {
	if len(m.Acceptances) == 0 {
		return found
	}
	kept := found[:0]
	for _, d := range found {
		drop := false
		for _, a := range m.Acceptances {
			if a.Rule != d.Rule || a.For != "" && a.For != d.Target || a.Because == "" || expired(a, today) {
				continue
			}
			switch {
			case a.Override:
				d.Overridden = a.Because
			case d.Severity < diag.Stop:
				drop = true
			}
		}
		if !drop {
			kept = append(kept, d)
		}
	}
	return kept
}

// expired reports whether the last day of an acceptance has passed. Dates are
// written year-month-day, so their texts compare as they do.
func expired(a *model.Acceptance, today string) bool {
	return a.Until != "" && today != "" && a.Until < today
}
