package model

import (
	"math/big"
	"sort"
	"strings"

	"wellposed/grammar"
	"wellposed/parser/diag"
	"wellposed/parser/near"
	"wellposed/parser/source"
)

// resolver resolves the expressions of one statement and collects which columns
// they use.
type resolver struct {
	b *builder
	// columns used row by row, in order of appearance.
	columns []*Column
	// gathered are columns inside sum(x), mean(x) and the like, whose values are
	// all used at once; inside counts how deep such a call is at hand.
	gathered []*Column
	inside   int
	// terms counts the parts of the expressions, definitions of lets put in.
	terms int
	// failed is set once something could not be resolved.
	failed bool
	// observing allows between(…) and summary(…) at the top.
	observing bool
}

func (b *builder) resolver() *resolver { return &resolver{b: b} }

// never reports a name that nothing declares.
func (b *builder) never(name string, span source.Span) {
	if b.lost {
		return
	}
	var known []string
	for n := range b.names {
		if len([]rune(name)) > 2 || strings.EqualFold(n, name) { // any two letters are near each other
			known = append(known, n)
		}
	}
	sort.Strings(known)
	notes := []string(nil)
	if grammar.FindKind(name) != nil || grammar.FindDistribution(name) != nil {
		notes = []string{name + " is a word of the language; it names nothing in this model."}
	}
	b.problem(NeverDeclared, diag.Stop, span, name+" is never declared"+ending(near.Suggest(name, known)), notes...)
}

func (r *resolver) fail() Expr {
	r.failed = true
	return nil
}

// expr resolves an expression; nil when it could not be.
func (r *resolver) expr(e grammar.Expr) Expr {
	b := r.b
	r.terms++
	switch e := e.(type) {
	case nil:
		return r.fail()
	case *grammar.Number:
		x := ParseDecimal(e.Text)
		if x == nil {
			b.stop(DoesNotFit, b.spanOf(e), "The number %s is beyond what is read; exponents go from −10,000 to 10,000.", clip(e.Text))
			return r.fail()
		}
		return &Number{b.spanOf(e), x}
	case *grammar.Quote:
		return &Level{b.spanOf(e), unquote(e.Quoted)}
	case *grammar.Ident:
		return r.ident(e)
	case *grammar.Index:
		return r.index(e)
	case *grammar.Call:
		return r.call(e)
	case *grammar.Unary:
		x := r.expr(e.X)
		if x == nil {
			return nil
		}
		op := "neg"
		if e.Op == "not" {
			op = "not"
		}
		if c, ok := x.(*Constant); ok && op == "neg" && c.Name == "inf" {
			return &Constant{b.spanOf(e), "-inf"}
		}
		return &Op{b.spanOf(e), op, []Expr{x}}
	case *grammar.Binary:
		x, y := r.expr(e.X), r.expr(e.Y)
		if x == nil || y == nil {
			return nil
		}
		return &Op{b.spanOf(e), e.Op, []Expr{x, y}}
	case *grammar.Paren:
		return r.expr(e.X)
	case *grammar.Tuple:
		return r.vector(b.spanOf(e), e.Items)
	case *grammar.List:
		return r.vector(b.spanOf(e), e.Items)
	}
	b.stop(DoesNotFit, b.spanOf(e), "This can't stand here.")
	return r.fail()
}

func clip(s string) string {
	if len(s) > 40 {
		return s[:40] + "…"
	}
	return s
}

func (r *resolver) vector(span source.Span, items []grammar.Expr) Expr {
	v := &Vector{Span: span}
	for _, item := range items {
		x := r.expr(item)
		if x == nil {
			return nil
		}
		v.Items = append(v.Items, x)
	}
	return v
}

// uses notes columns, by row or gathered as the place has it.
func (r *resolver) uses(columns ...*Column) {
	if r.inside > 0 {
		r.gathered = append(r.gathered, columns...)
		return
	}
	r.columns = append(r.columns, columns...)
}

func (r *resolver) columnRef(span source.Span, c *Column) Expr {
	r.uses(c)
	return &ColumnRef{span, c}
}

