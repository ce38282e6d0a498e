package parser

import (
	"io"
	"strings"
	"unicode"
	"unicode/utf8"

	"github.com/alecthomas/participle/v2/lexer"
	"golang.org/x/text/unicode/norm"

	"wellposed/grammar"
)

// The kinds of token. Space stands for any gap between two tokens (blanks, line
// breaks, comments): it is skipped when parsing, and makes the end of a node
// exact, because the token after a node's last one starts where that one ends.
const (
	tokenIdent lexer.TokenType = -(iota + 2)
	tokenKeyword
	tokenNumber
	tokenString
	tokenOp
	tokenSpace
	tokenIllegal
	tokenComment
)

var symbols = map[string]lexer.TokenType{
	"EOF":     lexer.EOF,
	"Ident":   tokenIdent,
	"Keyword": tokenKeyword,
	"Number":  tokenNumber,
	"String":  tokenString,
	"Op":      tokenOp,
	"Space":   tokenSpace,
	"Illegal": tokenIllegal,
	"Comment": tokenComment,
}

// token is one token with its exact extent. Text is its canonical spelling:
// `<=` for ≤, the NFC form of a name.
type token struct {
	kind       lexer.TokenType
	start, end int
	text       string
	// first is set when no other token stands before it on its line.
	first bool
	// flaw says what is wrong with the token itself; empty for most.
	flaw flaw
}

// flaw is something wrong with a single token.
type flaw uint8

const (
	flawNone         flaw = iota
	flawIllegal           // a character of no meaning
	flawUnterminated      // a text without its closing quote
	flawQuotes            // a text in typographic quotes
	flawJoined            // a number with letters right after it
	flawBytes             // bytes that are no UTF-8
)

var keywords = func() map[string]bool {
	m := map[string]bool{}
	for _, k := range grammar.Keywords {
		m[k] = true
	}
	return m
}()

// hyphenated holds the functions with a hyphen in their name.
var hyphenated = func() []string {
	var names []string
	for _, f := range grammar.Functions {
		if strings.Contains(f.Name, "-") {
			names = append(names, f.Name)
		}
	}
	return names
}()

// cousins are characters that are read as an ASCII operator.
var cousins = map[rune]string{
	'≤': "<=", '≥': ">=", '≠': "!=",
	'−': "-", // U+2212 MINUS SIGN
	'×': "*", '·': "*", '⋅': "*",
	'÷': "/",
	'∝': "∝",
}

// scanner cuts text into tokens; comments are tokens, blanks are not.
type scanner struct {
	text string
	pos  int
	// first is true until a token was met on the line.
	first bool
}

func newScanner(text string, pos int) scanner { return scanner{text: text, pos: pos, first: true} }

// isBlank counts the byte order mark as a blank.
func isBlank(r rune) bool { return unicode.IsSpace(r) || r == '\ufeff' }

// next returns the next token; at the end one of kind EOF.
func (s *scanner) next() token {
	s.skipBlanks()
	start, first := s.pos, s.first
	if start >= len(s.text) {
		return token{kind: lexer.EOF, start: start, end: start, first: first}
	}
	s.first = false
	t := s.scan()
	t.start, t.end, t.first = start, s.pos, first
	if t.text == "" {
		t.text = s.text[start:s.pos]
	}
	return t
}

func (s *scanner) skipBlanks() {
	for s.pos < len(s.text) {
		switch c := s.text[s.pos]; {
		case c == '\n' || c == '\r':
			s.first = true
			s.pos++
		case c == ' ' || c == '\t' || c == '\f' || c == '\v':
			s.pos++
		case c < utf8.RuneSelf:
			return
		default:
			r, size := utf8.DecodeRuneInString(s.text[s.pos:])
			if !isBlank(r) {
				return
			}
			s.pos += size
		}
	}
}

