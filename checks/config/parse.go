package config

import (
	"errors"
	"fmt"
	"math/big"
	"strconv"
	"strings"

	"github.com/pelletier/go-toml/v2/unstable"

	"wellposed/parser/diag"
	"wellposed/parser/near"
	"wellposed/parser/source"
)

// Names of the findings of reading.
const (
	Unreadable = "configuration-unreadable"
	NotKnown   = "setting-not-known"
	NotFit     = "setting-does-not-fit"
)

// Doc is one line about a finding of reading.
type Doc struct{ Name, Doc string }

// Docs lists the findings of reading a configuration.
var Docs = []Doc{
	{Unreadable, "The configuration can't be read from some place on. What stands before that place is in force."},
	{NotKnown, "The configuration has a setting that does not exist. The other settings are in force."},
	{NotFit, "A setting has a value that does not fit it. The other settings are in force."},
}

var (
	topKeys   = []string{"matters", "strict", "level", "severity", "limits", "paths"}
	limitKeys = []string{"table-megabytes", "rows", "seconds"}
	pathKeys  = []string{"match", "skip", "matters", "strict", "severity"}
	levels    = []string{"note", "warn", "stop"}
)

// Parse reads a configuration. What is not understood is a finding, and the
// rest holds.
func Parse(file *source.File, rules []Known) (*Config, []diag.Finding) {
	r := &reader{file: file, config: Default(), rules: map[string]Known{}}
	for _, k := range rules {
		r.rules[k.Name], r.names = k, append(r.names, k.Name)
	}
	r.config.Path = file.Path
	r.read()
	return r.config, r.found
}

type reader struct {
	file   *source.File
	config *Config
	rules  map[string]Known
	names  []string
	found  []diag.Finding
	parser unstable.Parser
	// table is where key-values go: "", "severity", "limits", "paths",
	// "paths.severity", or "?" when it is not known.
	table string
	seen  map[string]bool
}

func (r *reader) read() {
	r.seen = map[string]bool{}
	r.parser.Reset([]byte(r.file.Text))
	for r.parser.NextExpression() {
		switch e := r.parser.Expression(); e.Kind {
		case unstable.Table, unstable.ArrayTable:
			r.header(e)
		case unstable.KeyValue:
			r.keyValue(r.table, e)
		}
	}
	if err := r.parser.Error(); err != nil {
		span := source.Span{}
		var parse *unstable.ParserError
		if errors.As(err, &parse) && len(parse.Highlight) > 0 {
			at := r.parser.Range(parse.Highlight)
			span = source.Span{Start: int(at.Offset), End: int(at.Offset + at.Length)}
		}
		r.report(Unreadable, span, fmt.Sprintf("The configuration can't be read from here on: %v.", err), "Settings after this place are not in force.")
	}
}

func (r *reader) header(e *unstable.Node) {
	name, span := r.key(e)
	r.table = name
	switch {
	case e.Kind == unstable.ArrayTable && name == "paths":
		r.config.Paths = append(r.config.Paths, ForPaths{})
		r.seen = without(r.seen, "paths.")
	case e.Kind == unstable.Table && (name == "severity" || name == "limits"):
	case name == "paths.severity" && len(r.config.Paths) > 0:
	case name == "paths":
		r.table = "?"
		r.report(NotFit, span, "`paths` is a list: write [[paths]] before each entry.")
	default:
		r.table = "?"
		r.unknown(span, name, []string{"severity", "limits", "paths"})
	}
}

// without drops the keys with a prefix, so that the next entry may set them.
func without(seen map[string]bool, prefix string) map[string]bool {
	kept := map[string]bool{}
	for k := range seen {
		if !strings.HasPrefix(k, prefix) {
			kept[k] = true
		}
	}
	return kept
}

func (r *reader) keyValue(table string, e *unstable.Node) {
	if table == "?" {
		return
	}
	name, span := r.key(e)
	if full := strings.TrimPrefix(table+"."+name, "."); r.seen[full] {
		r.report(NotFit, span, fmt.Sprintf("`%s` is set twice; the first one holds.", full))
		return
	} else {
		r.seen[full] = true
	}
	value := e.Value()
	if value.Kind == unstable.InlineTable && name == "severity" {
		inner := strings.TrimPrefix(table+".severity", ".")
		for it := value.Children(); it.Next(); {
			r.keyValue(inner, it.Node())
		}
		return
	}
	// A dotted key reaches into a table: severity.no-rival-declared = "off".
	if head, rest, dotted := strings.Cut(name, "."); dotted && table == "" && (head == "severity" || head == "limits") {
		table, name = head, rest
	}
	switch table {
	case "":
		r.top(name, span, value)
	case "severity":
		if r.config.Severity == nil {
			r.config.Severity = map[string]Setting{}
		}
		r.severity(r.config.Severity, name, span, value)
	case "limits":
		r.limit(name, span, value)
	case "paths":
		r.entry(&r.config.Paths[len(r.config.Paths)-1], name, span, value)
	case "paths.severity":
		p := &r.config.Paths[len(r.config.Paths)-1]
		if p.Severity == nil {
			p.Severity = map[string]Setting{}
		}
		r.severity(p.Severity, name, span, value)
	}
}

func (r *reader) top(name string, span source.Span, v *unstable.Node) {
	switch name {
	case "matters":
		r.config.Matters = r.share(name, span, v)
	case "strict":
		if b := r.yes(name, span, v); b != nil {
			r.config.Strict = *b
		}
	case "level":
		if set, ok := r.word(name, span, v, levels); ok {
			r.config.Level = set.Severity
		}
	default:
		r.unknown(span, name, topKeys)
	}
}

