package grammar

import (
	"reflect"
	"regexp"
	"sort"
	"strings"
)

var quotedWord = regexp.MustCompile(`'([a-zA-Z]+)'`)

// SoftWords are the words with a meaning inside a statement: as, flat, because.
// They are taken from the tags of the syntax tree, in alphabetical order, and
// are words only where the grammar expects them.
func SoftWords() []string {
	seen := map[string]bool{}
	types := []any{Title{}, Table{}, Unknown{}, Declared{}, Vary{}, Observe{}, Modifier{}, PriorSpec{}, PriorRule{}, Reason{},
		Rivals{}, ReportedForm{}, Conclude{}, Suppose{}, Require{}, PosteriorChance{}, Coverage{}, CoveragePart{}, Chance{}, Agree{},
		Accept{}}
	for _, k := range Keywords {
		seen[k] = true
	}
	var words []string
	for _, v := range types {
		t := reflect.TypeOf(v)
		for i := range t.NumField() {
			for _, m := range quotedWord.FindAllStringSubmatch(t.Field(i).Tag.Get("parser"), -1) {
				if w := m[1]; !seen[w] && strings.ToLower(w) == w && w != "a" {
					seen[w] = true
					words = append(words, w)
				}
			}
		}
	}
	sort.Strings(words)
	return words
}
