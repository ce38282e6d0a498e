// Package wire connects a server to a client over a stream.
//
// Requests are handled one after the other in the order of arrival, so that
// edits can't overtake each other; a handler that only reads takes its snapshot
// first and then calls jsonrpc2.Async to let the next message in. A panic is
// answered with an error and reported, and never ends the connection; neither
// does an error of a notification.
package wire

import (
	"context"
	"fmt"
	"io"
	"runtime/debug"
	"strings"

	"go.lsp.dev/jsonrpc2"
	"go.lsp.dev/protocol"
)

// codec reads and writes the payloads by the protocol's rules for unions.
type codec struct{}

// Marshal encodes a payload.
func (codec) Marshal(v any) ([]byte, error) {
	if raw, ok := v.(jsonrpc2.RawMessage); ok && raw != nil {
		return raw, nil
	}
	return protocol.Marshal(v)
}

// Unmarshal decodes a payload.
func (codec) Unmarshal(data []byte, v any) error {
	if raw, ok := v.(*jsonrpc2.RawMessage); ok {
		*raw = append(jsonrpc2.RawMessage(nil), data...)
		return nil
	}
	return protocol.Unmarshal(data, v)
}

// Connect serves server on the stream. The client for calls in the other
// direction is in the context of every handler (protocol.ClientFromContext) and
// is returned as well. report gets one line for each contained fault.
func Connect(ctx context.Context, stream io.ReadWriteCloser, server protocol.Server, report func(string)) (jsonrpc2.Conn, protocol.Client) {
	conn := jsonrpc2.NewConn(jsonrpc2.NewStream(stream), jsonrpc2.WithCodec(codec{}))
	client := protocol.ClientDispatcher(conn)
	handler := cancelling(contain(protocol.ServerHandler(server, jsonrpc2.MethodNotFoundHandler), report))
	conn.Go(protocol.WithClient(ctx, client), tolerate(handler, report))
	return conn, client
}

// contain turns a panic of a handler into an error of that request.
func contain(handler jsonrpc2.Handler, report func(string)) jsonrpc2.Handler {
	return func(ctx context.Context, req *jsonrpc2.Request) (result any, err error) {
		method := strings.Clone(req.Method())
		defer func() {
			if p := recover(); p != nil {
				report(fmt.Sprintf("%s failed: %v\n%s", method, p, debug.Stack()))
				result, err = nil, jsonrpc2.NewError(jsonrpc2.InternalError, fmt.Sprintf("%s failed inside the server; please report it", method))
			}
		}()
		return handler(ctx, req)
	}
}

// tolerate keeps an error of a notification from ending the connection.
func tolerate(handler jsonrpc2.Handler, report func(string)) jsonrpc2.Handler {
	return func(ctx context.Context, req *jsonrpc2.Request) (any, error) {
		call, method := req.IsCall(), strings.Clone(req.Method())
		result, err := handler(ctx, req)
		if !call && err != nil {
			report(fmt.Sprintf("%s: %v", method, err))
			return nil, nil
		}
		return result, err
	}
}
