package evidence

import (
	"crypto/sha256"
	"encoding/hex"
	"errors"
	"fmt"
	"math"
	"math/big"
	"path"
	"path/filepath"
	"strings"

	"wellposed/checks/existence"
	"wellposed/checks/facts"
	"wellposed/checks/posterior"
	"wellposed/checks/wording"
	"wellposed/parser/diag"
	"wellposed/parser/model"
	"wellposed/parser/source"
)

// Options are what the page shows beside the model.
type Options struct {
	// Version of the program, Date as it is to be printed; both may be empty.
	Version, Date string
	// Findings of the rules.
	Findings []diag.Finding
}

// Collect gathers everything for a model. It stops early when the context of the
// facts ends; what was not reached is said to be so.
func Collect(f *facts.Facts, o Options) *Evidence {
	m := f.Model
	c := &collector{f: f, m: m, e: &Evidence{
		Schema: Schema, Title: m.Title, Notes: m.Notes, Version: o.Version, Date: o.Date,
		File: path.Base(filepath.ToSlash(m.File.Path)), FileHash: hash(m.File.Text), Matters: percentage(m.Matters),
		Cautions: cautions, Checklist: checklist,
	}}
	if c.e.Title == "" {
		c.e.Title = c.e.File
	}
	c.analyses = append([]*model.Analysis{m.Declared()}, f.Rivals()...)
	c.model()
	c.priors()
	c.verdicts()
	c.ranges()
	c.reports()
	c.conclusions()
	c.derived()
	c.design()
	c.promises()
	c.findings(o.Findings)
	c.e.SelfTest = SelfTest(f.Context())
	c.methods()
	c.answer()
	return c.e
}

type collector struct {
	f        *facts.Facts
	m        *model.Model
	e        *Evidence
	analyses []*model.Analysis
	// methodsSeen keeps the methods met, in order.
	methodsSeen []string
}

func hash(text string) string {
	sum := sha256.Sum256([]byte(strings.ReplaceAll(text, "\r\n", "\n")))
	return hex.EncodeToString(sum[:])
}

func percentage(share *big.Rat) string {
	return level(share)
}

// level prints a level: 95 %.
func level(share *big.Rat) string {
	x := new(big.Rat).Mul(share, big.NewRat(100, 1))
	if x.IsInt() {
		return x.Num().String() + " %"
	}
	return strings.TrimRight(x.FloatString(4), "0") + " %"
}

// number takes a number over, with its method.
func (c *collector) number(n posterior.Number) Number {
	if math.IsNaN(n.Value) {
		return Number{Text: "–"}
	}
	out := Number{Text: n.Text(), Error: n.Error, How: string(n.How), Method: n.Method}
	if !math.IsInf(n.Value, 0) {
		v := n.Value
		out.Value = &v
	}
	if n.Method != "" {
		seen := false
		for _, s := range c.methodsSeen {
			seen = seen || s == n.Method
		}
		if !seen {
			c.methodsSeen = append(c.methodsSeen, n.Method)
		}
	}
	return out
}

func figure(value, bound float64, how diag.How, method string) Number {
	v := value
	return Number{Text: diag.Figure(value, bound, 3), Value: &v, Error: bound, How: string(how), Method: method}
}

func (c *collector) model() {
	for _, u := range c.m.Unknowns {
		out := Unknown{Name: u.Name, Label: u.Label, Components: u.Components(), Support: support(u.Support)}
		if u.Kind != nil {
			out.Kind = u.Kind.Name
		}
		c.e.Unknowns = append(c.e.Unknowns, out)
	}
	for _, l := range c.m.Lets {
		c.e.Formulas = append(c.e.Formulas, Formula{l.Name + " is defined by", l.Name + " = " + model.Text(l.Value)})
	}
	for _, p := range c.m.Populations {
		c.e.Formulas = append(c.e.Formulas, Formula{
			fmt.Sprintf("%s varies between its %d levels (%s)", p.Unknown.Name, p.Unknown.Components(), p.Dist.Spec.Doc),
			p.Unknown.Name + " as " + model.DistText(p.Dist)})
	}
	for _, o := range c.m.Observations {
		var what []string
		for _, e := range o.What {
			what = append(what, model.Text(e))
		}
		name := strings.Join(what, ", ")
		switch o.Reading {
		case model.Between:
			name = "between(" + model.Text(o.Low) + ", " + model.Text(o.High) + ")"
		case model.Summary:
			name = "summary(n = " + model.Text(o.N) + ", mean = " + model.Text(o.Mean) + ", sd = " + model.Text(o.SD) + ")"
		}
		words := "The data " + name + " are"
		if o.Awaited {
			words = "The awaited data " + name + " will be"
		}
		formula := name + " as " + model.DistText(o.Dist)
		if o.Right != nil {
			formula += ", right-censored where " + model.Text(o.Right)
		}
		if o.Left != nil {
			formula += ", left-censored where " + model.Text(o.Left)
		}
		c.e.Formulas = append(c.e.Formulas, Formula{words + " a draw (" + o.Dist.Spec.Doc + ")", formula})
		c.e.Data = append(c.e.Data, Datum{name, wording.Data(o)})
	}
	for _, t := range c.m.Tables {
		out := Table{Name: t.Name, Path: path.Base(filepath.ToSlash(t.Path)), Hash: t.Hash, Rows: t.Rows}
		if t.Path == "" {
			out.Path = ""
		}
		for _, col := range t.Columns {
			out.Columns = append(out.Columns, Column{col.Name, columnSummary(col)})
		}
		c.e.Tables = append(c.e.Tables, out)
	}
}

