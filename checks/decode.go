package checks

import (
	"fmt"
	"strings"
	"unicode/utf8"

	"wellposed/parser/diag"
	"wellposed/parser/source"
)

// MaxModelBytes bounds the size of a model file. A plan's statistical section is
// a few kilobytes; data belong in tables.
const MaxModelBytes = 4 << 20

// BrokenEncoding is the problem of a file that is not UTF-8.
const BrokenEncoding = "broken-encoding"

// Decode makes a source file of raw bytes. Bytes that are not UTF-8 become
// replacement characters, each stretch with a finding (at most ten), so that the
// rest of the file can still be checked. A byte order mark is dropped.
func Decode(path string, raw []byte) (*source.File, []diag.Finding) {
	text := string(raw)
	if strings.HasPrefix(text, "\xff\xfe") || strings.HasPrefix(text, "\xfe\xff") || strings.Count(text[:min(64, len(text))], "\x00") > 8 {
		return source.NewFile(path, ""), []diag.Finding{{
			Rule: BrokenEncoding, Severity: diag.Stop, Path: path,
			Headline: "The file looks like UTF-16; model files are UTF-8.",
			Notes:    []string{"It goes away when the file is saved as UTF-8."},
		}}
	}
	text = strings.TrimPrefix(text, "\ufeff")
	if utf8.ValidString(text) {
		return source.NewFile(path, text), nil
	}
	const most = 10
	var b strings.Builder
	var found []diag.Finding
	more := 0
	for i := 0; i < len(text); {
		r, size := utf8.DecodeRuneInString(text[i:])
		if r != utf8.RuneError || size != 1 {
			b.WriteString(text[i : i+size])
			i += size
			continue
		}
		start, first, n := b.Len(), text[i], 0
		for i < len(text) {
			if r, size := utf8.DecodeRuneInString(text[i:]); r != utf8.RuneError || size != 1 {
				break
			}
			b.WriteRune(utf8.RuneError)
			i, n = i+1, n+1
		}
		if len(found) == most {
			more++
			continue
		}
		found = append(found, diag.Finding{
			Rule: BrokenEncoding, Severity: diag.Stop, Path: path, Span: source.Span{Start: start, End: b.Len()},
			Headline: fmt.Sprintf("%s not UTF-8 (the first is 0x%02X).", counted(n, "byte is", "bytes are"), first),
			Notes:    []string{"It goes away when the file is saved as UTF-8. The rest of the file is checked as if a � stood here."},
		})
	}
	if more > 0 {
		found[most-1].Notes = append(found[most-1].Notes, fmt.Sprintf("%s further on.", counted(more, "more such place", "more such places")))
	}
	return source.NewFile(path, b.String()), found
}

func counted(n int, one, many string) string {
	if n == 1 {
		return "1 " + one
	}
	return fmt.Sprintf("%d %s", n, many)
}
