package parser_test

import (
	"encoding/json"
	"reflect"
	"strings"
	"testing"

	"wellposed/grammar"
	"wellposed/parser"
	"wellposed/parser/source"
)

// shape is a tree as text, without places: what a formatter must keep.
func shape(t testing.TB, tree *grammar.File) string {
	t.Helper()
	var b strings.Builder
	for _, l := range tree.Lines {
		for _, c := range l.Comments {
			b.WriteString(strings.TrimRight(c.Text, " \t") + "\n")
		}
		if l.Broken {
			b.WriteString("broken " + strings.NewReplacer("\r\n", "\n", "\r", "\n").Replace(l.Text) + "\n")
			continue
		}
		b.WriteString(outline(t, l.Statement) + "\n")
	}
	return b.String()
}

// outline is a node as text, without places.
func outline(t testing.TB, node any) string {
	t.Helper()
	text, err := json.Marshal(clean(reflect.ValueOf(node)))
	if err != nil {
		t.Fatal(err)
	}
	return string(text)
}

func clean(v reflect.Value) any {
	switch v.Kind() {
	case reflect.Invalid: // a comment that stands alone
		return nil
	case reflect.Pointer, reflect.Interface:
		if v.IsNil() {
			return nil
		}
		return clean(v.Elem())
	case reflect.Slice:
		var out []any
		for i := range v.Len() {
			out = append(out, clean(v.Index(i)))
		}
		return out
	case reflect.Struct:
		out := map[string]any{"": v.Type().Name()}
		for i := range v.NumField() {
			f := v.Type().Field(i)
			if f.Type == reflect.TypeFor[grammar.Mark]() {
				continue
			}
			out[f.Name] = clean(v.Field(i))
			if v.Type() == reflect.TypeFor[grammar.Dist]() && f.Name == "Name" {
				out[f.Name] = strings.ToLower(v.Field(i).String())
			}
			if v.Type() == reflect.TypeFor[grammar.PriorRule]() && f.Name == "Jeffreys" {
				out[f.Name] = v.Field(i).Bool()
			}
		}
		return out
	}
	return v.Interface()
}

func parse(text string) (*grammar.File, []string) {
	file := source.NewFile("m.bayes", text)
	tree, findings := parser.Parse(file)
	var out []string
	for _, f := range findings {
		out = append(out, f.Rule+" `"+file.Slice(f.Span)+"` "+f.Headline)
	}
	return tree, out
}
