package lsp

import (
	"context"

	"go.lsp.dev/protocol"

	"wellposed/checks/existence"
	"wellposed/checks/wording"
	"wellposed/lsp/internal/session"
	"wellposed/parser/source"
)

// InlayHint shows short facts after priors and observations: the verdict where
// there is no posterior or none was decided, and what the data hold.
func (s *server) InlayHint(ctx context.Context, p *protocol.InlayHintParams) ([]protocol.InlayHint, error) {
	return read(s, ctx, p.TextDocument.URI, func(snap *session.Snapshot) ([]protocol.InlayHint, error) {
		list := []protocol.InlayHint{}
		within := s.count.Span(snap.File, p.Range)
		pad := true
		add := func(at source.Span, text string) {
			if text != "" && at.End >= within.Start && at.End <= within.End {
				list = append(list, protocol.InlayHint{Position: s.count.Position(snap.File, at.End), Label: protocol.String(text), PaddingLeft: &pad})
			}
		}
		f := snap.Facts()
		for _, o := range f.Model.Observations {
			add(o.Span, wording.Data(o))
		}
		for _, prior := range f.Model.Priors {
			if len(prior.About) > 0 {
				add(prior.FormSpan, verdictHint(f.Existence(f.Model.Declared()).Of(prior.About[0])))
			}
		}
		return list, nil
	})
}

func verdictHint(v *existence.Verdict) string {
	switch {
	case v == nil:
		return ""
	case v.Status == existence.DoesNotExist:
		if where := wording.Escapes(v); where != "" {
			return "no posterior: " + where
		}
		return "no posterior"
	case v.Status == existence.NotDecided:
		return "not decided"
	}
	return string(v.How)
}
