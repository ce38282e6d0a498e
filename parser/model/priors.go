package model

import (
	"context"
	"errors"

	"wellposed/grammar"
	"wellposed/parser"
	"wellposed/parser/diag"
	"wellposed/parser/source"
)

func (b *builder) prior(s *grammar.Prior) {
	p := b.spec(s.Spec, b.reason(s.Reason))
	if p == nil {
		return
	}
	p.Span = b.statementSpan()
	b.m.Priors = append(b.m.Priors, p)
}

func (b *builder) rival(s *grammar.Rival) {
	r := &Rival{Name: b.text(s.Name), Span: b.statementSpan(), Reason: b.reason(s.Reason)}
	for _, other := range b.m.Rivals {
		if other.Name == r.Name {
			f := b.stop(DeclaredTwice, b.span(s.Name.Pos, s.Name.EndPos), "There is a second rival named %q.", r.Name)
			f.Related = append(f.Related, diag.Related{Path: b.m.File.Path, Span: other.Span, Message: "the first one"})
			return
		}
	}
	for _, spec := range s.Specs {
		if p := b.spec(spec, r.Reason); p != nil && (p.Rule == nil || p.Rule.Name != Unreadable) {
			r.Priors = append(r.Priors, p)
		}
	}
	if len(r.Priors) > 0 {
		b.m.Rivals = append(b.m.Rivals, r)
	}
}

func (b *builder) rivals(s *grammar.Rivals) {
	for _, n := range s.For {
		if u := b.unknownNamed(n); u != nil {
			b.m.Standard = append(b.m.Standard, u)
		}
	}
}

// unknownNamed finds an unknown by its name.
func (b *builder) unknownNamed(n *grammar.Name) *Unknown {
	span := b.nameSpan(n)
	for _, e := range b.names[n.Text] {
		if u, ok := e.symbol.(*Unknown); ok {
			b.use(span, u, false)
			return u
		}
	}
	if len(b.names[n.Text]) == 0 {
		b.never(n.Text, span)
	} else {
		b.stop(DoesNotFit, span, "%s is no unknown.", n.Text)
	}
	return nil
}

// spec resolves what is said about a target; nil when it could not be.
func (b *builder) spec(s *grammar.PriorSpec, reason Reason) *Prior {
	if s == nil {
		return nil
	}
	r := b.resolver()
	target := r.expr(s.Target)
	p := &Prior{Span: b.span(s.Pos, s.EndPos), TargetSpan: b.spanOf(s.Target), Reason: reason}
	p.FormSpan = source.Span{Start: p.TargetSpan.End, End: b.span(s.Pos, s.EndPos).End}
	for p.FormSpan.Start < p.FormSpan.End && b.m.File.Text[p.FormSpan.Start] == ' ' {
		p.FormSpan.Start++
	}
	switch {
	case s.Dist != nil:
		p.Form = ByDist
		p.Dist = r.dist(s.Dist)
		for _, m := range s.Mods {
			if m.Truncated == nil {
				b.stop(DoesNotFit, b.span(m.Pos, m.EndPos), "Only `truncated to (a, b)` can follow a prior.")
				continue
			}
			p.Truncated = r.interval(m.Truncated)
		}
		if p.Dist == nil {
			r.failed = true
		}
	case s.Flat:
		p.Form = ByFlat
	case s.Kernel != nil:
		p.Form, p.Kernel = ByKernel, r.expr(s.Kernel)
	case s.Rule != nil:
		p.Form, p.Rule = ByRule, b.rule(s.Rule, r)
		if p.Rule == nil {
			r.failed = true
		}
	}
	if target == nil {
		return nil
	}
	p.Target, p.About = target, UnknownsIn(target)
	_, p.Joint = target.(*Vector)
	if len(p.About) == 0 {
		b.priorOnKnown(target, p)
		return nil
	}
	if r.failed {
		// The unknowns have a prior that can't be read: no second complaint.
		p.Form, p.Dist, p.Kernel, p.Rule = ByRule, nil, nil, &RulePrior{Name: Unreadable}
		p.Text = Text(target) + " " + string(Unreadable)
		return p
	}
	if !b.priorFits(p, r) {
		p.Form, p.Dist, p.Kernel, p.Rule, p.Truncated = ByRule, nil, nil, &RulePrior{Name: Unreadable}, nil
		p.Text = Text(target) + " " + string(Unreadable)
		return p
	}
	p.Text = p.text()
	if p.Dist != nil {
		b.parameters(p.Dist, []int{0})
	}
	return p
}

