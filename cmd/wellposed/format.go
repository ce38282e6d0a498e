package main

import (
	"flag"
	"fmt"
	"os"
	"path/filepath"

	"wellposed/checks"
	"wellposed/parser"
)

func init() {
	addVerb(verb{
		name: "format", brief: "write models in their canonical form", usage: "[options] [FILE | FOLDER | GLOB | -] …",
		more: `Rewrites model files in their canonical form and prints the names of those that
changed. Every statement and every comment is kept; statements that can't be read
stay as they are. - reads standard input and writes to standard output; without
arguments the current folder is searched.

Exit codes:
  0   done; with --check or --diff: everything is in canonical form
  1   with --check or --diff: something is not
  4   a file could not be read or written
  64  the command line could not be understood`,
		setup: func(set *flag.FlagSet) func(*call) int {
			f := &formatter{}
			set.BoolVar(&f.check, "check", false, "change nothing; print the names of files that are not in canonical form")
			set.BoolVar(&f.diff, "diff", false, "change nothing; print what would change")
			return f.run
		},
	})
}

type formatter struct{ check, diff bool }

func (f *formatter) run(c *call) int {
	args := c.args
	if len(args) == 0 {
		args = []string{"."}
	}
	paths, trouble := findModels(args)
	for _, err := range trouble {
		c.complain("%v", err)
	}
	code := exitClean
	if len(trouble) > 0 {
		code = exitUnreadable
	}
	for _, path := range paths {
		code = max(code, f.one(c, path))
	}
	return code
}

func (f *formatter) one(c *call, path string) int {
	raw, name, err := readModel(c.stdin, path, "")
	if err != nil {
		c.complain("%s: %v", name, err)
		return exitUnreadable
	}
	file, broken := checks.Decode(name, raw)
	if len(broken) > 0 {
		c.complain("%s: %s", name, broken[0].Headline)
		return exitUnreadable
	}
	text := parser.Format(file)
	changed := text != string(raw)
	switch {
	case f.diff:
		if changed {
			fmt.Fprint(c.stdout, unified(name, string(raw), text))
		}
	case f.check:
		if changed {
			fmt.Fprintln(c.stdout, name)
		}
	case path == "-":
		fmt.Fprint(c.stdout, text)
		return exitClean
	case changed:
		if err := replace(path, text); err != nil {
			c.complain("%s: %v", name, err)
			return exitUnreadable
		}
		fmt.Fprintln(c.stdout, name)
		return exitClean
	}
	if changed {
		return exitFindings
	}
	return exitClean
}

// replace writes a file whole or not at all: beside it first, then over it. The
// permissions are kept; a link keeps pointing where it did.
func replace(path, text string) error {
	path, err := filepath.EvalSymlinks(path)
	if err != nil {
		return err
	}
	info, err := os.Stat(path)
	if err != nil {
		return err
	}
	temp, err := os.CreateTemp(filepath.Dir(path), "."+filepath.Base(path)+"-*")
	if err != nil {
		return err
	}
	defer os.Remove(temp.Name())
	if _, err := temp.WriteString(text); err != nil {
		temp.Close()
		return err
	}
	if err := temp.Chmod(info.Mode().Perm()); err != nil {
		temp.Close()
		return err
	}
	if err := temp.Close(); err != nil {
		return err
	}
	return os.Rename(temp.Name(), path)
}
