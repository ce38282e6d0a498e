package main

import (
	"bufio"
	"errors"
	"flag"
	"fmt"
	"io"
	"os"
	"runtime/debug"
	"sort"
	"strings"

	"wellposed/parser/near"
)

// verb is one command. A file of its own adds it to the table:
//
//	func init() { addVerb(verb{name: "lint", …, run: lint}) }
type verb struct {
	name string
	// brief is one line for the list of verbs.
	brief string
	// usage is the command line after the verb: "[options] FILE …".
	usage string
	// more is printed under the usage: what it does, examples, exit codes.
	more string
	// options declares the options and returns what runs with them. It is called
	// once for each command line.
	setup func(*flag.FlagSet) func(*call) int
}

// call is one command line on its way through a verb.
type call struct {
	args           []string
	stdin          io.Reader
	stdout, stderr io.Writer
	// out is standard output without the buffer, to ask what it is.
	out  io.Writer
	verb verb
	// given are the options that stand on the command line.
	given map[string]bool
}

// complain prints a message for people on standard error.
func (c *call) complain(format string, args ...any) {
	fmt.Fprintf(c.stderr, "wellposed: "+format+"\n", args...)
}

// misuse says what is wrong with the command line and how to get help.
func (c *call) misuse(format string, args ...any) int {
	c.complain(format, args...)
	fmt.Fprintf(c.stderr, "See wellposed help %s.\n", c.verb.name)
	return exitUsage
}

var verbs = map[string]verb{}

func addVerb(v verb) { verbs[v.name] = v }

func verbNames() []string {
	names := make([]string, 0, len(verbs))
	for name := range verbs {
		names = append(names, name)
	}
	sort.Strings(names)
	return names
}

// Main runs a command line and returns the exit code.
func Main(args []string, stdin io.Reader, stdout, stderr io.Writer) (code int) {
	out := bufio.NewWriter(stdout)
	c := &call{stdin: stdin, stdout: out, stderr: stderr, out: stdout}
	defer func() {
		if p := recover(); p != nil {
			c.complain("internal fault: %v\n%s", p, debug.Stack())
			code = exitFault
		}
		if err := out.Flush(); err != nil && code < exitUnreadable && !errors.Is(err, os.ErrClosed) && !brokenPipe(err) {
			c.complain("cannot write: %v", err)
			code = exitUnreadable
		}
	}()
	if len(args) == 0 {
		overview(stderr)
		return exitUsage
	}
	name := args[0]
	switch name {
	case "help", "--help", "-h", "-help":
		return help(c, args[1:])
	case "--version", "-version":
		name = "version"
	}
	v, known := verbs[name]
	if !known {
		kind := "command"
		if strings.HasPrefix(name, "-") {
			kind = "option before the command"
		}
		c.complain("unknown %s %q%s", kind, name, near.Suggest(name, verbNames()))
		fmt.Fprintf(stderr, "See wellposed help.\n")
		return exitUsage
	}
	return c.run(v, args[1:])
}

// run reads the options, which may stand before, between and after the
// arguments, and runs the verb.
func (c *call) run(v verb, args []string) int {
	c.verb = v
	set := flag.NewFlagSet(v.name, flag.ContinueOnError)
	set.SetOutput(io.Discard)
	do := v.setup(set)
	for len(args) > 0 {
		arg := args[0]
		switch {
		case arg == "--":
			c.args = append(c.args, args[1:]...)
			args = nil
			continue
		case arg == "-" || !strings.HasPrefix(arg, "-"):
			c.args, args = append(c.args, arg), args[1:]
			continue
		}
		name, _, _ := strings.Cut(strings.TrimLeft(arg, "-"), "=")
		if name == "help" || name == "h" {
			return help(c, []string{v.name})
		}
		if set.Lookup(name) == nil {
			return c.misuse("unknown option %s%s", cutValue(arg), near.Suggest("--"+name, optionNames(set)))
		}
		if c.given == nil {
			c.given = map[string]bool{}
		}
		c.given[name] = true
		taken := 1
		if !strings.Contains(arg, "=") && !isBool(set.Lookup(name)) {
			taken = 2
			if len(args) < 2 {
				return c.misuse("option --%s needs a value", name)
			}
		}
		if err := set.Parse(args[:taken]); err != nil {
			return c.misuse("option --%s: %s", name, plainFlagError(err))
		}
		args = args[taken:]
	}
	return do(c)
}

func cutValue(arg string) string {
	name, _, _ := strings.Cut(arg, "=")
	return name
}

func optionNames(set *flag.FlagSet) []string {
	var names []string
	set.VisitAll(func(f *flag.Flag) { names = append(names, "--"+f.Name) })
	return names
}

func isBool(f *flag.Flag) bool {
	b, ok := f.Value.(interface{ IsBoolFlag() bool })
	return ok && b.IsBoolFlag()
}

// plainFlagError drops the flag package's own words around our message.
func plainFlagError(err error) string {
	text := err.Error()
	if i := strings.LastIndex(text, ": "); i >= 0 {
		text = text[i+2:]
	}
	return text
}

// choice is an option that takes one of a few words.
type choice struct {
	value   string
	allowed []string
}

func (o *choice) String() string { return o.value }

func (o *choice) Set(s string) error {
	for _, a := range o.allowed {
		if s == a {
			o.value = s
			return nil
		}
	}
	return fmt.Errorf("%q is none of %s%s", s, strings.Join(o.allowed, ", "), near.Suggest(s, o.allowed))
}

func oneOf(set *flag.FlagSet, name, preset, usage string, allowed ...string) *choice {
	o := &choice{preset, allowed}
	set.Var(o, name, usage)
	return o
}

// overview lists the verbs.
func overview(w io.Writer) {
	fmt.Fprint(w, "wellposed decides whether the posterior of a Bayesian model exists and whether its\ndefault priors decide the answer.\n\n")
	for _, name := range verbNames() {
		fmt.Fprintf(w, "  wellposed %-10s %s\n", name, verbs[name].brief)
	}
	fmt.Fprint(w, "\nwellposed help COMMAND says more. The first thing to try:\n\n  wellposed lint MODEL.bayes\n")
}

func help(c *call, args []string) int {
	if len(args) == 0 {
		overview(c.stdout)
		return exitClean
	}
	v, known := verbs[args[0]]
	if !known {
		c.complain("unknown command %q%s", args[0], near.Suggest(args[0], verbNames()))
		return exitUsage
	}
	fmt.Fprintf(c.stdout, "wellposed %s %s\n\n%s\n", v.name, v.usage, strings.TrimSpace(v.more))
	set := flag.NewFlagSet(v.name, flag.ContinueOnError)
	v.setup(set)
	first := true
	set.VisitAll(func(f *flag.Flag) {
		if first {
			fmt.Fprint(c.stdout, "\nOptions\n")
			first = false
		}
		name := "--" + f.Name
		value, usage := flag.UnquoteUsage(f)
		if o, ok := f.Value.(*choice); ok {
			value = strings.Join(o.allowed, "|")
		}
		if value != "" && !isBool(f) {
			name += " " + value
		}
		if f.DefValue != "" && f.DefValue != "false" {
			usage += " (" + f.DefValue + " when left out)"
		}
		fmt.Fprintf(c.stdout, "  %s\n        %s\n", name, usage)
	})
	return exitClean
}
