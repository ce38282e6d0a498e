package model

import (
	"math/big"
	"strings"

	"wellposed/grammar"
	"wellposed/parser/diag"
	"wellposed/parser/source"
)

var standardLevel = big.NewRat(95, 100)

// report resolves a reported quantity.
func (b *builder) report(s *grammar.Report) {
	r := b.resolver()
	value := r.expr(s.Value)
	if value == nil {
		return
	}
	out := &Report{Span: b.statementSpan(), ValueSpan: b.spanOf(s.Value), Value: value, Name: Text(value)}
	if s.Name != nil {
		out.Name, out.Span = s.Name.Text, b.statementSpan()
		b.use(b.nameSpan(s.Name), out, true)
	}
	if len(UnknownsIn(value)) == 0 {
		b.stop(DoesNotFit, out.ValueSpan, "%s depends on no unknown: it is known, and there is nothing to report.", out.Name)
		return
	}
	if b.overRows(r, out.ValueSpan, "What is reported") {
		return
	}
	for _, form := range s.Summaries {
		if form.Point != "" {
			out.Points = append(out.Points, form.Point)
			continue
		}
		for _, l := range form.Levels {
			level := b.share(l)
			if level == nil {
				continue
			}
			if level.Sign() == 0 || level.Cmp(big.NewRat(1, 1)) == 0 {
				b.stop(DoesNotFit, b.span(l.Pos, l.EndPos), "The level of an interval lies between 0%% and 100%%.")
				continue
			}
			out.Intervals = append(out.Intervals, Asked{Kind: IntervalKind(form.Kind), Level: level})
		}
	}
	if len(out.Intervals) == 0 {
		out.Intervals = []Asked{{Kind: Central, Level: standardLevel, Default: true}}
	}
	b.m.Reports = append(b.m.Reports, out)
}

// overRows reports an expression that has a value for each row where it must
// have one.
func (b *builder) overRows(r *resolver, span source.Span, what string) bool {
	if len(r.columns) == 0 {
		return false
	}
	c := r.columns[0]
	f := b.stop(DoesNotFit, span, "%s has one value, but %s has %s.", what, c.Name, counted(c.Rows(), "value"))
	f.Notes = append(f.Notes, "Put a number in its place, or one level in quotes for an index.")
	return true
}

// conclude resolves a conclusion: P(event) against a threshold, perhaps several
// joined by `and`.
func (b *builder) conclude(s *grammar.Conclude) {
	c := &Conclusion{Name: b.text(s.Name), Span: b.statementSpan()}
	r := b.resolver()
	r.observing = true
	when := r.expr(s.When)
	if when == nil || b.overRows(r, when.Place(), "A conclusion") {
		return
	}
	var clauses []Clause
	var split func(e Expr) bool
	split = func(e Expr) bool {
		op, ok := e.(*Op)
		if !ok {
			return false
		}
		if op.Op == "and" {
			return split(op.Args[0]) && split(op.Args[1])
		}
		x, y, sign := op.Args[0], Expr(nil), op.Op
		if len(op.Args) == 2 {
			y = op.Args[1]
		}
		if !isProbability(x) {
			x, y, sign = y, x, map[string]string{"<": ">", "<=": ">=", ">": "<", ">=": "<="}[sign]
		}
		if !isProbability(x) || y == nil || !strings.ContainsAny(sign, "<>") {
			return false
		}
		threshold, err := EvalExact(y, 0)
		if err != nil {
			return false
		}
		clauses = append(clauses, Clause{x.(*Call).Args[0], sign, threshold})
		return true
	}
	if !split(when) {
		f := b.stop(DoesNotFit, when.Place(), "A conclusion compares a probability with a number.")
		f.Notes = append(f.Notes, "It is written `conclude \"name\" when P(p < 0.05) >= 0.95`.")
		return
	}
	c.Event, c.Op, c.Threshold, c.More = clauses[0].Event, clauses[0].Op, clauses[0].Threshold, clauses[1:]
	b.use(b.span(s.Name.Pos, s.Name.EndPos), c, true)
	b.m.Conclusions = append(b.m.Conclusions, c)
}