// scan moves over one token and gives its kind, and its text where that is not
// as written.
func (s *scanner) scan() token {
	c := s.text[s.pos]
	switch {
	case isLetter(c):
		return s.scanIdent()
	case isDigit(c), c == '.' && s.pos+1 < len(s.text) && isDigit(s.text[s.pos+1]) && !s.afterName():
		return s.scanNumber()
	}
	switch c {
	case '"':
		return s.scanString()
	case '#':
		s.pos = lineEnd(s.text, s.pos)
		return token{kind: tokenComment}
	case '=', '!', '<', '>':
		if s.pos+1 < len(s.text) && s.text[s.pos+1] == '=' {
			s.pos += 2
			return token{kind: tokenOp}
		}
		s.pos++
		if c == '!' {
			return token{kind: tokenIllegal, flaw: flawIllegal}
		}
		return token{kind: tokenOp}
	case '+', '-', '*', '/', '^', '(', ')', '[', ']', ',', ':', ';', '%', '.', '|':
		s.pos++
		return token{kind: tokenOp}
	}
	r, size := utf8.DecodeRuneInString(s.text[s.pos:])
	if op, ok := cousins[r]; ok {
		s.pos += size
		return token{kind: tokenOp, text: op}
	}
	switch {
	case r == utf8.RuneError && size == 1:
		for s.pos < len(s.text) {
			if r, size := utf8.DecodeRuneInString(s.text[s.pos:]); r != utf8.RuneError || size != 1 {
				break
			}
			s.pos++
		}
		return token{kind: tokenIllegal, flaw: flawBytes}
	case r == '“' || r == '”' || r == '„':
		return s.scanTypographic(size)
	case nameStart(r):
		return s.scanIdent()
	}
	s.pos += size
	for s.pos < len(s.text) { // combining marks go with their base
		r, size := utf8.DecodeRuneInString(s.text[s.pos:])
		if !unicode.Is(unicode.M, r) {
			break
		}
		s.pos += size
	}
	return token{kind: tokenIllegal, flaw: flawIllegal}
}

// afterName reports whether the character before is part of a name or a
// number, so that a point belongs to it.
func (s *scanner) afterName() bool {
	if s.pos == 0 {
		return false
	}
	r, _ := utf8.DecodeLastRuneInString(s.text[:s.pos])
	return nameRest(r)
}

func (s *scanner) scanIdent() token {
	start, ascii := s.pos, true
	for s.pos < len(s.text) {
		c := s.text[s.pos]
		if isLetter(c) || isDigit(c) {
			s.pos++
			continue
		}
		if c < utf8.RuneSelf {
			break
		}
		r, size := utf8.DecodeRuneInString(s.text[s.pos:])
		if !nameRest(r) || r == utf8.RuneError {
			break
		}
		ascii = false
		s.pos += size
	}
	word := s.text[start:s.pos]
	if !ascii {
		return token{kind: tokenIdent, text: canonicalName(word)}
	}
	if keywords[word] {
		return token{kind: tokenKeyword, text: word}
	}
	for _, name := range hyphenated {
		if head, tail, _ := strings.Cut(name, "-"); head == word && strings.HasPrefix(s.text[s.pos:], "-"+tail+"(") {
			s.pos = start + len(name)
			return token{kind: tokenIdent, text: name}
		}
	}
	return token{kind: tokenIdent, text: word}
}

// canonicalName is the composed form of a name, in which the micro sign is the
// Greek letter, so that two spellings that look alike are one name.
func canonicalName(word string) string {
	return norm.NFC.String(strings.ReplaceAll(word, "\u00b5", "\u03bc"))
}

func (s *scanner) scanNumber() token {
	digits := func() bool {
		from := s.pos
		for s.pos < len(s.text) && isDigit(s.text[s.pos]) {
			s.pos++
		}
		return s.pos > from
	}
	digits()
	if s.pos+1 < len(s.text) && s.text[s.pos] == '.' && isDigit(s.text[s.pos+1]) {
		s.pos++
		digits()
	}
	if s.pos < len(s.text) && (s.text[s.pos] == 'e' || s.text[s.pos] == 'E') {
		before := s.pos
		s.pos++
		if s.pos < len(s.text) && (s.text[s.pos] == '-' || s.text[s.pos] == '+') {
			s.pos++
		}
		if !digits() {
			s.pos = before
		}
	}
	joined := false
	for s.pos < len(s.text) {
		r, size := utf8.DecodeRuneInString(s.text[s.pos:])
		if !nameRest(r) || r == utf8.RuneError {
			break
		}
		joined = true
		s.pos += size
	}
	if joined {
		return token{kind: tokenIllegal, flaw: flawJoined}
	}
	return token{kind: tokenNumber}
}

