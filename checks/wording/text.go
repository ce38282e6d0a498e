package wording

import (
	"math"
	"strings"
	"unicode"
	"unicode/utf8"
)

// Undefined is the value of evidence that is no number.
var Undefined = math.NaN()

// Sentence ends a text with a full stop and begins it with a capital when its
// first word is an ordinary one (an unknown keeps its own spelling).
func Sentence(s string) string {
	s = strings.TrimSpace(s)
	if s == "" {
		return s
	}
	if !strings.HasSuffix(s, ".") && !strings.HasSuffix(s, "?") && !strings.HasSuffix(s, "…") {
		s += "."
	}
	word, _, _ := strings.Cut(s, " ")
	if ordinary[strings.TrimRight(word, ":,")] {
		r, size := utf8.DecodeRuneInString(s)
		s = string(unicode.ToUpper(r)) + s[size:]
	}
	return s
}

// ordinary words may be capitalised at the head of a sentence.
var ordinary = map[string]bool{
	"the": true, "an": true, "all": true, "none": true, "no": true, "with": true, "it": true, "needed": true, "every": true,
	"one": true, "two": true, "three": true, "some": true, "there": true, "this": true, "these": true, "each": true, "flat": true, "in": true, "on": true,
	"when": true, "as": true, "mass": true, "only": true, "because": true, "columns": true, "column": true, "rows": true, "row": true, "readings": true,
}

// List joins words: "a", "a and b", "a, b and c".
func List(words []string) string {
	switch n := len(words); n {
	case 0:
		return ""
	case 1:
		return words[0]
	default:
		return strings.Join(words[:n-1], ", ") + " and " + words[n-1]
	}
}

// Capital begins a text with a capital letter.
func Capital(s string) string {
	r, size := utf8.DecodeRuneInString(s)
	return string(unicode.ToUpper(r)) + s[size:]
}
