package main

import (
	"flag"
	"fmt"
	"runtime"
	"runtime/debug"
)

func init() {
	addVerb(verb{
		name: "version", brief: "say which build this is", usage: "",
		more: "Prints the version, the Go release, and the revision it was built from, where known.",
		setup: func(*flag.FlagSet) func(*call) int {
			return func(c *call) int {
				if len(c.args) > 0 {
					return c.misuse("version takes no arguments")
				}
				v, revision := buildFacts()
				fmt.Fprintf(c.stdout, "wellposed %s\n%s %s/%s\n", v, runtime.Version(), runtime.GOOS, runtime.GOARCH)
				if revision != "" {
					fmt.Fprintln(c.stdout, revision)
				}
				return exitClean
			}
		},
	})
}

// buildFacts are the version and the revision that the Go tool wrote into the
// program.
func buildFacts() (version, revision string) {
	info, ok := debug.ReadBuildInfo()
	if !ok {
		return "unknown", ""
	}
	version = info.Main.Version
	if version == "" {
		version = "(devel)"
	}
	changed := ""
	for _, s := range info.Settings {
		switch s.Key {
		case "vcs.revision":
			revision = "revision " + s.Value
		case "vcs.modified":
			if s.Value == "true" {
				changed = ", with changes"
			}
		}
	}
	if revision != "" {
		revision += changed
	}
	return version, revision
}
