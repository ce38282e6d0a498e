package checks

import (
	"fmt"
	"strings"
	"unicode/utf8"

	"wellposed/parser"
	"wellposed/parser/diag"
	"wellposed/parser/source"
)

// Decode makes a source file of raw bytes. A byte order mark is dropped. Each
// stretch of bytes that are not UTF-8 is a finding (at most ten), wherever it
// stands; the rest of the file can still be checked.
func Decode(path string, raw []byte) (*source.File, []diag.Finding) {
	text := string(raw)
	if strings.HasPrefix(text, "\xff\xfe") || strings.HasPrefix(text, "\xfe\xff") || strings.Count(text[:min(64, len(text))], "\x00") > 8 {
		return source.NewFile(path, ""), []diag.Finding{{
			Rule: parser.RuleEncoding, Severity: diag.Stop, Path: path,
			Headline: "The file looks like UTF-16; model files are UTF-8.",
			Notes:    []string{"It goes away when the file is saved as UTF-8."},
		}}
	}
	text = strings.TrimPrefix(text, "\ufeff")
	file := source.NewFile(path, text)
	if utf8.ValidString(text) {
		return file, nil
	}
	const most = 10
	var found []diag.Finding
	more := 0
	for i := 0; i < len(text); {
		if !broken(text, i) {
			_, size := utf8.DecodeRuneInString(text[i:])
			i += size
			continue
		}
		start := i
		for i < len(text) && broken(text, i) {
			i++
		}
		if len(found) == most {
			more++
			continue
		}
		found = append(found, diag.Finding{
			Rule: parser.RuleEncoding, Severity: diag.Stop, Path: path, Span: source.Span{Start: start, End: i},
			Headline: fmt.Sprintf("%s not UTF-8 (the first is 0x%02X).", counted(i-start, "byte here is", "bytes here are"), text[start]),
			Notes:    []string{"It goes away when the file is saved as UTF-8. The rest of the file is checked."},
		})
	}
	if more > 0 {
		found[most-1].Notes = append(found[most-1].Notes, fmt.Sprintf("%s further on.", counted(more, "more such place", "more such places")))
	}
	return file, found
}

// broken reports whether the byte at an offset begins no character.
func broken(text string, at int) bool {
	r, size := utf8.DecodeRuneInString(text[at:])
	return r == utf8.RuneError && size == 1
}

// Merge joins the findings of decoding with those of a run and puts them in
// order. What both say of one place is said once.
func Merge(decoding, found []diag.Finding) []diag.Finding {
	if len(decoding) == 0 {
		return found
	}
	all := append([]diag.Finding(nil), decoding...)
	for _, d := range found {
		if d.Rule == parser.RuleEncoding {
			continue
		}
		all = append(all, d)
	}
	Sort(all)
	return all
}

func counted(n int, one, many string) string {
	if n == 1 {
		return "1 " + one
	}
	return fmt.Sprintf("%d %s", n, many)
}
