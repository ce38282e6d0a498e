package main

import (
	"flag"
	"fmt"
	"strings"

	"wellposed/checks"
	"wellposed/parser/near"
)

func init() {
	addVerb(verb{
		name: "explain", brief: "show the page of a rule, or list the rules", usage: "[RULE …]",
		more: `Shows what a rule says, why, the mathematics in a few lines, what would make it
go away, its sources, and an example that is flagged beside one that is clean.
Without a name it lists the rules with their severities.`,
		setup: func(*flag.FlagSet) func(*call) int { return explain },
	})
}

func explain(c *call) int {
	if len(c.args) == 0 {
		listRules(c)
		return exitClean
	}
	for i, name := range c.args {
		page, known := checks.Page(name)
		if !known {
			return c.misuse("there is no rule %q%s", name, near.Suggest(name, checks.PageNames()))
		}
		if i > 0 {
			fmt.Fprintln(c.stdout)
		}
		fmt.Fprintln(c.stdout, strings.TrimSpace(page))
	}
	return exitClean
}

func listRules(c *call) {
	group := ""
	for _, r := range checks.Rules() {
		if string(r.Group) != group {
			group = string(r.Group)
			fmt.Fprintf(c.stdout, "%s\n", upperFirst(group))
		}
		fmt.Fprintf(c.stdout, "  %-4s  %s\n        %s\n", r.Severity, r.Name, r.Brief)
	}
	if problems := checks.Problems(); len(problems) > 0 {
		fmt.Fprintln(c.stdout, "Reading the model and its data")
		for _, r := range problems {
			fmt.Fprintf(c.stdout, "  %-4s  %s\n        %s\n", r.Severity, r.Name, r.Brief)
		}
	}
}

func upperFirst(s string) string {
	if s == "" {
		return s
	}
	return strings.ToUpper(s[:1]) + s[1:]
}
