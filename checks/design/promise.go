package design

import (
	"context"
	"errors"
	"fmt"
	"math"
	"strconv"
	"strings"

	"wellposed/checks/existence"
	"wellposed/checks/posterior"
	"wellposed/parser/diag"
	"wellposed/parser/model"
)

// Outcomes of a promise.
const (
	Kept     = "kept"
	Broken   = "broken"
	NotShown = "not shown"
)

// Result is how a promise came out.
type Result struct {
	Promise *model.Promise
	// Text is the statement without its keyword.
	Text    string
	Outcome string
	// Distance to the limit, with its sign: "0.886 against 0.88: 0.006 to spare".
	Distance string
	// Why says what stands in the way of a promise that is not shown, or which
	// value decides.
	Why     string
	Numbers []diag.Evidence
}

// Subject is what promises are judged on.
type Subject struct {
	Model *model.Model
	// Declared and Rivals are analyses of the data at hand, their rules resolved.
	Declared *model.Analysis
	Rivals   []*model.Analysis
	// Planned is the declared analysis of the prospective model, its rules
	// resolved, with what its outcomes break.
	Planned   *model.Analysis
	Breaks    *Breaks
	BreaksErr error
	Verdict   *existence.Result
}

// Judge says for each promise whether it is kept.
func Judge(ctx context.Context, s *Subject) []Result {
	var out []Result
	for _, p := range s.Model.Promises {
		r := Result{Promise: p, Text: statement(s.Model, p), Outcome: NotShown}
		switch p.Kind {
		case model.EveryOutcome:
			s.every(&r)
		case model.PosteriorChance:
			s.posterior(&r)
		case model.LongRunCoverage:
			s.coverage(ctx, &r)
		case model.ConclusionChance:
			s.conclusion(ctx, &r)
		case model.RivalsAgree:
			s.rivals(ctx, &r)
		}
		if ctx.Err() != nil && r.Outcome == NotShown {
			r.Why = "the time allowed was over"
		}
		out = append(out, r)
	}
	return out
}

func statement(m *model.Model, p *model.Promise) string {
	text := m.File.Text[p.Span.Start:min(p.Span.End, len(m.File.Text))]
	if i := strings.IndexByte(text, '#'); i >= 0 && !strings.Contains(text[:i], `"`) {
		text = text[:i]
	}
	return strings.Join(strings.Fields(strings.TrimPrefix(strings.TrimSpace(text), "require")), " ")
}

func (r *Result) number(name string, value, bound float64, how diag.How, method string) {
	r.Numbers = append(r.Numbers, diag.Evidence{Name: name, Value: value, Error: bound, Text: diag.Figure(value, bound, 3), How: how, Method: method})
}

// hold compares a value known within a bound with a limit. op is ">=" or "<=".
func (r *Result) hold(value, bound, limit float64, op string) {
	margin := value - limit
	if op == "<=" {
		margin = -margin
	}
	outcome := NotShown
	switch {
	case margin-bound >= 0:
		outcome = Kept
	case margin+bound < 0:
		outcome = Broken
	default:
		r.Why = "the error bound reaches the limit"
	}
	part := fmt.Sprintf("%s against %s", figures(value, bound, margin), Plain(limit))
	switch outcome {
	case Kept:
		part += fmt.Sprintf(", %s to spare", diag.Figure(margin, bound, 2))
	case Broken:
		part += fmt.Sprintf(", %s short", diag.Figure(-margin, bound, 2))
	}
	if r.Distance != "" {
		part = r.Distance + "; " + part
	}
	r.Distance = part
	r.worsen(outcome)
}

// Plain prints a number as people write it, with at most six digits.
func Plain(x float64) string {
	text := strconv.FormatFloat(x, 'g', 6, 64)
	if strings.Contains(text, "e") {
		return diag.Figure(x, 0, 6)
	}
	return strings.Replace(text, "-", "−", 1)
}

// figures prints so many digits that the distance to the limit can be seen.
func figures(value, bound, margin float64) string {
	most := 3
	if m := math.Abs(margin); m > 0 && value != 0 {
		most = min(8, max(3, 1+int(math.Ceil(math.Log10(math.Abs(value)/m)))))
	}
	return diag.Figure(value, bound, most)
}

// worsen keeps the worst of several outcomes; the first is taken as it is.
func (r *Result) worsen(outcome string) {
	rank := map[string]int{"": 0, Kept: 1, NotShown: 2, Broken: 3}
	first := len(r.Numbers) <= 1
	if first || rank[outcome] > rank[r.Outcome] {
		r.Outcome = outcome
	}
}

func (s *Subject) every(r *Result) {
	b := s.Breaks
	if s.BreaksErr != nil {
		if errors.Is(s.BreaksErr, ErrNoPlan) && s.Verdict != nil {
			status, how := s.Verdict.Overall()
			switch {
			case status == existence.DoesNotExist:
				r.Outcome, r.Distance = Broken, "the data at hand leave no posterior"
			case status == existence.Exists && (how == diag.Proved || how == diag.Bounded):
				r.Why = "the posterior exists with the data at hand; other outcomes are not counts, so they are not enumerated"
			}
			return
		}
		r.Why = s.BreaksErr.Error()
		return
	}
	r.Numbers = append(r.Numbers, diag.Evidence{Name: "outcomes without a posterior", Value: float64(b.Bad), Text: whole(b.Bad), How: b.How, Method: "enumeration"})
	switch {
	case b.Bad > 0 || b.Bad < 0:
		r.Outcome, r.Distance = Broken, "no posterior with "+b.Text
	case b.Undecided > 0 || b.How == diag.NotDecided:
		r.Why = "some outcomes are not decided"
	default:
		r.Outcome, r.Distance = Kept, "every outcome leaves a posterior"
	}
}

