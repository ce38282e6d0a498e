package main

import (
	"fmt"
	"strings"
)

// unified is the difference of two texts as patch programs read it, with three
// lines around each change; empty when they are the same.
func unified(name, before, after string) string {
	a, b := splitLines(before), splitLines(after)
	steps := script(a, b)
	var out strings.Builder
	const around = 3
	for i := 0; i < len(steps); {
		if steps[i].kind == ' ' {
			i++
			continue
		}
		// A hunk goes on while changes are at most two contexts apart.
		start, end, same := max(0, i-around), i, 0
		for end < len(steps) && same <= 2*around {
			if steps[end].kind == ' ' {
				same++
			} else {
				same = 0
			}
			end++
		}
		end = min(end-max(0, same-around), len(steps))
		if out.Len() == 0 {
			fmt.Fprintf(&out, "--- %s\n+++ %s\n", name, name)
		}
		hunk(&out, steps[start:end])
		i = end
	}
	return out.String()
}

// step is one line of the difference: ' ' in both, '-' in the first, '+' in the
// second. At and to are the lines before it in each, from 0.
type step struct {
	kind   byte
	at, to int
	text   string
}

func hunk(out *strings.Builder, steps []step) {
	var old, fresh int
	for _, s := range steps {
		if s.kind != '+' {
			old++
		}
		if s.kind != '-' {
			fresh++
		}
	}
	fmt.Fprintf(out, "@@ -%s +%s @@\n", lineRange(steps[0].at, old), lineRange(steps[0].to, fresh))
	for _, s := range steps {
		out.WriteByte(s.kind)
		out.WriteString(s.text)
		if !strings.HasSuffix(s.text, "\n") {
			out.WriteString("\n\\ No newline at end of file\n")
		}
	}
}

func lineRange(start, n int) string {
	if n > 0 {
		start++
	}
	if n == 1 {
		return fmt.Sprint(start)
	}
	return fmt.Sprintf("%d,%d", start, n)
}

func splitLines(s string) []string {
	lines := strings.SplitAfter(s, "\n")
	if lines[len(lines)-1] == "" {
		lines = lines[:len(lines)-1]
	}
	return lines
}

// script finds a shortest edit script (Myers 1986, "An O(ND) difference
// algorithm and its variations"). Beyond a thousand edits the middle part is
// replaced as a whole.
func script(a, b []string) []step {
	head := 0
	for head < len(a) && head < len(b) && a[head] == b[head] {
		head++
	}
	tail := 0
	for tail < len(a)-head && tail < len(b)-head && a[len(a)-1-tail] == b[len(b)-1-tail] {
		tail++
	}
	var out []step
	for i := range head {
		out = append(out, step{' ', i, i, a[i]})
	}
	out = append(out, middle(a[head:len(a)-tail], b[head:len(b)-tail], head)...)
	for i := len(a) - tail; i < len(a); i++ {
		out = append(out, step{' ', i, i - len(a) + len(b), a[i]})
	}
	return out
}

func middle(a, b []string, shift int) []step {
	const most = 1000
	n, m := len(a), len(b)
	v := map[int]int{1: 0}
	var trace []map[int]int
	for d := 0; d <= min(n+m, most); d++ {
		kept := make(map[int]int, len(v))
		for k, x := range v {
			kept[k] = x
		}
		trace = append(trace, kept)
		for k := -d; k <= d; k += 2 {
			x := v[k-1] + 1
			if k == -d || k != d && v[k-1] < v[k+1] {
				x = v[k+1]
			}
			for x < n && x-k < m && a[x] == b[x-k] {
				x++
			}
			v[k] = x
			if x >= n && x-k >= m {
				return backtrack(a, b, trace, shift)
			}
		}
	}
	var out []step
	for i, line := range a {
		out = append(out, step{'-', shift + i, shift, line})
	}
	for j, line := range b {
		out = append(out, step{'+', shift + n, shift + j, line})
	}
	return out
}

func backtrack(a, b []string, trace []map[int]int, shift int) []step {
	var back []step
	x, y := len(a), len(b)
	for d := len(trace) - 1; d >= 0; d-- {
		v, k := trace[d], x-y
		from := k - 1
		if k == -d || k != d && v[k-1] < v[k+1] {
			from = k + 1
		}
		px := v[from]
		py := px - from
		for x > px && y > py && x > 0 && y > 0 {
			x, y = x-1, y-1
			back = append(back, step{' ', shift + x, shift + y, a[x]})
		}
		if d == 0 {
			break
		}
		if x == px {
			y--
			back = append(back, step{'+', shift + x, shift + y, b[y]})
		} else {
			x--
			back = append(back, step{'-', shift + x, shift + y, a[x]})
		}
	}
	out := make([]step, len(back))
	for i, s := range back {
		out[len(back)-1-i] = s
	}
	return out
}
