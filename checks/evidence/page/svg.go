package page

import (
	"fmt"
	"math"
	"strings"
	"unicode/utf8"

	"wellposed/checks/evidence"
	"wellposed/checks/posterior/longrun"
	"wellposed/parser/diag"
)

// picture is a drawing with a text alternative. Coordinates are rounded to a
// tenth, so the bytes do not hang on the last bit of a number.
type picture struct {
	b             strings.Builder
	width, height float64
}

func newPicture(height float64) *picture { return &picture{width: 640, height: height} }

func (p *picture) line(class string, x1, y1, x2, y2 float64) {
	fmt.Fprintf(&p.b, `<line class="%s" x1="%s" y1="%s" x2="%s" y2="%s"/>`, class, at(x1), at(y1), at(x2), at(y2))
}

func (p *picture) text(x, y float64, anchor, class, s string) {
	fmt.Fprintf(&p.b, `<text x="%s" y="%s" text-anchor="%s"`, at(x), at(y), anchor)
	if class != "" {
		fmt.Fprintf(&p.b, ` class="%s"`, class)
	}
	fmt.Fprintf(&p.b, `>%s</text>`, esc(s))
}

func (p *picture) path(class string, points [][2]float64, closed bool) {
	if len(points) == 0 {
		return
	}
	fmt.Fprintf(&p.b, `<path class="%s" d="M`, class)
	for i, q := range points {
		if i > 0 {
			p.b.WriteString(" L")
		}
		p.b.WriteString(at(q[0]) + " " + at(q[1]))
	}
	if closed {
		p.b.WriteString(" Z")
	}
	p.b.WriteString(`"/>`)
}

func (p *picture) dot(x, y, r float64) {
	fmt.Fprintf(&p.b, `<circle class="dot" cx="%s" cy="%s" r="%s"/>`, at(x), at(y), at(r))
}

func (p *picture) done(alt, caption string) figure {
	return figure{
		svg:     fmt.Sprintf(`<svg viewBox="0 0 %s %s" role="img" aria-label="%s">%s</svg>`, at(p.width), at(p.height), esc(alt), p.b.String()),
		alt:     alt,
		caption: caption,
	}
}

func at(x float64) string {
	s := fmt.Sprintf("%.1f", x)
	s = strings.TrimSuffix(s, ".0")
	if s == "-0" {
		return "0"
	}
	return s
}

// short cuts a label that has no room.
func short(s string, most int) string {
	if utf8.RuneCountInString(s) <= most {
		return s
	}
	return string([]rune(s)[:most-1]) + "…"
}

// axis maps values to a horizontal stretch.
type axis struct{ low, high, left, right float64 }

func (a axis) x(v float64) float64 {
	return a.left + (math.Min(math.Max(v, a.low), a.high)-a.low)/(a.high-a.low)*(a.right-a.left)
}

// ticks are about four round numbers inside an axis.
func (a axis) ticks() []float64 {
	span := a.high - a.low
	step := math.Pow(10, math.Floor(math.Log10(span/4)))
	for _, f := range []float64{5, 2} {
		if span/(step*f) >= 3 {
			step *= f
			break
		}
	}
	var out []float64
	for k := math.Ceil(a.low/step - 1e-9); k*step <= a.high+1e-9*span; k++ {
		out = append(out, k*step)
	}
	return out
}

func (p *picture) axis(a axis, y float64, name string) {
	p.line("axis", a.left, y, a.right, y)
	for _, t := range a.ticks() {
		x := a.x(t)
		p.line("axis", x, y, x, y+4)
		p.text(x, y+18, "middle", "", tickText(t))
	}
	p.text((a.left+a.right)/2, y+36, "middle", "faint", name)
}

func tickText(t float64) string {
	if math.Abs(t) < 1e-12 {
		return "0"
	}
	if math.Abs(t) < 1e-3 || math.Abs(t) >= 1e5 {
		return diag.Figure(t, 0, 2)
	}
	s := fmt.Sprintf("%.4f", t)
	s = strings.TrimRight(strings.TrimRight(s, "0"), ".")
	return strings.Replace(s, "-", "−", 1)
}

