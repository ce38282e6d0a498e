package model

import (
	"errors"
	"math"
	"math/big"
	"strconv"
	"strings"
	"sync"

	"wellposed/grammar"
	"wellposed/parser/diag"
	"wellposed/parser/source"
)

// TableCache keeps the tables that were read, by path and content, so that an
// edit of the model does not read them again. It may be shared. It forgets all
// it has when it would hold more than maxCachedCells.
type TableCache struct {
	mu     sync.Mutex
	tables map[string]*Table
	cells  int
}

const maxCachedCells = 20_000_000

// take returns a copy of a cached table with fresh columns sharing the cells, so
// that a model may mark them.
func (c *TableCache) take(key string) *Table {
	if c == nil {
		return nil
	}
	c.mu.Lock()
	t := c.tables[key]
	c.mu.Unlock()
	if t == nil {
		return nil
	}
	return t.copy()
}

func (c *TableCache) keep(key string, t *Table) {
	if c == nil {
		return
	}
	c.mu.Lock()
	defer c.mu.Unlock()
	cells := t.Rows * len(t.Columns)
	if c.tables == nil || len(c.tables) >= 64 || c.cells+cells > maxCachedCells {
		c.tables, c.cells = map[string]*Table{}, 0
	}
	if _, known := c.tables[key]; !known {
		c.cells += cells
	}
	c.tables[key] = t.copy()
}

func (t *Table) copy() *Table {
	dup := *t
	dup.Columns = make([]*Column, len(t.Columns))
	for i, c := range t.Columns {
		column := *c
		column.Table = &dup
		dup.Columns[i] = &column
	}
	return &dup
}

// table reads a table and enters its columns.
func (b *builder) table(s *grammar.Table) {
	span := b.nameSpan(s.Name)
	var t *Table
	if s.From != nil {
		t = b.fileTable(s, span)
	} else {
		t = b.inlineTable(s, span)
	}
	if t == nil {
		// Keep the name, so that its uses are not reported as well.
		b.lost = true
		t = &Table{Name: s.Name.Text, Span: span}
		if s.From != nil {
			t.Path = b.text(s.From)
		}
	}
	if !b.declare(t.Name, t.Span, t) {
		return
	}
	b.m.Tables = append(b.m.Tables, t)
	seen := map[string]bool{}
	for _, c := range t.Columns {
		if seen[c.Name] {
			b.stop(DeclaredTwice, c.Span, "The table %s has two columns named %s.", t.Name, c.Name)
			continue
		}
		seen[c.Name] = true
		b.names[c.Name] = append(b.names[c.Name], entry{c, c.Span})
		if t.Path == "" {
			b.use(c.Span, c, true)
		}
	}
}

func (b *builder) fileTable(s *grammar.Table, span source.Span) *Table {
	name := b.text(s.From)
	at := b.span(s.From.Pos, s.From.EndPos)
	content, path, err := b.o.Loader.Load(b.m.File.Path, name)
	if err != nil {
		f := b.stop(TableUnreadable, at, "The table %s can't be read from %q: %v.", s.Name.Text, name, err)
		f.Related = append(f.Related, diag.Related{Path: path, Message: "the data file", Row: 1, Column: 1})
		return nil
	}
	text := string(content)
	sum := hash(text)
	if t := b.o.Tables.take(path + "\x00" + sum); t != nil {
		t.Name, t.Span, t.Path = s.Name.Text, span, name
		for _, c := range t.Columns {
			c.Span = at
		}
		return t
	}
	limit := b.o.MaxRows
	if limit <= 0 {
		limit = MaxRows
	}
	columns, err := readCSV(text, limit)
	if err != nil {
		var where *csvError
		row, column := 1, 1
		if errors.As(err, &where) {
			row, column = max(1, where.line), max(1, where.column)
		}
		f := b.stop(TableUnreadable, at, "The table %s can't be read from %q: %v.", s.Name.Text, name, err)
		f.Related = append(f.Related, diag.Related{Path: path, Row: row, Column: column, Message: "here the data file can't be read"})
		return nil
	}
	t := &Table{Name: s.Name.Text, Span: span, Path: name, FilePath: path, Hash: sum, Columns: columns, Rows: columns[0].Rows()}
	for _, c := range columns {
		c.Table, c.Span = t, at
	}
	if len(columns) == 1 && strings.ContainsAny(columns[0].Name, ";\t") {
		b.problem(TableUnreadable, diag.Warn, at, "The table "+t.Name+" has one column, named "+strconv.Quote(columns[0].Name)+".",
			"Cells are separated by commas; this file seems to use another separator.")
	}
	b.o.Tables.keep(path+"\x00"+sum, t)
	return t
}

