// Package config reads wellposed.toml: what a team decided once for all its
// models. The nearest file wins, going up from the model; files are not merged.
// Reading is strict: what is not understood is a finding with its place, and
// never passes silently. The command line and the server call the same code.
package config

import (
	"math/big"
	"path/filepath"

	"wellposed/parser/diag"
)

// Name is the name of the file.
const Name = "wellposed.toml"

// Known is what the reader must know about a rule.
type Known struct {
	Name     string
	Severity diag.Severity
	// Firm rules speak about existence; they can't be switched off or lowered.
	Firm bool
}

// Setting is a severity, or off.
type Setting struct {
	Severity diag.Severity
	Off      bool
}

// Config is one file, or the defaults when Path is empty.
type Config struct {
	Path string
	// Top ends the search for a nearer file's parents; informational once found.
	Top bool
	// Matters is nil when the file does not say.
	Matters  *big.Rat
	Strict   bool
	Level    diag.Severity
	Severity map[string]Setting
	Limits   Limits
	Paths    []ForPaths
}

// Limits bound what is read and computed.
type Limits struct {
	// TableMegabytes bounds one data file, Rows its rows, Seconds the numbers of
	// one model. Zero means the built-in bound.
	TableMegabytes, Rows, Seconds int
}

// ForPaths are settings for the files that match one of the patterns, relative
// to the configuration file. Later entries win.
type ForPaths struct {
	Match    []string
	Skip     bool
	Matters  *big.Rat
	Strict   *bool
	Severity map[string]Setting
}

// Settings are what holds for one file.
type Settings struct {
	Skip     bool
	Matters  *big.Rat
	Strict   bool
	Severity map[string]Setting
	Limits   Limits
}

// Default is the configuration without a file.
func Default() *Config { return &Config{Level: diag.Warn} }

// For returns what holds for a model file.
func (c *Config) For(path string) Settings {
	s := Settings{Matters: c.Matters, Strict: c.Strict, Severity: map[string]Setting{}, Limits: c.Limits}
	for name, set := range c.Severity {
		s.Severity[name] = set
	}
	for _, entry := range c.Paths {
		if !entry.matches(c.relative(path)) {
			continue
		}
		s.Skip = entry.Skip
		if entry.Matters != nil {
			s.Matters = entry.Matters
		}
		if entry.Strict != nil {
			s.Strict = *entry.Strict
		}
		for name, set := range entry.Severity {
			s.Severity[name] = set
		}
	}
	return s
}

// relative is a path as seen from the configuration file's folder, with forward
// slashes; the path itself when it has no such form.
func (c *Config) relative(path string) string {
	base, err1 := filepath.Abs(filepath.Dir(c.Path))
	full, err2 := filepath.Abs(path)
	if err1 != nil || err2 != nil {
		return filepath.ToSlash(path)
	}
	rel, err := filepath.Rel(base, full)
	if err != nil {
		return filepath.ToSlash(path)
	}
	return filepath.ToSlash(rel)
}

func (p *ForPaths) matches(path string) bool {
	for _, pattern := range p.Match {
		if Match(pattern, path) {
			return true
		}
	}
	return false
}

// Apply sets the severities of findings and drops those that are off.
func (s Settings) Apply(found []diag.Finding) []diag.Finding {
	kept := found[:0]
	for _, d := range found {
		set, ok := s.Severity[d.Rule]
		switch {
		case !ok:
		case set.Off:
			continue
		default:
			d.Severity = set.Severity
		}
		kept = append(kept, d)
	}
	return kept
}