func (r *reader) entry(p *ForPaths, name string, span source.Span, v *unstable.Node) {
	switch name {
	case "match":
		if v.Kind == unstable.String {
			p.Match = []string{string(v.Data)}
			return
		}
		if v.Kind != unstable.Array {
			r.report(NotFit, span, "`match` takes a list of patterns, as in [\"archive/**\"].")
			return
		}
		for it := v.Children(); it.Next(); {
			if it.Node().Kind != unstable.String {
				r.report(NotFit, span, "`match` takes a list of patterns, as in [\"archive/**\"].")
				return
			}
			p.Match = append(p.Match, string(it.Node().Data))
		}
	case "skip":
		if b := r.yes(name, span, v); b != nil {
			p.Skip = *b
		}
	case "matters":
		p.Matters = r.share(name, span, v)
	case "strict":
		p.Strict = r.yes(name, span, v)
	default:
		r.unknown(span, name, pathKeys)
	}
}

func (r *reader) limit(name string, span source.Span, v *unstable.Node) {
	targets := map[string]*int{
		"table-megabytes": &r.config.Limits.TableMegabytes, "rows": &r.config.Limits.Rows, "seconds": &r.config.Limits.Seconds,
	}
	target := targets[name]
	if target == nil {
		r.unknown(span, name, limitKeys)
		return
	}
	n, err := strconv.Atoi(strings.ReplaceAll(string(v.Data), "_", ""))
	if v.Kind != unstable.Integer || err != nil || n < 1 || n > 1e9 {
		r.report(NotFit, span, fmt.Sprintf("`%s` takes a whole number from 1 to 1,000,000,000.", name))
		return
	}
	*target = n
}

func (r *reader) severity(into map[string]Setting, name string, span source.Span, v *unstable.Node) {
	known, ok := r.rules[name]
	if !ok {
		r.unknown(span, name, r.names)
		return
	}
	set, ok := r.word(name, span, v, append([]string{"off"}, levels...))
	if !ok {
		return
	}
	if known.Firm && (set.Off || set.Severity < known.Severity) {
		r.report(NotFit, span, fmt.Sprintf("`%s` is about existence: it can't be lowered or switched off for a repository.", name),
			"Override it in the model, with a reason; it then stays listed.")
		return
	}
	into[name] = set
}

func (r *reader) word(name string, span source.Span, v *unstable.Node, words []string) (Setting, bool) {
	text := string(v.Data)
	for _, w := range words {
		if v.Kind == unstable.String && w == text {
			if w == "off" {
				return Setting{Off: true}, true
			}
			for i, l := range levels {
				if l == w {
					return Setting{Severity: diag.Severity(i)}, true
				}
			}
		}
	}
	r.report(NotFit, span, fmt.Sprintf("`%s` takes one of %s%s", name, quoted(words), end(near.Suggest(text, words))))
	return Setting{}, false
}

func (r *reader) yes(name string, span source.Span, v *unstable.Node) *bool {
	if v.Kind != unstable.Bool {
		r.report(NotFit, span, fmt.Sprintf("`%s` takes true or false.", name))
		return nil
	}
	b := string(v.Data) == "true"
	return &b
}

// share reads "10%", 0.1 or "1/10" as an exact number between 0 and 1.
func (r *reader) share(name string, span source.Span, v *unstable.Node) *big.Rat {
	text, percent := strings.CutSuffix(strings.TrimSpace(string(v.Data)), "%")
	text = strings.TrimSpace(text)
	x, ok := new(big.Rat), len(text) > 0 && len(text) < 40 && !strings.ContainsAny(text, "eE")
	if ok {
		_, ok = x.SetString(text)
	}
	if ok && percent {
		x.Quo(x, big.NewRat(100, 1))
	}
	if !ok || x.Sign() <= 0 || x.Cmp(big.NewRat(1, 1)) > 0 {
		r.report(NotFit, span, fmt.Sprintf("`%s` takes a share of the interval's width, as in \"10%%\".", name))
		return nil
	}
	return x
}

// key is the dotted name of an expression and its place.
func (r *reader) key(e *unstable.Node) (string, source.Span) {
	var parts []string
	span := source.Span{Start: -1}
	for it := e.Key(); it.Next(); {
		n := it.Node()
		parts = append(parts, string(n.Data))
		at := source.Span{Start: int(n.Raw.Offset), End: int(n.Raw.Offset + n.Raw.Length)}
		if span.Start < 0 {
			span = at
		}
		span = span.Cover(at)
	}
	return strings.Join(parts, "."), span
}

func (r *reader) unknown(span source.Span, name string, known []string) {
	r.report(NotKnown, span, fmt.Sprintf("There is no setting `%s` here%s", name, end(near.Suggest(name, known))))
}

func (r *reader) report(rule string, span source.Span, headline string, notes ...string) {
	r.found = append(r.found, diag.Finding{Rule: rule, Severity: diag.Warn, Path: r.file.Path, Span: span, Headline: headline, Notes: notes})
}

func quoted(words []string) string {
	var list []string
	for _, w := range words {
		list = append(list, strconv.Quote(w))
	}
	return strings.Join(list[:len(list)-1], ", ") + " or " + list[len(list)-1]
}

func end(suggestion string) string {
	if suggestion == "" {
		return "."
	}
	return suggestion
}
