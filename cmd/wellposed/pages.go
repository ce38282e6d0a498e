package main

import (
	"crypto/sha256"
	"encoding/hex"
	"net/url"
	"os"
	"path/filepath"
	"sync"

	"wellposed/checks"
)

// pages gives the addresses of the rules' pages as files that an editor can
// open. They are written to the user's cache folder when first asked for, under
// a name made from their content; without a writable cache there is no link.
type pages struct {
	once   sync.Once
	folder string
}

// address is the address of a rule's page, or "".
func (p *pages) address(rule string) string {
	p.once.Do(p.write)
	if p.folder == "" {
		return ""
	}
	if _, ok := checks.Page(rule); !ok {
		return ""
	}
	at := url.URL{Scheme: "file", Path: filepath.ToSlash(filepath.Join(p.folder, rule+".md"))}
	if at.Path[0] != '/' { // a drive letter
		at.Path = "/" + at.Path
	}
	return at.String()
}

func (p *pages) write() {
	cache, err := os.UserCacheDir()
	if err != nil {
		return
	}
	sum := sha256.New()
	names := checks.PageNames()
	for _, name := range names {
		text, _ := checks.Page(name)
		sum.Write([]byte(text))
	}
	folder := filepath.Join(cache, "wellposed", "pages-"+hex.EncodeToString(sum.Sum(nil)[:8]))
	if err := os.MkdirAll(folder, 0o755); err != nil {
		return
	}
	for _, name := range names {
		path := filepath.Join(folder, name+".md")
		text, _ := checks.Page(name)
		if old, err := os.ReadFile(path); err == nil && string(old) == text {
			continue
		}
		if err := os.WriteFile(path, []byte(text), 0o644); err != nil {
			return
		}
	}
	p.folder = folder
}
