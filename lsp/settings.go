package lsp

import (
	"context"
	"path/filepath"
	"sync"

	"go.lsp.dev/protocol"

	"wellposed/checks"
	"wellposed/checks/config"
)

// settings are the configuration files that hold for the open models, as the
// command line reads them; they are read again when one changes.
type settings struct {
	mu      sync.Mutex
	settler *checks.Settler
}

// of is what holds for a model file.
func (s *settings) of(path string) config.Settings {
	s.mu.Lock()
	if s.settler == nil {
		s.settler = &checks.Settler{}
	}
	settler := s.settler
	s.mu.Unlock()
	return settler.For(path).For(path)
}

// forget makes the next look read the files again.
func (s *settings) forget() {
	s.mu.Lock()
	defer s.mu.Unlock()
	s.settler = nil
}

// DidChangeWatchedFiles checks the open models again that read a changed data
// file, or all when a configuration changed.
func (s *server) DidChangeWatchedFiles(_ context.Context, p *protocol.DidChangeWatchedFilesParams) error {
	for _, change := range p.Changes {
		s.changed(change.URI.FsPath())
	}
	return nil
}

// changed looks at a file that is no model and has changed on disk.
func (s *server) changed(path string) {
	if filepath.Base(path) == config.Name {
		s.settings.forget()
		for _, snap := range s.session.Opened() {
			s.session.Refresh(snap.URI)
		}
		return
	}
	s.tables.forget(path)
	for _, snap := range s.session.Opened() {
		if s.tables.reads(snap.URI, path) {
			s.session.Refresh(snap.URI)
		}
	}
}