func (b *builder) inlineTable(s *grammar.Table, span source.Span) *Table {
	if len(s.Rows) == 0 {
		b.stop(TableUnreadable, span, "The table %s has neither rows below it nor `from \"FILE\"`.", s.Name.Text)
		return nil
	}
	t := &Table{Name: s.Name.Text, Span: span, Rows: len(s.Rows) - 1}
	head := s.Rows[0]
	var all strings.Builder
	for i, cell := range head.Cells {
		c := &Column{Name: cell.Text, Table: t, Index: i, Span: b.span(cell.Pos, cell.EndPos)}
		t.Columns = append(t.Columns, c)
	}
	for _, r := range s.Rows[1:] {
		if len(r.Cells) != len(head.Cells) {
			b.stop(TableUnreadable, b.span(r.Pos, r.EndPos), "This row has %d cells where the header names %d columns.", len(r.Cells), len(head.Cells))
			return nil
		}
		for i, cell := range r.Cells {
			c := t.Columns[i]
			c.Texts = append(c.Texts, cell.Text)
			c.Spans = append(c.Spans, b.span(cell.Pos, cell.EndPos))
			all.WriteString(cell.Text)
			all.WriteByte(0x1f)
		}
		all.WriteByte('\n')
	}
	t.Hash = hash(all.String())
	for _, c := range t.Columns {
		c.fill()
	}
	return t
}

// fill works out what the cells are.
func (c *Column) fill() {
	c.Numeric = true
	c.Floats = make([]float64, len(c.Texts))
	for i, text := range c.Texts {
		c.set(i, text)
	}
}

// set enters a cell and works out what it is.
func (c *Column) set(row int, text string) {
	c.Texts[row] = text
	if len(text) <= 2 && (text == "" || text == "NA") {
		if c.Missing == nil {
			c.Missing = make([]bool, len(c.Texts))
		}
		c.Missing[row] = true
		c.Floats[row] = math.NaN()
		return
	}
	x, ok := decimalFloat(text)
	if !ok {
		r, ok := fraction(text) // vectors of fractions hold "1/3"
		if !ok {
			c.Numeric = false
			c.Floats[row] = math.NaN()
			return
		}
		x, _ = r.Float64()
	}
	c.Floats[row] = x
}

// levels makes the levels of a column that is used as an index.
func (c *Column) levels() {
	if c.Codes != nil {
		return
	}
	c.Codes = make([]int32, len(c.Texts))
	known := map[string]int32{}
	for i, text := range c.Texts {
		if c.missing(i) {
			c.Codes[i] = -1
			continue
		}
		code, ok := known[text]
		if !ok {
			code = int32(len(c.Levels))
			known[text] = code
			c.Levels = append(c.Levels, text)
		}
		c.Codes[i] = code
	}
}

func (c *Column) missing(row int) bool { return c.Missing != nil && c.Missing[row] }

// shape makes the components of the unknowns, when all names are known.
func (b *builder) shape() {
	for _, entries := range b.names {
		if list := values(entries); len(list) > 1 {
			for _, e := range list {
				if c, ok := e.symbol.(*Column); ok {
					c.shared = true
				}
			}
		}
	}
	statements(b, func(s *grammar.Unknown) {
		for _, d := range s.Declared {
			if u := b.declaredUnknown(d.Name); u != nil {
				b.components(u, d)
			}
		}
	})
	statements(b, func(s *grammar.Vary) {
		if u := b.declaredUnknown(s.Name); u != nil {
			u.Per = b.columns(s.Across)
			u.lost = len(u.Per) != len(s.Across)
			b.perLevels(u)
		}
	})
	total := 0
	for _, u := range b.m.Unknowns {
		if len(u.Levels) == 0 {
			u.Levels = []string{""}
		}
		total += len(u.Levels)
	}
	if total > MaxComponents && len(b.m.Unknowns) > 0 {
		b.line = b.m.Tree.Lines[0]
		b.stop(TooLarge, b.m.Unknowns[0].Span, "The unknowns have %d components together; at most %d are examined.", total, MaxComponents)
	}
}