func isProbability(e Expr) bool {
	c, ok := e.(*Call)
	return ok && c.Func == "P"
}

// suppose resolves planning values.
func (b *builder) suppose(s *grammar.Suppose) {
	r := b.resolver()
	target := r.expr(s.Target)
	if target == nil {
		return
	}
	out := &Supposed{Span: b.statementSpan(), Unknowns: UnknownsIn(target), Reason: b.reason(s.Reason)}
	if len(out.Unknowns) == 0 {
		b.stop(DoesNotFit, b.spanOf(s.Target), "Planning values are for unknowns; there is none here.")
		return
	}
	switch {
	case s.Dist != nil:
		if out.Dist = r.dist(s.Dist); out.Dist == nil {
			return
		}
		b.parameters(out.Dist, []int{0})
	case s.From != nil:
		out.From, out.To = b.constant(s.From), b.constant(s.To)
		if out.From == nil || out.To == nil {
			return
		}
		if out.From.Cmp(out.To) >= 0 {
			b.stop(DoesNotFit, b.statementSpan(), "The range of planning values is empty.")
			return
		}
	}
	for _, v := range s.Values {
		items := []grammar.Expr{v}
		if t, ok := v.(*grammar.Tuple); ok {
			items = t.Items
		}
		if len(items) != len(out.Unknowns) {
			b.stop(DoesNotFit, b.spanOf(v), "Here stand %d values for %d unknowns.", len(items), len(out.Unknowns))
			return
		}
		var point []*big.Rat
		for _, item := range items {
			x := b.constant(item)
			if x == nil {
				return
			}
			point = append(point, x)
		}
		out.Points = append(out.Points, point)
	}
	b.m.Supposed = append(b.m.Supposed, out)
}

// require resolves a promise.
func (b *builder) require(s *grammar.Require) {
	p := &Promise{Span: b.statementSpan(), Op: ">="}
	switch {
	case s.Every:
		p.Kind = EveryOutcome
	case s.With != nil:
		p.Kind, p.Bound = PosteriorChance, b.share(s.With.Least)
		if p.Bound == nil {
			return
		}
	case s.Coverage != nil:
		if !b.coverage(p, s.Coverage) {
			return
		}
	case s.Chance != nil:
		if !b.chance(p, s.Chance) {
			return
		}
	case s.Agree != nil:
		p.Kind, p.Bound = RivalsAgree, b.share(s.Agree.Within)
		p.Report = b.reportNamed(s.Agree.On)
		if p.Bound == nil || p.Report == nil {
			return
		}
	}
	b.m.Promises = append(b.m.Promises, p)
}

// reportNamed finds a report by its name.
func (b *builder) reportNamed(n *grammar.Name) *Report {
	var names []string
	for _, r := range b.m.Reports {
		if r.Name == n.Text {
			b.use(b.nameSpan(n), r, false)
			return r
		}
		names = append(names, r.Name)
	}
	b.stop(NeverDeclared, b.nameSpan(n), "No report is named %s; reported are %s.", n.Text, listed(names))
	return nil
}

func (b *builder) coverage(p *Promise, s *grammar.Coverage) bool {
	p.Kind, p.Report = LongRunCoverage, b.reportNamed(s.Of)
	if p.Report == nil {
		return false
	}
	for _, part := range s.Parts {
		switch part.Which {
		case "lowest":
			p.Lowest = b.share(part.Least)
		case "average":
			p.Average = b.share(part.Least)
		default:
			p.Over = b.unknownNamed(part.Unknown)
			p.From, p.To = b.constant(part.From), b.constant(part.To)
			if p.Over == nil || p.From == nil || p.To == nil {
				return false
			}
			if p.From.Cmp(p.To) >= 0 {
				b.stop(DoesNotFit, b.span(part.Pos, part.EndPos), "The range is empty.")
				return false
			}
		}
	}
	if p.Lowest == nil && p.Average == nil {
		b.stop(DoesNotFit, b.statementSpan(), "Say which coverage is promised: `lowest >= 88%%`, `average >= 94%%` or both.")
		return false
	}
	return true
}

