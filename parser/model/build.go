package model

import (
	"context"
	"math/big"
	"slices"
	"sort"

	"wellposed/grammar"
	"wellposed/parser"
	"wellposed/parser/diag"
	"wellposed/parser/source"
)

// MaxComponents bounds the components of all unknowns of a model together.
const MaxComponents = 1_000_000

// MaxTerms bounds the parts of one statement's expressions once the definitions
// of its lets are put in: a chain of lets could double at each step.
const MaxTerms = 100_000

// Options say where data come from and how much is read.
type Options struct {
	// Loader reads data files; nil means Disk{}.
	Loader Loader
	// Matters is the threshold when the file does not say; nil means 1/10.
	Matters *big.Rat
	// MaxRows bounds the rows of a table; 0 means the package's bound.
	MaxRows int
	// Tables, when set, keeps read tables between builds, keyed by content.
	Tables *TableCache
}

// matters is the threshold of a file that does not say.
func (o Options) matters() *big.Rat {
	if o.Matters != nil {
		return o.Matters
	}
	return big.NewRat(1, 10)
}

// Build reads a model file and its data. It never fails: what can't be
// understood is in Problems, and the rest is there.
func Build(ctx context.Context, file *source.File, o Options) *Model {
	tree, found := parser.Parse(file)
	return BuildTree(ctx, file, tree, found, o)
}

// BuildTree is Build for a tree that is read already; found are the findings of
// reading it.
func BuildTree(ctx context.Context, file *source.File, tree *grammar.File, found []diag.Finding, o Options) *Model {
	if o.Loader == nil {
		o.Loader = Disk{}
	}
	b := &builder{
		ctx: ctx, o: o, names: map[string][]entry{},
		m: &Model{File: file, Tree: tree, Matters: o.matters(), Problems: append([]diag.Finding(nil), found...)},
	}
	b.build()
	sort.SliceStable(b.m.Uses, func(i, j int) bool { return b.m.Uses[i].Span.Start < b.m.Uses[j].Span.Start })
	sort.SliceStable(b.m.Problems, func(i, j int) bool { return b.m.Problems[i].Span.Start < b.m.Problems[j].Span.Start })
	// The middle of a chain a < b < c is resolved twice; it stands once.
	b.m.Uses = slices.CompactFunc(b.m.Uses, func(x, y Use) bool { return x == y })
	b.m.Problems = slices.CompactFunc(b.m.Problems, func(x, y diag.Finding) bool {
		return x.Rule == y.Rule && x.Span == y.Span && x.Headline == y.Headline
	})
	return b.m
}

// builder makes one model.
type builder struct {
	ctx   context.Context
	o     Options
	m     *Model
	names map[string][]entry
	line  *grammar.Line // the statement at hand
	lets  map[*Let]*pendingLet
	// lost is set when a data file could not be read: a name that is not known
	// may be one of its columns, so it is not reported as well.
	lost bool
}

type pendingLet struct {
	line  *grammar.Line
	value grammar.Expr
	state int // 0 not yet, 1 at work, 2 done
}

// entry is one meaning of a name.
type entry struct {
	symbol any
	span   source.Span
}

// statements calls do for each whole statement of a type, with b.line set.
func statements[S grammar.Statement](b *builder, do func(S)) {
	for _, line := range b.m.Tree.Lines {
		s, ok := line.Statement.(S)
		if !ok || line.Broken || b.ctx.Err() != nil {
			continue
		}
		b.line = line
		do(s)
	}
}

func (b *builder) build() {
	b.lets = map[*Let]*pendingLet{}
	statements(b, b.title)
	statements(b, func(s *grammar.Note) { b.m.Notes = append(b.m.Notes, b.text(s.Text)) })
	statements(b, func(s *grammar.Field) { b.m.Field = b.text(s.Text) })
	statements(b, b.matters)
	statements(b, b.table)
	b.givens()
	statements(b, b.await)
	statements(b, b.unknown)
	statements(b, b.varyName)
	statements(b, b.letName)
	b.shape()
	statements(b, b.letValue)
	statements(b, b.vary)
	statements(b, b.observe)
	statements(b, b.prior)
	statements(b, b.rival)
	statements(b, b.rivals)
	statements(b, b.report)
	statements(b, b.conclude)
	statements(b, b.suppose)
	statements(b, b.require)
	statements(b, func(s *grammar.Accept) { b.accept(s.Rule, s.For, s.Because, s.By, s.Until, false) })
	statements(b, func(s *grammar.Override) { b.accept(s.Rule, s.For, s.Because, s.By, s.Until, true) })
	b.everyUnknownHasPrior()
}

