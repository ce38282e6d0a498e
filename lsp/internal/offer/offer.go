// Package offer finds what can be written at a place of a model file.
package offer

import (
	"regexp"
	"sort"
	"strings"

	"wellposed/checks"
	"wellposed/checks/existence"
	"wellposed/checks/facts"
	"wellposed/grammar"
	"wellposed/parser/model"
	"wellposed/parser/source"
)

// Kind says what an item is.
type Kind int

// Kinds of items.
const (
	Keyword Kind = iota
	Name
	Column
	Law
	Function
	KindOfUnknown
	Argument
	Choice
	RuleName
)

// Item is one thing that can be written.
type Item struct {
	Label  string
	Kind   Kind
	Detail string
	Doc    string
	// Insert is the text to write when it is not the label.
	Insert string
}

var (
	atStart   = regexp.MustCompile(`^\s*[\p{L}_]*$`)
	afterKind = regexp.MustCompile(`^\s*unknown\s[^:]*:\s*[\p{L}_]*$`)
	afterAs   = regexp.MustCompile(`\bas\s+[\p{L}-]*$|\b(?:Mixture|mixture)\(.*:\s*[\p{L}-]*$`)
	afterRule = regexp.MustCompile(`^\s*(?:accept|override)\s+[\p{L}-]*$`)
	target    = regexp.MustCompile(`^\s*(?:prior|rival\s+"[^"]*":?)\s+[\p{L}_]*$`)
	form      = regexp.MustCompile(`^\s*prior\s+([\p{L}_][\p{L}\p{N}_]*)\s+[\p{L}∝]*$`)
	inCall    = regexp.MustCompile(`([\p{L}][\p{L}\p{N}]*(?:-[\p{L}][\p{L}\p{N}]*)*)\(([^()]*)$`)
)

// At lists what can be written at an offset, best first, and the span of the word
// that it would replace.
func At(f *facts.Facts, file *source.File, offset int) ([]Item, source.Span) {
	line, column := file.Locate(offset, source.Bytes)
	text, span := file.Line(line)
	before := text[:min(column, len(text))]
	if i := strings.IndexByte(before, '#'); i >= 0 && strings.Count(before[:i], `"`)%2 == 0 {
		return nil, source.Span{Start: offset, End: offset}
	}
	word := source.Span{Start: span.Start + len(before) - len(tail(before)), End: offset}
	switch {
	case strings.Count(before, `"`)%2 == 1:
		return nil, word
	case atStart.MatchString(before):
		return statements(), word
	case afterKind.MatchString(before):
		return kinds(), word
	case afterRule.MatchString(before):
		return rules(), word
	case target.MatchString(before):
		return unknowns(f.Model), word
	case form.MatchString(before):
		name := form.FindStringSubmatch(before)[1]
		return forms(f, name), word
	case afterAs.MatchString(before):
		return laws(), word
	}
	items := arguments(before)
	items = append(items, names(f.Model)...)
	return append(items, functions()...), word
}

// tail is the word at the end of a text.
func tail(s string) string {
	i := strings.LastIndexFunc(s, func(r rune) bool {
		return !(r == '_' || r == '-' || r >= '0' && r <= '9' || r >= 'a' && r <= 'z' || r >= 'A' && r <= 'Z' || r > 127)
	})
	if i < 0 {
		return s
	}
	return strings.TrimLeft(s[i:], " \t,(=:[*/+")
}

func statements() []Item {
	var list []Item
	for _, k := range grammar.Keywords {
		list = append(list, Item{Label: k, Kind: Keyword, Detail: "statement", Insert: k + " "})
	}
	return list
}

func kinds() []Item {
	var list []Item
	for _, k := range grammar.Kinds {
		label := k.Name
		if k.Sized {
			label += "(2)"
		}
		list = append(list, Item{Label: label, Kind: KindOfUnknown, Detail: k.Doc})
	}
	return list
}