func (b *builder) chance(p *Promise, s *grammar.Chance) bool {
	p.Kind, p.Op, p.Bound = ConclusionChance, s.Op, b.share(s.Bound)
	name := b.text(s.Of)
	var names []string
	for _, c := range b.m.Conclusions {
		if c.Name == name {
			p.Conclusion = c
			b.use(b.span(s.Of.Pos, s.Of.EndPos), c, false)
		}
		names = append(names, c.Name)
	}
	if p.Conclusion == nil {
		b.stop(NeverDeclared, b.span(s.Of.Pos, s.Of.EndPos), "There is no conclusion %q; the model concludes %s.", name, listed(names))
		return false
	}
	for _, w := range s.When {
		u, v := b.unknownNamed(w.Name), b.constant(w.Value)
		if u == nil || v == nil {
			return false
		}
		p.At = append(p.At, Setting{u, v})
	}
	return p.Bound != nil
}

// accept resolves an acceptance or an override.
func (b *builder) accept(rule *grammar.Words, subject *grammar.Subject, because, by *grammar.Text, until *grammar.Date, override bool) {
	a := &Acceptance{
		Span: b.statementSpan(), Override: override, Rule: strings.Join(rule.Parts, ""), RuleSpan: b.span(rule.Pos, rule.EndPos),
		Because: b.text(because), By: b.text(by),
	}
	if subject != nil {
		if subject.Name != nil {
			a.For = subject.Name.Text
			span := b.nameSpan(subject.Name)
			if entries := b.names[a.For]; len(entries) == 1 {
				b.use(span, entries[0].symbol, false)
			} else if r := b.reported(a.For); r != nil {
				b.use(span, r, false)
			} else if len(entries) == 0 {
				b.never(a.For, span)
			}
		} else {
			a.For = b.text(subject.Text)
		}
	}
	if until != nil {
		a.Until = b.date(until)
	}
	if a.Because == "" {
		f := b.problem(ArgumentMissing, diag.Warn, a.Span, "An acceptance without a reason does nothing.")
		f.Notes = append(f.Notes, "Add `because \"…\"`.")
	}
	b.m.Acceptances = append(b.m.Acceptances, a)
}

func (b *builder) reported(name string) *Report {
	for _, r := range b.m.Reports {
		if r.Name == name {
			return r
		}
	}
	return nil
}

// date reads a calendar day; an impossible one is a problem and does not expire.
func (b *builder) date(d *grammar.Date) string {
	parts := d.Parts
	for i := range parts {
		parts[i] = strings.Trim(parts[i], "-")
	}
	text := strings.Join(without(parts, ""), "-")
	if !validDate(text) {
		b.stop(DoesNotFit, b.span(d.Pos, d.EndPos), "%s is no day of the calendar; a date reads 2027-06-30.", text)
		return ""
	}
	return text
}

func without(list []string, drop string) []string {
	var out []string
	for _, s := range list {
		if s != drop {
			out = append(out, s)
		}
	}
	return out
}

