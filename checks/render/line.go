package render

import (
	"fmt"
	"io"

	"wellposed/parser/source"
)

// writeLines is the GNU form: path:line:column: severity: headline [rule].
// Columns count characters from 1.
func writeLines(w io.Writer, r *Report, _ Options) error {
	for _, f := range r.Files {
		if f.Trouble != "" {
			fmt.Fprintf(w, "%s:1:1: stop: %s [unreadable]\n", printable(f.Path), printable(f.Trouble))
		}
		for _, d := range f.Findings {
			p := f.locate(d.Span, source.Characters)
			word := d.Severity.String()
			if d.Overridden != "" {
				word += " (overridden)"
			}
			fmt.Fprintf(w, "%s:%d:%d: %s: %s [%s]\n", printable(f.Path), p.line, p.column, word, printable(d.Headline), d.Rule)
		}
	}
	return nil
}
