package render

import (
	"fmt"
	"io"
	"strings"
	"unicode/utf8"

	"wellposed/parser/diag"
	"wellposed/parser/source"
)

// margin is the width of the labels that stand left of a finding's paragraphs.
const margin = 14

// writeText is the format for people. A finding is a place with its severity in
// words, the headline, the source with the spot underlined, and labelled
// paragraphs. A clean run says nothing unless asked to.
func writeText(w io.Writer, r *Report, o Options) error {
	if o.Width <= 0 {
		o.Width = 80
	}
	o.Width = max(40, min(o.Width, 120))
	p := &page{w: w, o: o}
	for _, f := range r.Files {
		if f.Trouble != "" {
			p.printf("%s  %s\n", p.bold(f.Path), p.paint(diag.Stop, "unreadable"))
			p.paragraph("  ", "  ", f.Trouble)
			p.printf("\n")
		}
		for _, d := range f.Findings {
			p.finding(f, d)
		}
		if o.Verbose && len(f.Findings) == 0 && f.Trouble == "" {
			p.printf("%s  nothing found\n", p.bold(f.Path))
		}
		if o.Verbose {
			for _, v := range f.Verdicts {
				p.verdict(v)
			}
			if len(f.Verdicts) > 0 {
				p.printf("\n")
			}
		}
	}
	if line := summary(r.Tally(), o.Verbose); line != "" {
		p.paragraph("", "", line)
	}
	return nil
}

// summary is the closing line; empty when all is well and nobody asked.
func summary(c Count, verbose bool) string {
	var parts []string
	add := func(n int, word string) {
		if n > 0 {
			parts = append(parts, fmt.Sprintf("%d %s", n, word))
		}
	}
	add(c.Stop, "stop")
	add(c.Warn, "warn")
	add(c.Note, plural(c.Note, "note", "notes"))
	add(c.Overridden, "overridden")
	add(c.Broken, plural(c.Broken, "promise broken", "promises broken"))
	add(c.Unreadable, plural(c.Unreadable, "file unreadable", "files unreadable"))
	if len(parts) == 0 {
		if !verbose {
			return ""
		}
		parts = []string{"nothing found"}
	}
	return fmt.Sprintf("%s in %d %s.", strings.Join(parts, ", "), c.Files, plural(c.Files, "model", "models"))
}

func plural(n int, one, many string) string {
	if n == 1 {
		return one
	}
	return many
}

// page prints with a width and, if wanted, colour.
type page struct {
	w io.Writer
	o Options
}

func (p *page) printf(format string, args ...any) { fmt.Fprintf(p.w, format, args...) }

func (p *page) bold(s string) string {
	if !p.o.Colour {
		return s
	}
	return "\x1b[1m" + s + "\x1b[0m"
}

func (p *page) faint(s string) string {
	if !p.o.Colour {
		return s
	}
	return "\x1b[2m" + s + "\x1b[0m"
}

// paint colours a severity. The word is always there too.
func (p *page) paint(s diag.Severity, text string) string {
	if !p.o.Colour {
		return text
	}
	code := map[diag.Severity]string{diag.Stop: "35", diag.Warn: "33", diag.Note: "36"}[s]
	return "\x1b[1;" + code + "m" + text + "\x1b[0m"
}