// WithOutcome returns a copy of the model in which awaited givens and columns
// have the given values. Everything else is shared.
func (m *Model) WithOutcome(values map[string][]*big.Rat) *Model {
	dup := *m
	givens, columns := map[*Given]*Given{}, map[*Column]*Column{}
	for _, a := range m.Awaited {
		v, ok := values[a.Name]
		if !ok || len(v) == 0 {
			continue
		}
		if a.Given != nil {
			g := &Given{Name: a.Given.Name, Span: a.Given.Span}
			if a.Given.Vector != nil || len(v) > 1 {
				g.Vector = filled(a.Given.Name, a.Given.Span, nil, v)
			} else {
				g.Value = v[0]
			}
			givens[a.Given] = g
			if a.Given.Vector != nil {
				columns[a.Given.Vector] = g.Vector
			}
		} else if a.Column != nil {
			c := filled(a.Column.Name, a.Column.Span, a.Column, v)
			columns[a.Column] = c
		}
	}
	swap := func(e Expr) Expr { return substitute(e, givens, columns) }
	dup.Observations = make([]*Observation, len(m.Observations))
	for i, o := range m.Observations {
		n := *o
		n.What = swapAll(o.What, swap)
		n.Low, n.High, n.N, n.Mean, n.SD = swap(o.Low), swap(o.High), swap(o.N), swap(o.Mean), swap(o.SD)
		n.Right, n.Left, n.Weight = swap(o.Right), swap(o.Left), swap(o.Weight)
		n.Dist = swapDist(o.Dist, swap)
		n.Awaited = false
		for _, e := range append(append([]Expr{}, n.What...), n.Low, n.High, n.N, n.Mean, n.SD) {
			Walk(e, func(e Expr) {
				if g, ok := e.(*GivenRef); ok && g.Given.Awaited {
					n.Awaited = true
				}
				if c, ok := e.(*ColumnRef); ok && c.Column.Awaited {
					n.Awaited = true
				}
			})
		}
		dup.Observations[i] = &n
	}
	return &dup
}

func filled(name string, span source.Span, from *Column, v []*big.Rat) *Column {
	c := &Column{}
	if from != nil {
		*c = *from
	}
	c.Name, c.Span, c.Awaited, c.Missing, c.Texts, c.Levels, c.Codes = name, span, false, nil, nil, nil, nil
	for _, x := range v {
		c.Texts = append(c.Texts, decimalText(x))
	}
	c.fill()
	return c
}

func swapAll(list []Expr, swap func(Expr) Expr) []Expr {
	out := make([]Expr, len(list))
	for i, e := range list {
		out[i] = swap(e)
	}
	return out
}

func swapDist(d *Dist, swap func(Expr) Expr) *Dist {
	if d == nil {
		return nil
	}
	n := *d
	n.Args = map[string]Expr{}
	for k, e := range d.Args {
		n.Args[k] = swap(e)
	}
	n.Parts = nil
	for _, p := range d.Parts {
		n.Parts = append(n.Parts, Part{swap(p.Weight), swapDist(p.Dist, swap)})
	}
	return &n
}

// substitute replaces givens and columns; what does not change is shared.
func substitute(e Expr, givens map[*Given]*Given, columns map[*Column]*Column) Expr {
	again := func(list []Expr) ([]Expr, bool) {
		out, changed := make([]Expr, len(list)), false
		for i, x := range list {
			out[i] = substitute(x, givens, columns)
			changed = changed || out[i] != x
		}
		return out, changed
	}
	switch e := e.(type) {
	case *GivenRef:
		if g := givens[e.Given]; g != nil {
			if g.Vector != nil {
				return &ColumnRef{e.Span, g.Vector}
			}
			return &GivenRef{e.Span, g}
		}
	case *ColumnRef:
		if c := columns[e.Column]; c != nil {
			return &ColumnRef{e.Span, c}
		}
	case *LetRef:
		if v := substitute(e.Let.Value, givens, columns); v != e.Let.Value {
			l := *e.Let
			l.Value = v
			return &LetRef{e.Span, &l}
		}
	case *Op:
		if args, changed := again(e.Args); changed {
			return &Op{e.Span, e.Op, args}
		}
	case *Call:
		if args, changed := again(e.Args); changed {
			c := &Call{Span: e.Span, Func: e.Func, Args: args}
			if e.memo != nil {
				c.memo = &memo{}
			}
			return c
		}
	case *Vector:
		if items, changed := again(e.Items); changed {
			return &Vector{e.Span, items}
		}
	}
	return e
}
