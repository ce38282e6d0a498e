package lsp

import (
	"context"
	"slices"

	"go.lsp.dev/protocol"

	"wellposed/lsp/internal/convert"
)

// Initialize agrees on what both sides can do.
func (s *server) Initialize(_ context.Context, p *protocol.InitializeParams) (*protocol.InitializeResult, error) {
	var offered []protocol.PositionEncodingKind
	if g := p.Capabilities.General; g != nil {
		offered = g.PositionEncodings
	}
	var encoding protocol.PositionEncodingKind
	s.count, encoding = convert.Agree(offered)
	if t := p.Capabilities.TextDocument; t != nil {
		s.abilities.markdown = t.Hover != nil && slices.Contains(t.Hover.ContentFormat, protocol.MarkupKindMarkdown)
		s.abilities.pulls = t.Diagnostic != nil
	}
	folders, _ := p.WorkspaceFolders.Get()
	for _, folder := range folders {
		s.roots = append(s.roots, folder.URI.FsPath())
	}
	yes, incremental := true, protocol.TextDocumentSyncKindIncremental
	return &protocol.InitializeResult{
		ServerInfo: protocol.ServerInfo{Name: "wellposed", Version: protocol.NewOptional(s.options.Version)},
		Capabilities: protocol.ServerCapabilities{
			PositionEncoding: encoding,
			TextDocumentSync: &protocol.TextDocumentSyncOptions{
				OpenClose: &yes, Change: &incremental, Save: protocol.Boolean(true),
			},
			HoverProvider:              protocol.Boolean(true),
			DefinitionProvider:         protocol.Boolean(true),
			ReferencesProvider:         protocol.Boolean(true),
			DocumentHighlightProvider:  protocol.Boolean(true),
			RenameProvider:             protocol.Boolean(true),
			DocumentSymbolProvider:     protocol.Boolean(true),
			FoldingRangeProvider:       protocol.Boolean(true),
			DocumentFormattingProvider: protocol.Boolean(true),
			DocumentLinkProvider:       &protocol.DocumentLinkOptions{},
			InlayHintProvider:          protocol.Boolean(true),
			CompletionProvider:         &protocol.CompletionOptions{TriggerCharacters: []string{" ", "(", ",", ":", "."}},
			CodeActionProvider:         &protocol.CodeActionOptions{CodeActionKinds: []protocol.CodeActionKind{protocol.CodeActionKindQuickFix}},
		},
	}, nil
}

// Shutdown ends the work; only exit may follow.
func (s *server) Shutdown(context.Context) error {
	s.shutdown.Store(true)
	s.stop()
	return nil
}

// Exit ends the server.
func (s *server) Exit(context.Context) error {
	s.exitOnce.Do(func() { close(s.exited) })
	return nil
}