// finding prints one finding.
func (p *page) finding(f *File, d diag.Finding) {
	at := f.locate(d.Span, source.Characters)
	word := d.Severity.String()
	if d.Overridden != "" {
		word += ", overridden"
	}
	p.printf("%s  %s\n", p.bold(fmt.Sprintf("%s:%d:%d", printable(f.Path), at.line, at.column)), p.paint(d.Severity, word))
	for _, line := range wrap(printable(d.Headline), p.o.Width-2) {
		p.printf("  %s\n", p.bold(line))
	}
	p.quote(f, d)
	for i, note := range d.Notes {
		p.labelled(label("reason", i), note)
	}
	if d.Sketch != "" {
		for i, line := range strings.Split(strings.TrimRight(d.Sketch, "\n"), "\n") {
			p.printf("%s%s\n", p.lead(label("sketch", i)), strings.TrimRight(line, " "))
		}
	}
	for i, e := range d.Evidence {
		p.labelled(label("numbers", i), evidence(e))
	}
	for i, r := range d.Related {
		p.labelled(label("see also", i), f.where(r)+"  "+r.Message)
	}
	for i, x := range d.Fixes {
		p.labelled(label("way out", i), fix(x))
	}
	if d.Overridden != "" {
		p.labelled("overridden", d.Overridden)
	}
	p.labelled("read more", "wellposed explain "+d.Rule)
	p.printf("\n")
}

// label is printed for the first of several paragraphs of a kind.
func label(word string, i int) string {
	if i > 0 {
		return ""
	}
	return word
}

func (p *page) lead(label string) string {
	return "  " + p.faint(label) + strings.Repeat(" ", max(1, margin-2-source.Width(label)))
}

func (p *page) labelled(label, text string) {
	lines := wrap(printable(text), p.o.Width-margin)
	for i, line := range lines {
		if i > 0 {
			label = ""
		}
		p.printf("%s%s\n", p.lead(label), line)
	}
}

func (p *page) paragraph(first, rest, text string) {
	for i, line := range wrap(printable(text), p.o.Width-source.Width(rest)) {
		lead := rest
		if i == 0 {
			lead = first
		}
		p.printf("%s%s\n", lead, line)
	}
}

// evidence is one number in words.
func evidence(e diag.Evidence) string {
	s := e.Name
	if e.About != "" {
		s += ", " + e.About
	}
	if e.Text != "" {
		s += ": " + e.Text
	}
	if e.Method != "" {
		s += " (" + string(e.How) + ", " + e.Method + ")"
	} else if e.How != "" && string(e.How) != e.Text {
		s += " (" + string(e.How) + ")"
	}
	return s
}

func fix(x diag.Fix) string {
	s := x.Title
	if x.Consequence != "" {
		s += ": " + x.Consequence
	}
	if x.Grade == diag.ChangesPosterior {
		s += " [another posterior]"
	}
	return s
}

// verdict prints what the engine decided, for --verbose.
func (p *page) verdict(v Verdict) {
	text := strings.Join(v.Unknowns, ", ") + ": posterior " + v.Status
	if v.Status != v.How {
		text += ", " + v.How
	}
	if v.Claim != "" {
		text += "; " + v.Claim
	}
	p.paragraph("  ", strings.Repeat(" ", 4), text)
}

// quote prints the lines of the span with an underline. At most three lines are
// shown, and of a line wider than the page only the part around the span.
func (p *page) quote(f *File, d diag.Finding) {
	if f.Source == nil || len(f.Source.Text) == 0 {
		p.printf("\n")
		return
	}
	const lead = "    "
	first, _ := f.Source.Locate(d.Span.Start, source.Bytes)
	last, _ := f.Source.Locate(max(d.Span.Start, d.Span.End), source.Bytes)
	p.printf("\n")
	for n := first; n <= last; n++ {
		if n == first+3 && last > n {
			p.printf("%s… %d more lines\n", lead, last-n+1)
			break
		}
		text, span := f.Source.Line(n)
		from := max(0, min(d.Span.Start-span.Start, len(text)))
		to := max(from, min(d.Span.End-span.Start, len(text)))
		if n > first {
			from = len(text) - len(strings.TrimLeft(text, " \t"))
			to = max(from, to)
		}
		shown, under := underline(text, from, to, p.o.Width-len(lead))
		p.printf("%s%s\n", lead, shown)
		if under != "" {
			p.printf("%s%s\n", lead, p.paint(d.Severity, under))
		}
	}
	p.printf("\n")
}

