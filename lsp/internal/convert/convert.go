// Package convert turns positions, findings and edits into the protocol's
// values and back. It is the only place outside parser/source that knows how
// the client counts columns.
package convert

import (
	"strings"

	"go.lsp.dev/protocol"
	"go.lsp.dev/uri"

	"wellposed/parser/diag"
	"wellposed/parser/source"
)

// Counting is the position encoding agreed with the client.
type Counting struct{ unit source.Unit }

// Agree picks the encoding: UTF-8 when the client offers it, because that costs
// nothing here; otherwise UTF-16, which every client must speak.
func Agree(offered []protocol.PositionEncodingKind) (Counting, protocol.PositionEncodingKind) {
	for _, kind := range offered {
		if kind == protocol.PositionEncodingKindUTF8 {
			return Counting{source.Bytes}, kind
		}
	}
	return Counting{source.UTF16}, protocol.PositionEncodingKindUTF16
}

// Position is the place of a byte offset.
func (c Counting) Position(f *source.File, offset int) protocol.Position {
	line, column := f.Locate(offset, c.unit)
	return protocol.Position{Line: uint32(line), Character: uint32(column)}
}

// Range is the place of a span.
func (c Counting) Range(f *source.File, s source.Span) protocol.Range {
	return protocol.Range{Start: c.Position(f, s.Start), End: c.Position(f, s.End)}
}

// Offset is the byte offset of a place.
func (c Counting) Offset(f *source.File, p protocol.Position) int {
	return f.Offset(int(p.Line), int(p.Character), c.unit)
}

// Span is the span of a range.
func (c Counting) Span(f *source.File, r protocol.Range) source.Span {
	a, b := c.Offset(f, r.Start), c.Offset(f, r.End)
	return source.Span{Start: min(a, b), End: max(a, b)}
}

// Files finds the text and address of a path that a finding names.
type Files interface {
	// File returns the text behind a path, nil when it can't be had.
	File(path string) *source.File
	// URI returns the address of a path.
	URI(path string) uri.URI
}

// Page is the address of a rule's page, or empty.
type Page func(rule string) uri.URI

// Diagnostic is a finding as the editor shows it.
func (c Counting) Diagnostic(f *source.File, files Files, page Page, finding diag.Finding) protocol.Diagnostic {
	d := protocol.Diagnostic{
		Range:    c.Range(f, finding.Span),
		Severity: severity(finding),
		Code:     protocol.String(finding.Rule),
		Source:   protocol.NewOptional("wellposed"),
		Message:  protocol.String(Message(finding)),
	}
	if href := page(finding.Rule); href != "" {
		d.CodeDescription = protocol.CodeDescription{Href: href}
	}
	for _, r := range finding.Related {
		if at, ok := c.location(files, r); ok {
			d.RelatedInformation = append(d.RelatedInformation, protocol.DiagnosticRelatedInformation{Location: at, Message: r.Message})
		}
	}
	return d
}

func (c Counting) location(files Files, r diag.Related) (protocol.Location, bool) {
	file := files.File(r.Path)
	at := protocol.Location{URI: files.URI(r.Path)}
	switch {
	case at.URI == "":
		return at, false
	case r.Row > 0:
		// The row of a data file; without its text the whole line is meant.
		at.Range.Start.Line = uint32(r.Row - 1)
		at.Range.End.Line = uint32(r.Row)
	case file != nil:
		at.Range = c.Range(file, r.Span)
	}
	return at, true
}

// Message is the text of a finding for an editor: the headline, then the notes.
func Message(finding diag.Finding) string {
	lines := append([]string{finding.Headline}, finding.Notes...)
	if finding.Overridden != "" {
		lines = append(lines, "Overridden: "+finding.Overridden)
	}
	return strings.Join(lines, "\n")
}

func severity(finding diag.Finding) protocol.DiagnosticSeverity {
	switch {
	case finding.Overridden != "":
		return protocol.DiagnosticSeverityInformation
	case finding.Severity == diag.Stop:
		return protocol.DiagnosticSeverityError
	case finding.Severity == diag.Warn:
		return protocol.DiagnosticSeverityWarning
	}
	return protocol.DiagnosticSeverityInformation
}

// Edits are a fix as changes to documents. The edits of other files are left
// out when their text can't be had.
func (c Counting) Edits(files Files, fix diag.Fix) *protocol.WorkspaceEdit {
	changes := map[uri.URI][]protocol.TextEdit{}
	for _, e := range fix.Edits {
		file := files.File(e.Path)
		if file == nil {
			continue
		}
		at := files.URI(e.Path)
		changes[at] = append(changes[at], protocol.TextEdit{Range: c.Range(file, e.Span), NewText: e.Text})
	}
	return &protocol.WorkspaceEdit{Changes: changes}
}