// span is the absolute place of two marks of the statement at hand.
func (b *builder) span(from, to grammar.Mark) source.Span {
	s := source.Span{Start: from.Offset, End: to.Offset}
	if s.End < s.Start {
		s.End = s.Start
	}
	return s.Shift(b.line.Start)
}

func (b *builder) spanOf(e grammar.Expr) source.Span {
	if e == nil {
		return b.statementSpan()
	}
	from, to := e.Span()
	return b.span(from, to)
}

func (b *builder) nameSpan(n *grammar.Name) source.Span { return b.span(n.Pos, n.EndPos) }

// statementSpan is the place of the statement at hand without what follows it.
func (b *builder) statementSpan() source.Span {
	text := b.line.Text
	end := len(text)
	for _, c := range b.line.Comments {
		if c.Pos.Offset+len(c.Text) >= end {
			end = c.Pos.Offset
		}
	}
	for end > 0 && (text[end-1] == ' ' || text[end-1] == '\n' || text[end-1] == '\r' || text[end-1] == '\t') {
		end--
	}
	return source.Span{Start: b.line.Start, End: b.line.Start + end}
}

// use records that a name stands at a place.
func (b *builder) use(span source.Span, symbol any, definition bool) {
	b.m.Uses = append(b.m.Uses, Use{Span: span, Symbol: symbol, Definition: definition})
}

// everyUnknownHasPrior reports unknowns without prior, as none is assumed, and
// priors beyond the one that an unknown can have.
func (b *builder) everyUnknownHasPrior() {
	taken := map[*Unknown]*Prior{}
	second := func(p *Prior, u *Unknown) {
		first := taken[u]
		if unreadable(p) || first != nil && unreadable(first) {
			return // what it says is not known
		}
		if u.Population != nil {
			f := b.stop(TwoPriors, p.Span, "%s has a population model already (its `vary` statement); a prior beside it would count twice.", u.Name)
			f.Target = u.Name
			f.Related = append(f.Related, diag.Related{Path: b.m.File.Path, Span: u.Population.Span, Message: "the population model"})
			return
		}
		f := b.stop(TwoPriors, p.Span, "%s gets a second prior; both together would be their product.", u.Name)
		f.Target = u.Name
		f.Related = append(f.Related, diag.Related{Path: b.m.File.Path, Span: first.Span, Message: "the first prior"})
	}
	var derived []*Prior
	for _, p := range b.m.Priors {
		if len(p.About) > 1 && !p.Joint {
			derived = append(derived, p)
			continue
		}
		for _, u := range p.About {
			if u.Population != nil || taken[u] != nil {
				second(p, u)
			} else {
				taken[u] = p
			}
		}
	}
	// A prior on a function of several unknowns, such as alpha / slope, stands
	// for the prior of one of them.
	for _, p := range derived {
		if !stand(p, taken, map[*Prior]bool{}) {
			second(p, p.About[len(p.About)-1])
		}
	}
	for _, u := range b.m.Unknowns {
		if u.Population == nil && taken[u] == nil {
			f := b.stop(NoPrior, u.Span, "%s has no prior, and none is assumed silently.", u.Name)
			f.Target = u.Name
			f.Notes = append(f.Notes, "Choices that are made for a "+u.Kind.Name+": "+choices(u)+".")
		}
	}
}

func unreadable(p *Prior) bool { return p.Rule != nil && p.Rule.Name == Unreadable }

// stand finds one of its unknowns that a derived prior can stand for, moving
// other derived priors out of the way (an augmenting path).
func stand(p *Prior, taken map[*Unknown]*Prior, visited map[*Prior]bool) bool {
	if visited[p] {
		return false
	}
	visited[p] = true
	for _, u := range p.About {
		other := taken[u]
		switch {
		case u.Population != nil:
			continue
		case other == nil:
		case len(other.About) < 2 || other.Joint || !stand(other, taken, visited):
			continue
		}
		taken[u] = p
		return true
	}
	return false
}

// choices names the usual choices for a kind, for a message only.
func choices(u *Unknown) string {
	t := u.Name
	switch u.Kind.Name {
	case "probability":
		return "`prior " + t + " as Beta(1, 1)`, `prior " + t + " jeffreys`"
	case "rate", "scale", "positive":
		return "`prior " + t + " ∝ 1 / " + t + "`, `prior " + t + " flat`, a named distribution with its source"
	case "shape", "degrees":
		return "a named distribution with its source, such as `prior " + t + " as Gamma(shape = …, rate = …)`"
	case "proportions":
		return "`prior " + t + " as Dirichlet(1/2)`"
	case "covariance":
		return "`prior " + t + " as inverse-Wishart(degrees = …, scale = …)`"
	case "count":
		return "`prior " + t + " ∝ 1 / " + t + "`, a named distribution with its source"
	}
	return "`prior " + t + " flat`, `prior " + t + " as Normal(…, sd = …)`"
}
