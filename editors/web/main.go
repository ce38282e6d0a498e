//go:build js && wasm

// Command web is the language server for a browser: the page in page/ talks to
// it as an editor talks to `wellposed serve`, message by message, inside a
// worker. Nothing leaves the page.
package main

import (
	"bufio"
	"context"
	"fmt"
	"io"
	"strconv"
	"strings"
	"syscall/js"

	"wellposed/lsp"
)

func main() {
	fromPage, toServer := io.Pipe()
	fromServer, toPage := io.Pipe()
	messages := make(chan string, 64)
	js.Global().Set("wellposedSend", js.FuncOf(func(_ js.Value, args []js.Value) any {
		messages <- args[0].String()
		return nil
	}))
	go func() {
		for m := range messages {
			fmt.Fprintf(toServer, "Content-Length: %d\r\n\r\n%s", len(m), m)
		}
	}()
	go deliver(bufio.NewReader(fromServer), js.Global().Get("wellposedReceive"))
	js.Global().Get("wellposedReady").Invoke()
	lsp.Serve(context.Background(), fromPage, toPage, lsp.Options{Version: "web"})
}

// deliver hands each message of the server to the page.
func deliver(r *bufio.Reader, receive js.Value) {
	for {
		length := 0
		for {
			line, err := r.ReadString('\n')
			if err != nil {
				return
			}
			line = strings.TrimSpace(line)
			if line == "" {
				break
			}
			if value, ok := strings.CutPrefix(line, "Content-Length: "); ok {
				length, _ = strconv.Atoi(value)
			}
		}
		body := make([]byte, length)
		if _, err := io.ReadFull(r, body); err != nil {
			return
		}
		receive.Invoke(string(body))
	}
}
