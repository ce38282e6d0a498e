// Package page renders collected evidence as a self-contained HTML page, as
// Markdown and as JSON. All three are made from the same value; the first two from
// the same blocks, so that they hold the same words and numbers.
package page

import (
	"encoding/json"
	"fmt"
	"io"

	"wellposed/checks/evidence"
)

// Write renders evidence in a format: html, markdown or json.
func Write(w io.Writer, format string, e *evidence.Evidence) error {
	switch format {
	case "html":
		_, err := io.WriteString(w, html(e))
		return err
	case "markdown":
		_, err := io.WriteString(w, markdown(e))
		return err
	case "json":
		enc := json.NewEncoder(w)
		enc.SetIndent("", "  ")
		enc.SetEscapeHTML(false)
		return enc.Encode(e)
	}
	return fmt.Errorf("unknown format %q", format)
}

// Formats lists what Write knows.
var Formats = []string{"html", "markdown", "json"}

// block is one piece of the page.
type block interface{ isBlock() }

type (
	// heading opens a numbered part.
	heading struct{ number, text string }
	// subheading opens a piece of a part.
	subheading struct{ text string }
	para       struct {
		text string
		kind string // "", "lead", "alarm", "small"
	}
	bullets struct{ items []string }
	table   struct {
		caption string
		head    []string
		rows    [][]cell
	}
	// figure is a picture with its text alternative.
	figure struct {
		svg, alt, caption string
	}
	// lines to sign.
	signatures struct{ names []string }
)

// cell is a table cell. Row headers are th elements; numbers align right.
type cell struct {
	text   string
	header bool
	number bool
	code   bool
	mark   string // "good", "bad", "open": a sign before the text, and a tint
}

func (heading) isBlock()    {}
func (subheading) isBlock() {}
func (para) isBlock()       {}
func (bullets) isBlock()    {}
func (table) isBlock()      {}
func (figure) isBlock()     {}
func (signatures) isBlock() {}

// sign is a mark that reads without colour.
func sign(mark string) string {
	return map[string]string{"good": "✓ ", "bad": "✗ ", "open": "? "}[mark]
}

func th(text string) cell   { return cell{text: text, header: true} }
func td(text string) cell   { return cell{text: text} }
func num(text string) cell  { return cell{text: text, number: true} }
func code(text string) cell { return cell{text: text, code: true} }

func orDash(s string) string {
	if s == "" {
		return "–"
	}
	return s
}
