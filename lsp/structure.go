package lsp

import (
	"context"

	"go.lsp.dev/protocol"

	"wellposed/lsp/internal/session"
	"wellposed/parser"
	"wellposed/parser/model"
	"wellposed/parser/source"
)

// DocumentSymbol lists what a model declares, reports and concludes.
func (s *server) DocumentSymbol(ctx context.Context, p *protocol.DocumentSymbolParams) (protocol.DocumentSymbolResult, error) {
	return read(s, ctx, p.TextDocument.URI, func(snap *session.Snapshot) (protocol.DocumentSymbolResult, error) {
		m := snap.Model()
		list := protocol.DocumentSymbolSlice{}
		add := func(name, detail string, kind protocol.SymbolKind, whole, at source.Span) {
			if name == "" || at.Empty() {
				return
			}
			whole = whole.Cover(at)
			list = append(list, protocol.DocumentSymbol{Name: name, Detail: &detail, Kind: kind,
				Range: s.count.Range(snap.File, whole), SelectionRange: s.count.Range(snap.File, at)})
		}
		for _, g := range m.Givens {
			add(g.Name, "given", protocol.SymbolKindConstant, g.Span, g.Span)
		}
		for _, t := range m.Tables {
			add(t.Name, "table", protocol.SymbolKindArray, t.Span, t.Span)
		}
		for _, u := range m.Unknowns {
			add(u.Name, u.Kind.Name, protocol.SymbolKindVariable, u.StmtSpan, u.Span)
		}
		for _, l := range m.Lets {
			add(l.Name, model.Text(l.Value), protocol.SymbolKindFunction, l.Span, l.Span)
		}
		for _, r := range m.Rivals {
			add(r.Name, "rival", protocol.SymbolKindProperty, r.Span, r.Span)
		}
		for _, r := range m.Reports {
			add(r.Name, "report", protocol.SymbolKindEvent, r.Span, r.ValueSpan)
		}
		for _, c := range m.Conclusions {
			add(c.Name, "conclusion", protocol.SymbolKindBoolean, c.Span, c.Span)
		}
		return list, nil
	})
}

// FoldingRanges folds statements of several lines and runs of comments.
func (s *server) FoldingRanges(ctx context.Context, p *protocol.FoldingRangeParams) ([]protocol.FoldingRange, error) {
	return read(s, ctx, p.TextDocument.URI, func(snap *session.Snapshot) ([]protocol.FoldingRange, error) {
		list := []protocol.FoldingRange{}
		for _, l := range snap.Model().Tree.Lines {
			first, _ := snap.File.Locate(l.Start, source.Bytes)
			last, column := snap.File.Locate(l.Start+len(l.Text), source.Bytes)
			if column == 0 && last > first {
				last--
			}
			if last > first {
				list = append(list, protocol.FoldingRange{StartLine: uint32(first), EndLine: uint32(last)})
			}
		}
		return list, nil
	})
}

// Formatting writes the document in its canonical form.
func (s *server) Formatting(ctx context.Context, p *protocol.DocumentFormattingParams) ([]protocol.TextEdit, error) {
	return read(s, ctx, p.TextDocument.URI, func(snap *session.Snapshot) ([]protocol.TextEdit, error) {
		text := parser.Format(snap.File)
		if text == snap.File.Text {
			return []protocol.TextEdit{}, nil
		}
		whole := source.Span{Start: 0, End: len(snap.File.Text)}
		return []protocol.TextEdit{{Range: s.count.Range(snap.File, whole), NewText: text}}, nil
	})
}

// DocumentLink links the data files of tables.
func (s *server) DocumentLink(ctx context.Context, p *protocol.DocumentLinkParams) ([]protocol.DocumentLink, error) {
	return read(s, ctx, p.TextDocument.URI, func(snap *session.Snapshot) ([]protocol.DocumentLink, error) {
		list := []protocol.DocumentLink{}
		for _, t := range snap.Model().Tables {
			if t.FilePath == "" || len(t.Columns) == 0 || t.Columns[0].Span.Empty() {
				continue
			}
			target := files{s}.URI(t.FilePath)
			list = append(list, protocol.DocumentLink{Range: s.count.Range(snap.File, t.Columns[0].Span), Target: &target})
		}
		return list, nil
	})
}
