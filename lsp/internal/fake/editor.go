// Package fake is an editor made for tests. It speaks the protocol with plain
// JSON, so that it shares nothing with the server's library, and fails the test
// on an answer that nobody asked for, two answers to one request, a message
// that is no valid JSON-RPC, and an unclean shutdown.
package fake

import (
	"bufio"
	"encoding/json"
	"fmt"
	"io"
	"strconv"
	"strings"
	"sync"
	"testing"
	"time"
)

// Patience is how long the editor waits for anything; it only bounds a hang.
const Patience = 30 * time.Second

// Message is a JSON-RPC message as it came.
type Message struct {
	JSONRPC string          `json:"jsonrpc"`
	ID      json.RawMessage `json:"id"`
	Method  string          `json:"method"`
	Params  json.RawMessage `json:"params"`
	Result  json.RawMessage `json:"result"`
	Error   *Error          `json:"error"`
}

// Error is the error of an answer.
type Error struct {
	Code    int    `json:"code"`
	Message string `json:"message"`
}

func (e *Error) Error() string { return fmt.Sprintf("%d: %s", e.Code, e.Message) }

// Published is one publishDiagnostics notification.
type Published struct {
	URI         string       `json:"uri"`
	Version     *int32       `json:"version"`
	Diagnostics []Diagnostic `json:"diagnostics"`
}

// Diagnostic is a finding as it was sent.
type Diagnostic struct {
	Range              Range                  `json:"range"`
	Severity           int                    `json:"severity"`
	Code               string                 `json:"code"`
	Source             string                 `json:"source"`
	Message            string                 `json:"message"`
	CodeDescription    *struct{ Href string } `json:"codeDescription"`
	RelatedInformation []struct {
		Location Location `json:"location"`
		Message  string   `json:"message"`
	} `json:"relatedInformation"`
}

// Range, Position and Location are the protocol's.
type (
	Range struct {
		Start Position `json:"start"`
		End   Position `json:"end"`
	}
	Position struct {
		Line      int `json:"line"`
		Character int `json:"character"`
	}
	Location struct {
		URI   string `json:"uri"`
		Range Range  `json:"range"`
	}
)

// Editor is the client end of one connection.
type Editor struct {
	t      testing.TB
	to     io.WriteCloser
	writes sync.Mutex
	exit   <-chan int

	mu        sync.Mutex
	changed   *sync.Cond
	next      int
	open      map[string]chan *Message
	published map[string][]Published
	calls     []Message // requests and notifications from the server
	ended     bool
	// Answer replies to a request of the server; nil answers null.
	Answer func(method string, params json.RawMessage) any
}

// Start connects an editor to a server, which gets the two streams and returns
// its exit code. The test ends with a clean shutdown.
func Start(t testing.TB, serve func(in io.Reader, out io.Writer) int) *Editor {
	toServer, fromEditor := io.Pipe()
	toEditor, fromServer := io.Pipe()
	exit := make(chan int, 1)
	e := &Editor{t: t, to: fromEditor, exit: exit, open: map[string]chan *Message{}, published: map[string][]Published{}}
	e.changed = sync.NewCond(&e.mu)
	go func() {
		code := serve(toServer, fromServer)
		fromServer.Close()
		exit <- code
	}()
	go e.read(bufio.NewReader(toEditor))
	t.Cleanup(e.finish)
	return e
}

// Initialize does the handshake with the given client capabilities (JSON) and
// returns the server's.
func (e *Editor) Initialize(root, capabilities string) json.RawMessage {
	e.t.Helper()
	params := map[string]any{"processId": nil, "rootUri": nil, "capabilities": json.RawMessage(capabilities)}
	if root != "" {
		params["rootUri"] = root
		params["workspaceFolders"] = []any{map[string]string{"uri": root, "name": "root"}}
	}
	result := e.Request("initialize", params)
	e.Notify("initialized", struct{}{})
	return result
}

// Request sends a request and returns its result; an error fails the test.
func (e *Editor) Request(method string, params any) json.RawMessage {
	e.t.Helper()
	m := e.Call(method, params).Wait()
	if m.Error != nil {
		e.t.Fatalf("%s: %v", method, m.Error)
	}
	return m.Result
}

// Pending is a request on its way.
type Pending struct {
	ID     int
	editor *Editor
	method string
	answer chan *Message
}

// Call sends a request and does not wait.
func (e *Editor) Call(method string, params any) *Pending {
	e.t.Helper()
	e.mu.Lock()
	e.next++
	p := &Pending{ID: e.next, editor: e, method: method, answer: make(chan *Message, 1)}
	e.open[strconv.Itoa(p.ID)] = p.answer
	e.mu.Unlock()
	e.send(map[string]any{"jsonrpc": "2.0", "id": p.ID, "method": method, "params": params})
	return p
}

// Wait returns the answer.
func (p *Pending) Wait() *Message {
	p.editor.t.Helper()
	select {
	case m := <-p.answer:
		return m
	case <-time.After(Patience):
		p.editor.t.Fatalf("%s: no answer", p.method)
		return nil
	}
}

// Cancel asks the server to give the request up.
func (p *Pending) Cancel() { p.editor.Notify("$/cancelRequest", map[string]any{"id": p.ID}) }

// Notify sends a notification.
func (e *Editor) Notify(method string, params any) {
	e.t.Helper()
	e.send(map[string]any{"jsonrpc": "2.0", "method": method, "params": params})
}

// Open opens a document.
func (e *Editor) Open(uri string, version int, text string) {
	e.t.Helper()
	e.Notify("textDocument/didOpen", map[string]any{"textDocument": map[string]any{
		"uri": uri, "languageId": "bayes", "version": version, "text": text}})
}

