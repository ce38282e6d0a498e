package page

import (
	"strings"

	"wellposed/checks/evidence"
)

// design is the stage before the data.
func design(e *evidence.Evidence) []block {
	out := []block{heading{"8", "Before the data"}}
	d := e.Design
	if d == nil {
		return append(out, para{"The file awaits nothing, supposes nothing and promises nothing about outcomes.", ""})
	}
	if d.Trouble != "" {
		return append(out, para{"The plan was not examined: " + d.Trouble + ".", ""})
	}
	lead := "Counts of the plan: " + strings.Join(d.Counts, ", ") + "."
	if d.Hindsight {
		lead += " The data are known; the plan is examined as if it were carried out again."
	}
	out = append(out, para{lead, ""})
	if len(d.Breaks) > 0 {
		t := table{caption: "Outcomes that leave no posterior, and how likely they are", head: append([]string{"Analysis", "Outcomes"}, d.Breaks[0].Plans...)}
		for _, b := range d.Breaks {
			mark := "bad"
			if b.Text == "none" {
				mark = "good"
			}
			row := []cell{th(b.Analysis), {text: b.Text, mark: mark}}
			for _, n := range b.Chances {
				row = append(row, num(n.Text))
			}
			t.rows = append(t.rows, row)
		}
		out = append(out, t)
	}
	for i := 0; i < len(d.Chances); {
		j := i
		for j < len(d.Chances) && d.Chances[j].Conclusion == d.Chances[i].Conclusion {
			j++
		}
		t := table{caption: "Chance of drawing “" + d.Chances[i].Conclusion + "”", head: append([]string{"Analysis"}, d.Chances[i].Plans...)}
		for _, c := range d.Chances[i:j] {
			row := []cell{th(c.Analysis)}
			for _, n := range c.Chances {
				row = append(row, num(n.Text))
			}
			t.rows = append(t.rows, row)
		}
		out = append(out, t)
		i = j
	}
	if len(d.Curves) > 0 {
		t := table{caption: "Long-run coverage", head: []string{"Analysis", "Report", "Lowest", "Where", "Average"}}
		for _, c := range d.Curves {
			t.rows = append(t.rows, []cell{th(c.Analysis), td(c.Report + ", " + c.Interval), num(c.Lowest.Text), td(c.LowestAt), num(c.Average.Text)})
		}
		out = append(out, t)
		for _, c := range d.Curves {
			out = append(out, coverage(c))
		}
	}
	if d.Sizes != nil {
		t := table{caption: "Smallest demonstration without failure, for " + d.Sizes.Claim, head: []string{"Prior", "Trials", "Chance that a product exactly at the limit passes"}}
		for _, r := range d.Sizes.Rows {
			t.rows = append(t.rows, []cell{th(r.Analysis), num(r.Trials), num(r.Risk.Text)})
		}
		out = append(out, t)
	}
	return out
}
