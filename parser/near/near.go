// Package near finds the known word that a mistyped one was meant to be.
package near

import "strings"

// Word returns the known word nearest to a mistyped one, or "" when none is
// near: at most one edit for words of up to 4 letters, two for up to 8, three
// beyond. Case does not count. Among equally near words the first wins.
func Word(typed string, known []string) string {
	runes := []rune(strings.ToLower(typed))
	limit := 3
	switch {
	case len(runes) <= 4:
		limit = 1
	case len(runes) <= 8:
		limit = 2
	}
	best := ""
	for _, k := range known {
		if d := distance(runes, []rune(strings.ToLower(k)), limit); d <= limit {
			best, limit = k, d-1
		}
	}
	return best
}

// Suggest is Word as the end of a message: `; did you mean "lint"?`, or "".
func Suggest(typed string, known []string) string {
	if w := Word(typed, known); w != "" {
		return "; did you mean " + w + "?"
	}
	return ""
}

// distance counts insertions, deletions, substitutions and swaps of neighbours;
// it gives limit+1 when there are more than limit.
func distance(a, b []rune, limit int) int {
	if limit < 0 || len(a)-len(b) > limit || len(b)-len(a) > limit {
		return limit + 1
	}
	two, one, row := make([]int, len(b)+1), make([]int, len(b)+1), make([]int, len(b)+1)
	for j := range one {
		one[j] = j
	}
	for i := 1; i <= len(a); i++ {
		row[0] = i
		for j := 1; j <= len(b); j++ {
			cost := 1
			if a[i-1] == b[j-1] {
				cost = 0
			}
			row[j] = min(one[j]+1, row[j-1]+1, one[j-1]+cost)
			if i > 1 && j > 1 && a[i-1] == b[j-2] && a[i-2] == b[j-1] {
				row[j] = min(row[j], two[j-2]+1)
			}
		}
		two, one, row = one, row, two
	}
	return one[len(b)]
}