// Edit replaces a range of a document.
func (e *Editor) Edit(uri string, version int, r Range, text string) {
	e.t.Helper()
	e.Notify("textDocument/didChange", map[string]any{
		"textDocument":   map[string]any{"uri": uri, "version": version},
		"contentChanges": []any{map[string]any{"range": r, "text": text}}})
}

// Replace replaces the whole text of a document.
func (e *Editor) Replace(uri string, version int, text string) {
	e.t.Helper()
	e.Notify("textDocument/didChange", map[string]any{
		"textDocument":   map[string]any{"uri": uri, "version": version},
		"contentChanges": []any{map[string]any{"text": text}}})
}

// Diagnostics waits until the newest findings published for a version satisfy
// the condition, and returns them.
func (e *Editor) Diagnostics(uri string, version int32, enough func([]Diagnostic) bool) []Diagnostic {
	e.t.Helper()
	deadline := time.Now().Add(Patience)
	timer := time.AfterFunc(Patience, e.changed.Broadcast)
	defer timer.Stop()
	e.mu.Lock()
	defer e.mu.Unlock()
	for {
		if list := e.published[uri]; len(list) > 0 {
			last := list[len(list)-1]
			if last.Version != nil && *last.Version == version && enough(last.Diagnostics) {
				return last.Diagnostics
			}
		}
		if e.ended || time.Now().After(deadline) {
			e.t.Fatalf("no such findings for %s version %d; published: %+v", uri, version, e.published[uri])
		}
		e.changed.Wait()
	}
}

// Published returns everything that was published for a document so far.
func (e *Editor) Published(uri string) []Published {
	e.mu.Lock()
	defer e.mu.Unlock()
	return append([]Published(nil), e.published[uri]...)
}

// Called returns the server's own requests and notifications so far, without
// published findings.
func (e *Editor) Called() []Message {
	e.mu.Lock()
	defer e.mu.Unlock()
	return append([]Message(nil), e.calls...)
}

// SendRaw writes bytes as they are.
func (e *Editor) SendRaw(b []byte) {
	e.writes.Lock()
	defer e.writes.Unlock()
	_, _ = e.to.Write(b)
}

func (e *Editor) send(m any) {
	body, err := json.Marshal(m)
	if err != nil {
		e.t.Errorf("cannot encode: %v", err)
		return
	}
	e.SendRaw([]byte(fmt.Sprintf("Content-Length: %d\r\n\r\n%s", len(body), body)))
}

func (e *Editor) read(r *bufio.Reader) {
	defer func() {
		e.mu.Lock()
		e.ended = true
		e.mu.Unlock()
		e.changed.Broadcast()
	}()
	for {
		length := -1
		for {
			line, err := r.ReadString('\n')
			if err != nil {
				return
			}
			line = strings.TrimRight(line, "\r\n")
			if line == "" {
				break
			}
			if value, ok := strings.CutPrefix(line, "Content-Length: "); ok {
				length, _ = strconv.Atoi(value)
			}
		}
		if length < 0 {
			e.t.Errorf("message without length")
			return
		}
		body := make([]byte, length)
		if _, err := io.ReadFull(r, body); err != nil {
			e.t.Errorf("message cut short: %v", err)
			return
		}
		e.take(body)
	}
}

func (e *Editor) take(body []byte) {
	var m Message
	if err := json.Unmarshal(body, &m); err != nil || m.JSONRPC != "2.0" {
		e.t.Errorf("not a JSON-RPC message: %s", body)
		return
	}
	switch {
	case m.Method == "":
		e.mu.Lock()
		answer := e.open[string(m.ID)]
		delete(e.open, string(m.ID))
		e.mu.Unlock()
		if answer == nil {
			e.t.Errorf("an answer that nobody waits for: %s", body)
			return
		}
		answer <- &m
	case m.Method == "textDocument/publishDiagnostics":
		var p Published
		if err := json.Unmarshal(m.Params, &p); err != nil || p.Diagnostics == nil {
			e.t.Errorf("bad findings: %v %s", err, m.Params)
		}
		e.mu.Lock()
		e.published[p.URI] = append(e.published[p.URI], p)
		e.mu.Unlock()
		e.changed.Broadcast()
	default:
		e.mu.Lock()
		e.calls = append(e.calls, m)
		answer := e.Answer
		e.mu.Unlock()
		e.changed.Broadcast()
		if m.ID != nil {
			var result any
			if answer != nil {
				result = answer(m.Method, m.Params)
			}
			e.send(map[string]any{"jsonrpc": "2.0", "id": m.ID, "result": result})
		}
	}
}

// finish shuts the server down and checks that it went cleanly.
func (e *Editor) finish() {
	select {
	case code := <-e.exit:
		if !e.t.Failed() {
			e.t.Errorf("the server ended by itself with %d", code)
		}
		return
	default:
	}
	answer := e.Call("shutdown", nil)
	select {
	case m := <-answer.answer:
		if m.Error != nil {
			e.t.Errorf("shutdown: %v", m.Error)
		}
	case <-time.After(Patience):
		e.t.Errorf("shutdown: no answer")
	}
	e.Notify("exit", nil)
	select {
	case code := <-e.exit:
		if code != 0 {
			e.t.Errorf("exit code %d after a clean shutdown", code)
		}
	case <-time.After(Patience):
		e.t.Errorf("the server did not exit")
	}
	e.to.Close()
	e.mu.Lock()
	defer e.mu.Unlock()
	for id := range e.open {
		e.t.Errorf("request %s was never answered", id)
	}
}