func (r *resolver) ident(e *grammar.Ident) Expr {
	b, span := r.b, r.b.spanOf(e)
	if e.Table != "" {
		if c := b.columnOf(e.Table, e.Text, span); c != nil {
			return r.columnRef(span, c)
		}
		return r.fail()
	}
	if e.Text == "pi" || e.Text == "inf" {
		return &Constant{span, e.Text}
	}
	entries := values(b.names[e.Text])
	switch {
	case len(entries) > 1:
		b.ambiguous(e.Text, span, entries)
		return r.fail()
	case len(entries) == 0:
		b.never(e.Text, span)
		return r.fail()
	}
	b.use(span, entries[0].symbol, false)
	switch symbol := entries[0].symbol.(type) {
	case *Unknown:
		return &UnknownRef{Span: span, Unknown: symbol}
	case *Given:
		if symbol.Vector != nil {
			return r.columnRef(span, symbol.Vector)
		}
		return &GivenRef{span, symbol}
	case *Column:
		return r.columnRef(span, symbol)
	case *Let:
		b.letNow(symbol)
		if symbol.Value == nil {
			return r.fail()
		}
		if r.terms += symbol.terms; r.terms > MaxTerms {
			if !r.failed {
				b.stop(TooLarge, span, "With its definitions put in, this statement has more than %d terms.", MaxTerms)
			}
			return r.fail()
		}
		r.uses(columnsOf(symbol.Value)...)
		r.gathered = append(r.gathered, gatheredIn(symbol.Value)...)
		return &LetRef{span, symbol}
	}
	if t, ok := entries[0].symbol.(*Table); ok && len(t.Columns) == 0 {
		return r.fail() // it could not be read, which is reported where it is named
	}
	b.stop(DoesNotFit, span, "%s is a table; name one of its columns: %s.column.", e.Text, e.Text)
	return r.fail()
}

// values drops the tables from the meanings of a name where it has others: a
// table's bare name is no value, so a column may be called as its table is.
func values(entries []entry) []entry {
	if len(entries) < 2 {
		return entries
	}
	var out []entry
	for _, e := range entries {
		if _, table := e.symbol.(*Table); !table {
			out = append(out, e)
		}
	}
	return out
}

func (r *resolver) index(e *grammar.Index) Expr {
	b := r.b
	span := b.spanOf(e)
	base := r.ident(e.Of)
	if base == nil {
		return nil
	}
	u, ok := base.(*UnknownRef)
	if !ok {
		b.stop(DoesNotFit, span, "Only an unknown with components takes an index; %s is none.", e.Of.Text)
		return r.fail()
	}
	if u.Unknown.lost {
		return r.fail()
	}
	if u.Unknown.Scalar() {
		b.stop(DoesNotFit, span, "%s has one value; it takes no index.", e.Of.Text)
		return r.fail()
	}
	ref := &UnknownRef{Span: span, Unknown: u.Unknown}
	if i := r.coefficient(e, u.Unknown); i >= 0 {
		ref.Which, ref.Component = Fixed, i
		return ref
	}
	var labels []string
	for _, by := range e.By {
		x := r.expr(by)
		switch x := x.(type) {
		case nil:
			return nil
		case *ColumnRef:
			x.Column.levels()
			ref.By = append(ref.By, x.Column)
		case *Level:
			labels = append(labels, x.Text)
		default:
			v, err := EvalExact(x, 0)
			if err != nil || len(columnsOf(x)) > 0 {
				b.stop(NotALevel, b.spanOf(by), "An index is a column, a level in quotes or a number.")
				return r.fail()
			}
			labels = append(labels, decimalText(v))
		}
	}
	if len(ref.By) > 0 {
		if len(labels) > 0 {
			b.stop(NotALevel, span, "Columns and single levels can't be mixed in one index.")
			return r.fail()
		}
		if want := len(u.Unknown.Per); !u.Unknown.Either && want > 0 && len(ref.By) != want {
			b.stop(NotALevel, span, "%s has a component for each %s; the index names %d of these columns.", u.Unknown.Name, perText(u.Unknown), len(ref.By))
			return r.fail()
		}
		ref.Which = ByRow
		return ref
	}
	label := strings.Join(labels, " / ")
	for i, l := range u.Unknown.Levels {
		if l == label {
			ref.Which, ref.Component = Fixed, i
			return ref
		}
	}
	b.problem(NotALevel, diag.Stop, span, u.Unknown.Name+" has no component "+label+ending(near.Suggest(label, u.Unknown.Levels)), "It has "+listed(u.Unknown.Levels)+".")
	return r.fail()
}

