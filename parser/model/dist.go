package model

import (
	"fmt"
	"strings"

	"wellposed/grammar"
	"wellposed/parser/diag"
	"wellposed/parser/near"
	"wellposed/parser/source"
)

// dist resolves a distribution; nil when it could not be.
func (r *resolver) dist(d *grammar.Dist) *Dist {
	b := r.b
	if d == nil {
		r.failed = true
		return nil
	}
	spec := grammar.FindDistribution(d.Name)
	if spec == nil {
		var names []string
		for _, s := range grammar.Distributions {
			names = append(names, s.Name)
		}
		b.stop(LawUnknown, b.span(d.Pos, d.NameEnd), "There is no distribution %s%s", d.Name, ending(near.Suggest(d.Name, names)))
		r.failed = true
		return nil
	}
	out := &Dist{Span: b.span(d.Pos, d.EndPos), Spec: spec, Args: map[string]Expr{}}
	if spec.Name == "Mixture" {
		return r.mixture(d, out)
	}
	values := make([]Expr, len(d.Args))
	ok := true
	for i, a := range d.Args {
		if a.Dist != nil {
			b.stop(DoesNotFit, b.span(a.Pos, a.EndPos), "%s takes numbers, not distributions.", spec.Name)
			r.failed = true
			return nil
		}
		values[i] = r.expr(a.Value)
		ok = ok && values[i] != nil
	}
	if !ok {
		return nil
	}
	form, placed := r.place(spec, d)
	if form < 0 {
		r.failed = true
		return nil
	}
	out.Form = form
	for i, label := range placed {
		params := spec.Forms[form]
		if last := params[len(params)-1]; last.Variadic && label == last.Label {
			v, _ := out.Args[label].(*Vector)
			if v == nil {
				v = &Vector{Span: out.Span}
				out.Args[label] = v
			}
			if w, ok := values[i].(*Vector); ok && len(placed) == 1 {
				out.Args[label] = w
				continue
			}
			v.Items = append(v.Items, values[i])
			continue
		}
		out.Args[label] = values[i]
	}
	return out
}

func (r *resolver) mixture(d *grammar.Dist, out *Dist) *Dist {
	b := r.b
	for _, a := range d.Args {
		if a.Dist == nil || a.Weight == nil {
			b.stop(ArgumentMissing, b.span(a.Pos, a.EndPos), "A part of a Mixture reads `weight: distribution`.")
			r.failed = true
			return nil
		}
		w, part := r.expr(a.Weight), r.dist(a.Dist)
		if w == nil || part == nil {
			return nil
		}
		out.Parts = append(out.Parts, Part{w, part})
	}
	if len(out.Parts) == 0 {
		b.stop(ArgumentMissing, out.Span, "A Mixture needs parts: `Mixture(w: Normal(0, sd = 1), 1 - w: Normal(5, sd = 1))`.")
		r.failed = true
		return nil
	}
	return out
}

// place matches the arguments with the parametrisations. It returns the form and
// the label of each argument, or -1 after reporting why nothing fits.
func (r *resolver) place(spec *grammar.Distribution, d *grammar.Dist) (int, []string) {
	for i, form := range spec.Forms {
		if labels, ok := fit(form, d.Args, false); ok {
			return i, labels
		}
	}
	b := r.b
	// A label that no form has.
	var known []string
	for _, form := range spec.Forms {
		for _, p := range form {
			known = append(known, p.Label)
		}
	}
	for _, a := range d.Args {
		if a.Label == "" || contains(known, a.Label) {
			continue
		}
		b.stop(ArgumentUnknown, b.span(a.Pos, a.LabelEnd), "%s has no argument %s%s", spec.Name, a.Label, ending(near.Suggest(a.Label, known)))
		return -1, nil
	}
	// Everything fits once the names that must be written are guessed.
	for _, form := range spec.Forms {
		if labels, ok := fit(form, d.Args, true); ok {
			r.unnamed(spec, d, labels)
			return -1, nil
		}
	}
	var forms []string
	for _, form := range spec.Forms {
		forms = append(forms, "`"+formText(spec, form)+"`")
	}
	f := b.stop(ArgumentMissing, b.span(d.Pos, d.EndPos), "The arguments of %s fit none of its forms.", spec.Name)
	f.Notes = append(f.Notes, "It is written "+strings.Join(forms, " or ")+".")
	return -1, nil
}

