package page

import (
	"fmt"
	"strings"

	"wellposed/checks/evidence"
)

// markdown writes the same blocks as text; a picture becomes its alternative.
func markdown(e *evidence.Evidence) string {
	var b strings.Builder
	fmt.Fprintf(&b, "# %s\n\nEvidence on the priors\n", plain(e.Title))
	for _, x := range blocks(e) {
		b.WriteString("\n")
		switch x := x.(type) {
		case heading:
			fmt.Fprintf(&b, "## %s %s\n", x.number, plain(x.text))
		case subheading:
			fmt.Fprintf(&b, "### %s\n", plain(x.text))
		case para:
			text := plain(x.text)
			if x.kind == "alarm" {
				text = "**" + text + "**"
			}
			b.WriteString(text + "\n")
		case bullets:
			for _, i := range x.items {
				fmt.Fprintf(&b, "- %s\n", plain(i))
			}
		case table:
			fmt.Fprintf(&b, "%s\n\n", plain(x.caption))
			head := make([]string, len(x.head))
			rule := make([]string, len(x.head))
			for i, h := range x.head {
				head[i], rule[i] = inCell(h), "---"
			}
			fmt.Fprintf(&b, "| %s |\n| %s |\n", strings.Join(head, " | "), strings.Join(rule, " | "))
			for _, row := range x.rows {
				var cells []string
				for _, c := range row {
					text := inCell(sign(c.mark) + c.text)
					if c.code && c.text != "–" {
						text = "`" + strings.NewReplacer("`", "'", "|", "\\|", "\n", " ").Replace(c.text) + "`"
					}
					cells = append(cells, text)
				}
				fmt.Fprintf(&b, "| %s |\n", strings.Join(cells, " | "))
			}
		case figure:
			fmt.Fprintf(&b, "*Picture: %s* %s\n", plain(x.caption), plain(x.alt))
		case signatures:
			for _, n := range x.names {
				fmt.Fprintf(&b, "%s, name, date and signature: ____________________\n", plain(n))
			}
		}
	}
	return b.String()
}

// plain escapes what Markdown would read as markup.
func plain(s string) string {
	return strings.NewReplacer("\\", "\\\\", "*", "\\*", "_", "\\_", "`", "\\`", "<", "&lt;", ">", "&gt;", "[", "\\[", "]", "\\]", "#", "\\#").Replace(strings.Join(strings.Fields(s), " "))
}

func inCell(s string) string { return strings.ReplaceAll(plain(s), "|", "\\|") }
