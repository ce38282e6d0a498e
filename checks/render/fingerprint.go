package render

import (
	"crypto/sha256"
	"encoding/hex"
	"fmt"
	"path/filepath"
	"strings"
)

// fingerprints are stable names of a file's findings: the rule, the path, the
// target and the content of the statement, with blanks folded. A finding keeps
// its name when lines move. Findings that agree in all of these are numbered.
func fingerprints(f *File) []string {
	seen := map[string]int{}
	out := make([]string, len(f.Findings))
	for i, d := range f.Findings {
		content := ""
		if f.Source != nil {
			content = strings.Join(strings.Fields(f.Source.Slice(f.statement(d.Span.Start))), " ")
		}
		key := strings.Join([]string{d.Rule, filepath.ToSlash(f.Path), d.Target, content}, "\x00")
		n := seen[key]
		seen[key]++
		sum := sha256.Sum256([]byte(fmt.Sprintf("%s\x00%d", key, n)))
		out[i] = hex.EncodeToString(sum[:16])
	}
	return out
}
