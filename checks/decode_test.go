package checks

import (
	"strings"
	"testing"
	"unicode/utf8"

	"wellposed/parser"
	"wellposed/parser/diag"
)

func TestDecode(t *testing.T) {
	for name, c := range map[string]struct {
		raw, text string
		at        []int
	}{
		"plain":     {"unknown θ : probability\n", "unknown θ : probability\n", nil},
		"mark":      {"\ufefftitle \"x\"\n", "title \"x\"\n", nil},
		"empty":     {"", "", nil},
		"latin1":    {"title \"caf\xe9\"\n", "title \"caf\xe9\"\n", []int{10}},
		"stretch":   {"a\xff\xfe\xfdb\x80", "a\xff\xfe\xfdb\x80", []int{1, 5}},
		"utf16":     {"\xff\xfet\x00i\x00", "", []int{0}},
		"real fffd": {"title \"�\"\n", "title \"�\"\n", nil},
	} {
		f, found := Decode("m.bayes", []byte(c.raw))
		if f.Text != c.text {
			t.Errorf("%s: text %q, want %q", name, f.Text, c.text)
		}
		if len(found) != len(c.at) {
			t.Errorf("%s: %d findings, want %d", name, len(found), len(c.at))
			continue
		}
		for i, d := range found {
			if d.Span.Start != c.at[i] {
				t.Errorf("%s: finding %d at byte %d, want %d", name, i, d.Span.Start, c.at[i])
			}
		}
	}
	if _, found := Decode("m", []byte(strings.Repeat("a\xff", 1000))); len(found) != 10 {
		t.Errorf("1000 broken places give %d findings, want 10", len(found))
	}
}

func TestMergeSaysItOnce(t *testing.T) {
	f, broken := Decode("m.bayes", []byte("unknown p\xe9 : probability\n"))
	_, read := parser.Parse(f)
	count := 0
	for _, d := range Merge(broken, append(read, diag.Finding{Rule: "other"})) {
		if d.Rule == parser.RuleEncoding {
			count++
		}
	}
	if count != 1 {
		t.Errorf("the broken byte is reported %d times", count)
	}
}

func FuzzDecode(f *testing.F) {
	f.Add([]byte("title \"caf\xe9\"\n"))
	f.Add([]byte("\xff\xfe"))
	f.Fuzz(func(t *testing.T, raw []byte) {
		file, found := Decode("m", raw)
		if utf8.ValidString(file.Text) == (len(found) > 0) && file.Text != "" {
			t.Fatalf("%d findings for %q", len(found), raw)
		}
		for _, d := range found {
			if d.Span.Start < 0 || d.Span.End > len(file.Text) {
				t.Fatal("a span outside the file")
			}
		}
	})
}
