package wording

import (
	"strconv"
	"strings"

	"wellposed/checks/facts"
	"wellposed/checks/posterior"
	"wellposed/parser/model"
)

// Preview says what changes on the first report that depends on an unknown when
// one analysis takes the place of another: "upper 95 %: none → 0.0466". It is
// empty where neither has numbers.
func Preview(f *facts.Facts, from, to *model.Analysis, u *model.Unknown) string {
	for _, r := range f.Model.Reports {
		depends := false
		for _, v := range model.UnknownsIn(r.Value) {
			depends = depends || v == u
		}
		if !depends || len(r.Intervals) == 0 {
			continue
		}
		after := f.Posterior(to, r)
		if after.Err != nil || len(after.Intervals) == 0 {
			return ""
		}
		before := "none"
		if s := f.Posterior(from, r); s.Err == nil && len(s.Intervals) > 0 {
			before = IntervalText(s.Intervals[0])
		} else if f.Sound(from, u) {
			before = "not computed"
		}
		in := after.Intervals[0]
		level, _ := in.Level.Float64()
		text := string(in.Kind) + " " + strconv.FormatFloat(100*level, 'g', 6, 64) + " %: " + before + " → " + IntervalText(in)
		if len(f.Model.Reports) > 1 {
			text = r.Name + " " + text
		}
		return text
	}
	return ""
}

// IntervalText prints an interval with the digits that hold: the bound of a
// one-sided one, "0.395 to 1.06" else.
func IntervalText(in posterior.Interval) string {
	switch in.Kind {
	case model.Upper:
		return in.High.Text()
	case model.Lower:
		return in.Low.Text()
	}
	return in.Low.Text() + " to " + in.High.Text()
}

// consequence joins what a standard choice is with what it does.
func consequence(parts ...string) string {
	var out []string
	for _, p := range parts {
		if p != "" {
			out = append(out, p)
		}
	}
	return strings.Join(out, "; ")
}
