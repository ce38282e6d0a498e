// Package lsp serves the checker inline to any editor that speaks the Language
// Server Protocol. One file holds one method; internal/wire connects,
// internal/session keeps documents and snapshots, internal/convert translates.
package lsp

import (
	"context"
	"fmt"
	"io"
	"sync"
	"sync/atomic"

	"go.lsp.dev/jsonrpc2"
	"go.lsp.dev/protocol"
	"go.lsp.dev/uri"

	"wellposed/lsp/internal/convert"
	"wellposed/lsp/internal/session"
	"wellposed/lsp/internal/wire"
	"wellposed/parser/source"
)

// Options of a server.
type Options struct {
	// Version is shown to the client.
	Version string
	// Page gives the address of a rule's page, or "" when there is none.
	Page func(rule string) string
	// Log gets one line for each contained fault; never a row of data.
	Log io.Writer
}

// server answers one client.
type server struct {
	protocol.UnimplementedServer
	ctx      context.Context
	stop     context.CancelFunc
	options  Options
	session  *session.Session
	client   protocol.Client
	tables   *tables
	settings settings

	// Agreed in initialize, read-only afterwards.
	count     convert.Counting
	abilities abilities
	roots     []string

	logging  sync.Mutex
	shutdown atomic.Bool
	exited   chan struct{}
	exitOnce sync.Once
}

// abilities are what the client can show.
type abilities struct {
	markdown bool
	pulls    bool // asks for diagnostics itself
}

// Serve runs the server on a stream until the client says exit or the stream
// ends. It returns 0 when shutdown came before exit, else 1, as the protocol
// wants it.
func Serve(ctx context.Context, in io.Reader, out io.Writer, o Options) int {
	if o.Page == nil {
		o.Page = func(string) string { return "" }
	}
	ctx, cancel := context.WithCancel(ctx)
	defer cancel()
	// The work ends with shutdown, the connection only after its answer.
	work, stop := context.WithCancel(ctx)
	defer stop()
	s := &server{ctx: work, stop: stop, options: o, tables: newTables(), exited: make(chan struct{})}
	s.count, _ = convert.Agree(nil)
	s.session = session.New(work, 2, s.build, s.publish)
	ready := make(chan struct{})
	conn, client := wire.Connect(ctx, pipe{in, out}, waiting{s, ready}, s.report)
	s.client = client
	close(ready)
	select {
	case <-s.exited:
	case <-conn.Done():
	}
	cancel()
	s.session.Wait()
	if s.shutdown.Load() {
		return 0
	}
	return 1
}

// waiting holds the first message back until the server has its client.
type waiting struct {
	*server
	ready chan struct{}
}

// Initialize waits for the client to be set; it is always the first request.
func (w waiting) Initialize(ctx context.Context, p *protocol.InitializeParams) (*protocol.InitializeResult, error) {
	<-w.ready
	return w.server.Initialize(ctx, p)
}

// report logs a contained fault.
func (s *server) report(line string) {
	if s.options.Log == nil {
		return
	}
	s.logging.Lock()
	defer s.logging.Unlock()
	fmt.Fprintln(s.options.Log, line)
}

// pipe joins two ends to a stream.
type pipe struct {
	io.Reader
	io.Writer
}

// Close closes the ends that can be closed.
func (p pipe) Close() error {
	if c, ok := p.Reader.(io.Closer); ok {
		return c.Close()
	}
	return nil
}

// page is the address of a rule's page.
func (s *server) page(rule string) uri.URI { return uri.URI(s.options.Page(rule)) }

// files resolves the paths that findings name: open documents first, then disk.
type files struct{ *server }

// File implements convert.Files.
func (f files) File(path string) *source.File { return f.text(path) }

// URI implements convert.Files.
func (f files) URI(path string) uri.URI {
	if path == "" {
		return ""
	}
	at, err := uri.Parse(path)
	if err == nil && at.Scheme() != "" && len(at.Scheme()) > 1 {
		return at
	}
	return uri.File(path)
}

// Request answers a method that the protocol does not name: there is none.
func (s *server) Request(_ context.Context, method string, _ any) (any, error) {
	return nil, jsonrpc2.NewError(jsonrpc2.MethodNotFound, method+" is not known here")
}
