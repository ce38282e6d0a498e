package parser

import (
	"strings"

	"wellposed/grammar"
)

// readRow splits one row of a table in place into its cells.
func readRow(text string, at span) *grammar.Row {
	row := &grammar.Row{Pos: grammar.Mark{Offset: at.start}, EndPos: grammar.Mark{Offset: at.end}}
	for start := at.start + 1; start <= at.end; {
		end, closed := cellEnd(text, start, at.end)
		body := text[start:end]
		if !closed && strings.TrimSpace(body) == "" {
			break
		}
		trimmed := strings.TrimLeft(body, " \t")
		from := start + len(body) - len(trimmed)
		trimmed = strings.TrimRight(trimmed, " \t")
		row.Cells = append(row.Cells, grammar.Cell{
			Pos: grammar.Mark{Offset: from}, EndPos: grammar.Mark{Offset: from + len(trimmed)}, Text: cellText(trimmed)})
		if !closed {
			break
		}
		start = end + 1
	}
	return row
}

// cellEnd finds the | that closes the cell which starts at start; closed is
// false when the row ends first.
func cellEnd(text string, start, limit int) (end int, closed bool) {
	for i := start; i < limit; i++ {
		switch text[i] {
		case '\\':
			i++
		case '|':
			return i, true
		}
	}
	return limit, false
}

// cellText is what a cell says: a pair of quotes around it is taken off, \|
// stands for | and \# for #.
func cellText(raw string) string {
	if len(raw) >= 2 && raw[0] == '"' && raw[len(raw)-1] == '"' && strings.IndexByte(raw[1:len(raw)-1], '"') < 0 {
		raw = raw[1 : len(raw)-1]
	}
	if strings.IndexByte(raw, '\\') < 0 {
		return raw
	}
	return strings.NewReplacer(`\|`, "|", `\#`, "#", `\\`, `\`).Replace(raw)
}
