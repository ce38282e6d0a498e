package model

import (
	"math/big"
	"strconv"
	"strings"

	"wellposed/grammar"
	"wellposed/parser/diag"
	"wellposed/parser/near"
	"wellposed/parser/source"
)

// text is the value of a quoted text.
func (b *builder) text(t *grammar.Text) string {
	if t == nil {
		return ""
	}
	return unquote(t.Quoted)
}

// unquote drops the quotes and reads \" \\ and \n.
func unquote(s string) string {
	s = strings.TrimPrefix(s, `"`)
	if !strings.HasSuffix(s, `\"`) || strings.HasSuffix(s, `\\"`) {
		s = strings.TrimSuffix(s, `"`)
	}
	if !strings.Contains(s, `\`) {
		return s
	}
	return strings.NewReplacer(`\\`, `\`, `\"`, `"`, `\n`, "\n", `\t`, "\t").Replace(s)
}

func (b *builder) reason(r grammar.Reason) Reason {
	out := Reason{Because: b.text(r.Because), From: b.text(r.From)}
	for _, t := range []*grammar.Text{r.Because, r.From} {
		if t == nil {
			continue
		}
		s := b.span(t.Pos, t.EndPos)
		if out.Span.Empty() {
			out.Span = s
		}
		out.Span = out.Span.Cover(s)
	}
	return out
}

func (b *builder) title(s *grammar.Title) {
	if b.m.Title == "" {
		b.m.Title = b.text(s.Text)
	}
}

func (b *builder) matters(s *grammar.Matters) {
	if r := b.share(s.Share); r != nil && r.Sign() > 0 {
		b.m.Matters = r
	}
}

// share evaluates 10% or 0.1; nil with a problem when it is none.
func (b *builder) share(s *grammar.Share) *big.Rat {
	if s == nil {
		return nil
	}
	x := b.constant(s.Value)
	if x == nil {
		return nil
	}
	if s.Percent {
		x = new(big.Rat).Quo(x, big.NewRat(100, 1))
	}
	if x.Sign() < 0 || x.Cmp(big.NewRat(1, 1)) > 0 {
		b.stop(DoesNotFit, b.span(s.Pos, s.EndPos), "A share lies between 0 and 1, or 0%% and 100%%.")
		return nil
	}
	return x
}

// declare enters a name; it reports shadowing and a second declaration, and
// returns whether the name may be used.
func (b *builder) declare(name string, span source.Span, symbol any) bool {
	b.use(span, symbol, true)
	if what := reserved(name); what != "" {
		b.stop(Shadows, span, "%s is the name of a %s, so it can't be declared here.", name, what)
		return false
	}
	for _, e := range b.names[name] {
		if _, column := e.symbol.(*Column); column {
			continue // resolved where the name is used
		}
		f := b.stop(DeclaredTwice, span, "%s is declared a second time.", name)
		f.Related = append(f.Related, diag.Related{Path: b.m.File.Path, Span: e.span, Message: "the first declaration"})
		return false
	}
	b.names[name] = append(b.names[name], entry{symbol, span})
	return true
}

// reserved says what a name is in the language itself, or "".
func reserved(name string) string {
	if grammar.FindFunction(name) != nil {
		return "function"
	}
	for _, c := range grammar.Constants {
		if c == name {
			return "constant"
		}
	}
	if d := grammar.FindDistribution(name); d != nil && d.Name == name {
		return "distribution"
	}
	return ""
}

// givens enters all givens, then evaluates them in the order of their needs.
func (b *builder) givens() {
	type pending struct {
		line  *grammar.Line
		given *Given
		value grammar.Expr
	}
	var all []pending
	statements(b, func(s *grammar.Given) {
		for _, bind := range s.Bindings {
			g := &Given{Name: bind.Name.Text, Span: b.nameSpan(bind.Name)}
			if b.declare(g.Name, g.Span, g) {
				b.m.Givens = append(b.m.Givens, g)
				all = append(all, pending{b.line, g, bind.Value})
			}
		}
	})
	// A given may use another one: go round until nothing changes.
	for len(all) > 0 {
		var next []pending
		for _, p := range all {
			b.line = p.line
			if !b.given(p.given, p.value, false) {
				next = append(next, p)
			}
		}
		if len(next) == len(all) { // they wait for each other
			for _, p := range next {
				b.line = p.line
				b.given(p.given, p.value, true)
			}
			return
		}
		all = next
	}
}

// given evaluates one given; it reports false when a name is not ready yet,
// unless it is the last chance.
func (b *builder) given(g *Given, value grammar.Expr, last bool) bool {
	if list, ok := value.(*grammar.List); ok {
		c := &Column{Name: g.Name, Span: g.Span, Numeric: true}
		for _, item := range list.Items {
			c.Spans = append(c.Spans, b.spanOf(item))
			if q, ok := item.(*grammar.Quote); ok {
				c.Texts = append(c.Texts, unquote(q.Quoted))
				c.Numeric = false
				continue
			}
			x, ready := b.known(item, last)
			if !ready {
				return false
			}
			if x == nil {
				return true
			}
			c.Texts = append(c.Texts, decimalText(x))
		}
		c.fill()
		g.Vector = c
		return true
	}
	x, ready := b.known(value, last)
	if ready {
		g.Value = x
	}
	return ready
}

// known evaluates an expression of numbers and givens. ready is false when it
// needs a given that has no value yet and it is not the last chance.
func (b *builder) known(e grammar.Expr, last bool) (x *big.Rat, ready bool) {
	if !last {
		waits := false
		walkIdents(e, func(id *grammar.Ident) {
			for _, n := range b.names[id.Text] {
				if g, ok := n.symbol.(*Given); ok && g.Value == nil && g.Vector == nil {
					waits = true
				}
			}
		})
		if waits {
			return nil, false
		}
	}
	return b.constant(e), true
}

// constant evaluates an expression that must be known, exactly; nil with a
// problem otherwise.
func (b *builder) constant(e grammar.Expr) *big.Rat {
	r := b.resolver()
	x := r.expr(e)
	if x == nil || r.failed {
		return nil
	}
	if len(r.columns) > 0 {
		c := r.columns[0]
		b.stop(DoesNotFit, b.spanOf(e), "One known number must stand here; %s has %s.", c.Name, counted(c.Rows(), "value"))
		return nil
	}
	v, err := EvalExact(x, 0)
	if err != nil {
		b.stop(DoesNotFit, b.spanOf(e), "A known number must stand here: %v.", err)
		return nil
	}
	return v
}

// await marks names whose values are not there yet.
func (b *builder) await(s *grammar.Await) {
	for _, n := range s.Names {
		span := b.nameSpan(n)
		if table, name, dotted := strings.Cut(n.Text, "."); dotted {
			if c := b.columnOf(table, name, span); c != nil {
				c.Awaited = true
				b.m.Awaited = append(b.m.Awaited, &Awaited{Name: n.Text, Span: span, Column: c})
			}
			continue
		}
		entries := values(b.names[n.Text])
		if len(entries) == 0 {
			g := &Given{Name: n.Text, Span: span, Awaited: true}
			if b.declare(n.Text, span, g) {
				b.m.Givens = append(b.m.Givens, g)
				b.m.Awaited = append(b.m.Awaited, &Awaited{Name: n.Text, Span: span, Given: g})
			}
			continue
		}
		if len(entries) > 1 {
			b.ambiguous(n.Text, span, entries)
			continue
		}
		switch symbol := entries[0].symbol.(type) {
		case *Given:
			symbol.Awaited = true
			b.use(span, symbol, false)
			b.m.Awaited = append(b.m.Awaited, &Awaited{Name: n.Text, Span: span, Given: symbol})
		case *Column:
			symbol.Awaited = true
			b.use(span, symbol, false)
			b.m.Awaited = append(b.m.Awaited, &Awaited{Name: n.Text, Span: span, Column: symbol})
		default:
			b.stop(DoesNotFit, span, "Only data can be awaited; %s is none.", n.Text)
		}
	}
}

func (b *builder) ambiguous(name string, span source.Span, entries []entry) {
	f := b.stop(Ambiguous, span, "%s could mean %d things; write which one.", name, len(entries))
	for _, e := range entries {
		message := "the other meaning; it can't be written in another way, so rename one of the two"
		if c, ok := e.symbol.(*Column); ok && c.Table != nil {
			message = "written " + c.Table.Name + "." + c.Name
		}
		f.Related = append(f.Related, diag.Related{Path: b.m.File.Path, Span: e.span, Message: message})
	}
}

// unknown declares unknowns; their components are made in shape, when all
// tables are known.
func (b *builder) unknown(s *grammar.Unknown) {
	kind := grammar.FindKind(s.Kind.Name)
	if kind == nil {
		var names []string
		for _, k := range grammar.Kinds {
			names = append(names, k.Name)
		}
		b.stop(KindUnknown, b.span(s.Kind.Pos, s.Kind.EndPos), "There is no kind %s%s", s.Kind.Name, ending(near.Suggest(s.Kind.Name, names)))
		kind = grammar.FindKind("real")
	}
	size := 0
	if s.Kind.Size != nil {
		if x := b.constant(s.Kind.Size); x != nil {
			if !x.IsInt() || x.Sign() <= 0 || x.Cmp(big.NewRat(1000, 1)) > 0 {
				b.stop(DoesNotFit, b.spanOf(s.Kind.Size), "The size of %s is a whole number from 1 to 1000.", kind.Name)
			} else {
				size = int(x.Num().Int64())
			}
		}
	}
	if kind.Sized && size == 0 {
		b.stop(DoesNotFit, b.span(s.Kind.Pos, s.Kind.EndPos), "%s needs its size: %s(3).", kind.Name, kind.Name)
		size = 2
	}
	for _, d := range s.Declared {
		u := &Unknown{
			Name: d.Name.Text, Kind: kind, Label: b.text(s.Label), Span: b.nameSpan(d.Name), StmtSpan: b.statementSpan(),
			Size: size, Relative: -1, Reason: b.reason(s.Reason), Support: kindBounds(kind),
		}
		if s.In != nil {
			b.narrow(u, s.In)
		}
		if s.Limited != nil {
			b.limit(u, s)
		}
		if l, h := u.Support.Low, u.Support.High; l != nil && h != nil && l.Cmp(h) >= 0 && (!kind.Discrete || l.Cmp(h) > 0) {
			b.stop(DoesNotFit, u.StmtSpan, "No value is left for %s: a %s above %s and below %s does not exist.", u.Name, kind.Name, decimalText(l), decimalText(h))
			u.Support = kindBounds(kind)
		}
		if b.declare(u.Name, u.Span, u) {
			b.m.Unknowns = append(b.m.Unknowns, u)
		}
	}
}

func kindBounds(k *grammar.KindSpec) Bounds {
	bound := Bounds{LowOpen: true, HighOpen: true}
	if k.Low != "" && k.Low != "-inf" {
		bound.Low, _ = new(big.Rat).SetString(k.Low)
	}
	if k.High != "" && k.High != "inf" {
		bound.High, _ = new(big.Rat).SetString(k.High)
	}
	if k.Discrete {
		bound.LowOpen = false
	}
	return bound
}

// narrow applies `in (a, b)`.
func (b *builder) narrow(u *Unknown, in *grammar.Interval) {
	low, lowInf := b.end(in.Low)
	high, highInf := b.end(in.High)
	if low != nil && high != nil && low.Cmp(high) >= 0 {
		b.stop(DoesNotFit, b.span(in.Pos, in.EndPos), "The lower end of the interval is not below the upper one.")
		return
	}
	if low != nil && !lowInf && (u.Support.Low == nil || low.Cmp(u.Support.Low) >= 0) {
		u.Support.Low, u.Support.LowOpen = low, in.Open == "("
	}
	if high != nil && !highInf && (u.Support.High == nil || high.Cmp(u.Support.High) <= 0) {
		u.Support.High, u.Support.HighOpen = high, in.Close == ")"
	}
}

// end evaluates an end of an interval, which may be infinite.
func (b *builder) end(e grammar.Expr) (x *big.Rat, infinite bool) {
	switch e := e.(type) {
	case *grammar.Ident:
		if e.Text == "inf" {
			return nil, true
		}
	case *grammar.Unary:
		if id, ok := e.X.(*grammar.Ident); ok && id.Text == "inf" && e.Op == "-" {
			return nil, true
		}
	}
	return b.constant(e), false
}

// limit applies `limited to x >= 0 by nature`.
func (b *builder) limit(u *Unknown, s *grammar.Unknown) {
	u.Limit = &Limit{Span: b.spanOf(s.Limited), Nature: s.Nature}
	here := false
	// listed reports the name of one of the unknowns of the statement.
	listed := func(e grammar.Expr) bool {
		id, ok := e.(*grammar.Ident)
		if !ok {
			return false
		}
		for _, d := range s.Declared {
			if d.Name.Text == id.Text {
				return true
			}
		}
		return false
	}
	var apply func(e grammar.Expr) bool
	apply = func(e grammar.Expr) bool {
		if p, ok := e.(*grammar.Paren); ok {
			return apply(p.X)
		}
		c, ok := e.(*grammar.Binary)
		if !ok {
			return false
		}
		if c.Op == "and" {
			return apply(c.X) && apply(c.Y)
		}
		op, x, y := c.Op, c.X, c.Y
		if listed(y) && !listed(x) {
			op, x, y = map[string]string{"<": ">", "<=": ">=", ">": "<", ">=": "<="}[op], y, x
		}
		if !listed(x) {
			return false
		}
		id := x.(*grammar.Ident)
		if id.Text != u.Name {
			return true // a limit on another one of the list
		}
		here = true
		b.use(b.spanOf(id), u, false)
		v := b.constant(y)
		if v == nil {
			return true
		}
		switch op {
		case ">", ">=":
			if u.Support.Low == nil || v.Cmp(u.Support.Low) >= 0 {
				u.Support.Low, u.Support.LowOpen = v, op == ">"
			}
		case "<", "<=":
			if u.Support.High == nil || v.Cmp(u.Support.High) <= 0 {
				u.Support.High, u.Support.HighOpen = v, op == "<"
			}
		default:
			return false
		}
		return true
	}
	if !apply(s.Limited) {
		b.stop(DoesNotFit, u.Limit.Span, "A limit compares %s with a known number: `limited to %s >= 0`.", u.Name, u.Name)
	}
	if !here {
		u.Limit = nil
	}
}

func (b *builder) varyName(s *grammar.Vary) {
	u := &Unknown{
		Name: s.Name.Text, Kind: grammar.FindKind("effect"), Label: b.text(s.Label), Span: b.nameSpan(s.Name),
		StmtSpan: b.statementSpan(), Relative: -1, Reason: b.reason(s.Reason), Support: Bounds{LowOpen: true, HighOpen: true},
		Population: &Population{Span: b.statementSpan()},
	}
	u.Population.Unknown, u.Population.Reason = u, u.Reason
	if d := grammar.FindDistribution(s.Dist.Name); d != nil && d.On == grammar.OnPositive {
		u.Kind, u.Support.Low = grammar.FindKind("positive"), new(big.Rat)
	} else if d != nil && d.On == grammar.OnUnit {
		u.Kind, u.Support.Low, u.Support.High = grammar.FindKind("probability"), new(big.Rat), big.NewRat(1, 1)
	}
	if b.declare(u.Name, u.Span, u) {
		b.m.Unknowns = append(b.m.Unknowns, u)
	}
}

func (b *builder) letName(s *grammar.Let) {
	l := &Let{Name: s.Name.Text, Span: b.nameSpan(s.Name)}
	if b.declare(l.Name, l.Span, l) {
		b.m.Lets = append(b.m.Lets, l)
		b.lets[l] = &pendingLet{line: b.line, value: s.Value}
	}
}

func (b *builder) letValue(s *grammar.Let) {
	for _, e := range b.names[s.Name.Text] {
		if l, ok := e.symbol.(*Let); ok && b.lets[l] != nil && b.lets[l].line == b.line {
			b.letNow(l)
		}
	}
}

// letNow resolves a let when it is first needed; a let in terms of itself is a
// problem.
func (b *builder) letNow(l *Let) {
	p := b.lets[l]
	if p == nil || p.state == 2 {
		return
	}
	if p.state == 1 {
		b.stop(DoesNotFit, l.Span, "%s is defined in terms of itself.", l.Name)
		p.state = 2
		return
	}
	p.state = 1
	line := b.line
	b.line = p.line
	r := b.resolver()
	l.Value = r.expr(p.value)
	l.terms = r.terms
	if l.Value != nil {
		l.Table = r.rows(b.spanOf(p.value)).table
	}
	b.line = line
	p.state = 2
}

// counted writes a number of things: 1 row, 3 rows, 10,000 rows.
func counted(n int, what string) string {
	text := strconv.Itoa(n)
	for i := len(text) - 3; i > 0; i -= 3 {
		text = text[:i] + "," + text[i:]
	}
	if n == 1 {
		return text + " " + what
	}
	return text + " " + what + "s"
}

// ending makes a suggestion the end of a sentence.
func ending(suggestion string) string {
	if suggestion == "" {
		return "."
	}
	return suggestion
}

// walkIdents visits the identifiers of a syntax tree.
func walkIdents(e grammar.Expr, visit func(*grammar.Ident)) {
	switch e := e.(type) {
	case *grammar.Ident:
		visit(e)
	case *grammar.Index:
		visit(e.Of)
		for _, x := range e.By {
			walkIdents(x, visit)
		}
	case *grammar.Call:
		for _, a := range e.Args {
			walkIdents(a.Value, visit)
		}
	case *grammar.Unary:
		walkIdents(e.X, visit)
	case *grammar.Binary:
		walkIdents(e.X, visit)
		walkIdents(e.Y, visit)
	case *grammar.Paren:
		walkIdents(e.X, visit)
	case *grammar.Tuple:
		for _, x := range e.Items {
			walkIdents(x, visit)
		}
	case *grammar.List:
		for _, x := range e.Items {
			walkIdents(x, visit)
		}
	}
}
