package main

import (
	"math/rand"
	"os"
	"os/exec"
	"strings"
	"testing"
)

const untidy = "title   \"x\"\nunknown p:probability   # a comment\n\n\n\nprior p as beta( 1,1 )\n"

func TestFormat(t *testing.T) {
	t.Chdir(t.TempDir())
	if err := os.WriteFile("a.bayes", []byte(untidy), 0o640); err != nil {
		t.Fatal(err)
	}
	code, stdout, _ := wellposed("", "format", "--check", "a.bayes")
	if code != exitFindings || stdout != "a.bayes\n" {
		t.Errorf("--check: code %d, %q", code, stdout)
	}
	code, stdout, _ = wellposed("", "format", "--diff", "a.bayes")
	if code != exitFindings || !strings.Contains(stdout, "-prior p as beta( 1,1 )\n") || !strings.Contains(stdout, "+prior p as Beta(1, 1)\n") {
		t.Errorf("--diff: code %d, %q", code, stdout)
	}
	if raw, _ := os.ReadFile("a.bayes"); string(raw) != untidy {
		t.Error("--check or --diff changed the file")
	}
	_, tidy, _ := wellposed(untidy, "format", "-")
	code, stdout, _ = wellposed("", "format", "a.bayes")
	raw, _ := os.ReadFile("a.bayes")
	if code != exitClean || stdout != "a.bayes\n" || string(raw) != tidy || !strings.Contains(tidy, "# a comment") {
		t.Errorf("code %d, %q, file %q, from standard input %q", code, stdout, raw, tidy)
	}
	if info, _ := os.Stat("a.bayes"); info.Mode().Perm() != 0o640 {
		t.Errorf("the permissions became %v", info.Mode())
	}
	code, stdout, _ = wellposed("", "format", "--check", "--diff", ".")
	if code != exitClean || stdout != "" {
		t.Errorf("formatted again: code %d, %q", code, stdout)
	}
	entries, _ := os.ReadDir(".")
	if len(entries) != 1 {
		t.Errorf("%d files are left in the folder", len(entries))
	}
	code, _, stderr := wellposed("\xff\n", "format", "-")
	if code != exitUnreadable || !strings.Contains(stderr, "not UTF-8") {
		t.Errorf("broken bytes: code %d, %q", code, stderr)
	}
	if code, _, _ := wellposed("", "format", "missing.bayes"); code != exitUnreadable {
		t.Errorf("a missing file: code %d", code)
	}
}

// A difference, applied as a patch, turns the first text into the second.
func TestUnifiedCanBeApplied(t *testing.T) {
	patch, err := exec.LookPath("patch")
	random := rand.New(rand.NewSource(1))
	text := func() string {
		var b strings.Builder
		for range random.Intn(30) {
			b.WriteString([]string{"a", "b", "c", "d"}[random.Intn(4)] + "\n")
		}
		s := b.String()
		if random.Intn(3) == 0 {
			s = strings.TrimSuffix(s, "\n")
		}
		return s
	}
	t.Chdir(t.TempDir())
	for range 200 {
		before, after := text(), text()
		steps := script(splitLines(before), splitLines(after))
		var old, fresh strings.Builder
		for _, s := range steps {
			if s.kind != '+' {
				old.WriteString(s.text)
			}
			if s.kind != '-' {
				fresh.WriteString(s.text)
			}
		}
		if old.String() != before || fresh.String() != after {
			t.Fatalf("the script of %q and %q gives %q and %q", before, after, old.String(), fresh.String())
		}
		d := unified("f", before, after)
		if (d == "") != (before == after) {
			t.Fatalf("difference %q of %q and %q", d, before, after)
		}
		if err != nil || d == "" {
			continue
		}
		if err := os.WriteFile("f", []byte(before), 0o644); err != nil {
			t.Fatal(err)
		}
		cmd := exec.Command(patch, "-s", "-p0", "f")
		cmd.Stdin = strings.NewReader(d)
		if out, err := cmd.CombinedOutput(); err != nil {
			t.Fatalf("%v %s\n%q\n%q\n%s", err, out, before, after, d)
		}
		if got, _ := os.ReadFile("f"); string(got) != after && after != "" {
			t.Fatalf("patched to %q, want %q", got, after)
		}
	}
}
