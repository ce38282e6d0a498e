package main

import (
	"bytes"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

func TestDerive(t *testing.T) {
	file := filepath.Join(t.TempDir(), "m.bayes")
	text := "unknown p : probability\nobserve 0 of 40 with probability p\nprior p jeffreys\n" +
		"given y = [1.2, 0.7, 3.1]\nunknown mu : location\nunknown sigma : scale\nobserve y as Normal(mu, sd = sigma)\nprior mu flat\nprior sigma ∝ 1/sigma\n"
	if err := os.WriteFile(file, []byte(text), 0o644); err != nil {
		t.Fatal(err)
	}
	for _, c := range []struct {
		args []string
		code int
		says []string
	}{
		{[]string{file}, exitClean, []string{"prior p as Beta(1/2, 1/2)", "I(p) = 40 / (p * (1 - p))", "assumed: the number of trials was fixed beforehand", "Jeffreys (1946)", "of p: exists (proved)"}},
		{[]string{file, "p", "--scale", "odds"}, exitClean, []string{"on the scale odds: 1/(sqrt(odds) * (1 + odds))"}},
		{[]string{file, "--rule", "reference", "mu", "sigma"}, exitClean, []string{"prior (mu, sigma) ∝ 1/sigma", "order of interest: mu before sigma"}},
		{[]string{file, "--rule", "jointly", "mu", "sigma"}, exitClean, []string{"prior (mu, sigma) ∝ 1/sigma^2"}},
		{[]string{file, "--scale", "variance", "sigma"}, exitClean, []string{"prior sigma ∝ 1/sigma", "on the scale variance: 1/variance"}},
		{[]string{file, "--rule", "jeffreys", "mu", "sigma"}, exitUsage, nil},
		{[]string{file, "q"}, exitUsage, nil},
		{[]string{file, "p", "--scale", "odd"}, exitUsage, nil},
		{[]string{file, "--rule", "matching"}, exitUsage, nil},
		{nil, exitUsage, nil},
		{[]string{file + "x"}, exitUnreadable, nil},
	} {
		var out, errs bytes.Buffer
		code := Main(append([]string{"derive"}, c.args...), strings.NewReader(""), &out, &errs)
		if code != c.code {
			t.Errorf("%v: exit code %d, want %d\n%s%s", c.args, code, c.code, out.String(), errs.String())
		}
		for _, s := range c.says {
			if !strings.Contains(out.String(), s) {
				t.Errorf("%v does not say %q:\n%s", c.args, s, out.String())
			}
		}
		if code == exitUsage && !strings.Contains(errs.String(), "wellposed: ") {
			t.Errorf("%v: no complaint: %s", c.args, errs.String())
		}
	}
}
