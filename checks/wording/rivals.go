package wording

import (
	"math"
	"strconv"
	"strings"
	"unicode/utf8"

	"wellposed/checks/facts"
	"wellposed/checks/posterior"
	"wellposed/parser/diag"
	"wellposed/parser/model"
)

// Alternative is a prior set that stands beside the declared one.
type Alternative struct {
	// Name is how it is listed: a rival's name or a standard choice's text.
	Name     string
	Analysis *model.Analysis
	Priors   []*model.Prior
}

// Alternatives are the declared rivals, then the standard choices for the unknowns
// with `rivals for …: standard`, in the order of the file.
func Alternatives(f *facts.Facts) []Alternative {
	declared := f.Model.Declared()
	var list []Alternative
	for _, r := range f.Model.Rivals {
		list = append(list, Alternative{r.Name, Under(declared, r), r.Priors})
	}
	for _, u := range f.Model.Standard {
		list = append(list, Choices(f, u)...)
	}
	return list
}

// Choices are the standard choices for an unknown but the declared one.
func Choices(f *facts.Facts, u *model.Unknown) []Alternative {
	declared := f.Model.Declared().PriorOf(u)
	var list []Alternative
	for _, c := range f.Standard(u) {
		if declared == nil || declared.Text != c.Prior.Text {
			list = append(list, Alternative{c.Text, c.Analysis, []*model.Prior{c.Prior}})
		}
	}
	return list
}

// Shift is the largest move of an end of a reported interval.
type Shift struct {
	// Interval is the place of the interval in the report.
	Interval int
	// End is "upper end", "lower end", "upper bound" or "lower bound".
	End      string
	From, To posterior.Number
	// Widths is the move in widths of the interval under the first analysis, Share
	// the move as a share of the end's value.
	Widths, Share float64
	// Sure is the least that Widths may be by the errors of the numbers.
	Sure float64
}

// ShiftOf compares a report under two analyses; not ok when there are no numbers.
func ShiftOf(f *facts.Facts, from, to *model.Analysis, r *model.Report) (Shift, bool) {
	a := f.Posterior(from, r)
	if a.Err != nil {
		return Shift{}, false
	}
	b := f.Posterior(to, r)
	if b.Err != nil {
		return Shift{}, false
	}
	best, ok := Shift{}, false
	for i := range a.Intervals {
		width, kind := a.Widths[i], a.Intervals[i].Kind
		look := func(end string, x, y posterior.Number) {
			move := math.Abs(y.Value - x.Value)
			s := Shift{Interval: i, End: end, From: x, To: y, Widths: move / width.Value, Share: move / math.Abs(x.Value)}
			s.Sure = math.Max(0, move-x.Error-y.Error) / (width.Value + width.Error)
			if !math.IsNaN(s.Widths) && !math.IsInf(s.Widths, 0) && width.Value > 0 && (!ok || s.Sure > best.Sure) {
				best, ok = s, true
			}
		}
		switch kind {
		case model.Upper:
			look("upper bound", a.Intervals[i].High, b.Intervals[i].High)
		case model.Lower:
			look("lower bound", a.Intervals[i].Low, b.Intervals[i].Low)
		default:
			look("lower end", a.Intervals[i].Low, b.Intervals[i].Low)
			look("upper end", a.Intervals[i].High, b.Intervals[i].High)
		}
	}
	return best, ok
}

// Matters reports whether a shift counts under the file's threshold.
func Matters(m *model.Model, s Shift) bool {
	share, _ := m.Matters.Float64()
	return s.Sure > share
}

// Moved says how far: "0.42 widths of the interval, 34 %".
func Moved(s Shift) string {
	width := diag.Figure(s.Widths, (s.From.Error+s.To.Error)/math.Max(1e-300, math.Abs(s.From.Value-s.To.Value))*s.Widths, 2)
	text := width + " widths of the interval"
	if s.Share < 100 {
		text += ", " + diag.Percent(s.Share, 0, 2)
	}
	return text
}

// AskedText names an interval: "upper 95 %".
func AskedText(a model.Asked) string {
	level, _ := a.Level.Float64()
	return string(a.Kind) + " " + strconv.FormatFloat(100*level, 'g', 6, 64) + " %"
}

// Columns lays rows of cells out, the first column to the left, others to the
// right; lines end with \n.
func Columns(rows [][]string) string {
	var width []int
	for _, row := range rows {
		for i, cell := range row {
			if i == len(width) {
				width = append(width, 0)
			}
			width[i] = max(width[i], utf8.RuneCountInString(cell))
		}
	}
	var b strings.Builder
	for _, row := range rows {
		var line strings.Builder
		for i, cell := range row {
			pad := strings.Repeat(" ", width[i]-utf8.RuneCountInString(cell))
			if i == 0 {
				line.WriteString(cell + pad)
			} else {
				line.WriteString("   " + pad + cell)
			}
		}
		b.WriteString(strings.TrimRight(line.String(), " ") + "\n")
	}
	return b.String()
}

// Measured is a number as evidence.
func Measured(name, about string, n posterior.Number) diag.Evidence {
	return diag.Evidence{Name: name, About: about, Text: n.Text(), Value: n.Value, Error: n.Error, How: n.How, Method: n.Method}
}

// Called names an alternative in a sentence.
func Called(a Alternative) string {
	if len(a.Priors) == 1 && a.Priors[0].Text == a.Name {
		return quoted(a.Name)
	}
	return `the rival "` + a.Name + `"`
}

// EndText names the end that moved: "the upper 95 % bound of p", "the lower end of
// mu (central 95 %)".
func EndText(s Shift, a model.Asked, name string) string {
	kind, bound, _ := strings.Cut(s.End, " ")
	if bound == "bound" {
		level, _ := a.Level.Float64()
		return "the " + kind + " " + strconv.FormatFloat(100*level, 'g', 6, 64) + " % bound of " + name
	}
	return "the " + s.End + " of " + name + " (" + AskedText(a) + ")"
}