// coefficient is the component that beta[age] means for an unknown declared
// `for (age, dose)`; -1 when the index is no such column.
func (r *resolver) coefficient(e *grammar.Index, u *Unknown) int {
	if len(u.For) == 0 || len(e.By) != 1 {
		return -1
	}
	id, ok := e.By[0].(*grammar.Ident)
	if !ok {
		return -1
	}
	for i, c := range u.For {
		if c.Name == id.Text && (id.Table == "" || c.Table != nil && c.Table.Name == id.Table) {
			r.b.use(r.b.spanOf(id), c, false)
			return i
		}
	}
	return -1
}

func perText(u *Unknown) string {
	var names []string
	for _, c := range u.Per {
		names = append(names, c.Name)
	}
	return strings.Join(names, " by ")
}

func (r *resolver) call(e *grammar.Call) Expr {
	b, span := r.b, r.b.spanOf(e)
	f := grammar.FindFunction(e.Name)
	if f == nil {
		var names []string
		for _, f := range grammar.Functions {
			names = append(names, f.Name)
		}
		b.stop(FunctionUnknown, b.span(e.Pos, e.NameEnd), "There is no function %s%s", e.Name, ending(near.Suggest(e.Name, names)))
		return r.fail()
	}
	if len(e.Args) < f.Min || f.Max >= 0 && len(e.Args) > f.Max {
		b.stop(FunctionUnknown, span, "%s takes %s; here it has %d.", f.Name, arity(f), len(e.Args))
		return r.fail()
	}
	if (f.Name == "between" || f.Name == "summary" || f.Name == "P") && !r.observing {
		where := map[string]string{"between": "after `observe`", "summary": "after `observe`", "P": "in `conclude`"}[f.Name]
		b.stop(DoesNotFit, span, "%s stands only %s.", f.Name, where)
		return r.fail()
	}
	call := &Call{Span: span, Func: f.Name}
	if gathers(f.Name, len(e.Args)) {
		call.memo = &memo{}
		r.inside++
		defer func() { r.inside-- }()
	}
	for _, a := range e.Args {
		if a.Label != "" && f.Name != "summary" {
			b.stop(ArgumentUnknown, b.span(a.Pos, a.LabelEnd), "The arguments of %s have no names.", f.Name)
			return r.fail()
		}
		x := r.expr(a.Value)
		if x == nil {
			return nil
		}
		call.Args = append(call.Args, x)
	}
	switch f.Name {
	case "linear":
		u, ok := call.Args[0].(*UnknownRef)
		if ok && u.Unknown.lost {
			return r.fail()
		}
		if !ok || len(u.Unknown.For) == 0 {
			b.stop(DoesNotFit, span, "linear takes an unknown that is declared `for (…)` columns.")
			return r.fail()
		}
		r.uses(u.Unknown.For...)
	case "previous":
		if _, ok := call.Args[0].(*ColumnRef); !ok {
			b.stop(DoesNotFit, span, "previous takes a column.")
			return r.fail()
		}
	}
	return call
}

func arity(f *grammar.Function) string {
	switch {
	case f.Max < 0:
		return "one argument or more"
	case f.Min == 1:
		return "one argument"
	case f.Min == 2:
		return "two arguments"
	}
	return "three arguments"
}

// rowsOf says over which rows a statement runs.
type rowsOf struct {
	table *Table
	count int // 1 when there are no columns
}

