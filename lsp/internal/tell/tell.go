// Package tell writes what an editor shows about a place of a model: a few
// lines of Markdown, made from the facts.
package tell

import (
	"fmt"
	"strings"

	"wellposed/checks/existence"
	"wellposed/checks/facts"
	"wellposed/checks/wording"
	"wellposed/grammar"
	"wellposed/lsp/internal/under"
	"wellposed/parser/model"
)

// About is the Markdown for a thing, empty when there is nothing to say.
func About(f *facts.Facts, t under.Thing) string {
	switch {
	case t.Prior != nil:
		return prior(f, t.Prior)
	case t.Report != nil && t.Symbol == nil:
		return report(f, t.Report)
	}
	switch s := t.Symbol.(type) {
	case *model.Unknown:
		return unknown(f, s)
	case *model.Given:
		return given(s)
	case *model.Column:
		return column(s)
	case *model.Table:
		return table(s)
	case *model.Let:
		return fmt.Sprintf("**%s** = `%s`", s.Name, model.Text(s.Value))
	case *model.Report:
		return report(f, s)
	}
	return wordOf(t.Word)
}

// Plain strips the few Markdown marks that About writes.
func Plain(markdown string) string {
	return strings.NewReplacer("**", "", "`", "", "\\|", "|").Replace(markdown)
}

func prior(f *facts.Facts, p *model.Prior) string {
	var b strings.Builder
	fmt.Fprintf(&b, "**prior** `%s`\n", p.Text)
	if k := kernel(f, p); k != "" {
		fmt.Fprintf(&b, "\nAs a kernel: `∝ %s`\n", k)
	}
	a := analysisOf(f.Model, p)
	r := f.Existence(a)
	for _, u := range p.About {
		if v := r.Of(u); v != nil {
			b.WriteString("\n" + Verdict(v))
			break
		}
	}
	if p.Reason.Because != "" {
		fmt.Fprintf(&b, "\nReason: %s", p.Reason.Because)
		if p.Reason.From != "" {
			fmt.Fprintf(&b, " (%s)", p.Reason.From)
		}
		b.WriteString("\n")
	}
	return b.String()
}

// analysisOf is the analysis in which a prior is in force.
func analysisOf(m *model.Model, p *model.Prior) *model.Analysis {
	declared := m.Declared()
	for _, r := range m.Rivals {
		for _, q := range r.Priors {
			if p == q {
				return wording.Under(declared, r)
			}
		}
	}
	return declared
}

// Verdict is a verdict in three lines: the answer with how it was found, the
// claim, and the conditions with the numbers put in.
func Verdict(v *existence.Verdict) string {
	var b strings.Builder
	switch v.Status {
	case existence.Exists:
		fmt.Fprintf(&b, "Posterior exists: **%s**.", v.How)
	case existence.DoesNotExist:
		fmt.Fprintf(&b, "**No posterior**: %s.", v.How)
		if where := wording.Escapes(v); where != "" {
			fmt.Fprintf(&b, " Mass escapes to %s.", where)
		}
	default:
		b.WriteString("Existence **not decided**.")
	}
	b.WriteString("\n")
	if v.Claim != "" {
		fmt.Fprintf(&b, "\n%s\n", v.Claim)
	}
	for _, c := range v.Conditions {
		mark := "holds"
		if !c.Holds {
			mark = "fails"
		}
		fmt.Fprintf(&b, "\n- `%s`: `%s` %s", c.Text, c.Filled, mark)
	}
	if len(v.Conditions) > 0 {
		b.WriteString("\n")
	}
	if v.Source != "" {
		fmt.Fprintf(&b, "\nSource: %s\n", v.Source)
	}
	return b.String()
}

func unknown(f *facts.Facts, u *model.Unknown) string {
	var b strings.Builder
	fmt.Fprintf(&b, "**unknown** `%s` : %s", u.Name, u.Kind.Name)
	if u.Label != "" {
		fmt.Fprintf(&b, " — %s", u.Label)
	}
	fmt.Fprintf(&b, "\n\n%s\n", u.Kind.Doc)
	if n := u.Components(); n > 1 {
		fmt.Fprintf(&b, "\n%d components: %s\n", n, some(u.Levels))
	}
	if u.Population != nil {
		fmt.Fprintf(&b, "\nVaries as `%s`\n", f.Model.File.Slice(u.Population.Dist.Span))
	} else if p := f.Model.Declared().PriorOf(u); p != nil {
		fmt.Fprintf(&b, "\nPrior: `%s`\n", p.Text)
	} else {
		b.WriteString("\nNo prior.\n")
	}
	if v := f.Existence(f.Model.Declared()).Of(u); v != nil {
		b.WriteString("\n" + Verdict(v))
	}
	return b.String()
}

func given(g *model.Given) string {
	switch {
	case g.Awaited:
		return fmt.Sprintf("**given** `%s`: awaited", g.Name)
	case g.Value != nil:
		return fmt.Sprintf("**given** `%s` = %s", g.Name, g.Value.RatString())
	case g.Vector != nil:
		return column(g.Vector)
	}
	return fmt.Sprintf("**given** `%s`", g.Name)
}

func table(t *model.Table) string {
	var names []string
	for _, c := range t.Columns {
		names = append(names, c.Name)
	}
	from := "in place"
	if t.Path != "" {
		from = "from `" + t.Path + "`"
	}
	return fmt.Sprintf("**table** `%s` %s: %d rows\n\n%s", t.Name, from, t.Rows, some(names))
}

func report(f *facts.Facts, r *model.Report) string {
	return fmt.Sprintf("**report** `%s` = `%s`", r.Name, model.Text(r.Value))
}

// some lists names, the first dozen when there are many.
func some(names []string) string {
	if len(names) > 12 {
		return strings.Join(names[:12], ", ") + fmt.Sprintf(", … (%d in all)", len(names))
	}
	return strings.Join(names, ", ")
}

// wordOf explains a word of the language.
func wordOf(word string) string {
	if d := grammar.FindDistribution(word); d != nil {
		return distribution(d)
	}
	if k := grammar.FindKind(word); k != nil {
		support := ""
		if k.Low != "" {
			support = fmt.Sprintf(", between %s and %s", k.Low, k.High)
		}
		return fmt.Sprintf("**%s** — %s%s", k.Name, k.Doc, support)
	}
	if fn := grammar.FindFunction(word); fn != nil {
		return fmt.Sprintf("**%s** — %s", fn.Name, fn.Doc)
	}
	return ""
}

func distribution(d *grammar.Distribution) string {
	var b strings.Builder
	fmt.Fprintf(&b, "**%s** — %s\n\nOn %s.\n", d.Name, d.Doc, d.On)
	for _, form := range d.Forms {
		var args []string
		for _, p := range form {
			text := p.Label
			if p.Named {
				text += " = …"
			}
			if p.Optional {
				text = "[" + text + "]"
			}
			if p.Variadic {
				text += ", …"
			}
			args = append(args, text)
		}
		fmt.Fprintf(&b, "\n- `%s(%s)`", d.Name, strings.Join(args, ", "))
	}
	b.WriteString("\n")
	return b.String()
}
