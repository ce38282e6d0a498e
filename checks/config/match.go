package config

import (
	"path"
	"strings"
)

// Match reports whether a slash-separated path fits a pattern: * and ? stand for
// characters within a name, ** for any number of folders, and a pattern that
// ends with / for everything below that folder.
func Match(pattern, name string) bool {
	if strings.HasSuffix(pattern, "/") {
		pattern += "**"
	}
	return match(strings.Split(pattern, "/"), strings.Split(name, "/"))
}

func match(pattern, name []string) bool {
	for len(pattern) > 0 {
		if pattern[0] == "**" {
			for skip := 0; skip <= len(name); skip++ {
				if match(pattern[1:], name[skip:]) {
					return true
				}
			}
			return false
		}
		if len(name) == 0 {
			return false
		}
		if ok, err := path.Match(pattern[0], name[0]); err != nil || !ok {
			return false
		}
		pattern, name = pattern[1:], name[1:]
	}
	return len(name) == 0
}