func support(b model.Bounds) string {
	end := func(r *big.Rat, infinite string) string {
		if r == nil {
			return infinite
		}
		return model.Text(&model.Number{Value: r})
	}
	low, high := "(", ")"
	if b.Low != nil && !b.LowOpen {
		low = "["
	}
	if b.High != nil && !b.HighOpen {
		high = "]"
	}
	return low + end(b.Low, "−∞") + ", " + end(b.High, "∞") + high
}

func columnSummary(col *model.Column) string {
	if col.Awaited {
		return "awaited"
	}
	missing, zeros, numbers := 0, 0, 0
	low, high := math.Inf(1), math.Inf(-1)
	distinct := map[string]bool{}
	for i, text := range col.Texts {
		if col.Missing != nil && col.Missing[i] {
			missing++
			continue
		}
		distinct[text] = true
		if col.Numeric {
			x := col.Floats[i]
			numbers++
			low, high = math.Min(low, x), math.Max(high, x)
			if x == 0 {
				zeros++
			}
		}
	}
	var parts []string
	if numbers > 0 {
		parts = append(parts, fmt.Sprintf("%d numbers from %s to %s", numbers, diag.Figure(low, 0, 4), diag.Figure(high, 0, 4)))
		if zeros > 0 {
			parts = append(parts, fmt.Sprintf("%d zero", zeros))
		}
	} else {
		parts = append(parts, fmt.Sprintf("%d levels", len(distinct)))
	}
	if missing > 0 {
		parts = append(parts, fmt.Sprintf("%d missing", missing))
	}
	return strings.Join(parts, ", ")
}

// about is what an analysis changes against the declared one.
func (c *collector) about(a *model.Analysis) string {
	declared := map[*model.Prior]bool{}
	for _, p := range c.m.Priors {
		declared[p] = true
	}
	var texts []string
	for _, p := range a.Use {
		if a.Name == "declared" || !declared[p] {
			texts = append(texts, p.Text)
		}
	}
	return strings.Join(texts, "; ")
}

func (c *collector) priors() {
	seen := map[*model.Prior]bool{}
	for i, a := range c.analyses {
		for _, p := range a.Use {
			if seen[p] {
				continue
			}
			seen[p] = true
			out := Prior{Analysis: a.Name, Text: p.Text, Because: p.Reason.Because, From: p.Reason.From, Proper: c.proper(a, p)}
			if p.Form == model.ByRule {
				if d := c.f.Derived(a, p); d.Err == nil {
					out.Meaning = d.Name
				} else {
					out.Meaning = d.Err.Error()
				}
			}
			if i > 0 && out.Because == "" {
				for _, r := range c.m.Rivals {
					for _, q := range r.Priors {
						if q == p {
							out.Because, out.From = r.Reason.Because, r.Reason.From
						}
					}
				}
				for _, u := range c.m.Standard {
					for _, s := range c.f.Standard(u) {
						if s.Prior == p {
							out.Because, out.From = s.Label+": "+s.Note, s.Source
						}
					}
				}
			}
			c.e.Priors = append(c.e.Priors, out)
		}
	}
}

// proper says whether a prior has a law of its own.
func (c *collector) proper(a *model.Analysis, p *model.Prior) string {
	proper := "proper"
	for _, u := range p.About {
		for k := range u.Components() {
			if k > 0 {
				break
			}
			e := &model.UnknownRef{Unknown: u, Which: model.Fixed, Component: k}
			if u.Scalar() {
				e = &model.UnknownRef{Unknown: u}
			}
			if u.Relative == k && !u.Scalar() {
				continue
			}
			switch l := c.f.PriorLaw(a, e); {
			case errors.Is(l.Err, posterior.ErrImproper), errors.Is(l.Err, posterior.ErrNoPosterior):
				return "improper"
			case l.Err != nil:
				proper = "not determined"
			}
		}
	}
	return proper
}

