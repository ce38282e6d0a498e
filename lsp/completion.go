package lsp

import (
	"context"
	"fmt"

	"go.lsp.dev/protocol"

	"wellposed/lsp/internal/offer"
	"wellposed/lsp/internal/session"
)

var itemKinds = map[offer.Kind]protocol.CompletionItemKind{
	offer.Keyword: protocol.CompletionItemKindKeyword, offer.Name: protocol.CompletionItemKindVariable,
	offer.Column: protocol.CompletionItemKindField, offer.Law: protocol.CompletionItemKindClass,
	offer.Function: protocol.CompletionItemKindFunction, offer.KindOfUnknown: protocol.CompletionItemKindTypeParameter,
	offer.Argument: protocol.CompletionItemKindProperty, offer.Choice: protocol.CompletionItemKindValue,
	offer.RuleName: protocol.CompletionItemKindConstant,
}

// Completion lists what can be written at the cursor, best first.
func (s *server) Completion(ctx context.Context, p *protocol.CompletionParams) (protocol.CompletionResult, error) {
	return read(s, ctx, p.TextDocument.URI, func(snap *session.Snapshot) (protocol.CompletionResult, error) {
		items, word := offer.At(snap.Facts(), snap.File, s.count.Offset(snap.File, p.Position))
		list := &protocol.CompletionList{Items: []protocol.CompletionItem{}}
		for i, item := range items {
			text := item.Insert
			if text == "" {
				text = item.Label
			}
			c := protocol.CompletionItem{
				Label: item.Label, Kind: itemKinds[item.Kind],
				SortText:   protocol.NewOptional(fmt.Sprintf("%04d", i)),
				FilterText: protocol.NewOptional(item.Label),
				TextEdit:   &protocol.TextEdit{Range: s.count.Range(snap.File, word), NewText: text},
			}
			if item.Detail != "" {
				c.Detail = protocol.NewOptional(item.Detail)
			}
			if item.Doc != "" {
				c.Documentation = protocol.String(item.Doc)
			}
			list.Items = append(list.Items, c)
		}
		return list, nil
	})
}
