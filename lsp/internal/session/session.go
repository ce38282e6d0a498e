// Package session holds the open documents and their snapshots.
//
// Edits come one after the other and each makes a new snapshot; reads work on
// the snapshot that they took and are never disturbed. A newer snapshot ends
// the work on the older one. Findings are published twice: those of reading and
// of the exact rules at once, then all of them when the numbers are there; a
// result of an older version is never published after a newer one.
package session

import (
	"context"
	"sort"
	"strings"
	"sync"

	"go.lsp.dev/uri"

	"wellposed/checks"
	"wellposed/checks/facts"
	"wellposed/parser/diag"
	"wellposed/parser/model"
	"wellposed/parser/source"
)

// Builder makes the typed model of a snapshot's text.
type Builder func(ctx context.Context, s *Snapshot) *model.Model

// Publisher shows the findings of a snapshot. Complete says that the numbers
// are in. It is called in order, and never for a snapshot that is no longer the
// newest.
type Publisher func(s *Snapshot, found []diag.Finding, complete bool)

// Session is the set of open documents. All methods may be called at any time
// from any goroutine; edits of one document must come in order.
type Session struct {
	ctx     context.Context
	build   Builder
	publish Publisher
	numeric chan struct{} // bounds the snapshots whose numbers are being made

	mu   sync.Mutex
	docs map[uri.URI]*document
	work sync.WaitGroup
}

type document struct {
	current *Snapshot
	// publishing keeps the order of the published results.
	publishing sync.Mutex
}

// Snapshot is one version of one document; it never changes.
type Snapshot struct {
	URI     uri.URI
	Version int32
	File    *source.File
	// Closed is set for a document that was read from disk, not from an editor.
	Closed bool

	ctx     context.Context
	cancel  context.CancelFunc
	session *Session
	doc     *document
	once    sync.Once
	facts   *facts.Facts
}

// New makes a session; ctx ends all its work. At most `parallel` documents have
// their numbers made at a time.
func New(ctx context.Context, parallel int, build Builder, publish Publisher) *Session {
	return &Session{
		ctx: ctx, build: build, publish: publish,
		numeric: make(chan struct{}, max(1, parallel)),
		docs:    map[uri.URI]*document{},
	}
}

// Open starts or replaces a document.
func (s *Session) Open(at uri.URI, version int32, text string) { s.set(at, version, text) }

// Edit replaces the text of an open document by what change makes of it. It
// reports false when the document is not open.
func (s *Session) Edit(at uri.URI, version int32, change func(*source.File) string) bool {
	old := s.Snapshot(at)
	if old == nil {
		return false
	}
	s.set(at, version, change(old.File))
	return true
}

// Close forgets a document and takes its findings away.
func (s *Session) Close(at uri.URI) {
	s.mu.Lock()
	doc := s.docs[at]
	delete(s.docs, at)
	s.mu.Unlock()
	if doc == nil {
		return
	}
	doc.publishing.Lock()
	defer doc.publishing.Unlock()
	doc.current.cancel()
	s.publish(doc.current, nil, true)
}

// Refresh checks a document again with the same text, because something that it
// reads has changed.
func (s *Session) Refresh(at uri.URI) {
	if old := s.Snapshot(at); old != nil {
		s.set(at, old.Version, old.File.Text)
	}
}

// Snapshot returns the newest version of an open document, nil when not open.
func (s *Session) Snapshot(at uri.URI) *Snapshot {
	s.mu.Lock()
	defer s.mu.Unlock()
	if doc := s.docs[at]; doc != nil {
		return doc.current
	}
	return nil
}

// Opened lists the open documents by address.
func (s *Session) Opened() []*Snapshot {
	s.mu.Lock()
	defer s.mu.Unlock()
	var list []*Snapshot
	for _, doc := range s.docs {
		list = append(list, doc.current)
	}
	sort.Slice(list, func(i, j int) bool { return list[i].URI < list[j].URI })
	return list
}

// Read makes a snapshot of a document that is not open, for one request. The
// caller must Release it.
func (s *Session) Read(at uri.URI, text string) *Snapshot {
	return s.snapshot(nil, at, 0, text)
}

// Release ends the work on a snapshot made by Read.
func (snap *Snapshot) Release() { snap.cancel() }

// Wait blocks until all work in the background is done.
func (s *Session) Wait() { s.work.Wait() }

func (s *Session) snapshot(doc *document, at uri.URI, version int32, text string) *Snapshot {
	ctx, cancel := context.WithCancel(s.ctx)
	return &Snapshot{
		URI: at, Version: version, File: source.NewFile(Path(at), strings.Clone(text)),
		Closed: doc == nil, ctx: ctx, cancel: cancel, session: s, doc: doc,
	}
}

func (s *Session) set(at uri.URI, version int32, text string) {
	s.mu.Lock()
	doc := s.docs[at]
	if doc == nil {
		doc = &document{}
		s.docs[at] = doc
	}
	if doc.current != nil {
		doc.current.cancel()
	}
	snap := s.snapshot(doc, at, version, text)
	doc.current = snap
	s.mu.Unlock()
	if !snap.IsModel() {
		return
	}
	s.work.Add(1)
	go func() {
		defer s.work.Done()
		s.diagnose(snap)
	}()
}

// diagnose publishes what is found at once, then what needs numbers.
func (s *Session) diagnose(snap *Snapshot) {
	f := snap.Facts()
	first := checks.Run(f, checks.Options{ExactOnly: true})
	s.show(snap, first, false)
	select {
	case s.numeric <- struct{}{}:
		defer func() { <-s.numeric }()
	case <-snap.ctx.Done():
		return
	}
	all := checks.Run(f, checks.Options{})
	s.show(snap, all, true)
}

// show publishes when the snapshot is still the newest and its work was not
// ended half-way.
func (s *Session) show(snap *Snapshot, found []diag.Finding, complete bool) {
	snap.doc.publishing.Lock()
	defer snap.doc.publishing.Unlock()
	if snap.ctx.Err() == nil && s.Snapshot(snap.URI) == snap {
		s.publish(snap, found, complete)
	}
}

// IsModel reports whether the document is a model file.
func (snap *Snapshot) IsModel() bool { return strings.HasSuffix(string(snap.URI), ".bayes") }

// Context ends when a newer version arrives or the document is closed.
func (snap *Snapshot) Context() context.Context { return snap.ctx }

// Facts are the results for this version, made when first asked for.
func (snap *Snapshot) Facts() *facts.Facts {
	snap.once.Do(func() { snap.facts = facts.New(snap.ctx, snap.session.build(snap.ctx, snap)) })
	return snap.facts
}

// Model is the typed model of this version.
func (snap *Snapshot) Model() *model.Model { return snap.Facts().Model }

// Path is the file path of an address, or the address itself when it is none.
func Path(at uri.URI) string {
	if strings.HasPrefix(string(at), "file:") {
		return at.FsPath()
	}
	return string(at)
}
