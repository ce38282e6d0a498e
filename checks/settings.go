package checks

import (
	"os"
	"path/filepath"
	"sync"

	"wellposed/checks/config"
	"wellposed/checks/rule"
	"wellposed/parser/diag"
	"wellposed/parser/source"
)

// Settler finds the configuration of each model: the nearest wellposed.toml,
// going up from the model's folder, each read once. It is safe for use by
// several goroutines.
type Settler struct {
	// Fixed, when set, is used for every model instead of the nearest file.
	Fixed string

	mu      sync.Mutex
	folders map[string]string
	files   map[string]*Configuration
}

// Configuration is one configuration file as it was read.
type Configuration struct {
	*config.Config
	Source *source.File
	// Problems are what could not be understood; the rest is in force.
	Problems []diag.Finding
	// Looked are the folders that were searched, nearest first.
	Looked []string
}

// For returns the configuration of a model, with the defaults when there is no
// file.
func (s *Settler) For(model string) *Configuration {
	s.mu.Lock()
	defer s.mu.Unlock()
	if s.files == nil {
		s.folders, s.files = map[string]string{}, map[string]*Configuration{}
	}
	path, looked := s.Fixed, []string(nil)
	if path == "" {
		folder := filepath.Dir(model)
		known, ok := s.folders[folder]
		if !ok {
			// A search that fails finds nothing: the defaults hold.
			known, looked, _ = config.Find(folder)
			s.folders[folder] = known
		}
		path = known
	}
	if c := s.files[path]; c != nil {
		return c
	}
	c := &Configuration{Config: config.Default(), Looked: looked}
	if path != "" {
		c = readConfiguration(path, looked)
	}
	s.files[path] = c
	return c
}

// Files are the configuration files that were read, by path, in no order.
func (s *Settler) Files() []*Configuration {
	s.mu.Lock()
	defer s.mu.Unlock()
	var list []*Configuration
	for path, c := range s.files {
		if path != "" {
			list = append(list, c)
		}
	}
	return list
}

func readConfiguration(path string, looked []string) *Configuration {
	raw, err := os.ReadFile(path)
	if err == nil && len(raw) > config.MaxBytes {
		raw, err = nil, errTooLarge
	}
	if err != nil {
		file := source.NewFile(path, "")
		c := config.Default()
		c.Path = path
		return &Configuration{Config: c, Source: file, Looked: looked, Problems: []diag.Finding{{
			Rule: config.Unreadable, Severity: diag.Warn, Path: path, Headline: "The configuration can't be read: " + err.Error() + ".",
			Notes: []string{"The built-in settings are in force."},
		}}}
	}
	file, broken := Decode(path, raw)
	c, found := config.Parse(file, ConfigRules())
	return &Configuration{Config: c, Source: file, Problems: append(broken, found...), Looked: looked}
}

type tooLarge struct{}

func (tooLarge) Error() string { return "it has more than 1 MB" }

var errTooLarge = tooLarge{}

// ConfigRules are the rules as the reader of configurations must know them.
// Rules that stop an analysis for want of a posterior are firm.
func ConfigRules() []config.Known {
	var list []config.Known
	for _, r := range Rules() {
		list = append(list, config.Known{Name: r.Name, Severity: r.Severity, Firm: r.Group == rule.Existence && r.Severity == diag.Stop})
	}
	return list
}