// declaredUnknown returns the unknown that the statement at hand declares.
func (b *builder) declaredUnknown(n *grammar.Name) *Unknown {
	for _, e := range b.names[n.Text] {
		if u, ok := e.symbol.(*Unknown); ok && u.Span == b.nameSpan(n) {
			return u
		}
	}
	return nil
}

func (b *builder) components(u *Unknown, d *grammar.Declared) {
	switch {
	case len(d.Either) > 0:
		u.Per, u.Either = b.columns(d.Either), true
		b.eitherLevels(u)
	case len(d.Per) > 0:
		u.Per = b.columns(d.Per)
		b.perLevels(u)
	case len(d.For) > 0:
		u.For = b.columns(d.For)
		for _, c := range u.For {
			u.Levels = append(u.Levels, c.Name)
			if !c.Numeric {
				b.stop(DoesNotFit, b.nameSpan(d.Name), "%s has one component for each column, but %s does not hold numbers; use `per %s`.", u.Name, c.Name, c.Name)
			}
		}
	case u.Size > 0:
		for i := 1; i <= u.Size; i++ {
			u.Levels = append(u.Levels, strconv.Itoa(i))
		}
	}
	u.lost = len(u.Per)+len(u.For) != len(d.Either)+len(d.Per)+len(d.For)
	if d.Relative != nil && !u.lost {
		level := b.text(d.Relative)
		for i, l := range u.Levels {
			if l == level {
				u.Relative = i
			}
		}
		if u.Relative < 0 {
			b.stop(NotALevel, b.span(d.Relative.Pos, d.Relative.EndPos), "%q is no level of %s; it has %s.", level, u.Name, listed(u.Levels))
		}
	}
}

// columns finds columns by name.
func (b *builder) columns(names []*grammar.Name) []*Column {
	var list []*Column
	for _, n := range names {
		if c := b.column(n); c != nil {
			list = append(list, c)
		}
	}
	for _, c := range list {
		if c.Table != list[0].Table || c.Rows() != list[0].Rows() {
			b.stop(TwoTables, b.nameSpan(names[0]), "%s and %s are columns of two tables.", list[0].Name, c.Name)
			return list[:1]
		}
	}
	return list
}

func (b *builder) column(n *grammar.Name) *Column {
	span := b.nameSpan(n)
	table, name, dotted := strings.Cut(n.Text, ".")
	if dotted {
		return b.columnOf(table, name, span)
	}
	entries := values(b.names[n.Text])
	switch {
	case len(entries) > 1:
		b.ambiguous(n.Text, span, entries)
		return nil
	case len(entries) == 0:
		b.never(n.Text, span)
		return nil
	}
	switch symbol := entries[0].symbol.(type) {
	case *Column:
		b.use(span, symbol, false)
		return symbol
	case *Given:
		b.use(span, symbol, false)
		if symbol.Vector != nil {
			return symbol.Vector
		}
	}
	b.stop(DoesNotFit, span, "A column of a table must stand here; %s is none.", n.Text)
	return nil
}

func (b *builder) columnOf(table, name string, span source.Span) *Column {
	for _, e := range b.names[table] {
		t, ok := e.symbol.(*Table)
		if !ok {
			continue
		}
		var names []string
		for _, c := range t.Columns {
			if c.Name == name {
				b.use(span, c, false)
				return c
			}
			names = append(names, c.Name)
		}
		if len(t.Columns) > 0 {
			b.stop(NoColumn, span, "The table %s has no column %s; it has %s.", table, name, listed(names))
		}
		return nil
	}
	b.never(table, span)
	return nil
}