// underline cuts a line to a width around [from, to) and returns it with the
// line that underlines the part, right for wide and combining characters.
func underline(text string, from, to, width int) (shown, under string) {
	// Of a very long line only the neighbourhood is looked at.
	before, part, after := expand(tail(text[:from], 32*width)), expand(head(text[from:to], 32*width)), expand(head(text[to:], 32*width))
	if source.Width(before)+source.Width(part)+source.Width(after) > width {
		keep := max(8, min(source.Width(part), width-2))
		if source.Width(part) > keep {
			part = cut(part, keep-1) + "…"
			after = ""
		}
		room := width - source.Width(part)
		right := min(source.Width(after), room/3)
		left := min(source.Width(before), room-right)
		right = min(source.Width(after), room-left)
		if source.Width(before) > left {
			before = "…" + cutLeft(before, max(0, left-1))
		}
		if source.Width(after) > right {
			after = cut(after, max(0, right-1)) + "…"
		}
	}
	cells := source.Width(part)
	if cells == 0 {
		cells = 1
	}
	return strings.TrimRight(before+part+after, " "), strings.Repeat(" ", source.Width(before)) + strings.Repeat("‾", cells)
}

// head and tail keep at most n bytes of a text, cut between code points.
func head(text string, n int) string {
	if len(text) <= n {
		return text
	}
	for n > 0 && !utf8.RuneStart(text[n]) {
		n--
	}
	return text[:n]
}

func tail(text string, n int) string {
	start := len(text) - n
	if start <= 0 {
		return text
	}
	for start < len(text) && !utf8.RuneStart(text[start]) {
		start++
	}
	return text[start:]
}

// expand makes text printable in place: a tab becomes a blank, a control
// character a visible stand-in of one cell.
func expand(text string) string {
	return strings.Map(func(r rune) rune {
		switch {
		case r == '\t':
			return ' '
		case r < ' ', r == 0x7f, r >= 0x80 && r < 0xa0, bidi(r):
			return '�'
		}
		return r
	}, text)
}

// printable guards the terminal against control characters in names, paths and
// texts; line breaks become blanks.
func printable(text string) string {
	return strings.Map(func(r rune) rune {
		switch {
		case r == '\t', r == '\n', r == '\r':
			return ' '
		case r < ' ', r == 0x7f, r >= 0x80 && r < 0xa0, bidi(r):
			return '�'
		}
		return r
	}, text)
}

// bidi reports the controls that reorder text on screen.
func bidi(r rune) bool { return r >= 0x202a && r <= 0x202e || r >= 0x2066 && r <= 0x2069 }

// cut keeps the first cells of a text. It looks at no more of the text than it
// keeps, so a line of any length is cheap.
func cut(text string, cells int) string {
	end, used := 0, 0
	for end < len(text) {
		step := source.Advance(text[end:], 1, source.Characters)
		used += source.Width(text[end : end+step])
		if used > cells {
			break
		}
		end += step
	}
	return text[:end]
}

// cutLeft keeps the last cells of a text.
func cutLeft(text string, cells int) string {
	// A character of several code points rarely has more than 32 bytes; only so
	// much of the end is looked at.
	if start := len(text) - 32*(cells+1); start > 0 {
		for start < len(text) && !utf8.RuneStart(text[start]) {
			start++
		}
		text = text[start:]
	}
	for text != "" && source.Width(text) > cells {
		text = text[source.Advance(text, 1, source.Characters):]
	}
	return text
}

// wrap breaks a text between words; a word wider than the page stays whole, so
// that paths can be copied.
func wrap(text string, width int) []string {
	var lines []string
	line := ""
	for _, word := range strings.Split(text, " ") {
		switch {
		case line == "":
			line = word
		case source.Width(line)+1+source.Width(word) <= width:
			line += " " + word
		default:
			lines = append(lines, strings.TrimRight(line, " "))
			line = word
		}
	}
	if line != "" || len(lines) == 0 {
		lines = append(lines, strings.TrimRight(line, " "))
	}
	return lines
}
