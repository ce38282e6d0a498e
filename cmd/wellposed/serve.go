package main

import (
	"context"
	"flag"

	"wellposed/lsp"
)

func init() {
	addVerb(verb{
		name: "serve", brief: "check while you write, in an editor", usage: "",
		more: "Speaks the Language Server Protocol on standard input and output until the\neditor says exit. Editors start it by themselves; see the folder editors/.",
		setup: func(*flag.FlagSet) func(*call) int {
			return func(c *call) int {
				if len(c.args) > 0 {
					return c.misuse("serve takes no arguments")
				}
				version, _ := buildFacts()
				options := lsp.Options{Version: version, Page: new(pages).address, Log: c.stderr}
				if code := lsp.Serve(context.Background(), c.stdin, c.out, options); code != 0 {
					return exitFault
				}
				return exitClean
			}
		},
	})
}