// rows checks that all columns of the statement go together.
func (r *resolver) rows(span source.Span) rowsOf {
	out := rowsOf{count: 1}
	var from *Column
	for _, c := range r.columns {
		switch {
		case from == nil:
			from = c
		case c.Table == from.Table && c.Table != nil:
		case c.Table != nil && from.Table != nil:
			r.b.stop(TwoTables, span, "%s.%s and %s.%s are columns of two tables, whose rows have nothing to do with each other.", from.Table.Name, from.Name, c.Table.Name, c.Name)
			r.failed = true
			return rowsOf{table: from.Table, count: from.Rows()}
		case c.Rows() != from.Rows():
			if c.Awaited || from.Awaited {
				continue
			}
			r.b.stop(RowsDiffer, span, "%s has %d values and %s has %d.", from.Name, from.Rows(), c.Name, c.Rows())
			r.failed = true
			return rowsOf{count: min(c.Rows(), from.Rows())}
		case c.Table != nil:
			from = c
		}
	}
	if from != nil {
		out = rowsOf{table: from.Table, count: from.Rows()}
	}
	return out
}

// columnsOf lists the columns whose value in the row at hand a resolved
// expression uses. Those inside sum(x), mean(x) and the like are not among them.
func columnsOf(e Expr) []*Column {
	var list []*Column
	eachColumn(e, false, func(c *Column, gathered bool) {
		if !gathered {
			list = append(list, c)
		}
	})
	return list
}

// gatheredIn lists the columns inside sum(x), mean(x) and the like.
func gatheredIn(e Expr) []*Column {
	var list []*Column
	eachColumn(e, false, func(c *Column, gathered bool) {
		if gathered {
			list = append(list, c)
		}
	})
	return list
}

func eachColumn(e Expr, gathered bool, visit func(c *Column, gathered bool)) {
	all := func(list []Expr, gathered bool) {
		for _, a := range list {
			eachColumn(a, gathered, visit)
		}
	}
	switch e := e.(type) {
	case *ColumnRef:
		visit(e.Column, gathered)
	case *UnknownRef:
		for _, c := range e.By {
			visit(c, gathered)
		}
	case *LetRef:
		if e.Let != nil {
			eachColumn(e.Let.Value, gathered, visit)
		}
	case *Op:
		all(e.Args, gathered)
	case *Vector:
		all(e.Items, gathered)
	case *Call:
		if e.Func == "linear" {
			if u, ok := e.Args[0].(*UnknownRef); ok {
				for _, c := range u.Unknown.For {
					visit(c, gathered)
				}
			}
		}
		all(e.Args, gathered || gathers(e.Func, len(e.Args)))
	}
}

// Walk visits an expression and its parts, definitions of lets included, parents
// first.
func Walk(e Expr, visit func(Expr)) {
	if e == nil {
		return
	}
	visit(e)
	switch e := e.(type) {
	case *LetRef:
		if e.Let != nil {
			Walk(e.Let.Value, visit)
		}
	case *Op:
		for _, a := range e.Args {
			Walk(a, visit)
		}
	case *Call:
		for _, a := range e.Args {
			Walk(a, visit)
		}
	case *Vector:
		for _, a := range e.Items {
			Walk(a, visit)
		}
	}
}

// UnknownsIn lists the unknowns of expressions, each once, in order of
// appearance.
func UnknownsIn(list ...Expr) []*Unknown {
	var out []*Unknown
	for _, e := range list {
		Walk(e, func(e Expr) {
			ref, ok := e.(*UnknownRef)
			if !ok {
				return
			}
			for _, u := range out {
				if u == ref.Unknown {
					return
				}
			}
			out = append(out, ref.Unknown)
		})
	}
	return out
}

// Known reports whether an expression depends on data and givens only.
func Known(e Expr) bool { return len(UnknownsIn(e)) == 0 }

// isOne reports whether a rational is 1.
func isOne(x *big.Rat) bool { return x.IsInt() && x.Num().IsInt64() && x.Num().Int64() == 1 }
