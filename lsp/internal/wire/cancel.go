package wire

import (
	"context"
	"sync"

	"go.lsp.dev/jsonrpc2"
	"go.lsp.dev/protocol"
)

// cancelling lets the client give a request up.
//
// The library's own handler derives a context from the request's pooled one,
// whose watcher may wake after the request was recycled and then ends the
// program; this one derives from the connection's context instead and takes only
// the values from the request's.
func cancelling(handler jsonrpc2.Handler) jsonrpc2.Handler {
	var mu sync.Mutex
	running := map[jsonrpc2.ID]context.CancelFunc{}
	return func(ctx context.Context, req *jsonrpc2.Request) (any, error) {
		if req.Method() == protocol.MethodCancelRequest {
			var params protocol.CancelParams
			if err := protocol.Unmarshal(req.Params(), &params); err != nil {
				return nil, err
			}
			var id jsonrpc2.ID
			switch given := params.ID.(type) {
			case protocol.Integer:
				id = jsonrpc2.NewNumberID(int64(given))
			case protocol.String:
				id = jsonrpc2.NewStringID(string(given))
			}
			mu.Lock()
			if cancel := running[id]; cancel != nil {
				cancel()
			}
			mu.Unlock()
			return nil, nil
		}
		if !req.IsCall() {
			return handler(ctx, req)
		}
		id := req.ID()
		life, cancel := context.WithCancel(jsonrpc2.DetachContext(ctx))
		mu.Lock()
		running[id] = cancel
		mu.Unlock()
		defer func() {
			mu.Lock()
			delete(running, id)
			mu.Unlock()
			cancel()
		}()
		return handler(requestContext{life, ctx}, req)
	}
}

// requestContext ends with one context and has the values of another.
type requestContext struct {
	context.Context
	values context.Context
}

// Value implements context.Context.
func (c requestContext) Value(key any) any { return c.values.Value(key) }
