package parser

import (
	"strings"

	"wellposed/grammar"
	"wellposed/parser/source"
)

// Width is the column after which a long statement is broken.
const Width = 100

// indent begins every further line of a statement.
const indent = "    "

// Format writes a model file in its canonical form. Statements that can't be
// read are left as they are; a file past the bounds is left as a whole.
//
//   - One statement a line; a statement longer than Width is broken after commas,
//     before `because`, `from`, `by`, `until` and `when`, or else after operators.
//   - Distribution names are written as in the reference, operators in ASCII, and
//     `∝` for `proportional to`.
//   - The columns of a table in place and the comments of neighbouring lines are
//     aligned. Every comment is kept.
//   - At most one blank line stands between statements; lines end with \n.
func Format(file *source.File) string {
	if len(file.Text) > MaxText {
		return file.Text
	}
	cuts := renew("", nil, file.Text)
	if len(cuts) > MaxStatements {
		return file.Text
	}
	var out []printed
	end := 0
	for i, h := range cuts {
		if i > 0 && breaks(file.Text[end:h.start]) > 1 {
			out = append(out, printed{})
		}
		k := cut(file.Text, h.start)
		out = append(out, k.format(file.Text[h.start:h.end], h.line)...)
		end = h.end
	}
	return alignComments(out)
}

// printed is one line of output: code, and the comment after it.
type printed struct {
	code, comment string
	// fixed lines are not touched by alignment.
	fixed bool
}

func breaks(text string) int {
	return strings.Count(text, "\n") + strings.Count(text, "\r") - strings.Count(text, "\r\n")
}

func (c *chunk) format(text string, l *line) []printed {
	switch {
	case l.broken || len(l.faults) > 0:
		text = strings.ReplaceAll(strings.ReplaceAll(text, "\r\n", "\n"), "\r", "\n")
		return []printed{{code: text, fixed: true}}
	case l.statement == nil:
		return []printed{{comment: strings.TrimRight(text, " \t")}}
	}
	head := *c
	if len(c.rows) > 0 {
		for i, t := range c.tokens {
			if t.start >= c.rows[0].start || t.kind == tokenComment && t.first {
				head.tokens = c.tokens[:i]
				break
			}
		}
	}
	out := fold(head.pieces(text, l.statement))
	if len(c.rows) > 0 {
		out = append(out, c.formatRows(text, l)...)
	}
	return out
}

// piece is a token with what stands before it.
type piece struct {
	text  string
	space bool
	// breakable is how well a line break before the piece would read: 0 never,
	// 1 after an operator, 2 after a comma.
	breakable int
	// comment pieces end their line; own ones also begin it.
	comment, own bool
}

// pieces spells the tokens of a statement canonically.
func (c *chunk) pieces(text string, s grammar.Statement) []piece {
	look := survey(s)
	var out []piece
	var last, before token // the last two tokens that are no comments
	depth := 0
	keyword := c.tokens[0].text
	for i := 0; i < len(c.tokens); i++ {
		t := c.tokens[i]
		if t.kind == tokenComment {
			out = append(out, piece{text: strings.TrimRight(text[t.start:t.end], " \t"), comment: true, own: t.first})
			continue
		}
		p := piece{text: t.text, space: last.kind != 0}
		if name, ok := look.spelled[t.start]; ok { // a name of several tokens
			p.text = name.text
			for i+1 < len(c.tokens) && c.tokens[i+1].start < name.end {
				i++
			}
			t.end = name.end
		} else if t.text == "proportional" && i+1 < len(c.tokens) && c.tokens[i+1].text == "to" && t.kind == tokenIdent {
			i++
			p.text = "∝"
		} else if n := hyphened(c.tokens, i, keyword, last); n > 0 {
			for range n {
				p.text += "-" + c.tokens[i+2].text
				i += 2
			}
		}
		p.space = p.space && !tight(last, t, before, look, keyword)
		p.breakable = breakable(last, t, depth, look)
		out = append(out, p)
		depth += nesting(t)
		before, last = last, t
	}
	return out
}

// hyphened gives the number of hyphens in a word of the grammar that begins
// with the token: right-censored, long-run, maximal-data-information.
func hyphened(tokens []token, i int, keyword string, last token) int {
	word := func(j int) string {
		if j < len(tokens) {
			return tokens[j].text
		}
		return ""
	}
	switch t := word(i); {
	case (t == "right" || t == "left") && last.text == "," && word(i+1) == "-" && word(i+2) == "censored" && word(i+3) == "where":
		return 1
	case t == "long" && keyword == "require" && last.text == "require":
		return 1
	case t == "maximal" && word(i+1) == "-" && word(i+2) == "data" && last.kind != tokenOp || t == "maximal" && last.text == ")":
		return 2
	}
	return 0
}

