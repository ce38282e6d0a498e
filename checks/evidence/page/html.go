package page

import (
	_ "embed"
	"fmt"
	stdhtml "html"
	"strings"

	"wellposed/checks/evidence"
)

//go:embed page.css
var style string

func esc(s string) string { return stdhtml.EscapeString(s) }

// html writes the page. It needs no script, no network and no other file; all
// text of the model is escaped.
func html(e *evidence.Evidence) string {
	var b strings.Builder
	list := blocks(e)
	b.WriteString("<!doctype html>\n<html lang=\"en\">\n<head>\n<meta charset=\"utf-8\">\n<meta name=\"viewport\" content=\"width=device-width, initial-scale=1\">\n<meta name=\"color-scheme\" content=\"light dark\">\n<meta http-equiv=\"Content-Security-Policy\" content=\"default-src 'none'; style-src 'unsafe-inline'\">\n")
	fmt.Fprintf(&b, "<title>%s: evidence</title>\n<style>\n%s</style>\n</head>\n<body>\n", esc(e.Title), style)
	fmt.Fprintf(&b, "<header>\n<p class=\"kind\">Evidence on the priors</p>\n<h1>%s</h1>\n</header>\n", esc(e.Title))
	b.WriteString("<nav aria-label=\"Parts\"><ol>\n")
	for _, x := range list {
		if h, ok := x.(heading); ok {
			fmt.Fprintf(&b, "<li><a href=\"#part-%s\">%s</a></li>\n", h.number, esc(h.text))
		}
	}
	b.WriteString("</ol></nav>\n<main>\n")
	open := false
	tables := 0
	for _, x := range list {
		switch x := x.(type) {
		case heading:
			if open {
				b.WriteString("</div></section>\n")
			}
			open = true
			fmt.Fprintf(&b, "<section id=\"part-%[1]s\" aria-labelledby=\"head-%[1]s\"><h2 id=\"head-%[1]s\"><span class=\"no\">%[1]s</span> %[2]s</h2><div class=\"body\">\n", x.number, esc(x.text))
		case subheading:
			fmt.Fprintf(&b, "<h3>%s</h3>\n", esc(x.text))
		case para:
			class := ""
			if x.kind != "" {
				class = " class=\"" + x.kind + "\""
			}
			fmt.Fprintf(&b, "<p%s>%s</p>\n", class, esc(x.text))
		case bullets:
			b.WriteString("<ul>\n")
			for _, i := range x.items {
				fmt.Fprintf(&b, "<li>%s</li>\n", esc(i))
			}
			b.WriteString("</ul>\n")
		case table:
			tables++
			writeTable(&b, x, tables)
		case figure:
			fmt.Fprintf(&b, "<figure>%s<figcaption>%s</figcaption></figure>\n", x.svg, esc(x.caption))
		case signatures:
			b.WriteString("<div class=\"sign\">\n")
			for _, n := range x.names {
				fmt.Fprintf(&b, "<p>%s, name, date and signature</p>\n", esc(n))
			}
			b.WriteString("</div>\n")
		}
	}
	if open {
		b.WriteString("</div></section>\n")
	}
	b.WriteString("</main>\n</body>\n</html>\n")
	return b.String()
}

func writeTable(b *strings.Builder, t table, n int) {
	fmt.Fprintf(b, "<div class=\"wide\" role=\"region\" aria-labelledby=\"table-%d\" tabindex=\"0\"><table>\n<caption id=\"table-%d\">%s</caption>\n<thead><tr>", n, n, esc(t.caption))
	for _, h := range t.head {
		fmt.Fprintf(b, "<th scope=\"col\">%s</th>", esc(h))
	}
	b.WriteString("</tr></thead>\n<tbody>\n")
	for _, row := range t.rows {
		b.WriteString("<tr>")
		for _, c := range row {
			tag, attr := "td", ""
			if c.header {
				tag, attr = "th", " scope=\"row\""
			}
			class := ""
			switch {
			case c.mark != "":
				class = c.mark
			case c.number:
				class = "num"
			}
			if class != "" {
				attr += " class=\"" + class + "\""
			}
			text := esc(c.text)
			if c.code && c.text != "–" {
				text = "<code>" + text + "</code>"
			}
			if s := sign(c.mark); s != "" {
				text = "<span class=\"sign-mark\" aria-hidden=\"true\">" + s + "</span>" + text
			}
			fmt.Fprintf(b, "<%s%s>%s</%s>", tag, attr, text, tag)
		}
		b.WriteString("</tr>\n")
	}
	b.WriteString("</tbody></table></div>\n")
}
