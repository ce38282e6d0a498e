package main

import (
	"bytes"
	"context"
	"flag"
	"os"
	"os/signal"
	"path/filepath"
	"time"

	"wellposed/checks"
	"wellposed/checks/evidence"
	"wellposed/checks/evidence/page"
	"wellposed/checks/facts"
	"wellposed/parser/diag"
	"wellposed/parser/model"
)

func init() {
	addVerb(verb{
		name: "evidence", brief: "write the page for the file", usage: "[-o PAGE] [--format FORMAT] FILE",
		more: `Collects what a reviewer asks for on one page: the answer in a paragraph, the model
in words, priors with their reasons, whether the posterior exists, every report under
every rival, the design, promises, methods, a self-test, a checklist and cautions.

  wellposed evidence relay.bayes -o relay.html
  wellposed evidence relay.bayes --format markdown

The page needs no script and no network, and prints. The same input gives the same
bytes: no clock is read; --date prints a date. No row of data is shown.

The page makes no judgement, so the exit code says only whether it was written:
  0   written
  4   the model could not be read, or the page not written
  64  the command line could not be understood
  70  internal fault`,
		setup: func(set *flag.FlagSet) func(*call) int {
			format := oneOf(set, "format", "html", "form of the page", page.Formats...)
			out := set.String("o", "", "write to this `FILE` instead of standard output")
			date := set.String("date", "", "`DATE` to print on the page, 2027-06-30; acceptances are judged on it")
			limit := set.Duration("limit", 2*time.Minute, "`TIME` that it may take; what is not ready by then is said to be missing")
			return func(c *call) int { return writeEvidence(c, format.value, *out, *date, *limit) }
		},
	})
}

func writeEvidence(c *call, format, out, date string, limit time.Duration) int {
	if len(c.args) != 1 {
		return c.misuse("name one model file")
	}
	if date != "" {
		if _, err := time.Parse(time.DateOnly, date); err != nil {
			return c.misuse("--date is written year-month-day, 2027-06-30")
		}
	}
	raw, name, err := readModel(c.stdin, c.args[0], "")
	if err != nil {
		c.complain("%s: %v", name, err)
		return exitUnreadable
	}
	ctx, stop := signal.NotifyContext(context.Background(), os.Interrupt)
	defer stop()
	if limit > 0 {
		var end context.CancelFunc
		ctx, end = context.WithTimeout(ctx, limit)
		defer end()
	}
	file, broken := checks.Decode(name, raw)
	m := model.Build(ctx, file, model.Options{})
	for _, p := range append(append([]diag.Finding(nil), broken...), m.Problems...) {
		if p.Severity == diag.Stop {
			c.complain("%s: %s (wellposed lint shows all)", name, p.Headline)
			return exitUnreadable
		}
	}
	f := facts.New(ctx, m)
	found := checks.Run(f, checks.Options{Today: date})
	version, _ := buildFacts()
	e := evidence.Collect(f, evidence.Options{Version: version, Date: date, Findings: found})
	var b bytes.Buffer
	if err := page.Write(&b, format, e); err != nil {
		c.complain("%v", err)
		return exitFault
	}
	if out == "" {
		if _, err := c.stdout.Write(b.Bytes()); err != nil {
			c.complain("cannot write: %v", err)
			return exitUnreadable
		}
		return exitClean
	}
	if err := writeWhole(out, b.Bytes()); err != nil {
		c.complain("%s: %v", out, plainError(err))
		return exitUnreadable
	}
	return exitClean
}

// writeWhole writes a file so that it is there whole or not at all.
func writeWhole(path string, content []byte) error {
	f, err := os.CreateTemp(filepath.Dir(path), ".wellposed-*")
	if err != nil {
		return err
	}
	defer os.Remove(f.Name())
	if _, err := f.Write(content); err != nil {
		f.Close()
		return err
	}
	if err := f.Chmod(0o644); err != nil {
		f.Close()
		return err
	}
	if err := f.Close(); err != nil {
		return err
	}
	return os.Rename(f.Name(), path)
}