// forest draws the intervals of a report under every analysis.
func forest(r evidence.Report) block {
	low, high := math.Inf(1), math.Inf(-1)
	take := func(n evidence.Number) {
		if n.Value != nil {
			low, high = math.Min(low, *n.Value), math.Max(high, *n.Value)
		}
	}
	some := false
	for _, row := range r.Rows {
		for _, s := range row.Spans[:min(1, len(row.Spans))] {
			some = true
			take(s.Low)
			take(s.High)
			take(row.Median)
		}
	}
	if !some || math.IsInf(low, 1) {
		return nil
	}
	if r.Mark != nil {
		low, high = math.Min(low, *r.Mark), math.Max(high, *r.Mark)
	}
	if !(high > low) {
		return nil
	}
	pad := (high - low) * 0.04
	if low != 0 {
		low -= pad
	}
	high += pad
	const rowHeight, top = 26.0, 12.0
	bottom := top + rowHeight*float64(len(r.Rows))
	p := newPicture(bottom + 46)
	a := axis{low, high, 210, 625}
	for _, t := range a.ticks() {
		p.line("grid", a.x(t), top, a.x(t), bottom)
	}
	var said []string
	for i, row := range r.Rows {
		y := top + rowHeight*(float64(i)+0.5)
		p.text(200, y+4, "end", "", short(row.Analysis, 27))
		if len(row.Spans) == 0 {
			p.text(a.left+8, y+4, "start", "faint", short(row.None, 56))
			said = append(said, row.Analysis+": "+row.None)
			continue
		}
		s := row.Spans[0]
		from, to := a.left, a.right
		if s.Low.Value != nil {
			from = a.x(*s.Low.Value)
		}
		if s.High.Value != nil {
			to = a.x(*s.High.Value)
		}
		p.line("main", from, y, to, y)
		if s.Kind != "upper" {
			p.line("main", from, y-5, from, y+5)
		}
		if s.Kind != "lower" {
			p.line("main", to, y-5, to, y+5)
		}
		if row.Median.Value != nil {
			p.dot(a.x(*row.Median.Value), y, 4.5)
		}
		said = append(said, fmt.Sprintf("%s: median %s, %s to %s", row.Analysis, row.Median.Text, s.Low.Text, s.High.Text))
	}
	if r.Mark != nil {
		x := a.x(*r.Mark)
		p.line("mark", x, top-6, x, bottom)
		said = append(said, "dotted line at "+diag.Figure(*r.Mark, 0, 3))
	}
	p.axis(a, bottom, r.Name)
	first := ""
	for _, row := range r.Rows {
		if len(row.Spans) > 0 {
			first = row.Spans[0].Kind + " " + row.Spans[0].Level
			break
		}
	}
	caption := fmt.Sprintf("%s: median (dot) and %s interval (line) under each prior.", r.Name, first)
	if r.Mark != nil {
		caption += " Dotted: the limit of the conclusion."
	}
	return p.done(strings.Join(said, "; ")+".", caption)
}

// sketches draws prior and posterior on the reported scale, one strip an
// analysis.
func sketches(r evidence.Report) block {
	var rows []evidence.Row
	for _, row := range r.Rows {
		if len(row.Posterior) > 0 || len(row.Prior) > 0 {
			rows = append(rows, row)
		}
	}
	if len(rows) == 0 {
		return nil
	}
	rows = rows[:min(len(rows), 8)]
	const strip, top = 58.0, 8.0
	bottom := top + strip*float64(len(rows))
	p := newPicture(bottom + 46)
	points := rows[0].Posterior
	if len(points) == 0 {
		points = rows[0].Prior
	}
	half := (points[1].X - points[0].X) / 2
	a := axis{points[0].X - half, points[len(points)-1].X + half, 210, 625}
	var said []string
	for i, row := range rows {
		base := top + strip*float64(i+1) - 6
		p.text(200, base-14, "end", "", short(row.Analysis, 27))
		p.line("grid", a.left, base, a.right, base)
		draw := func(curve []longrun.Point, class string, fill bool) {
			line := make([][2]float64, len(curve))
			for k, q := range curve {
				line[k] = [2]float64{a.x(q.X), base - q.Y*(strip-14)}
			}
			if fill && len(line) > 0 {
				area := append([][2]float64{{line[0][0], base}}, line...)
				p.path("fill", append(area, [2]float64{line[len(line)-1][0], base}), true)
			}
			p.path(class, line, false)
		}
		draw(row.Posterior, "main", true)
		draw(row.Prior, "second", false)
		text := row.Analysis + ": "
		switch {
		case len(row.Posterior) == 0:
			text += "prior only; no posterior is drawn"
		case len(row.Prior) == 0:
			text += "posterior " + shape(row.Posterior) + "; the prior has no law here, or none that was computed"
		default:
			text += "posterior " + shape(row.Posterior) + ", prior " + shape(row.Prior)
		}
		said = append(said, text)
	}
	p.axis(a, bottom, r.Name)
	return p.done(strings.Join(said, "; ")+".", fmt.Sprintf("On the scale of %s: posterior (solid, filled) and, where it is proper, the prior (dashed). Each curve is scaled to its own height.", r.Name))
}

