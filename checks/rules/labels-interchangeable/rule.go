// Package labelsinterchangeable reports parts of a mixture that could change places.
package labelsinterchangeable

import (
	_ "embed"
	"fmt"
	"math/big"
	"sort"
	"strings"

	"wellposed/checks/facts"
	"wellposed/checks/rule"
	"wellposed/checks/wording"
	"wellposed/parser/diag"
	"wellposed/parser/model"
)

//go:embed doc.md
var page string

// Rule looks for mixtures that stay the same when two parts change places.
var Rule = &rule.Rule{
	Name: "labels-interchangeable", Severity: diag.Warn, Group: rule.Identification, Phase: rule.Exact,
	Brief:   "Two parts of a mixture have the same law and the same priors, so a report on one of them is a report on the other.",
	Doc:     page,
	Sources: []string{"Stephens 2000", "derivation"},
	Check:   check,
}

func check(f *facts.Facts) []diag.Finding {
	m := f.Model
	if !wording.Whole(m) {
		return nil
	}
	var found []diag.Finding
	for i, o := range m.Observations {
		if o.Dist == nil {
			continue
		}
		for a := range o.Dist.Parts {
			for b := a + 1; b < len(o.Dist.Parts); b++ {
				s := exchange(m, o.Dist.Parts[a], o.Dist.Parts[b])
				if s == nil || !elsewhereSame(m, i, s) {
					continue
				}
				for _, r := range m.Reports {
					before, after := canonical(r.Value, nil), canonical(r.Value, s)
					if before == after {
						continue
					}
					found = append(found, diag.Finding{
						Rule: "labels-interchangeable", Severity: diag.Warn, Path: m.File.Path, Span: r.Span, Target: r.Name,
						Headline: fmt.Sprintf("Parts %d and %d of the mixture can change places, so the posterior of %s is also that of %s.", a+1, b+1, model.Text(r.Value), after),
						Notes:    []string{"It goes away with priors that tell the parts apart, or with a report that does not depend on their order, such as the smaller of the two."},
						Related:  []diag.Related{{Span: o.Span, Message: "the mixture"}},
						Evidence: []diag.Evidence{{Name: "symmetry", Text: s.text(), Value: wording.Undefined, How: diag.Proved, Method: "likelihood and priors are unchanged by it"}},
					})
				}
			}
		}
	}
	return found
}

// swap maps unknowns to those that take their places.
type swap map[*model.Unknown]*model.Unknown

func (s swap) text() string {
	var list []string
	for u, v := range s {
		if u.Name < v.Name {
			list = append(list, u.Name+" ↔ "+v.Name)
		}
	}
	sort.Strings(list)
	return strings.Join(list, ", ")
}

// exchange is the swap that turns one part into the other, nil when there is none. The
// weights must be the same known number.
func exchange(m *model.Model, a, b model.Part) swap {
	if a.Dist == nil || b.Dist == nil || a.Dist.Spec != b.Dist.Spec || a.Dist.Form != b.Dist.Form || len(a.Dist.Parts) > 0 {
		return nil
	}
	if a.Weight == nil || b.Weight == nil || !model.Known(a.Weight) || !model.Known(b.Weight) || model.Text(a.Weight) != model.Text(b.Weight) {
		return nil
	}
	s := swap{}
	for label, x := range a.Dist.Args {
		y := b.Dist.Args[label]
		if y == nil {
			return nil
		}
		if model.Text(x) == model.Text(y) {
			continue
		}
		u, v := scalar(x), scalar(y)
		if u == nil || v == nil || s[u] != nil && s[u] != v || s[v] != nil && s[v] != u || !alike(m, u, v) {
			return nil
		}
		s[u], s[v] = v, u
	}
	if len(s) == 0 {
		return nil
	}
	return s
}

func scalar(e model.Expr) *model.Unknown {
	if ref, ok := e.(*model.UnknownRef); ok && ref.Unknown.Scalar() {
		return ref.Unknown
	}
	return nil
}

// alike reports whether two unknowns have the same support and the same prior.
func alike(m *model.Model, u, v *model.Unknown) bool {
	d := m.Declared()
	p, q := d.PriorOf(u), d.PriorOf(v)
	if p == nil || q == nil || !wording.OnItself(p) || !wording.OnItself(q) || p.Form != q.Form || u.Kind != v.Kind {
		return false
	}
	if !end(u.Support.Low, v.Support.Low) || !end(u.Support.High, v.Support.High) || p.Truncated != nil || q.Truncated != nil {
		return false
	}
	switch p.Form {
	case model.ByFlat:
		return true
	case model.ByDist:
		return model.DistText(p.Dist) == model.DistText(q.Dist)
	}
	return false
}

func end(a, b *big.Rat) bool {
	return a == nil && b == nil || a != nil && b != nil && a.Cmp(b) == 0
}

// elsewhereSame reports whether nothing but the mixture depends on what is swapped.
func elsewhereSame(m *model.Model, mixture int, s swap) bool {
	swapped := func(u *model.Unknown) bool { return s[u] != nil }
	for i, o := range m.Observations {
		if i != mixture && wording.Touches(o, swapped) {
			return false
		}
	}
	for _, p := range m.Priors {
		names := 0
		for u := range s {
			if mentions(p.Text, u.Name) {
				names++
			}
		}
		if names > 1 || names == 1 && (len(p.About) != 1 || !swapped(p.About[0])) {
			return false
		}
	}
	for _, p := range m.Populations {
		for u := range s {
			if mentions(model.DistText(p.Dist), u.Name) {
				return false
			}
		}
	}
	// Further parts that hold a swapped unknown would break the symmetry.
	parts := 0
	for _, part := range m.Observations[mixture].Dist.Parts {
		for u := range s {
			if mentions(model.DistText(part.Dist), u.Name) {
				parts++
				break
			}
		}
	}
	return parts == 2
}

// mentions reports whether a name stands in a text as a word.
func mentions(text, name string) bool {
	for _, word := range strings.FieldsFunc(text, func(r rune) bool { return strings.ContainsRune(" ()[],;*/+-^=<>∝", r) }) {
		if word == name {
			return true
		}
	}
	return false
}

// canonical writes an expression with swapped unknowns; sums, products, least and
// largest values in a fixed order.
func canonical(e model.Expr, s swap) string {
	list := func(args []model.Expr) []string {
		var out []string
		for _, a := range args {
			out = append(out, canonical(a, s))
		}
		return out
	}
	switch e := e.(type) {
	case *model.UnknownRef:
		if v := s[e.Unknown]; v != nil {
			return v.Name
		}
	case *model.LetRef:
		if e.Let != nil {
			return canonical(e.Let.Value, s)
		}
	case *model.Call:
		args := list(e.Args)
		if e.Func == "min" || e.Func == "max" {
			sort.Strings(args)
		}
		return e.Func + "(" + strings.Join(args, ", ") + ")"
	case *model.Op:
		args := list(e.Args)
		if len(args) == 1 {
			return "(" + e.Op + " " + args[0] + ")"
		}
		if e.Op == "+" || e.Op == "*" {
			sort.Strings(args)
		}
		return "(" + strings.Join(args, " "+e.Op+" ") + ")"
	}
	return model.Text(e)
}
