package highlight

import (
	"fmt"
	"strings"

	"wellposed/grammar"
)

// Sublime is a syntax file for Sublime Text.
func Sublime() string {
	var b strings.Builder
	b.WriteString(`%YAML 1.2
---
# Made from the language's data; see grammar/highlight.
name: Bayes model
file_extensions: [bayes]
scope: source.bayes
contexts:
  main:
    - match: '#.*$'
      scope: comment.line.number-sign.bayes
    - match: '"'
      scope: punctuation.definition.string.begin.bayes
      push: text
`)
	rule := func(pattern, scope string) {
		fmt.Fprintf(&b, "    - match: '%s'\n      scope: %s.bayes\n", pattern, scope)
	}
	rule(`^\s*(`+strings.Join(grammar.Keywords, "|")+`)\b`, "keyword.control")
	rule(`(?i:`+strings.Join(distributions(), "|")+`)(?=\s*\()`, "support.function.distribution")
	rule(`\b(`+strings.Join(functions(), "|")+`)(?=\s*\()`, "support.function.builtin")
	rule(`\b(`+strings.Join(kinds(), "|")+`)\b`, "storage.type")
	rule(`\b(`+strings.Join(modifiers, "|")+`)\b`, "keyword.other")
	rule(`\b\d+(\.\d+)?([eE][-+]?\d+)?%?`, "constant.numeric")
	b.WriteString(`  text:
    - meta_scope: string.quoted.double.bayes
    - match: '\\.'
      scope: constant.character.escape.bayes
    - match: '"|$'
      scope: punctuation.definition.string.end.bayes
      pop: true
`)
	return b.String()
}
