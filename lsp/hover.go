package lsp

import (
	"context"

	"go.lsp.dev/jsonrpc2"
	"go.lsp.dev/protocol"
	"go.lsp.dev/uri"

	"wellposed/lsp/internal/session"
	"wellposed/lsp/internal/tell"
	"wellposed/lsp/internal/under"
)

// Hover tells what stands under the cursor: a prior with its kernel and verdict,
// an unknown, a report, a column, a distribution, a word of the language.
func (s *server) Hover(ctx context.Context, p *protocol.HoverParams) (*protocol.Hover, error) {
	return read(s, ctx, p.TextDocument.URI, func(snap *session.Snapshot) (*protocol.Hover, error) {
		f := snap.Facts()
		thing := under.At(f.Model, s.count.Offset(snap.File, p.Position))
		text := tell.About(f, thing)
		if text == "" {
			return nil, nil
		}
		kind := protocol.MarkupKindMarkdown
		if !s.abilities.markdown {
			kind, text = protocol.MarkupKindPlainText, tell.Plain(text)
		}
		at := s.count.Range(snap.File, thing.Span)
		return &protocol.Hover{Contents: &protocol.MarkupContent{Kind: kind, Value: text}, Range: &at}, nil
	})
}

// read runs a request that only reads: it takes the newest snapshot first and
// then lets the next message in. It ends as soon as the client cancels or a
// newer version arrives; the work that others may need goes on behind it. An
// unknown document gives the zero answer.
func read[T any](s *server, ctx context.Context, at uri.URI, answer func(*session.Snapshot) (T, error)) (T, error) {
	var none T
	snap := s.session.Snapshot(at)
	jsonrpc2.Async(ctx)
	if snap == nil || !snap.IsModel() {
		return none, nil
	}
	type result struct {
		value T
		err   error
		panic any
	}
	done := make(chan result, 1)
	go func() {
		var r result
		defer func() {
			r.panic = recover()
			done <- r
		}()
		r.value, r.err = answer(snap)
	}()
	select {
	case r := <-done:
		if r.panic != nil {
			panic(r.panic)
		}
		return r.value, r.err
	case <-ctx.Done():
		return none, protocol.ErrRequestCancelled
	case <-snap.Context().Done():
		return none, protocol.ErrContentModified
	}
}