func laws() []Item {
	var list []Item
	for _, d := range grammar.Distributions {
		list = append(list, Item{Label: d.Name, Kind: Law, Detail: d.Doc, Doc: "on " + string(d.On), Insert: d.Name + "("})
	}
	return list
}

func rules() []Item {
	var list []Item
	for _, r := range checks.Rules() {
		list = append(list, Item{Label: r.Name, Kind: RuleName, Detail: r.Brief})
	}
	return list
}

func functions() []Item {
	var list []Item
	for _, fn := range grammar.Functions {
		list = append(list, Item{Label: fn.Name, Kind: Function, Detail: fn.Doc, Insert: fn.Name + "("})
	}
	return list
}

// unknowns lists unknowns, those without a prior first.
func unknowns(m *model.Model) []Item {
	var without, with []Item
	declared := m.Declared()
	for _, u := range m.Unknowns {
		item := Item{Label: u.Name, Kind: Name, Detail: u.Kind.Name + " " + u.Label}
		if u.Population == nil && declared.PriorOf(u) == nil {
			item.Detail = "has no prior yet · " + item.Detail
			without = append(without, item)
		} else {
			with = append(with, item)
		}
	}
	return append(without, with...)
}

// forms lists what can be said of an unknown: the standard choices with their
// verdict, then the other forms.
func forms(f *facts.Facts, name string) []Item {
	var list []Item
	for _, u := range f.Model.Unknowns {
		if u.Name != name {
			continue
		}
		for _, c := range f.Standard(u) {
			rest, ok := strings.CutPrefix(c.Text, name+" ")
			if !ok {
				continue
			}
			verdict := "posterior not decided"
			if v := f.Existence(c.Analysis).Of(u); v != nil {
				switch v.Status {
				case existence.Exists:
					verdict = "posterior exists, " + string(v.How)
				case existence.DoesNotExist:
					verdict = "no posterior"
				}
			}
			list = append(list, Item{Label: rest, Kind: Choice, Detail: c.Label + " · " + verdict, Doc: c.Source})
		}
	}
	for _, w := range []string{"as ", "flat", "∝ ", "jeffreys"} {
		list = append(list, Item{Label: strings.TrimSpace(w), Kind: Keyword, Insert: w})
	}
	return list
}

// arguments lists the labels of the distribution whose bracket is open.
func arguments(before string) []Item {
	match := inCall.FindStringSubmatch(before)
	if match == nil {
		return nil
	}
	d := grammar.FindDistribution(match[1])
	if d == nil {
		return nil
	}
	seen := map[string]bool{}
	var list []Item
	for _, form := range d.Forms {
		for _, p := range form {
			if seen[p.Label] || p.Variadic || strings.Contains(match[2], p.Label+" =") {
				continue
			}
			seen[p.Label] = true
			list = append(list, Item{Label: p.Label + " =", Kind: Argument, Detail: p.Doc, Insert: p.Label + " = "})
		}
	}
	return list
}

// names lists everything that is declared.
func names(m *model.Model) []Item {
	var list []Item
	for _, u := range m.Unknowns {
		list = append(list, Item{Label: u.Name, Kind: Name, Detail: "unknown, " + u.Kind.Name})
	}
	for _, g := range m.Givens {
		list = append(list, Item{Label: g.Name, Kind: Name, Detail: "given"})
	}
	for _, l := range m.Lets {
		list = append(list, Item{Label: l.Name, Kind: Name, Detail: "let " + model.Text(l.Value)})
	}
	shared := map[string]int{}
	for _, t := range m.Tables {
		for _, c := range t.Columns {
			shared[c.Name]++
		}
	}
	for _, t := range m.Tables {
		for _, c := range t.Columns {
			label := c.Name
			if shared[c.Name] > 1 {
				label = t.Name + "." + c.Name
			}
			list = append(list, Item{Label: label, Kind: Column, Detail: "column of " + t.Name})
		}
	}
	sort.SliceStable(list, func(i, j int) bool { return list[i].Kind < list[j].Kind })
	return list
}
