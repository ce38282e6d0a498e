package parser

import (
	"strings"

	"github.com/alecthomas/participle/v2/lexer"
)

// chunk is the extent of one statement, or of a comment that stands alone. Its
// tokens have offsets relative to start.
type chunk struct {
	start, end int
	tokens     []token
	rows       []span // the rows of a table in place, relative to start
}

type span struct{ start, end int }

// goesOnAfter are the operators after which a statement goes on over a line
// break.
var goesOnAfter = map[string]bool{
	"+": true, "-": true, "*": true, "/": true, "^": true, "=": true, "==": true, "!=": true,
	"<": true, "<=": true, ">": true, ">=": true, ",": true, ":": true, ";": true, "∝": true,
}

// goesOnWith are the words that can't begin a statement, so that a line which
// begins with one belongs to the statement above.
var goesOnWith = map[string]bool{"because": true, "from": true, "by": true, "until": true, "when": true}

// cut finds the chunk that starts at or after pos. It is empty (with start ==
// end) when nothing but blanks is left. The result depends only on the text
// from pos on.
func cut(text string, pos int) chunk { return new(cutter).cut(text, pos) }

// cutter cuts several chunks, whose tokens lie in one slab.
type cutter struct{ slab []token }

func (k *cutter) cut(text string, pos int) chunk {
	if cap(k.slab)-len(k.slab) < 32 {
		k.slab = make([]token, 0, min(1024, max(32, cap(k.slab)*4)))
	}
	n := len(k.slab)
	c := cutInto(text, pos, k.slab[n:n])
	if m := len(c.tokens); m <= cap(k.slab)-n {
		k.slab = k.slab[:n+m]
		c.tokens = c.tokens[:m:m]
	}
	return c
}

func cutInto(text string, pos int, room []token) chunk {
	s := newScanner(text, pos)
	t := s.next()
	c := chunk{start: t.start, end: t.end, tokens: room}
	if t.kind == lexer.EOF {
		return c
	}
	add := func(t token) {
		c.end = t.end
		t.start -= c.start
		t.end -= c.start
		c.tokens = append(c.tokens, t)
	}
	if t.kind == tokenOp && t.text == "|" { // a row without a table
		end := lineEnd(text, t.start)
		add(token{kind: tokenOp, start: t.start, end: t.start + 1, text: "|", first: true})
		c.end = end
		return c
	}
	add(t)
	if t.kind == tokenComment {
		return c
	}
	depth := nesting(t)
	last := t // the last token that is no comment
	held := []token(nil)
	for {
		t = s.next()
		if t.kind == lexer.EOF {
			break
		}
		if t.kind == tokenComment {
			if t.first {
				held = append(held, t)
				continue
			}
			add(t)
			continue
		}
		if t.first && !continues(last, t, depth, c.tokens[0]) {
			break
		}
		for _, h := range held {
			add(h)
		}
		held = held[:0]
		add(t)
		depth = max(0, depth+nesting(t))
		last = t
	}
	if c.tokens[0].kind == tokenKeyword && c.tokens[0].text == "table" {
		c.takeRows(text)
	}
	return c
}

// continues reports whether a token at the start of a line belongs to the
// statement that the line above leaves off with `last`.
func continues(last, t token, depth int, head token) bool {
	switch {
	case t.kind == tokenKeyword:
		return false
	case depth > 0, last.kind == tokenOp && goesOnAfter[last.text]:
		return true
	case last.kind == tokenIdent && (last.text == "and" || last.text == "or" || last.text == "not"):
		return true
	}
	return t.kind == tokenIdent && goesOnWith[t.text] && head.kind == tokenKeyword
}

func nesting(t token) int {
	if t.kind == tokenOp {
		switch t.text {
		case "(", "[":
			return 1
		case ")", "]":
			return -1
		}
	}
	return 0
}

// takeRows extends a table by the lines that begin with |, with the comments
// and blank lines between them.
func (c *chunk) takeRows(text string) {
	at := lineEnd(text, c.end)
	if strings.TrimLeftFunc(text[c.end:at], isBlank) != "" {
		return // more on the line: `table a |…` is read as it stands
	}
	var held []token
	for at < len(text) {
		start := at + 1
		if text[at] == '\r' && start < len(text) && text[start] == '\n' {
			start++
		}
		at = lineEnd(text, start)
		line := text[start:at]
		body := strings.TrimLeftFunc(line, isBlank)
		from := start + len(line) - len(body)
		switch {
		case body == "":
		case body[0] == '#':
			held = append(held, token{kind: tokenComment, start: from - c.start, end: at - c.start, text: body, first: true})
		case body[0] == '|':
			c.tokens = append(c.tokens, held...)
			held = nil
			end, comment := rowEnd(body)
			c.rows = append(c.rows, span{from - c.start, from + end - c.start})
			c.end = from + end
			if comment >= 0 {
				c.tokens = append(c.tokens, token{kind: tokenComment, start: from + comment - c.start, end: at - c.start, text: body[comment:]})
				c.end = at
			}
		default:
			return
		}
	}
}

// rowEnd finds the end of a row's cells and the start of the comment after it,
// −1 when there is none. A comment is a # that begins a cell.
func rowEnd(row string) (end, comment int) {
	blank := false
	for i := 0; i < len(row); i++ {
		switch c := row[i]; {
		case c == '\\':
			i++
			blank = false
		case c == '|':
			blank = true
		case c == '#' && blank:
			return len(strings.TrimRight(row[:i], " \t")), i
		case c != ' ' && c != '\t':
			blank = false
		}
	}
	return len(strings.TrimRight(row, " \t")), -1
}
