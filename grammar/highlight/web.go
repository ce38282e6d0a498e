package highlight

import (
	"encoding/json"

	"wellposed/grammar"
)

// Web is the word lists for the page that runs in a browser.
func Web() string {
	text, err := json.MarshalIndent(map[string][]string{
		"keywords": grammar.Keywords, "modifiers": modifiers, "kinds": kinds(), "distributions": distributions(), "functions": functions(),
	}, "", "  ")
	if err != nil {
		panic(err) // strings always encode
	}
	return string(text) + "\n"
}
