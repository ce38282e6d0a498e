// Package highlight makes the highlighting files of editors from the language's
// own data, so that they can't fall behind it. The files under editors/ are
// goldens of this package's test: `go test ./grammar/highlight -update`.
package highlight

import (
	"sort"

	"wellposed/grammar"
)

// modifiers are the words that the grammar expects inside statements.
var modifiers = []string{
	"across", "agree", "as", "at", "average", "because", "before", "between", "by", "censored", "central", "chance",
	"constrained", "coverage", "every", "flat", "for", "from", "in", "jeffreys", "jointly", "left", "limited",
	"long", "lower", "lowest", "matching", "nature", "of", "on", "only", "outcome", "per", "posterior", "proportional",
	"rate", "reference", "relative", "right", "run", "sd", "separately", "shortest", "standard", "to", "truncated",
	"until", "upper", "weighted", "when", "where", "with", "within",
}

func kinds() []string {
	var list []string
	for _, k := range grammar.Kinds {
		list = append(list, k.Name)
	}
	return list
}

func distributions() []string {
	var list []string
	for _, d := range grammar.Distributions {
		list = append(list, d.Name)
	}
	// Longer names first: a regular expression takes the first that fits.
	sort.SliceStable(list, func(i, j int) bool { return len(list[i]) > len(list[j]) })
	return list
}

func functions() []string {
	var list []string
	for _, f := range grammar.Functions {
		list = append(list, f.Name)
	}
	sort.SliceStable(list, func(i, j int) bool { return len(list[i]) > len(list[j]) })
	return list
}