func (b *builder) perLevels(u *Unknown) {
	if len(u.Per) == 0 {
		return
	}
	for _, c := range u.Per {
		c.levels()
	}
	u.componentOf = map[string]int{}
	if len(u.Per) == 1 {
		u.Levels = u.Per[0].Levels
		for i, level := range u.Levels {
			u.componentOf[level] = i
		}
		return
	}
	made := map[string]int{} // the row that made a component
	for row := range u.Per[0].Rows() {
		label, ok := rowLabel(u.Per, row)
		if !ok {
			continue
		}
		if first, known := made[label]; known {
			for _, c := range u.Per {
				if c.Texts[row] != c.Texts[first] {
					f := b.stop(DoesNotFit, u.Span, "Two combinations of %s both read %q; change the levels so that they differ.", perText(u), clip(label))
					f.Related = append(f.Related, cell(c, first, b.m.File.Path, "one of them"), cell(c, row, b.m.File.Path, "the other"))
					return
				}
			}
			continue
		}
		made[label] = row
		u.componentOf[label] = len(u.Levels)
		u.Levels = append(u.Levels, label)
	}
}

func (b *builder) eitherLevels(u *Unknown) {
	u.componentOf = map[string]int{}
	if len(u.Per) == 0 {
		return
	}
	for row := range u.Per[0].Rows() {
		for _, c := range u.Per {
			if c.missing(row) {
				continue
			}
			if _, known := u.componentOf[c.Texts[row]]; !known {
				u.componentOf[c.Texts[row]] = len(u.Levels)
				u.Levels = append(u.Levels, c.Texts[row])
			}
		}
	}
	for _, c := range u.Per {
		c.levels()
	}
}

// rowLabel joins the levels of a row; ok is false when one is missing.
func rowLabel(columns []*Column, row int) (label string, ok bool) {
	if len(columns) == 1 {
		return columns[0].Texts[row], !columns[0].missing(row)
	}
	parts := make([]string, len(columns))
	for i, c := range columns {
		if c.missing(row) {
			return "", false
		}
		parts[i] = c.Texts[row]
	}
	return strings.Join(parts, " / "), true
}

// ComponentOf returns the component of a row by its levels in the columns; -1
// when the levels are none of the unknown's.
func (u *Unknown) ComponentOf(by []*Column, row int) int {
	if len(by) == 1 && len(u.Per) == 1 && !u.Either && by[0] == u.Per[0] && row >= 0 && row < len(by[0].Codes) {
		return int(by[0].Codes[row])
	}
	if len(by) == 0 || row < 0 || row >= by[0].Rows() {
		return -1
	}
	label, ok := rowLabel(by, row)
	if !ok {
		return -1
	}
	if i, known := u.componentOf[label]; known {
		return i
	}
	return -1
}

// listed joins names for a message, the first dozen when there are many.
func listed(names []string) string {
	if len(names) == 0 {
		return "none"
	}
	if len(names) > 12 {
		return strings.Join(names[:12], ", ") + ", …"
	}
	return strings.Join(names, ", ")
}

// decimalText writes an exact number so that ParseDecimal or a fraction reads it
// back.
func decimalText(x *big.Rat) string {
	if x.IsInt() {
		return x.Num().String()
	}
	// A fraction in lowest terms ends as a decimal when its denominator has no
	// prime factors but 2 and 5; n digits suffice for 2^n and 5^n.
	den, digits := new(big.Int).Set(x.Denom()), 0
	for _, p := range []int64{2, 5} {
		n, prime, rem := 0, big.NewInt(p), new(big.Int)
		for {
			q, r := new(big.Int).QuoRem(den, prime, rem)
			if r.Sign() != 0 {
				break
			}
			den, n = q, n+1
		}
		digits = max(digits, n)
	}
	if den.IsInt64() && den.Int64() == 1 && digits <= 60 {
		return x.FloatString(digits)
	}
	return x.RatString()
}

// fraction reads a/b of whole numbers.
func fraction(text string) (*big.Rat, bool) {
	if a, b, ok := strings.Cut(text, "/"); ok && isDecimal(a) && isDecimal(b) && !strings.ContainsAny(text, ".eE") {
		return new(big.Rat).SetString(text)
	}
	return nil, false
}