func (c *collector) verdicts() {
	for _, a := range c.analyses {
		for _, v := range c.f.Existence(a).Verdicts {
			out := Verdict{Analysis: a.Name, Unknowns: []string{}, Status: string(v.Status), How: string(v.How), Claim: v.Claim, Theorem: v.Theorem, Source: v.Source, Repairs: v.Repairs}
			for _, u := range v.Unknowns {
				out.Unknowns = append(out.Unknowns, u.Name)
			}
			for _, k := range v.Conditions {
				out.Conditions = append(out.Conditions, Condition{k.Text, k.Filled, k.Holds})
			}
			c.e.Verdicts = append(c.e.Verdicts, out)
		}
	}
}

func (c *collector) derived() {
	add := func(a *model.Analysis, d facts.Derivation, rule, about string, declared bool, use *model.Analysis) {
		out := Derived{Rule: rule, About: about, Declared: declared}
		if d.Err != nil {
			out.Trouble, out.Verdict = d.Err.Error(), "not derived"
		} else {
			out.Name, out.Steps, out.Assumed, out.Source = d.Name, d.Steps, d.Assumed, d.Source
			status, how := c.f.Existence(use).Overall()
			out.Verdict = string(status)
			if status != existence.NotDecided {
				out.Verdict += " (" + string(how) + ")"
			}
		}
		c.e.Derived = append(c.e.Derived, out)
	}
	done := map[string]bool{}
	for _, a := range c.analyses {
		for _, p := range a.Use {
			if p.Form == model.ByRule && !done[p.Text] {
				done[p.Text] = true
				add(a, c.f.Derived(a, p), string(p.Rule.Name), targets(p), true, a)
			}
		}
	}
	if len(done) > 0 || c.f.Context().Err() != nil {
		return
	}
	// Nothing is stated by a rule: Jeffreys' rule for each single unknown.
	declared := c.m.Declared()
	for _, u := range c.m.Unknowns {
		if !u.Scalar() || u.Population != nil || declared.PriorOf(u) == nil || len(declared.PriorOf(u).About) != 1 || u.Kind == nil || u.Kind.Discrete {
			continue
		}
		d := c.f.DerivedBy(declared, &model.RulePrior{Name: model.Jeffreys}, []*model.Unknown{u})
		if d.Err != nil || d.Prior == nil {
			add(declared, d, "jeffreys", u.Name, false, declared)
			continue
		}
		add(declared, d, "jeffreys", u.Name, false, declared.With("jeffreys for "+u.Name, d.Prior))
	}
}

func targets(p *model.Prior) string {
	var names []string
	for _, u := range p.About {
		names = append(names, u.Name)
	}
	return strings.Join(names, ", ")
}

func (c *collector) promises() {
	for _, r := range c.f.Promises() {
		c.e.Promises = append(c.e.Promises, Promise{r.Text, r.Outcome, r.Distance, r.Why})
	}
	for _, a := range c.m.Acceptances {
		kind := "accepted"
		if a.Override {
			kind = "overridden"
		}
		c.e.Acceptances = append(c.e.Acceptances, Acceptance{kind, a.Rule, a.For, a.Because, a.By, a.Until})
	}
}

func (c *collector) findings(list []diag.Finding) {
	c.e.Findings = []Finding{}
	for _, d := range list {
		line, _ := c.m.File.Locate(d.Span.Start, source.Characters)
		c.e.Findings = append(c.e.Findings, Finding{d.Rule, d.Severity.String(), line + 1, d.Headline, d.Notes, d.Overridden})
	}
}

func (c *collector) methods() {
	c.e.Methods = append(c.e.Methods,
		"Existence is decided by analysis of the form with exact rational numbers, read as the text of the file and of the tables writes them; never by a numerical integral.",
		"Every printed number has only the digits that its error bound supports.")
	for _, s := range c.methodsSeen {
		c.e.Methods = append(c.e.Methods, "Used for numbers on this page: "+s+".")
	}
	if c.e.Design != nil && c.e.Design.Trouble == "" {
		c.e.Methods = append(c.e.Methods, "Outcomes of counts are enumerated, not simulated. Long-run coverage is evaluated on both sides of every jump; between jumps it has its least value at an end. The average weighs every value of the range alike and is integrated in closed form.")
	}
	if c.f.Context().Err() != nil {
		c.e.Methods = append(c.e.Methods, "The time allowed was over before everything was computed; what is missing is marked.")
	}
}
