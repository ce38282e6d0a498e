package main

import (
	"os"
	"strings"
	"testing"
)

// TestReadme keeps the example in the README true: its model and its output.
func TestReadme(t *testing.T) {
	t.Chdir("../..")
	readme, err := os.ReadFile("README.md")
	if err != nil {
		t.Fatal(err)
	}
	model, err := os.ReadFile("testdata/demo/relay.bayes")
	if err != nil {
		t.Fatal(err)
	}
	out, code := output("lint", "--width", "80", "testdata/demo/relay.bayes")
	if code != exitFindings {
		t.Fatalf("exit code %d", code)
	}
	for what, text := range map[string]string{"model": string(model), "output": out} {
		if !strings.Contains(string(readme), strings.TrimSpace(text)) {
			t.Errorf("the %s in README.md is not the real one:\n%s", what, text)
		}
	}
}