// priorFits checks that a prior speaks of whole unknowns and not of rows.
func (b *builder) priorFits(p *Prior, r *resolver) bool {
	before := len(b.m.Problems)
	seen := map[*Unknown]bool{}
	Walk(p.Target, func(e Expr) {
		ref, ok := e.(*UnknownRef)
		if !ok || ref.Which == Whole || ref.Unknown.Scalar() || seen[ref.Unknown] {
			return
		}
		u := ref.Unknown
		seen[u] = true
		f := b.stop(DoesNotFit, place(ref, p.TargetSpan), "A prior speaks of all %d components of %s, not of some of them.", u.Components(), u.Name)
		f.Target = u.Name
		f.Notes = append(f.Notes, "Write `prior "+u.Name+" …` for the law of each component, or declare what needs a prior of its own as an unknown of its own.")
	})
	for _, c := range r.columns {
		if p.Dist != nil && vectorLaw(p.Dist.Spec) && c.Table == nil {
			continue // a given list is the argument as a whole: Dirichlet(weights)
		}
		f := b.stop(DoesNotFit, place(p.Target, p.TargetSpan).Cover(p.FormSpan), "A prior is no statement about rows; %s has %s.", c.Name, counted(c.Rows(), "value"))
		f.Notes = append(f.Notes, "A law that differs between groups is a population model: `vary theta across study as …`. One number from a column is `mean("+c.Name+")`, `max("+c.Name+")` and the like.")
		break
	}
	return len(b.m.Problems) == before
}

// vectorLaw reports a law that takes lists as arguments.
func vectorLaw(spec *grammar.Distribution) bool {
	switch spec.On {
	case grammar.OnVectors, grammar.OnCountVector, grammar.OnMatrices, grammar.OnSimplex, grammar.OnLevels:
		return true
	}
	return false
}

// Unreadable is the rule of a prior whose statement could not be understood; a
// finding says why. No verdict is given for its unknowns.
const Unreadable RuleName = "not understood"

func (b *builder) priorOnKnown(target Expr, p *Prior) {
	what := "What stands here"
	switch t := target.(type) {
	case *GivenRef:
		what = t.Given.Name
	case *ColumnRef:
		what = t.Column.Name
	}
	f := b.stop(PriorOnObserved, p.TargetSpan, "%s is known: a prior states what is believed about an unknown.", what)
	f.Notes = append(f.Notes, "Declare an unknown (`unknown theta : location`) and let the data arise from it (`observe …`).")
}

// rule resolves a prior named by its rule.
func (b *builder) rule(s *grammar.PriorRule, r *resolver) *RulePrior {
	switch {
	case s.Jeffreys && s.Sense == "jointly":
		return &RulePrior{Name: JeffreysJointly}
	case s.Jeffreys && s.Sense == "separately":
		return &RulePrior{Name: JeffreysSeparately}
	case s.Jeffreys:
		return &RulePrior{Name: Jeffreys}
	case s.Matching:
		return &RulePrior{Name: MatchingPrior}
	case s.MaxInfo:
		return &RulePrior{Name: MaximalData}
	case s.Constrained != nil:
		mean := r.expr(s.Constrained)
		if mean == nil {
			return nil
		}
		return &RulePrior{Name: ConstrainedMean, Mean: mean}
	case len(s.Reference) > 0:
		out := &RulePrior{Name: ReferencePrior}
		for _, e := range s.Reference {
			x := r.expr(e)
			if x == nil {
				return nil
			}
			group := UnknownsIn(x)
			if len(group) == 0 {
				b.stop(DoesNotFit, b.spanOf(e), "The order of a reference prior names unknowns.")
				return nil
			}
			out.Order = append(out.Order, group)
		}
		return out
	}
	return nil
}

// PriorFromText reads what may follow `prior`, such as "p as Beta(1/2, 1/2)", in
// the context of a model. Its spans mean nothing.
func PriorFromText(m *Model, text string) (*Prior, error) {
	file := source.NewFile(m.File.Path, "prior "+text)
	tree, found := parser.Parse(file)
	if len(found) > 0 {
		return nil, errors.New(found[0].Headline)
	}
	b := &builder{ctx: context.Background(), m: &Model{File: file, Tree: tree}, names: namesOf(m), lets: map[*Let]*pendingLet{}}
	for _, line := range tree.Lines {
		s, ok := line.Statement.(*grammar.Prior)
		if !ok {
			continue
		}
		b.line = line
		b.prior(s)
	}
	if len(b.m.Problems) > 0 {
		return nil, errors.New(b.m.Problems[0].Headline)
	}
	if len(b.m.Priors) != 1 {
		return nil, errors.New("this is not one prior")
	}
	p := b.m.Priors[0]
	p.Span, p.TargetSpan, p.FormSpan = source.Span{}, source.Span{}, source.Span{}
	return p, nil
}

// namesOf is the name space of a built model.
func namesOf(m *Model) map[string][]entry {
	names := map[string][]entry{}
	add := func(name string, symbol any) { names[name] = append(names[name], entry{symbol: symbol}) }
	for _, g := range m.Givens {
		add(g.Name, g)
	}
	for _, t := range m.Tables {
		add(t.Name, t)
		for _, c := range t.Columns {
			add(c.Name, c)
		}
	}
	for _, u := range m.Unknowns {
		add(u.Name, u)
	}
	for _, l := range m.Lets {
		add(l.Name, l)
	}
	return names
}
