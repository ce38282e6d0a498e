package evidence

import (
	"fmt"
	"strings"

	"wellposed/checks/existence"
	"wellposed/checks/wording"
	"wellposed/parser/model"
)

// answer writes the paragraph at the head.
func (c *collector) answer() {
	say := func(format string, args ...any) { c.e.Answer = append(c.e.Answer, fmt.Sprintf(format, args...)) }
	c.sayExistence(say)
	for _, r := range c.e.Reports {
		c.sayReport(say, r)
	}
	for _, k := range c.e.Conclusions {
		yes, answered := 0, 0
		for _, row := range k.Rows {
			if row.Drawn == "yes" {
				yes++
			}
			if row.Drawn != "–" {
				answered++
			}
		}
		switch {
		case answered == 0:
		case k.Flips:
			say("The conclusion “%s” hangs on the prior: it is drawn under %d of the %d analyses that have an answer.", k.Name, yes, answered)
			c.e.Alarm = true
		case yes == 0:
			say("The conclusion “%s” is not drawn under %s.", k.Name, everyOf(answered))
		default:
			say("The conclusion “%s” is drawn under %s.", k.Name, everyOf(answered))
		}
	}
	kept := 0
	for _, p := range c.e.Promises {
		if p.Outcome == "kept" {
			kept++
		}
	}
	if n := len(c.e.Promises); n > 0 {
		if kept == n {
			say("All %d promises of the file are kept.", n)
		} else {
			say("Of %d promises in the file, %d %s kept; the rest are broken or not shown.", n, kept, isAre(kept))
			c.e.Alarm = true
		}
	}
	for _, a := range c.e.Acceptances {
		if a.Kind == "overridden" {
			say("Overridden: %s%s, because “%s”.", a.Rule, forTarget(a.For), a.Because)
			c.e.Alarm = true
		}
	}
}

func forTarget(s string) string {
	if s == "" {
		return ""
	}
	return " for " + s
}

func isAre(n int) string {
	if n == 1 {
		return "is"
	}
	return "are"
}

func everyOf(n int) string {
	if n == 1 {
		return "the one analysis that has an answer"
	}
	return fmt.Sprintf("all %d analyses that have an answer", n)
}

func (c *collector) sayExistence(say func(string, ...any)) {
	declared := c.m.Declared()
	result := c.f.Existence(declared)
	if len(result.Verdicts) == 0 {
		return
	}
	status, how := result.Overall()
	switch {
	case status == existence.DoesNotExist:
		c.e.Alarm = true
		var names []string
		claim := ""
		for _, v := range result.Verdicts {
			if v.Status != existence.DoesNotExist {
				continue
			}
			for _, u := range v.Unknowns {
				names = append(names, u.Name)
			}
			if claim == "" {
				claim = v.Claim
			}
		}
		say("Under the declared priors there is no posterior for %s (%s).", wording.List(names), how)
		if claim != "" {
			say("%s", wording.Sentence(claim))
		}
	case status == existence.NotDecided && c.waits():
		say("The data are awaited, so whether the posterior exists depends on what they will be.")
		if d := c.e.Design; d != nil && len(d.Breaks) > 0 && d.Breaks[0].Text == "none" {
			say("Every outcome of the plan leaves a posterior under the declared priors.")
		} else if d != nil && len(d.Breaks) > 0 {
			c.e.Alarm = true
			b := d.Breaks[0]
			say("No posterior under the declared priors with: %s.", b.Text)
			for i, n := range b.Chances {
				if i < 3 {
					say("That has probability %s when %s.", n.Text, b.Plans[i])
				}
			}
		}
	case status == existence.NotDecided:
		c.e.Alarm = true
		say("Whether the posterior exists under the declared priors is not decided.")
	default:
		say("Under the declared priors the posterior exists (%s).", how)
	}
	without, open := 0, 0
	for _, a := range c.analyses[1:] {
		switch s, _ := c.f.Existence(a).Overall(); {
		case s == existence.DoesNotExist:
			without++
		case s == existence.NotDecided && !c.waits():
			open++
		}
	}
	if without > 0 {
		say("It does not exist under %d of the %d rivals.", without, len(c.analyses)-1)
	}
	if open > 0 {
		say("It is not decided under %d of the %d rivals.", open, len(c.analyses)-1)
	}
}

// sayReport says how far the declared defaults agree on a report.
func (c *collector) sayReport(say func(string, ...any), r Report) {
	var low, high, first *Row
	end := func(row *Row) *Number {
		if len(row.Spans) == 0 {
			return nil
		}
		if row.Spans[0].Kind == string(model.Lower) {
			return &row.Spans[0].Low
		}
		return &row.Spans[0].High
	}
	count := 0
	for i := range r.Rows {
		row := &r.Rows[i]
		n := end(row)
		if n == nil || n.Value == nil {
			continue
		}
		count++
		if first == nil {
			first = row
		}
		if low == nil || *n.Value < *end(low).Value {
			low = row
		}
		if high == nil || *n.Value > *end(high).Value {
			high = row
		}
	}
	if count == 0 {
		return
	}
	span := first.Spans[0]
	which := span.Kind + " " + span.Level + " bound"
	if span.Kind == string(model.Central) || span.Kind == string(model.Shortest) {
		which = "upper end of the " + span.Kind + " " + span.Level + " interval"
	}
	if count == 1 {
		text := end(first).Text
		if strings.Contains(which, "interval") {
			say("For %s the %s interval is %s to %s.", r.Name, span.Kind+" "+span.Level, span.Low.Text, span.High.Text)
			return
		}
		say("For %s the %s is %s.", r.Name, which, text)
		return
	}
	if end(low).Text == end(high).Text {
		say("For %s the %s is %s under all %d analyses that have one.", r.Name, which, end(low).Text, count)
		return
	}
	say("Changing among the %d analyses that have an answer moves the %s for %s from %s to %s.", count, which, r.Name, end(low).Text, end(high).Text)
}