func (s *Subject) posterior(r *Result) {
	if s.BreaksErr != nil {
		r.Why = s.BreaksErr.Error()
		return
	}
	if len(s.Breaks.Chances) == 0 {
		r.Why = "no planning value is supposed; add `suppose … in …`"
		return
	}
	limit, _ := r.Promise.Bound.Float64()
	// The planning value with the least chance decides.
	var worst *Chance
	for i := range s.Breaks.Chances {
		c := &s.Breaks.Chances[i]
		if c.Err != nil {
			r.Why = c.Err.Error()
			return
		}
		if worst == nil || c.Value+c.Undecided > worst.Value+worst.Undecided {
			worst = c
		}
	}
	value, bound := 1-worst.Value-worst.Undecided/2, worst.Error+worst.Undecided/2
	r.number("chance of a posterior", value, bound, s.Breaks.How, "enumeration")
	r.hold(value, bound, limit, ">=")
	r.Why = strings.TrimSpace("least when " + worst.Plan.Text + ". " + r.Why)
}

func (s *Subject) coverage(ctx context.Context, r *Result) {
	p := r.Promise
	if s.BreaksErr != nil {
		r.Why = s.BreaksErr.Error()
		return
	}
	if p.From == nil || p.To == nil || p.Report == nil {
		r.Why = "the range of true values is not stated"
		return
	}
	from, _ := p.From.Float64()
	to, _ := p.To.Float64()
	c, how, err := Covering(ctx, s.Planned, p.Report, p.Over, from, to)
	if err != nil {
		r.Why = err.Error()
		return
	}
	if p.Lowest != nil {
		limit, _ := p.Lowest.Float64()
		r.number("lowest long-run coverage", c.Lowest, c.Error, how, "outcomes enumerated, both sides of every jump")
		r.hold(c.Lowest, c.Error, limit, ">=")
		r.Why = strings.TrimSpace(r.Why + fmt.Sprintf(" lowest %s %s = %s", c.Side, p.Report.Name, Plain(c.LowestAt)))
	}
	if p.Average != nil {
		limit, _ := p.Average.Float64()
		r.number("average long-run coverage", c.Average, c.Error, how, "outcomes enumerated, integrated in closed form")
		r.hold(c.Average, c.Error, limit, ">=")
	}
	if how == diag.Indicated && r.Outcome == Kept {
		r.Outcome, r.Why = NotShown, "the ends of the intervals come from quadrature without a verified bound; "+r.Why
	}
}

func (s *Subject) conclusion(ctx context.Context, r *Result) {
	if s.BreaksErr != nil {
		r.Why = s.BreaksErr.Error()
		return
	}
	claims, err := Deciding(ctx, s.Planned, s.Breaks, r.Promise.Conclusion)
	if err != nil {
		r.Why = err.Error()
		return
	}
	c := claims.Under(Settled(r.Promise.At))
	if c.Err != nil {
		r.Why = c.Err.Error()
		return
	}
	limit, _ := r.Promise.Bound.Float64()
	value, bound := c.Value+c.Undecided/2, c.Error+c.Undecided/2
	r.number(fmt.Sprintf("chance of %q when %s", r.Promise.Conclusion.Name, c.Plan.Text), value, bound, diag.Bounded, claims.Method)
	r.hold(value, bound, limit, r.Promise.Op)
}

func (s *Subject) rivals(ctx context.Context, r *Result) {
	p := r.Promise
	if len(s.Rivals) == 0 {
		r.Why = "no rival is declared"
		return
	}
	base, err := posterior.Summarize(ctx, s.Declared, p.Report)
	if err != nil {
		r.Why = "under the declared priors: " + err.Error()
		return
	}
	largest, bound, who := 0.0, 0.0, ""
	for _, a := range s.Rivals {
		other, err := posterior.Summarize(ctx, a, p.Report)
		if err != nil {
			r.Why = fmt.Sprintf("under %s: %v", a.Name, err)
			return
		}
		shift, e := Shift(base, other)
		if math.IsNaN(shift) {
			r.Why = "the declared interval has no width to compare with"
			return
		}
		if shift > largest || who == "" {
			largest, who = shift, a.Name
		}
		bound = math.Max(bound, e)
	}
	limit, _ := p.Bound.Float64()
	r.number("largest shift in widths of the declared interval", largest, bound, diag.Bounded, "posterior quantiles")
	r.hold(largest, bound, limit, "<=")
	r.Why = strings.TrimSpace(r.Why + " largest under " + who)
}

// Shift is the largest move of an end of the reported intervals, in widths of the
// reference interval, with a bound of its error. A one-sided interval is measured
// by the distance from the median to its end.
func Shift(base, other *posterior.Summary) (value, bound float64) {
	for i, b := range base.Intervals {
		if i >= len(other.Intervals) {
			break
		}
		o := other.Intervals[i]
		width := b.High.Value - b.Low.Value
		low, high := true, true
		switch b.Kind {
		case model.Upper:
			width, low = b.High.Value-base.Median.Value, false
		case model.Lower:
			width, high = base.Median.Value-b.Low.Value, false
		}
		if !(width > 0) || math.IsInf(width, 1) {
			return math.NaN(), math.NaN()
		}
		for _, pair := range []struct {
			use  bool
			x, y posterior.Number
		}{{low, b.Low, o.Low}, {high, b.High, o.High}} {
			if !pair.use {
				continue
			}
			value = math.Max(value, math.Abs(pair.x.Value-pair.y.Value)/width)
			bound = math.Max(bound, (pair.x.Error+pair.y.Error)/width*(1+value))
		}
	}
	return value, bound
}
