package lsp

import (
	"context"

	"go.lsp.dev/protocol"

	"wellposed/checks"
	"wellposed/lsp/internal/session"
)

// CodeAction offers the fixes of the findings in a range. A fix that changes the
// posterior says in its title what follows.
func (s *server) CodeAction(ctx context.Context, p *protocol.CodeActionParams) ([]protocol.CommandOrCodeAction, error) {
	return read(s, ctx, p.TextDocument.URI, func(snap *session.Snapshot) ([]protocol.CommandOrCodeAction, error) {
		span := s.count.Span(snap.File, p.Range)
		var list []protocol.CommandOrCodeAction
		for _, finding := range checks.Run(snap.Facts(), checks.Options{}) {
			if finding.Span.Start > span.End || finding.Span.End < span.Start {
				continue
			}
			for i, fix := range finding.Fixes {
				title := fix.Title
				if fix.Consequence != "" {
					title += " · " + fix.Consequence
				}
				kind, preferred := protocol.CodeActionKindQuickFix, i == 0 && len(finding.Fixes) == 1
				list = append(list, &protocol.CodeAction{
					Title: title, Kind: &kind, IsPreferred: &preferred,
					Diagnostics: []protocol.Diagnostic{s.count.Diagnostic(snap.File, files{s}, s.page, finding)},
					Edit:        s.count.Edits(files{s}, fix),
				})
			}
		}
		return list, nil
	})
}