// tight reports whether no blank stands between two tokens.
func tight(last, t, before token, look *surveyed, keyword string) bool {
	if t.kind == tokenOp {
		switch t.text {
		case ")", "]", ",", ";", "%":
			return true
		case ":":
			return keyword != "unknown"
		case "^", ".":
			return true
		case "(", "[":
			if look.opens[last.end] {
				return true
			}
		case "/":
			return last.kind == tokenNumber && look.fraction[t.start]
		}
	}
	if last.kind == tokenOp {
		switch last.text {
		case "(", "[", "^", ".":
			return true
		case "/":
			return before.kind == tokenNumber && look.fraction[last.start]
		case "-", "+":
			return !look.binary[last.start]
		}
	}
	return false
}

func breakable(last, t token, depth int, look *surveyed) int {
	switch {
	case t.kind == tokenKeyword || last.kind != tokenOp && !(t.kind == tokenIdent && goesOnWith[t.text]):
		return 0
	case last.text == "," || last.text == ";":
		return 2
	case t.kind == tokenIdent && goesOnWith[t.text] && depth == 0:
		return 2
	case look.binary[last.start] && last.text != "^" && last.text != "/":
		return 1
	}
	return 0
}

// fold makes lines of pieces.
func fold(pieces []piece) []printed {
	var out []printed
	for i := 0; i < len(pieces); {
		if pieces[i].own {
			out = append(out, printed{comment: lead(out) + pieces[i].text, fixed: true})
			i++
			continue
		}
		line := lead(out) + pieces[i].text
		column := source.Width(line)
		j, comma, operator := i+1, 0, 0
		for j < len(pieces) && !pieces[j].comment {
			p := pieces[j]
			switch {
			case p.breakable == 2:
				comma = j
			case p.breakable == 1:
				operator = j
			}
			column += source.Width(p.text)
			if p.space {
				column++
			}
			if column > Width && (comma > 0 || operator > 0) {
				if j = comma; j == 0 {
					j = operator
				}
				break
			}
			j++
		}
		for _, p := range pieces[i+1 : j] {
			if p.space {
				line += " "
			}
			line += p.text
		}
		next := printed{code: line}
		if j < len(pieces) && pieces[j].comment && !pieces[j].own {
			next.comment = pieces[j].text
			j++
		}
		out = append(out, next)
		i = j
	}
	return out
}

func lead(out []printed) string {
	if len(out) == 0 {
		return ""
	}
	return indent
}

// formatRows aligns the columns of a table in place.
func (c *chunk) formatRows(text string, l *line) []printed {
	table, ok := l.statement.(*grammar.Table)
	if !ok {
		return nil
	}
	var widths []int
	for _, r := range table.Rows {
		for i, cell := range r.Cells {
			if i == len(widths) {
				widths = append(widths, 0)
			}
			widths[i] = max(widths[i], source.Width(text[cell.Pos.Offset:cell.EndPos.Offset]))
		}
	}
	var comments []token
	for _, t := range c.tokens {
		if t.kind == tokenComment && (t.first || t.start > c.rows[0].start) {
			comments = append(comments, t)
		}
	}
	var out []printed
	for k, r := range table.Rows {
		for len(comments) > 0 && comments[0].start < r.Pos.Offset {
			out = append(out, printed{comment: strings.TrimRight(comments[0].text, " \t"), fixed: true})
			comments = comments[1:]
		}
		var b strings.Builder
		b.WriteString("|")
		for i, cell := range r.Cells {
			raw := text[cell.Pos.Offset:cell.EndPos.Offset]
			b.WriteString(" " + raw + strings.Repeat(" ", widths[i]-source.Width(raw)) + " |")
		}
		row := printed{code: b.String()}
		if len(comments) > 0 && !comments[0].first && (k+1 == len(table.Rows) || comments[0].start < table.Rows[k+1].Pos.Offset) {
			row.comment = strings.TrimRight(comments[0].text, " \t")
			comments = comments[1:]
		}
		out = append(out, row)
	}
	return out
}

// alignComments joins the lines and sets the comments of neighbouring lines
// one below the other.
func alignComments(lines []printed) string {
	var b strings.Builder
	for i := 0; i < len(lines); {
		j, width := i, 0
		for j < len(lines) && lines[j].code != "" && lines[j].comment != "" && !lines[j].fixed {
			width = max(width, source.Width(lines[j].code))
			j++
		}
		for ; i < j; i++ {
			l := lines[i]
			b.WriteString(l.code + strings.Repeat(" ", width-source.Width(l.code)) + "  " + l.comment + "\n")
		}
		if i < len(lines) && (lines[i].code == "" || lines[i].comment == "" || lines[i].fixed) {
			b.WriteString(lines[i].code + lines[i].comment + "\n")
			i++
		}
	}
	return b.String()
}
