package highlight

import (
	"encoding/xml"
	"flag"
	"os"
	"path/filepath"
	"testing"
)

var update = flag.Bool("update", false, "write the goldens")

func TestGoldens(t *testing.T) {
	for path, text := range map[string]string{
		"../../editors/kate/bayes.xml":               Kate(),
		"../../editors/vim/syntax/bayes.vim":         Vim(),
		"../../editors/neovim/syntax/bayes.vim":      Vim(),
		"../../editors/emacs/wellposed-words.el":     Emacs(),
		"../../editors/sublime/Bayes.sublime-syntax": Sublime(),
		"../../editors/web/page/src/words.json":      Web(),
	} {
		if *update {
			if err := os.MkdirAll(filepath.Dir(path), 0o755); err != nil {
				t.Fatal(err)
			}
			if err := os.WriteFile(path, []byte(text), 0o644); err != nil {
				t.Fatal(err)
			}
		}
		golden, err := os.ReadFile(path)
		if err != nil {
			t.Fatal(err)
		}
		if string(golden) != text {
			t.Errorf("%s is not what the language's data give; refresh it with -update", path)
		}
	}
}

func TestKateIsXML(t *testing.T) {
	var v struct {
		Name string `xml:"name,attr"`
	}
	if err := xml.Unmarshal([]byte(Kate()), &v); err != nil || v.Name != "Bayes model" {
		t.Errorf("%v %q", err, v.Name)
	}
}
