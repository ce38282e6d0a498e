package page

import (
	"fmt"
	"strings"

	"wellposed/checks/evidence"
)

// blocks lays the evidence out, part by part.
func blocks(e *evidence.Evidence) []block {
	var out []block
	add := func(b ...block) { out = append(out, b...) }

	add(heading{"1", "Answer"})
	kind := "lead"
	if e.Alarm {
		kind = "alarm"
	}
	add(para{strings.Join(e.Answer, " "), kind})
	for _, n := range e.Notes {
		add(para{n, ""})
	}
	add(head(e))

	add(heading{"2", "Model"})
	unknowns := table{caption: "What is unknown", head: []string{"Unknown", "Meaning", "Kind", "Range"}}
	for _, u := range e.Unknowns {
		kind := u.Kind
		if u.Components > 1 {
			kind += fmt.Sprintf(", %d components", u.Components)
		}
		unknowns.rows = append(unknowns.rows, []cell{th(u.Name), td(orDash(u.Label)), td(kind), td(u.Support)})
	}
	add(unknowns)
	formulas := table{caption: "How the data arise", head: []string{"In words", "As written"}}
	for _, f := range e.Formulas {
		formulas.rows = append(formulas.rows, []cell{td(f.Words), code(f.Formula)})
	}
	add(formulas)

	add(heading{"3", "Data, in summary"})
	data := table{caption: "What was observed", head: []string{"Data", "Content"}}
	for _, d := range e.Data {
		data.rows = append(data.rows, []cell{{text: d.What, header: true, code: true}, td(d.Summary)})
	}
	add(data)
	for _, t := range e.Tables {
		tb := table{caption: fmt.Sprintf("Table %s, %d rows", t.Name, t.Rows), head: []string{"Column", "Content"}}
		for _, c := range t.Columns {
			tb.rows = append(tb.rows, []cell{th(c.Name), td(c.Summary)})
		}
		add(tb)
		if t.Hash != "" {
			add(para{"SHA-256 of the table: " + t.Hash, "small"})
		}
	}
	add(para{"No row of data is printed on this page.", "small"})
	out = append(out, priors(e)...)
	out = append(out, existence(e)...)
	out = append(out, reports(e)...)
	out = append(out, derived(e)...)
	out = append(out, design(e)...)
	out = append(out, promises(e)...)

	add(heading{"10", "Methods and error bounds"}, bullets{e.Methods})
	add(heading{"11", "Self-test"}, para{"Published numbers, computed again when this page was made.", ""})
	self := table{caption: "Published examples", head: []string{"Example", "Source", "Published", "Computed", "Agrees"}}
	for _, x := range e.SelfTest {
		c := cell{text: "yes", mark: "good"}
		if !x.Agrees {
			c = cell{text: "no", mark: "bad"}
		}
		self.rows = append(self.rows, []cell{th(x.Name), td(x.Source), num(x.Published), num(x.Computed), c})
	}
	add(self)
	add(heading{"12", "Checklist"}, para{"Items that reviewers ask for, in our words, and where this page answers them. The lists themselves take precedence.", ""})
	check := table{caption: "Checklist", head: []string{"List", "Item", "Where"}}
	last := ""
	for _, i := range e.Checklist {
		if i.List != "" {
			last = i.List
		}
		check.rows = append(check.rows, []cell{td(last), th(i.Item), td(i.Where)})
	}
	add(check)
	add(heading{"13", "Cautions"}, bullets{e.Cautions})
	add(signatures{[]string{"Analyst", "Reviewer"}})
	return out
}

// head is the identity of the page.
func head(e *evidence.Evidence) block {
	t := table{caption: "What this page is about", head: []string{"Item", "Value"}}
	row := func(name, value string, mono bool) {
		if value != "" {
			t.rows = append(t.rows, []cell{th(name), {text: value, code: mono}})
		}
	}
	row("Model file", e.File, true)
	row("SHA-256 of the model file", e.FileHash, true)
	row("Program", strings.TrimSpace("wellposed "+e.Version), false)
	row("Date", e.Date, false)
	row("A shift matters from", e.Matters+" of the width of the declared interval", false)
	return t
}

