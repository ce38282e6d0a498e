package grammar

import (
	"encoding/json"
	"sort"
	"strings"
)

// TextMate is the highlighting grammar of the language as JSON, made from the
// lists of this package.
func TextMate() ([]byte, error) {
	match := func(scope, pattern string) map[string]any {
		return map[string]any{"name": scope + ".bayes", "match": pattern}
	}
	include := func(names ...string) []any {
		var out []any
		for _, n := range names {
			out = append(out, map[string]any{"include": "#" + n})
		}
		return out
	}
	var kinds, functions, distributions []string
	for _, k := range Kinds {
		kinds = append(kinds, k.Name)
	}
	for _, f := range Functions {
		functions = append(functions, f.Name)
	}
	for _, d := range Distributions {
		distributions = append(distributions, d.Name)
	}
	lead := "(?<![\\p{L}\\p{M}\\p{N}_.])"
	trail := "(?![\\p{L}\\p{M}\\p{N}_])"
	word := func(words []string) string { return lead + "(?:" + alternatives(words) + ")" + trail }
	grammar := map[string]any{
		"name":      "Bayesian model",
		"scopeName": "source.bayes",
		"fileTypes": []string{"bayes"},
		"patterns":  include("comment", "row", "statement", "string", "label", "distribution", "kind", "function", "constant", "date", "number", "word", "operator", "name"),
		"repository": map[string]any{
			"comment": match("comment.line.number-sign", "#.*$"),
			"row": map[string]any{
				"begin": "^\\s*(\\|)", "end": "$",
				"beginCaptures": map[string]any{"1": map[string]any{"name": "punctuation.separator.table.bayes"}},
				"patterns": []any{
					match("comment.line.number-sign", "(?<=\\|)\\s*#.*$"),
					match("punctuation.separator.table", "(?<!\\\\)\\|"),
					match("constant.numeric", "(?<=\\|)\\s*[-+]?[0-9]*\\.?[0-9]+(?:[eE][-+]?[0-9]+)?(?=\\s*(?:\\||$))"),
					match("string.unquoted", "[^|\\s](?:\\\\.|[^|\\\\])*"),
				}},
			"statement": match("keyword.control", "^\\s*(?:"+alternatives(Keywords)+")"+trail),
			"string": map[string]any{
				"name": "string.quoted.double.bayes", "begin": "\"", "end": "\"|$",
				"patterns": []any{match("constant.character.escape", "\\\\.")}},
			"label": match("variable.parameter",
				"(?<=[(,]|[(,] )[\\p{L}_][\\p{L}\\p{M}\\p{N}_]*(?: [\\p{L}_][\\p{L}\\p{M}\\p{N}_]*)?(?=\\s*=(?!=))"),
			"distribution": map[string]any{
				"name":  "support.class.distribution.bayes",
				"match": "(?i)(?<=\\bas |: )(?:" + alternatives(distributions) + ")(?=\\s*\\()"},
			"kind":     match("storage.type", "(?<=: )(?:"+alternatives(kinds)+")"+trail),
			"function": match("support.function", lead+"(?:"+alternatives(functions)+")(?=\\()"),
			"constant": match("constant.language", word(Constants)),
			"date":     match("constant.other.date", lead+"[0-9]{4}-[0-9]{2}-[0-9]{2}"+trail),
			"number":   match("constant.numeric", lead+"(?:[0-9]+(?:\\.[0-9]+)?|\\.[0-9]+)(?:[eE][-+]?[0-9]+)?%?"),
			"word":     match("keyword.other", word(SoftWords())),
			"operator": match("keyword.operator", "[-+*/^<>=!∝≤≥≠−×·÷]+|"+word([]string{"and", "or", "not"})),
			"name":     match("variable.other", "[\\p{L}_][\\p{L}\\p{M}\\p{N}_₀-₉]*"),
		},
	}
	out, err := json.MarshalIndent(grammar, "", "  ")
	return append(out, '\n'), err
}

// alternatives joins words, longer ones first, so that a word is not cut short
// by its own beginning.
func alternatives(words []string) string {
	sorted := append([]string(nil), words...)
	sort.SliceStable(sorted, func(i, j int) bool { return len(sorted[i]) > len(sorted[j]) })
	return strings.Join(sorted, "|")
}
