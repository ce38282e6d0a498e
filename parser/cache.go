package parser

import (
	"fmt"
	"sync"

	"wellposed/grammar"
	"wellposed/parser/diag"
	"wellposed/parser/source"
)

// Cache reads successive versions of one file. A statement whose text is known
// from the last version is not read again, so that a keystroke costs one
// statement. It is safe for use by several goroutines; trees share statements
// and must not be changed.
type Cache struct {
	mu    sync.Mutex
	text  string
	cuts  []held
	known map[string]*line
}

// held is a chunk with what was read from it.
type held struct {
	start, end int
	line       *line
}

// Parse reads a version of the file, as the function Parse does.
func (c *Cache) Parse(file *source.File) (*grammar.File, []diag.Finding) {
	if len(file.Text) > MaxText {
		return &grammar.File{}, []diag.Finding{{Rule: RuleFile, Severity: diag.Stop, Path: file.Path,
			Headline: fmt.Sprintf("The file has %s bytes; a model file of at most %s is read.", thousands(len(file.Text)), thousands(MaxText)),
			Notes:    []string{"Move data into a file beside the model: `table NAME from \"FILE\"`."}}}
	}
	c.mu.Lock()
	cuts := c.update(file.Text)
	c.mu.Unlock()
	return assemble(file, cuts)
}

// assemble makes the tree and the findings of a file from its lines.
func assemble(file *source.File, cuts []held) (*grammar.File, []diag.Finding) {
	lines := make([]grammar.Line, len(cuts))
	tree := &grammar.File{Lines: make([]*grammar.Line, len(cuts))}
	var findings []diag.Finding
	for i, h := range cuts {
		lines[i] = grammar.Line{Start: h.start, Text: file.Text[h.start:h.end],
			Statement: h.line.statement, Broken: h.line.broken, Comments: h.line.comments}
		tree.Lines[i] = &lines[i]
		for _, f := range h.line.faults {
			findings = append(findings, f.finding(file.Path, h.start))
		}
	}
	return tree, findings
}

// update brings the cuts up to date with a text.
func (c *Cache) update(text string) []held {
	known := c.known
	c.known = make(map[string]*line, len(known))
	var cuts []held
	for pos := 0; ; {
		k := cut(text, pos)
		if k.start == k.end {
			break
		}
		piece := text[k.start:k.end]
		l := known[piece]
		if l == nil {
			l = c.known[piece]
		}
		if l == nil {
			l = k.read(text)
		}
		c.known[piece] = l
		cuts = append(cuts, held{k.start, k.end, l})
		pos = k.end
	}
	c.text, c.cuts = text, cuts
	return cuts
}
