package lsp

import (
	"context"
	"fmt"
	"regexp"

	"go.lsp.dev/jsonrpc2"
	"go.lsp.dev/protocol"
	"go.lsp.dev/uri"

	"wellposed/grammar"
	"wellposed/lsp/internal/session"
	"wellposed/parser/model"
	"wellposed/parser/source"
)

// symbolAt is what a name at a place means, with its span; nil for none.
func symbolAt(m *model.Model, offset int) (any, source.Span) {
	for _, u := range m.Uses {
		if u.Span.Contains(offset) {
			return u.Symbol, u.Span
		}
	}
	return nil, source.Span{}
}

// uses are the places of a symbol, in order.
func uses(m *model.Model, symbol any) []model.Use {
	var list []model.Use
	for _, u := range m.Uses {
		if u.Symbol == symbol {
			list = append(list, u)
		}
	}
	return list
}

// Definition goes to where a name is declared; a column of a data file to its
// header cell there.
func (s *server) Definition(ctx context.Context, p *protocol.DefinitionParams) (protocol.DefinitionResult, error) {
	return read(s, ctx, p.TextDocument.URI, func(snap *session.Snapshot) (protocol.DefinitionResult, error) {
		symbol, _ := symbolAt(snap.Model(), s.count.Offset(snap.File, p.Position))
		if symbol == nil {
			return nil, nil
		}
		if c, ok := symbol.(*model.Column); ok && c.Table != nil && c.Table.FilePath != "" {
			return s.header(c), nil
		}
		for _, u := range uses(snap.Model(), symbol) {
			if u.Definition {
				return &protocol.Location{URI: snap.URI, Range: s.count.Range(snap.File, u.Span)}, nil
			}
		}
		return nil, nil
	})
}

// header is the place of a column's name in its data file.
func (s *server) header(c *model.Column) *protocol.Location {
	at := protocol.Location{URI: uri.File(c.Table.FilePath)}
	file := s.text(c.Table.FilePath)
	if file == nil {
		return &at
	}
	line, span := file.Line(0)
	if i := wordIn(line, c.Name); i >= 0 {
		at.Range = s.count.Range(file, source.Span{Start: span.Start + i, End: span.Start + i + len(c.Name)})
	}
	return &at
}

func wordIn(line, word string) int {
	at := regexp.MustCompile(`(?:^|[,"\s\x{FEFF}])(` + regexp.QuoteMeta(word) + `)(?:$|[,"\s])`).FindStringSubmatchIndex(line)
	if at == nil {
		return -1
	}
	return at[2]
}

// References lists the places of a name.
func (s *server) References(ctx context.Context, p *protocol.ReferenceParams) ([]protocol.Location, error) {
	return read(s, ctx, p.TextDocument.URI, func(snap *session.Snapshot) ([]protocol.Location, error) {
		symbol, _ := symbolAt(snap.Model(), s.count.Offset(snap.File, p.Position))
		list := []protocol.Location{}
		if symbol == nil {
			return list, nil
		}
		for _, u := range uses(snap.Model(), symbol) {
			if !u.Definition || p.Context.IncludeDeclaration {
				list = append(list, protocol.Location{URI: snap.URI, Range: s.count.Range(snap.File, u.Span)})
			}
		}
		return list, nil
	})
}

// DocumentHighlight marks the places of a name.
func (s *server) DocumentHighlight(ctx context.Context, p *protocol.DocumentHighlightParams) ([]protocol.DocumentHighlight, error) {
	return read(s, ctx, p.TextDocument.URI, func(snap *session.Snapshot) ([]protocol.DocumentHighlight, error) {
		symbol, _ := symbolAt(snap.Model(), s.count.Offset(snap.File, p.Position))
		list := []protocol.DocumentHighlight{}
		if symbol == nil {
			return list, nil
		}
		for _, u := range uses(snap.Model(), symbol) {
			kind := protocol.DocumentHighlightKindRead
			if u.Definition {
				kind = protocol.DocumentHighlightKindWrite
			}
			list = append(list, protocol.DocumentHighlight{Range: s.count.Range(snap.File, u.Span), Kind: kind})
		}
		return list, nil
	})
}

var identifier = regexp.MustCompile(`^[\p{L}_][\p{L}\p{N}\p{M}_]*$`)

// Rename changes a name everywhere in the model. Names of data files' columns
// stay: the file would have to change with them.
func (s *server) Rename(ctx context.Context, p *protocol.RenameParams) (*protocol.WorkspaceEdit, error) {
	return read(s, ctx, p.TextDocument.URI, func(snap *session.Snapshot) (*protocol.WorkspaceEdit, error) {
		m := snap.Model()
		symbol, span := symbolAt(m, s.count.Offset(snap.File, p.Position))
		if symbol == nil {
			return nil, refused("there is no name here")
		}
		if c, ok := symbol.(*model.Column); ok && c.Table != nil && c.Table.Path != "" {
			return nil, refused(fmt.Sprintf("%s is a column of %s; rename it there", c.Name, c.Table.Path))
		}
		if why := unfit(m, p.NewName); why != "" {
			return nil, refused(why)
		}
		old := snap.File.Slice(span)
		var edits []protocol.TextEdit
		for _, u := range uses(m, symbol) {
			// A use may be written table.column; only the name itself changes.
			at := u.Span
			if text := snap.File.Slice(at); text != old && len(text) > len(old) {
				at.Start = at.End - len(old)
			}
			edits = append(edits, protocol.TextEdit{Range: s.count.Range(snap.File, at), NewText: p.NewName})
		}
		return &protocol.WorkspaceEdit{Changes: map[uri.URI][]protocol.TextEdit{snap.URI: edits}}, nil
	})
}

// unfit says why a name can't be given, or "".
func unfit(m *model.Model, name string) string {
	switch {
	case !identifier.MatchString(name):
		return "a name begins with a letter and has letters, digits and _ only"
	case grammar.FindFunction(name) != nil || name == "pi" || name == "inf":
		return name + " is a word of the language"
	}
	for _, k := range grammar.Keywords {
		if k == name {
			return name + " begins statements"
		}
	}
	if d := grammar.FindDistribution(name); d != nil && d.Name == name {
		return name + " is a distribution"
	}
	for _, u := range m.Uses {
		if u.Definition && m.File.Slice(u.Span) == name {
			return name + " is declared already"
		}
	}
	return ""
}

func refused(why string) error { return jsonrpc2.NewError(jsonrpc2.InvalidParams, why) }
