package main

import (
	"bytes"
	"flag"
	"strings"
	"testing"
)

// wellposed runs a command line with an input.
func wellposed(input string, args ...string) (code int, stdout, stderr string) {
	var out, err bytes.Buffer
	code = Main(args, strings.NewReader(input), &out, &err)
	return code, out.String(), err.String()
}

func TestUsage(t *testing.T) {
	for _, c := range []struct {
		args   []string
		code   int
		stderr string
	}{
		{nil, exitUsage, "wellposed explain"},
		{[]string{"explian"}, exitUsage, `unknown command "explian"; did you mean explain?`},
		{[]string{"--bogus"}, exitUsage, `unknown option before the command "--bogus"`},
		{[]string{"zzzzzz"}, exitUsage, `unknown command "zzzzzz"` + "\n"},
		{[]string{"version", "x"}, exitUsage, "version takes no arguments"},
		{[]string{"version", "--x"}, exitUsage, "unknown option --x\n"},
		{[]string{"explain", "nothing-reproted"}, exitUsage, "did you mean nothing-reported?"},
		{[]string{"help", "explian"}, exitUsage, "did you mean explain?"},
	} {
		code, stdout, stderr := wellposed("", c.args...)
		if code != c.code || !strings.Contains(stderr, c.stderr) || stdout != "" {
			t.Errorf("%q: code %d, stdout %q, stderr %q; want code %d and %q", c.args, code, stdout, stderr, c.code, c.stderr)
		}
	}
}

func TestHelp(t *testing.T) {
	for _, args := range [][]string{{"help"}, {"--help"}, {"-h"}} {
		code, stdout, _ := wellposed("", args...)
		if code != exitClean {
			t.Errorf("%q: code %d", args, code)
		}
		for name, v := range verbs {
			if !strings.Contains(stdout, name) || !strings.Contains(stdout, v.brief) {
				t.Errorf("%q does not list %s", args, name)
			}
		}
	}
	for name := range verbs {
		for _, args := range [][]string{{"help", name}, {name, "--help"}, {name, "-h"}} {
			if code, stdout, _ := wellposed("", args...); code != exitClean || !strings.HasPrefix(stdout, "wellposed "+name) {
				t.Errorf("%q: code %d, %q", args, code, stdout)
			}
		}
	}
}

// Every verb and every option says what it is for.
func TestVerbsAreDescribed(t *testing.T) {
	for name, v := range verbs {
		if v.brief == "" || v.more == "" || strings.HasSuffix(v.brief, ".") {
			t.Errorf("%s is not described", name)
		}
		_, stdout, _ := wellposed("", "help", name)
		lines := strings.Split(stdout, "\n")
		for i, line := range lines {
			if strings.HasPrefix(line, "  --") && (i+1 >= len(lines) || !strings.HasPrefix(lines[i+1], "        ") || strings.TrimSpace(lines[i+1]) == "") {
				t.Errorf("%s: option %s is not described", name, strings.TrimSpace(line))
			}
		}
	}
}

func TestExplain(t *testing.T) {
	code, stdout, _ := wellposed("", "explain", "posterior-does-not-exist")
	if code != exitClean || !strings.HasPrefix(stdout, "# posterior-does-not-exist\n") || !strings.Contains(stdout, "## Mathematics") {
		t.Errorf("code %d, page %q", code, stdout)
	}
	code, stdout, _ = wellposed("", "explain")
	if code != exitClean || !strings.Contains(stdout, "stop  posterior-does-not-exist") {
		t.Errorf("code %d, list %q", code, stdout)
	}
}

func TestVersion(t *testing.T) {
	for _, arg := range []string{"version", "--version"} {
		if code, stdout, _ := wellposed("", arg); code != exitClean || !strings.HasPrefix(stdout, "wellposed ") {
			t.Errorf("%s: code %d, %q", arg, code, stdout)
		}
	}
}

// A panic in a verb becomes an internal fault.
func TestFault(t *testing.T) {
	addVerb(verb{name: "fault-for-test", brief: "x", more: "x", setup: faulty})
	defer delete(verbs, "fault-for-test")
	code, _, stderr := wellposed("", "fault-for-test")
	if code != exitFault || !strings.Contains(stderr, "internal fault: on purpose") {
		t.Errorf("code %d, stderr %q", code, stderr)
	}
}

func faulty(*flag.FlagSet) func(*call) int { return func(*call) int { panic("on purpose") } }