// fit assigns labels to arguments; with guess a positional argument may stand
// for a named one.
func fit(form []grammar.Param, args []*grammar.Arg, guess bool) ([]string, bool) {
	labels := make([]string, len(args))
	taken := map[string]bool{}
	for i, a := range args {
		if a.Label == "" {
			continue
		}
		found := false
		for _, p := range form {
			found = found || p.Label == a.Label
		}
		if !found || taken[a.Label] {
			return nil, false
		}
		labels[i], taken[a.Label] = a.Label, true
	}
	next := 0
	for i, a := range args {
		if a.Label != "" {
			continue
		}
		for next < len(form) && (taken[form[next].Label] && !form[next].Variadic || form[next].Named && (!guess || form[next].Optional)) {
			next++
		}
		if next >= len(form) {
			return nil, false
		}
		labels[i], taken[form[next].Label] = form[next].Label, true
		if !form[next].Variadic {
			next++
		}
	}
	for _, p := range form {
		if !p.Optional && !taken[p.Label] {
			return nil, false
		}
	}
	return labels, true
}

// spreads are the labels that say how wide a law is.
var spreads = map[string]bool{"sd": true, "variance": true, "precision": true, "log sd": true, "scale": true, "rate": true}

// unnamed reports positional arguments for which a name must be written, with
// one fix for each reading.
func (r *resolver) unnamed(spec *grammar.Distribution, d *grammar.Dist, guessed []string) {
	b := r.b
	// Which arguments lack their name?
	var bare []int
	for i, a := range d.Args {
		if a.Label != "" {
			continue
		}
		if named(spec, guessed[i]) {
			bare = append(bare, i)
		}
	}
	rule := ArgumentUnnamed
	span := b.span(d.Pos, d.EndPos)
	if len(bare) > 0 {
		span = b.span(d.Args[bare[0]].Pos, d.Args[bare[len(bare)-1]].EndPos)
	}
	for _, i := range bare {
		if spreads[guessed[i]] {
			rule = SpreadUnnamed
			span = b.span(d.Args[i].Pos, d.Args[i].EndPos)
		}
	}
	var readings, rivals []string
	var fixes []diag.Fix
	for _, form := range spec.Forms {
		labels, ok := fit(form, d.Args, true)
		if !ok {
			continue
		}
		var edits []diag.Edit
		var names []string
		for i, a := range d.Args {
			if a.Label == "" && named(spec, labels[i]) {
				at := b.span(a.Pos, a.Pos)
				edits = append(edits, diag.Edit{Path: b.m.File.Path, Span: source.Span{Start: at.Start, End: at.Start}, Text: labels[i] + " = "})
				names = append(names, labels[i]+" =")
				if len(bare) > 0 && i == bare[len(bare)-1] && !contains(rivals, labels[i]) {
					rivals = append(rivals, labels[i])
				}
			}
		}
		readings = append(readings, "`"+formText(spec, form)+"`")
		fixes = append(fixes, diag.Fix{Title: "Write " + strings.Join(names, ", "), Grade: diag.ChangesPosterior, Edits: edits})
	}
	if len(fixes) == 1 && len(fixes[0].Edits) == 1 {
		fixes[0].Grade = diag.Same // one name and one place for it
	}
	what := "which spread this is"
	for _, name := range rivals {
		if name != "sd" && name != "variance" && name != "precision" {
			what = "what this is"
		}
	}
	f := b.stop(rule, span, "%s does not say %s: %s.", spec.Name, what, either(rivals))
	if len(rivals) < 2 {
		f.Headline = spec.Name + " needs the names of these arguments, because the field has rival conventions."
	}
	f.Notes = append(f.Notes, "It is written "+strings.Join(readings, " or ")+".")
	f.Fixes = fixes
}

// either lists alternatives: sd, variance or precision.
func either(list []string) string {
	if len(list) < 2 {
		return strings.Join(list, "")
	}
	return strings.Join(list[:len(list)-1], ", ") + " or " + list[len(list)-1]
}

func named(spec *grammar.Distribution, label string) bool {
	for _, form := range spec.Forms {
		for _, p := range form {
			if p.Label == label && p.Named {
				return true
			}
		}
	}
	return false
}

func contains(list []string, s string) bool {
	for _, x := range list {
		if x == s {
			return true
		}
	}
	return false
}

func formText(spec *grammar.Distribution, form []grammar.Param) string {
	var parts []string
	for _, p := range form {
		switch {
		case p.Optional:
		case p.Named:
			parts = append(parts, p.Label+" = …")
		case p.Variadic:
			parts = append(parts, p.Label+", …")
		default:
			parts = append(parts, p.Label)
		}
	}
	return fmt.Sprintf("%s(%s)", spec.Name, strings.Join(parts, ", "))
}
