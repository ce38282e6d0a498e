package main

import (
	"net/url"
	"os"
	"strings"
	"testing"
)

func TestPages(t *testing.T) {
	t.Setenv("XDG_CACHE_HOME", t.TempDir())
	p := &pages{}
	at, err := url.Parse(p.address("posterior-does-not-exist"))
	if err != nil || at.Scheme != "file" {
		t.Fatal(at, err)
	}
	text, err := os.ReadFile(at.Path)
	if err != nil || !strings.HasPrefix(string(text), "# posterior-does-not-exist") {
		t.Errorf("%v %.40s", err, text)
	}
	if got := p.address("no-such-rule"); got != "" {
		t.Errorf("got %q", got)
	}
}

func TestPagesWithoutCache(t *testing.T) {
	file := t.TempDir() + "/file"
	if err := os.WriteFile(file, nil, 0o600); err != nil {
		t.Fatal(err)
	}
	t.Setenv("XDG_CACHE_HOME", file)
	if got := (&pages{}).address("posterior-does-not-exist"); got != "" {
		t.Errorf("got %q", got)
	}
}
