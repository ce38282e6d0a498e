package main

import (
	"flag"
	"fmt"
	"sort"
	"strings"

	"wellposed/checks"
	"wellposed/checks/render"
	"wellposed/parser/diag"
)

func init() {
	addVerb(verb{
		name: "config", brief: "show which configuration holds for a model, and why", usage: "[PATH]",
		more: `Shows the nearest wellposed.toml for a model or a folder, the folders that were
searched, and the settings that hold there. Exits with 1 when something in the file
is not understood.`,
		setup: func(set *flag.FlagSet) func(*call) int {
			fixed := set.String("config", "", "use this `FILE` instead of the nearest wellposed.toml")
			return func(c *call) int { return showConfig(c, *fixed) }
		},
	})
}

func showConfig(c *call, fixed string) int {
	path := "model.bayes"
	switch len(c.args) {
	case 0:
	case 1:
		path = c.args[0]
		if !strings.HasSuffix(path, ".bayes") {
			path = strings.TrimRight(path, "/") + "/model.bayes"
		}
	default:
		return c.misuse("config takes one path")
	}
	settler := checks.Settler{Fixed: fixed}
	used := settler.For(path)
	switch {
	case used.Path == "":
		fmt.Fprintln(c.stdout, "No wellposed.toml: the built-in settings hold.")
	case fixed != "":
		fmt.Fprintf(c.stdout, "%s: named on the command line.\n", used.Path)
	default:
		fmt.Fprintf(c.stdout, "%s: the nearest one, going up.\n", used.Path)
	}
	for _, folder := range used.Looked {
		fmt.Fprintf(c.stdout, "  searched %s\n", folder)
	}
	set := used.For(path)
	if set.Skip {
		fmt.Fprintln(c.stdout, "Files here are skipped.")
	}
	matters := "10 % (built in)"
	if set.Matters != nil {
		share, _ := set.Matters.Float64()
		matters = diag.Percent(share, 0, 4)
	}
	fmt.Fprintf(c.stdout, "matters   %s, where a model does not say\n", matters)
	fmt.Fprintf(c.stdout, "strict    %v\n", set.Strict)
	fmt.Fprintf(c.stdout, "level     %s\n", used.Level)
	var names []string
	for name := range set.Severity {
		names = append(names, name)
	}
	sort.Strings(names)
	for _, name := range names {
		word := set.Severity[name].Severity.String()
		if set.Severity[name].Off {
			word = "off"
		}
		fmt.Fprintf(c.stdout, "severity  %s = %s\n", name, word)
	}
	if len(used.Problems) == 0 {
		return exitClean
	}
	report := &render.Report{Rules: checks.Known(), Level: diag.Note, Files: []*render.File{{Path: used.Path, Source: used.Source, Findings: used.Problems}}}
	if err := render.Write(c.stdout, "text", report, render.Options{}); err != nil {
		c.complain("cannot write: %v", err)
		return exitUnreadable
	}
	return exitFindings
}