func priors(e *evidence.Evidence) []block {
	out := []block{heading{"4", "Priors"}}
	t := table{caption: "Priors, their reasons and sources", head: []string{"Analysis", "Prior", "Proper", "Reason", "Source"}}
	for _, p := range e.Priors {
		text := p.Text
		if p.Meaning != "" && p.Meaning != p.Text {
			text += " = " + p.Meaning
		}
		t.rows = append(t.rows, []cell{th(p.Analysis), code(text), td(p.Proper), td(orDash(p.Because)), td(orDash(p.From))})
	}
	out = append(out, t)
	for _, r := range e.Reports {
		if f := sketches(r); f != nil {
			out = append(out, f)
		}
	}
	return out
}

func existence(e *evidence.Evidence) []block {
	out := []block{heading{"5", "Does the posterior exist?"}}
	t := table{caption: "Verdicts", head: []string{"Analysis", "Unknowns", "Posterior", "How", "Condition, with the numbers put in", "Theorem and source"}}
	for _, v := range e.Verdicts {
		mark := map[string]string{"exists": "good", "does not exist": "bad"}[v.Status]
		if mark == "" {
			mark = "open"
		}
		var conditions []string
		for _, c := range v.Conditions {
			word := "holds"
			if !c.Holds {
				word = "fails"
			}
			conditions = append(conditions, fmt.Sprintf("%s: %s %s", c.Text, c.Filled, word))
		}
		said := strings.Join(conditions, "; ")
		if said == "" {
			said = v.Claim
		}
		source := v.Theorem
		if v.Source != "" && v.Source != v.Theorem {
			source = strings.TrimPrefix(source+"; "+v.Source, "; ")
		}
		how := v.How
		if how == v.Status {
			how = "–"
		}
		t.rows = append(t.rows, []cell{th(v.Analysis), td(strings.Join(v.Unknowns, ", ")), {text: v.Status, mark: mark}, td(how), td(said), td(orDash(source))})
	}
	out = append(out, t)
	for _, v := range e.Verdicts {
		if v.Status == "does not exist" && v.Analysis == "declared" {
			if v.Claim != "" {
				out = append(out, para{"Declared: " + v.Claim + ".", ""})
			}
			if len(v.Repairs) > 0 {
				out = append(out, para{"It goes away with " + strings.Join(v.Repairs, "; or ") + ".", ""})
			}
		}
	}
	for _, r := range e.Ranges {
		out = append(out, subheading{"A wider and wider range: " + r.Prior}, widening(r))
		w := table{caption: "The answer follows the range", head: []string{"Proper prior in its place", r.Quantity}}
		for _, s := range r.Steps {
			w.rows = append(w.rows, []cell{{text: s.Cut, header: true, code: true}, num(s.Number.Text)})
		}
		out = append(out, w, para{"Cutting an improper prior off does not repair it: the answer is the range that was chosen.", ""})
	}
	return out
}

