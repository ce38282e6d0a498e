package lsp

import (
	"context"
	"sync"

	"go.lsp.dev/uri"

	"wellposed/lsp/internal/session"
	"wellposed/parser"
	"wellposed/parser/model"
)

// tables remembers the data files that models read, so that a keystroke reads
// none again, and which model reads which file.
type tables struct {
	mu       sync.Mutex
	contents map[string]loaded
	readers  map[uri.URI]map[string]bool
	parsers  map[uri.URI]*parser.Cache
	cache    model.TableCache
}

type loaded struct {
	content []byte
	path    string
	err     error
}

func newTables() *tables {
	return &tables{contents: map[string]loaded{}, readers: map[uri.URI]map[string]bool{}, parsers: map[uri.URI]*parser.Cache{}}
}

// forget drops a file that has changed.
func (t *tables) forget(path string) {
	t.mu.Lock()
	defer t.mu.Unlock()
	for key, l := range t.contents {
		if l.path == path {
			delete(t.contents, key)
		}
	}
}

// reads reports whether a model has read a file.
func (t *tables) reads(at uri.URI, path string) bool {
	t.mu.Lock()
	defer t.mu.Unlock()
	return t.readers[at][path]
}

// parser is the statement cache of a document.
func (t *tables) parser(at uri.URI) *parser.Cache {
	t.mu.Lock()
	defer t.mu.Unlock()
	if t.parsers[at] == nil {
		t.parsers[at] = &parser.Cache{}
	}
	return t.parsers[at]
}

// drop forgets a document that was closed.
func (t *tables) drop(at uri.URI) {
	t.mu.Lock()
	defer t.mu.Unlock()
	delete(t.readers, at)
	delete(t.parsers, at)
}

// loader reads data files for one model: the text of an open document first,
// then the remembered content, then the disk.
type loader struct {
	server *server
	at     uri.URI
}

// Load implements model.Loader.
func (l loader) Load(from, name string) ([]byte, string, error) {
	disk := model.Disk{}
	t := l.server.tables
	key := from + "\x00" + name
	t.mu.Lock()
	known, ok := t.contents[key]
	t.mu.Unlock()
	if !ok {
		known.content, known.path, known.err = disk.Load(from, name)
		t.mu.Lock()
		t.contents[key] = known
		t.mu.Unlock()
	}
	t.mu.Lock()
	if t.readers[l.at] == nil {
		t.readers[l.at] = map[string]bool{}
	}
	t.readers[l.at][known.path] = true
	t.mu.Unlock()
	for _, snap := range l.server.session.Opened() {
		if !snap.IsModel() && snap.File.Path == known.path {
			return []byte(snap.File.Text), known.path, nil
		}
	}
	return known.content, known.path, known.err
}

// build makes the typed model of a snapshot.
func (s *server) build(ctx context.Context, snap *session.Snapshot) *model.Model {
	tree, found := s.tables.parser(snap.URI).Parse(snap.File)
	return model.BuildTree(ctx, snap.File, tree, found, model.Options{Matters: s.settings.of(snap.File.Path).Matters, Loader: loader{s, snap.URI}, Tables: &s.tables.cache})
}
