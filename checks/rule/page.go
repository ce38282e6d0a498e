package rule

import "strings"

// Headings are the parts that every rule's page has, in this order.
var Headings = []string{"What happens", "Why", "Mathematics", "What makes it go away", "Sources", "Flagged", "Clean"}

// Example is a model on a rule's page.
type Example struct {
	// Flagged examples have a finding of the rule, clean ones have none.
	Flagged bool
	Text    string
	// Says is what the page shows under a flagged example: one line a finding.
	Says string
	// SaysAt is where Says stands in the page, [start, end); both are 0 when the
	// page shows nothing.
	SaysAt [2]int
	// Line is the line of the page on which the example starts, from 1.
	Line int
}

// The fences of examples on a page.
const (
	fence       = "```"
	flaggedMark = fence + "bayes flagged\n"
	cleanMark   = fence + "bayes clean\n"
	saysMark    = fence + "says\n"
)

// Examples cuts the models out of a page.
func Examples(page string) []Example {
	var out []Example
	for at := 0; at < len(page); {
		end := len(page)
		if i := strings.IndexByte(page[at:], '\n'); i >= 0 {
			end = at + i + 1
		}
		line := page[at:end]
		switch line {
		case flaggedMark, cleanMark:
			text, next := block(page, end)
			out = append(out, Example{Flagged: line == flaggedMark, Text: text, Line: 1 + strings.Count(page[:at], "\n")})
			at = next
		case saysMark:
			text, next := block(page, end)
			if n := len(out); n > 0 {
				out[n-1].Says, out[n-1].SaysAt = text, [2]int{end, end + len(text)}
			}
			at = next
		default:
			at = end
		}
	}
	return out
}

// block returns the text from an offset up to the closing fence, and the offset
// after that fence.
func block(page string, at int) (text string, next int) {
	if i := strings.Index(page[at-1:], "\n"+fence); i >= 0 {
		end := at - 1 + i + 1
		next = end + len(fence)
		if next < len(page) && page[next] == '\n' {
			next++
		}
		return page[at:end], next
	}
	return page[at:], len(page)
}