func reports(e *evidence.Evidence) []block {
	out := []block{heading{"6", "Rivals and reports"}}
	if len(e.Reports) == 0 {
		return append(out, para{"The file reports nothing.", ""})
	}
	for _, r := range e.Reports {
		name := r.Name
		if r.Formula != r.Name {
			name += " = " + r.Formula
		}
		out = append(out, subheading{name + ", " + r.Asked})
		if f := forest(r); f != nil {
			out = append(out, f)
		}
		t := table{caption: "The report under every prior", head: []string{"Analysis", "Priors", "Median", "Interval", "Law", "Shift, in widths"}}
		for _, row := range r.Rows {
			interval := row.None
			var spans []string
			for _, s := range row.Spans {
				switch s.Kind {
				case "upper":
					spans = append(spans, "up to "+s.High.Text+" ("+s.Level+")")
				case "lower":
					spans = append(spans, "from "+s.Low.Text+" ("+s.Level+")")
				default:
					spans = append(spans, s.Low.Text+" to "+s.High.Text+" ("+s.Kind+" "+s.Level+")")
				}
			}
			c := td(interval)
			if len(spans) > 0 {
				c = td(strings.Join(spans, "; "))
			} else if row.None == "no posterior" {
				c.mark = "bad"
			}
			t.rows = append(t.rows, []cell{th(row.Analysis), code(row.Priors), num(row.Median.Text), c, td(orDash(row.Law)), num(row.Shift.Text)})
		}
		out = append(out, t)
	}
	for _, k := range e.Conclusions {
		t := table{caption: fmt.Sprintf("Conclusion “%s”: %s", k.Name, k.Rule), head: []string{"Analysis", "Posterior probability", "Drawn"}}
		for _, row := range k.Rows {
			c := td(row.Drawn)
			if row.None != "" {
				c = cell{text: row.None, mark: "open"}
			} else if row.Drawn == "yes" {
				c.mark = "good"
			} else {
				c.mark = "bad"
			}
			t.rows = append(t.rows, []cell{th(row.Analysis), num(row.Chance.Text), c})
		}
		out = append(out, t)
		if k.Flips {
			out = append(out, para{fmt.Sprintf("The conclusion “%s” is drawn under some of these priors and not under others.", k.Name), "alarm"})
		}
	}
	return out
}

func derived(e *evidence.Evidence) []block {
	out := []block{heading{"7", "Defaults derived by rule"}}
	if len(e.Derived) == 0 {
		return append(out, para{"No prior was derived for this model.", ""})
	}
	t := table{caption: "Derived defaults", head: []string{"Rule", "For", "Prior", "Derivation", "Posterior with it", "Source"}}
	for _, d := range e.Derived {
		rule := d.Rule
		if !d.Declared {
			rule += " (not declared)"
		}
		lines := strings.Join(d.Steps, "; ")
		if len(d.Assumed) > 0 {
			lines += "; taking it that " + strings.Join(d.Assumed, "; ")
		}
		if d.Trouble != "" {
			lines = d.Trouble
		}
		t.rows = append(t.rows, []cell{th(rule), td(d.About), code(orDash(d.Name)), td(orDash(lines)), td(d.Verdict), td(orDash(d.Source))})
	}
	return append(out, t)
}

func promises(e *evidence.Evidence) []block {
	out := []block{heading{"9", "Promises, acceptances, findings"}}
	if len(e.Promises) > 0 {
		t := table{caption: "Promises", head: []string{"Promise", "Outcome", "Distance to the limit", "Remark"}}
		for _, p := range e.Promises {
			mark := map[string]string{"kept": "good", "broken": "bad", "not shown": "open"}[p.Outcome]
			t.rows = append(t.rows, []cell{th(p.Text), {text: p.Outcome, mark: mark}, td(orDash(p.Distance)), td(orDash(p.Why))})
		}
		out = append(out, t)
	} else {
		out = append(out, para{"The file makes no promise.", ""})
	}
	if len(e.Acceptances) > 0 {
		t := table{caption: "Acceptances and overrides", head: []string{"Kind", "Finding", "For", "Reason", "By", "Until"}}
		for _, a := range e.Acceptances {
			t.rows = append(t.rows, []cell{td(a.Kind), th(a.Rule), td(orDash(a.For)), td(orDash(a.Because)), td(orDash(a.By)), td(orDash(a.Until))})
		}
		out = append(out, t)
	} else {
		out = append(out, para{"Nothing was accepted or overridden.", ""})
	}
	if len(e.Findings) == 0 {
		return append(out, para{"The rules have nothing to say.", ""})
	}
	t := table{caption: "Findings of the rules", head: []string{"Line", "Rule", "Severity", "What happens"}}
	for _, f := range e.Findings {
		said := f.Headline
		if f.Overridden != "" {
			said += " Overridden because “" + f.Overridden + "”."
		}
		t.rows = append(t.rows, []cell{num(fmt.Sprint(f.Line)), th(f.Rule), td(f.Severity), td(said)})
	}
	return append(out, t)
}