// shape says in words where a curve is high.
func shape(curve []longrun.Point) string {
	best := curve[0]
	for _, p := range curve {
		if p.Y > best.Y {
			best = p
		}
	}
	lowest := curve[0].Y
	for _, p := range curve {
		lowest = math.Min(lowest, p.Y)
	}
	switch {
	case lowest > 0.9:
		return "level"
	case best == curve[0]:
		return "falling from the left end"
	case best == curve[len(curve)-1]:
		return "rising to the right end"
	}
	return "highest near " + diag.Figure(best.X, 0, 2)
}

// widening draws the bound against the cut, on a logarithmic scale when the
// numbers span decades.
func widening(r evidence.Ranges) block {
	var values []float64
	for _, s := range r.Steps {
		if s.Number.Value == nil {
			return para{"", "small"}
		}
		values = append(values, *s.Number.Value)
	}
	positive, top := true, 0.0
	for _, v := range values {
		positive = positive && v > 0
		top = math.Max(top, math.Abs(v))
	}
	length := func(v float64) float64 { return math.Abs(v) / top }
	scale := "length in proportion"
	if positive {
		low, high := math.Inf(1), math.Inf(-1)
		for _, v := range values {
			low, high = math.Min(low, math.Log10(v)), math.Max(high, math.Log10(v))
		}
		if high-low > 1 {
			length = func(v float64) float64 { return 0.06 + 0.94*(math.Log10(v)-low)/(high-low) }
			scale = "length on a logarithmic scale"
		}
	}
	const rowHeight, y0 = 28.0, 6.0
	p := newPicture(y0 + rowHeight*float64(len(r.Steps)) + 6)
	var said []string
	for i, s := range r.Steps {
		y := y0 + rowHeight*(float64(i)+0.5)
		p.text(235, y+4, "end", "", short(s.Cut, 34))
		x := 245 + 290*length(values[i])
		p.path("fill", [][2]float64{{245, y - 8}, {x, y - 8}, {x, y + 8}, {245, y + 8}}, true)
		p.line("main", x, y-8, x, y+8)
		p.text(x+8, y+4, "start", "", s.Number.Text)
		said = append(said, fmt.Sprintf("%s gives %s", s.Cut, s.Number.Text))
	}
	return p.done(strings.Join(said, "; ")+".", fmt.Sprintf("%s as the prior's range grows (%s).", r.Quantity, scale))
}

// coverage draws the long-run coverage curve.
func coverage(c evidence.Curve) block {
	const top, bottom = 10.0, 190.0
	p := newPicture(bottom + 46)
	a := axis{c.From, c.To, 60, 625}
	low := 1.0
	for _, q := range c.Points {
		low = math.Min(low, q.Y)
	}
	low = math.Max(0, math.Floor((low-0.02)*20)/20)
	y := func(v float64) float64 { return bottom - (v-low)/(1-low)*(bottom-top) }
	up := axis{low, 1, 0, 1}
	for _, t := range up.ticks() {
		p.line("grid", a.left, y(t), a.right, y(t))
		p.text(a.left-8, y(t)+4, "end", "", tickText(t))
	}
	p.line("mark", a.left, y(c.Nominal), a.right, y(c.Nominal))
	line := make([][2]float64, len(c.Points))
	for i, q := range c.Points {
		line[i] = [2]float64{a.x(q.X), y(q.Y)}
	}
	p.path("main", line, false)
	p.axis(a, bottom, "true "+c.Over)
	alt := fmt.Sprintf("Long-run coverage of the %s interval under %s, a saw-tooth curve for %s from %s to %s: lowest %s %s, average %s, stated level %s.",
		c.Interval, c.Analysis, c.Over, tickText(c.From), tickText(c.To), c.Lowest.Text, c.LowestAt, c.Average.Text, tickText(c.Nominal))
	return p.done(alt, fmt.Sprintf("Long-run coverage of %s (%s), %s. Dotted: the stated level.", c.Report, c.Interval, c.Analysis))
}
