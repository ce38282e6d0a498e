package lsp

import (
	"context"
	"os"
	"strings"

	"go.lsp.dev/protocol"
	"go.lsp.dev/uri"

	"wellposed/parser/source"
)

// DidOpen starts a document.
func (s *server) DidOpen(_ context.Context, p *protocol.DidOpenTextDocumentParams) error {
	s.session.Open(own(p.TextDocument.URI), p.TextDocument.Version, p.TextDocument.Text)
	s.refreshReaders(p.TextDocument.URI)
	return nil
}

// DidChange applies edits in their order.
func (s *server) DidChange(_ context.Context, p *protocol.DidChangeTextDocumentParams) error {
	known := s.session.Edit(p.TextDocument.URI, p.TextDocument.Version, func(f *source.File) string {
		for _, change := range p.ContentChanges {
			switch c := change.(type) {
			case *protocol.TextDocumentContentChangeWholeDocument:
				f = source.NewFile(f.Path, c.Text)
			case *protocol.TextDocumentContentChangePartial:
				span := s.count.Span(f, c.Range)
				f = source.NewFile(f.Path, f.Text[:span.Start]+c.Text+f.Text[span.End:])
			}
		}
		return f.Text
	})
	if !known {
		s.report("didChange: the document is not open")
	}
	s.refreshReaders(p.TextDocument.URI)
	return nil
}

// DidSave checks again: the data files may have been saved with it.
func (s *server) DidSave(_ context.Context, p *protocol.DidSaveTextDocumentParams) error {
	s.refreshReaders(p.TextDocument.URI)
	return nil
}

// DidClose forgets a document.
func (s *server) DidClose(_ context.Context, p *protocol.DidCloseTextDocumentParams) error {
	s.session.Close(p.TextDocument.URI)
	s.tables.drop(p.TextDocument.URI)
	s.refreshReaders(p.TextDocument.URI)
	return nil
}

// refreshReaders checks the open models again that read a data file.
func (s *server) refreshReaders(at uri.URI) {
	if strings.HasSuffix(string(at), ".bayes") {
		return
	}
	s.changed(at.FsPath())
}

// text is the text of a path: of the open document, else of the file.
func (s *server) text(path string) *source.File {
	for _, snap := range s.session.Opened() {
		if snap.File.Path == path {
			return snap.File
		}
	}
	content, err := os.ReadFile(path)
	if err != nil {
		return nil
	}
	return source.NewFile(path, string(content))
}

// own copies an address out of the message that it was decoded from.
func own(at uri.URI) uri.URI { return uri.URI(strings.Clone(string(at))) }