func (s *scanner) scanString() token {
	for s.pos++; s.pos < len(s.text); s.pos++ {
		switch s.text[s.pos] {
		case '"':
			s.pos++
			return token{kind: tokenString}
		case '\\':
			if s.pos+1 < len(s.text) && s.text[s.pos+1] != '\n' && s.text[s.pos+1] != '\r' {
				s.pos++
			}
		case '\n', '\r':
			return token{kind: tokenString, flaw: flawUnterminated}
		}
	}
	return token{kind: tokenString, flaw: flawUnterminated}
}

// scanTypographic reads “…” as a text, to be reported with a fix.
func (s *scanner) scanTypographic(size int) token {
	end := lineEnd(s.text, s.pos)
	inner := s.text[s.pos+size : end]
	if i := strings.IndexAny(inner, "“”\""); i >= 0 {
		_, close := utf8.DecodeRuneInString(inner[i:])
		s.pos += size + i + close
		return token{kind: tokenString, text: Quote(inner[:i]), flaw: flawQuotes}
	}
	s.pos += size
	return token{kind: tokenIllegal, flaw: flawIllegal}
}

// lineEnd is the offset of the end of the line that holds pos, before its line
// break.
func lineEnd(text string, pos int) int {
	if i := strings.IndexAny(text[pos:], "\n\r"); i >= 0 {
		return pos + i
	}
	return len(text)
}

func isDigit(c byte) bool  { return '0' <= c && c <= '9' }
func isLetter(c byte) bool { return 'a' <= c && c <= 'z' || 'A' <= c && c <= 'Z' || c == '_' }

func nameStart(r rune) bool { return r == '_' || unicode.IsLetter(r) }

// nameRest allows subscript digits, as in θ₁.
func nameRest(r rune) bool {
	return r == '_' || unicode.IsLetter(r) || unicode.IsDigit(r) || unicode.Is(unicode.M, r) || '₀' <= r && r <= '₉'
}

// Quote writes a text between quotes, with escapes where they are needed.
func Quote(text string) string {
	return `"` + strings.NewReplacer(`\`, `\\`, `"`, `\"`, "\n", `\n`, "\t", `\t`).Replace(text) + `"`
}

// Unquote gives the text of a quoted one: \" \\ \n \t are read as usual, any
// other escape stands for the character after the backslash. Missing quotes
// are forgiven.
func Unquote(quoted string) string {
	s := strings.TrimPrefix(quoted, `"`)
	if !strings.Contains(s, `\`) {
		return strings.TrimSuffix(s, `"`)
	}
	var b strings.Builder
	for i := 0; i < len(s); i++ {
		switch c := s[i]; {
		case c == '"' && i == len(s)-1:
		case c == '\\' && i+1 < len(s):
			i++
			switch s[i] {
			case 'n':
				b.WriteByte('\n')
			case 't':
				b.WriteByte('\t')
			default:
				b.WriteByte(s[i])
			}
		default:
			b.WriteByte(c)
		}
	}
	return b.String()
}

// definition hands the scanner to participle.
type definition struct{}

func (definition) Symbols() map[string]lexer.TokenType { return symbols }

func (definition) Lex(_ string, r io.Reader) (lexer.Lexer, error) {
	text, err := io.ReadAll(r)
	if err != nil {
		return nil, err
	}
	return &feed{tokens: scanAll(string(text)), end: len(text)}, nil
}

// scanAll gives all tokens of a text, without the final EOF.
func scanAll(text string) []token {
	var tokens []token
	for s := newScanner(text, 0); ; {
		t := s.next()
		if t.kind == lexer.EOF {
			return tokens
		}
		tokens = append(tokens, t)
	}
}

// feed hands tokens to participle, a Space for each gap, comments left out.
type feed struct {
	tokens []token
	at     int // offset up to which everything was handed over
	end    int
}

func (f *feed) Next() (lexer.Token, error) {
	for len(f.tokens) > 0 && f.tokens[0].kind == tokenComment {
		f.tokens = f.tokens[1:]
	}
	start := f.end
	if len(f.tokens) > 0 {
		start = f.tokens[0].start
	}
	pos := lexer.Position{Offset: f.at}
	if f.at < start {
		f.at = start
		return lexer.Token{Type: tokenSpace, Value: " ", Pos: pos}, nil
	}
	if len(f.tokens) == 0 {
		return lexer.EOFToken(pos), nil
	}
	t := f.tokens[0]
	f.tokens, f.at = f.tokens[1:], t.end
	return lexer.Token{Type: t.kind, Value: t.text, Pos: pos}, nil
}
