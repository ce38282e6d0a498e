package lsp

import (
	"context"

	"go.lsp.dev/protocol"

	"wellposed/lsp/internal/session"
	"wellposed/parser/diag"
)

// publish sends the findings of a version.
func (s *server) publish(snap *session.Snapshot, found []diag.Finding, _ bool) {
	set := s.settings.of(snap.File.Path)
	if set.Skip {
		found = nil
	}
	found = set.Apply(append([]diag.Finding(nil), found...))
	list := make([]protocol.Diagnostic, 0, len(found))
	for _, finding := range found {
		list = append(list, s.count.Diagnostic(snap.File, files{s}, s.page, finding))
	}
	err := s.client.PublishDiagnostics(context.Background(), &protocol.PublishDiagnosticsParams{
		URI: snap.URI, Version: protocol.NewOptional(snap.Version), Diagnostics: list,
	})
	if err != nil && s.ctx.Err() == nil {
		s.report("publishDiagnostics: " + err.Error())
	}
}
