package parser

import (
	"fmt"
	"runtime"
	"sync"
	"sync/atomic"

	"wellposed/grammar"
	"wellposed/parser/diag"
	"wellposed/parser/source"
)

// Cache reads successive versions of one file. Only the statements around an
// edit are read again, so that a keystroke costs one statement. It is safe for
// use by several goroutines. Trees share statements and must not be changed.
type Cache struct {
	mu   sync.Mutex
	text string
	cuts []held
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
	c.cuts, c.text = renew(c.text, c.cuts, file.Text), file.Text
	cuts := c.cuts
	c.mu.Unlock()
	return assemble(file, cuts)
}

// assemble makes the tree and the findings of a file from its lines.
func assemble(file *source.File, cuts []held) (*grammar.File, []diag.Finding) {
	var findings []diag.Finding
	over := len(cuts) > MaxStatements
	if over {
		at := cuts[MaxStatements]
		findings = append(findings, diag.Finding{Rule: RuleStatements, Severity: diag.Stop, Path: file.Path,
			Span:     source.Span{Start: at.start, End: at.end},
			Headline: fmt.Sprintf("The file has more than %s statements; the rest is not read.", thousands(MaxStatements))})
		cuts = cuts[:MaxStatements]
	}
	lines := make([]grammar.Line, len(cuts))
	tree := &grammar.File{Lines: make([]*grammar.Line, len(cuts))}
	var read []diag.Finding
	for i, h := range cuts {
		lines[i] = grammar.Line{Start: h.start, Text: file.Text[h.start:h.end],
			Statement: h.line.statement, Broken: h.line.broken, Comments: h.line.comments}
		tree.Lines[i] = &lines[i]
		for _, f := range h.line.faults {
			read = append(read, f.finding(file.Path, h.start))
		}
	}
	return tree, append(read, findings...)
}

// renew cuts and reads a text, keeping what an older version has read. The
// chunks before and after the stretch in which the two texts differ are taken
// over; within it, statements with the same text are.
func renew(old string, cuts []held, text string) []held {
	same := commonPrefix(old, text)
	tail := commonSuffix(old[same:], text[same:])
	shift := len(text) - len(old)

	// A chunk depends on the text after it up to the next token at the start of
	// a line, and a table on the lines up to the next row.
	keep := 0
	for keep < len(cuts) && cuts[keep].end < same {
		keep++
	}
	keep = max(0, keep-1)
	for keep > 0 && cuts[keep].line.statement == nil && !cuts[keep].line.broken {
		keep--
	}
	known := map[string]*line{}
	for _, h := range cuts[keep:] {
		if h.start > len(old)-tail {
			break
		}
		known[old[h.start:h.end]] = h.line
	}

	out := make([]held, keep, len(cuts)+2)
	copy(out, cuts)
	pos := 0
	if keep > 0 {
		pos = cuts[keep-1].end
	}
	next := keep // the first old chunk that may start where a cut starts
	var knife cutter
	var fresh []chunk
	var places []int // of the fresh chunks in out
	for len(out) <= MaxStatements {
		k := knife.cut(text, pos)
		if k.start == k.end {
			break
		}
		if k.start >= len(text)-tail {
			for next < len(cuts) && cuts[next].start+shift < k.start {
				next++
			}
			if next < len(cuts) && cuts[next].start+shift == k.start {
				for _, h := range cuts[next:] {
					out = append(out, held{h.start + shift, h.end + shift, h.line})
				}
				break
			}
		}
		piece := text[k.start:k.end]
		l := known[piece]
		if l == nil {
			l = new(line)
			known[piece] = l
			fresh, places = append(fresh, k), append(places, len(out))
		}
		out = append(out, held{k.start, k.end, l})
		pos = k.end
	}
	inParallel(len(fresh), func(i int) { *out[places[i]].line = *fresh[i].read(text) })
	return out
}

// inParallel calls do for 0 to n − 1; many calls are shared out among the
// processors.
func inParallel(n int, do func(int)) {
	workers := min(runtime.GOMAXPROCS(0), n/32)
	if workers < 2 {
		for i := range n {
			do(i)
		}
		return
	}
	var next atomic.Int64
	var done sync.WaitGroup
	for range workers {
		done.Go(func() {
			for i := int(next.Add(1)) - 1; i < n; i = int(next.Add(1)) - 1 {
				do(i)
			}
		})
	}
	done.Wait()
}

func commonPrefix(a, b string) int {
	n, i := min(len(a), len(b)), 0
	for i+64 <= n && a[i:i+64] == b[i:i+64] {
		i += 64
	}
	for i < n && a[i] == b[i] {
		i++
	}
	return i
}

func commonSuffix(a, b string) int {
	n, i := min(len(a), len(b)), 0
	for i+64 <= n && a[len(a)-i-64:len(a)-i] == b[len(b)-i-64:len(b)-i] {
		i += 64
	}
	for i < n && a[len(a)-1-i] == b[len(b)-1-i] {
		i++
	}
	return i
}
