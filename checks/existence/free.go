package existence

import (
	"context"
	"fmt"
	"math/big"
	"strings"

	"wellposed/checks/existence/certificate"
	"wellposed/checks/existence/cone"
	"wellposed/parser/diag"
	"wellposed/parser/model"
)

// The recession test. For a log-concave likelihood times log-concave priors the
// posterior is proper exactly when no direction d ≠ 0 costs nothing. With
// observations that see a linear form x·β this is a system of linear
// inequalities, one or two a row (literature: Albert & Anderson 1984, Silvapulle
// 1981, Chen & Shao 2001; proof in the package documentation).

// sight is what an observation says about a direction d: each entry pairs a
// linear form with the sense in which x·d is free.
type sight struct {
	form  linearForm
	sense cone.Sense
	// free is set when the row says nothing.
	free bool
}

// directions collects the system of a group, or returns nil when it isn't one.
type directions struct {
	g       *group
	index   map[variable]int
	forms   []linearForm
	rows    []int // row of each inequality
	senses  []cone.Sense
	from    []rowFactor
	extra   []exactRow // from priors and supports
	eSense  []cone.Sense
	dropped bool // a bounded prior that isn't log-concave was left out
	link    string
}

// whenFree decides models whose likelihood is log-concave in linear forms.
func whenFree(g *group, ctx context.Context) *Verdict {
	d := &directions{g: g, index: g.index()}
	for _, v := range g.vars {
		if v.Unknown.Kind == nil || v.Unknown.Kind.Discrete {
			return nil
		}
	}
	if len(g.pops) > 0 || !d.priors() {
		return nil
	}
	classified := map[*model.Observation]*linked{}
	for k, f := range g.rows {
		if k%4096 == 0 && ctx.Err() != nil {
			return g.undecided("interrupted")
		}
		l, ok := classified[f.obs]
		if !ok {
			l = g.link(f.obs)
			classified[f.obs] = l
		}
		if l == nil || !d.row(l, f) {
			return nil
		}
	}
	pr, err := d.problem()
	if err != nil {
		return nil
	}
	r, err := cone.Decide(ctx, pr)
	if err != nil || r.Verdict == cone.NotDecided {
		return g.undecided("the search for a free direction was interrupted")
	}
	return d.verdict(r)
}

// priors turns priors and supports into inequalities; false when one is of
// another kind.
func (d *directions) priors() bool {
	g := d.g
	unit := func(i int) exactRow {
		return exactRow{constant: new(big.Rat), coef: map[int]*big.Rat{i: big.NewRat(1, 1)}}
	}
	for i, v := range g.vars {
		if v.Unknown.Size > 0 {
			if v.Unknown.Kind.Name != "cutpoints" {
				return false
			}
			if j, ok := d.index[variable{Unknown: v.Unknown, Component: v.Component + 1}]; ok {
				up := exactRow{constant: new(big.Rat), coef: map[int]*big.Rat{j: big.NewRat(1, 1), i: big.NewRat(-1, 1)}}
				d.extra, d.eSense = append(d.extra, up), append(d.eSense, cone.AtLeast)
			}
			continue
		}
		lo, hi := g.support(v)
		switch {
		case lo != nil && hi != nil:
			d.extra, d.eSense = append(d.extra, unit(i)), append(d.eSense, cone.Equal)
		case lo != nil:
			d.extra, d.eSense = append(d.extra, unit(i)), append(d.eSense, cone.AtLeast)
		case hi != nil:
			d.extra, d.eSense = append(d.extra, unit(i)), append(d.eSense, cone.AtMost)
		}
	}
	for _, f := range g.priors {
		p := f.prior
		target, plain := p.Target.(*model.UnknownRef)
		switch {
		case p.Form == model.ByFlat && plain:
			continue
		case plain && constantKernel(p):
			continue
		case p.Form == model.ByDist && p.Dist != nil && (plain || isVectorOfRefs(p.Target)):
			for _, x := range distExprs(p.Dist) {
				if mentions(x) {
					return false
				}
			}
			var mine []int
			if plain && target.Unknown.Size == 0 && len(p.About) == 1 {
				mine = []int{d.index[variable{Unknown: target.Unknown, Component: f.component}]}
			} else {
				for i, v := range g.vars {
					for _, u := range p.About {
						if v.Unknown == u {
							mine = append(mine, i)
						}
					}
				}
			}
			switch p.Dist.Spec.Name {
			case "Normal", "Laplace", "logistic", "Gumbel", "Exponential", "half-Normal", "skew-Normal":
				for _, i := range mine {
					d.extra, d.eSense = append(d.extra, unit(i)), append(d.eSense, cone.Equal)
				}
			case "Uniform":
				for _, i := range mine {
					d.extra, d.eSense = append(d.extra, unit(i)), append(d.eSense, cone.Equal)
				}
			case "Student-t", "Cauchy", "half-Cauchy", "half-Student-t":
				d.dropped = true
			default:
				return false
			}
		default:
			return false
		}
	}
	return true
}

// constantKernel reports a kernel that is a positive constant: flat.
func constantKernel(p *model.Prior) bool {
	return p.Form == model.ByKernel && p.Kernel != nil && !mentions(p.Kernel) && constantPositive(p.Kernel, 0)
}

func isVectorOfRefs(x model.Expr) bool {
	v, ok := x.(*model.Vector)
	if !ok {
		return false
	}
	for _, i := range v.Items {
		if _, ok := i.(*model.UnknownRef); !ok {
			return false
		}
	}
	return true
}

// row adds what one row of data says.
func (d *directions) row(l *linked, f rowFactor) bool {
	sights, ok := l.see(f.row)
	if !ok {
		return false
	}
	for _, s := range sights {
		if s.free {
			continue
		}
		d.forms = append(d.forms, s.form)
		d.rows = append(d.rows, f.row)
		d.senses = append(d.senses, s.sense)
		d.from = append(d.from, f)
	}
	if d.link == "" {
		d.link = l.name
	}
	return true
}

// problem hands the system to the cone engine, column by column: integers with
// a common power of ten where the data are decimals.
func (d *directions) problem() (*cone.Problem, error) {
	p, n := len(d.g.vars), len(d.forms)
	total := n + len(d.extra)
	senses := append(append([]cone.Sense(nil), d.senses...), d.eSense...)
	if pr := d.fastColumns(p, n, total, senses); pr != nil {
		return pr, nil
	}
	columns := make([]cone.Column, p)
	zero := new(big.Rat)
	for j := range columns {
		columns[j].Rational = make([]*big.Rat, total)
		for i := range columns[j].Rational {
			columns[j].Rational[i] = zero
		}
	}
	for i, f := range d.forms {
		r, ok := d.g.at(f, d.rows[i], d.index)
		if !ok {
			return nil, fmt.Errorf("a coefficient is not known")
		}
		for j, c := range r.coef {
			columns[j].Rational[i] = c
		}
	}
	for i, r := range d.extra {
		for j, c := range r.coef {
			columns[j].Rational[n+i] = c
		}
	}
	return cone.NewProblem(columns, senses)
}

// fastColumns serves the common case: every row has one and the same linear
// form, whose terms are single columns of decimals or constants.
func (d *directions) fastColumns(p, n, total int, senses []cone.Sense) *cone.Problem {
	if n < 512 {
		return nil
	}
	same := d.forms[0]
	for _, f := range d.forms {
		if len(f) != len(same) || len(f) > 0 && &f[0] != &same[0] {
			return nil
		}
	}
	columns := make([]cone.Column, p)
	filled := make([]bool, p)
	for _, t := range same {
		if t.ref == nil {
			continue
		}
		if t.component < 0 || len(t.others) > 0 || len(t.columns) > 1 || !t.scale.IsInt() || !t.scale.Num().IsInt64() {
			return nil
		}
		j, ok := d.index[variable{Unknown: t.ref.Unknown, Component: t.component}]
		if !ok || filled[j] {
			return nil
		}
		filled[j] = true
		s := t.scale.Num().Int64()
		if s > 1000 || s < -1000 {
			return nil
		}
		m := make([]int64, total)
		if len(t.columns) == 0 {
			for i := range n {
				m[i] = s
			}
			columns[j] = cone.Column{Mantissa: m}
			continue
		}
		e, ok := mantissas(t.columns[0], d.rows, m)
		if !ok {
			return nil
		}
		if s != 1 {
			for i := range n {
				m[i] *= s
			}
		}
		columns[j] = cone.Column{Mantissa: m, Exponent: e}
	}
	for j := range columns {
		if !filled[j] {
			columns[j] = cone.Column{Mantissa: make([]int64, total)}
		}
	}
	for i, r := range d.extra {
		for j, c := range r.coef {
			// Only the sign matters in a row with one entry; others need the
			// exact form.
			if len(r.coef) != 1 {
				return nil
			}
			columns[j].Mantissa[n+i] = int64(c.Sign())
		}
	}
	pr, err := cone.NewProblem(columns, senses)
	if err != nil {
		return nil
	}
	return pr
}

// mantissas reads decimals as integers times a common power of ten.
func mantissas(c *model.Column, rows []int, out []int64) (exponent int, ok bool) {
	places := 0
	for _, r := range rows {
		t := c.Texts[r]
		if strings.ContainsAny(t, "eE") {
			return 0, false
		}
		if k := strings.IndexByte(t, '.'); k >= 0 {
			places = max(places, len(t)-k-1)
		}
	}
	if places > 15 {
		return 0, false
	}
	for i, r := range rows {
		t := c.Texts[r]
		v, seen, negative, dot := int64(0), 0, false, -1
		for k := range len(t) {
			b := t[k]
			if d := b - '0'; d <= 9 && seen < 17 {
				v, seen = v*10+int64(d), seen+1
				continue
			}
			switch {
			case b == '-' && k == 0:
				negative = true
			case b == '+' && k == 0:
			case b == '.' && dot < 0:
				dot = seen
			case b >= '0' && b <= '9':
				if v > (1<<62)/10-10 {
					return 0, false
				}
				v, seen = v*10+int64(b-'0'), seen+1
			default:
				return 0, false
			}
		}
		if seen == 0 {
			return 0, false
		}
		have := 0
		if dot >= 0 {
			have = seen - dot
		}
		for ; have < places; have++ {
			if v > (1<<62)/10 {
				return 0, false
			}
			v *= 10
		}
		if negative {
			v = -v
		}
		out[i] = v
	}
	return -places, true
}

// verdict tells the answer in the model's words.
func (d *directions) verdict(r *cone.Result) *Verdict {
	g := d.g
	v := &Verdict{How: diag.Proved, Unknowns: g.unknowns(), Source: "Albert & Anderson 1984; Silvapulle 1981; Chen & Shao 2001; derivation",
		Theorem: "recession test for log-concave likelihoods"}
	v.Certificate = d.certificate(r)
	if len(d.from) > 0 {
		v.Observation = d.from[0].obs
	}
	if r.Verdict == cone.Overlapped {
		v.Status, v.Code = Exists, Overlap
		v.Claim = fmt.Sprintf("no direction in %s is left free by the data and the priors", d.names(nil))
		v.Conditions = []Condition{
			{Text: "rank of the design = number of coefficients", Filled: fmt.Sprintf("%d = %d", len(g.vars), len(g.vars)), Holds: true},
			{Text: "no separating direction", Filled: fmt.Sprintf("a positive combination of %d rows is 0", len(r.Certificate.Rows)), Holds: true}}
		return v
	}
	if d.dropped {
		return g.undecided("a heavy-tailed prior meets a direction that the data leave free")
	}
	v.Status = DoesNotExist
	for _, j := range r.Support {
		toward := "inf"
		if r.Direction[j].Sign() < 0 {
			toward = "-inf"
		}
		e := Escape{Unknown: g.vars[j].Unknown, Component: g.vars[j].Component, Toward: toward}
		if len(r.Support) > 1 {
			e.Step = ratText(r.Direction[j])
		}
		v.Escape = append(v.Escape, e)
	}
	where := d.names(r.Support)
	if r.Verdict == cone.RankDeficient {
		v.Code = Rank
		v.Claim = fmt.Sprintf("the data do not see the direction %s at all, and the prior is flat along it", d.direction(r))
		v.Conditions = []Condition{{Text: "rank of the design = number of coefficients", Filled: fmt.Sprintf("rank < %d", len(g.vars)), Holds: false}}
		v.Repairs = []string{"a proper prior on one of " + where, "leaving one of them out"}
		return v
	}
	v.Code = Separation
	kind := "quasi-completely"
	if r.Complete {
		kind = "completely"
	}
	v.Claim = fmt.Sprintf("the responses are separated %s along %s: the likelihood does not fall in that direction, and the prior is flat", kind, d.direction(r))
	v.Conditions = []Condition{{Text: "no separating direction", Filled: fmt.Sprintf("%d rows on one side, %d on the border", r.Apart, len(r.Touching)), Holds: false}}
	for _, i := range r.Touching {
		if i < len(d.from) && len(v.Rows) < 20 && d.from[i].obs == v.Observation {
			v.Rows = append(v.Rows, d.from[i].row)
		}
	}
	v.Repairs = []string{"a proper prior on " + where, "an observation that contradicts the direction"}
	if one := d.oneSided(); one != "" {
		v.Code = OneSidedLimits
		v.Claim = "every reading is only a limit on the same side, so the likelihood does not fall as " + one
	}
	return v
}

// oneSided reports a model in which nothing but limits of one side was seen.
func (d *directions) oneSided() string {
	if d.link != "location" || len(d.g.vars) != 1 {
		return ""
	}
	for _, s := range d.senses {
		if s != d.senses[0] || s == cone.Equal {
			return ""
		}
	}
	if d.senses[0] == cone.AtMost {
		return d.g.vars[0].Name() + " → −∞"
	}
	return d.g.vars[0].Name() + " → ∞"
}

func (d *directions) names(which []int) string {
	var out []string
	if which == nil {
		for i := range d.g.vars {
			which = append(which, i)
		}
	}
	for _, j := range which {
		out = append(out, d.g.vars[j].Name())
		if len(out) == 6 && len(which) > 7 {
			out = append(out, fmt.Sprintf("%d more", len(which)-6))
			break
		}
	}
	return strings.Join(out, ", ")
}

func (d *directions) direction(r *cone.Result) string {
	var b strings.Builder
	for k, j := range r.Support {
		if k == 6 && len(r.Support) > 7 {
			fmt.Fprintf(&b, " … (%d coefficients)", len(r.Support))
			break
		}
		c := r.Direction[j]
		switch {
		case c.Sign() < 0:
			b.WriteString(" − ")
		case k > 0:
			b.WriteString(" + ")
		}
		if a := new(big.Rat).Abs(c); a.Cmp(big.NewRat(1, 1)) != 0 {
			b.WriteString(ratText(a) + " ")
		}
		b.WriteString(d.g.vars[j].Name())
	}
	return strings.TrimSpace(b.String())
}

// certificate copies the rows that the proof needs.
func (d *directions) certificate(r *cone.Result) *certificate.Certificate {
	c := &certificate.Cone{Columns: len(d.g.vars), Overlap: r.Verdict == cone.Overlapped}
	add := func(i int) bool {
		var row exactRow
		var sense cone.Sense
		if i < len(d.forms) {
			x, ok := d.g.at(d.forms[i], d.rows[i], d.index)
			if !ok {
				return false
			}
			row, sense = x, d.senses[i]
		} else {
			row, sense = d.extra[i-len(d.forms)], d.eSense[i-len(d.forms)]
		}
		texts := make([]string, len(d.g.vars))
		for j := range texts {
			texts[j] = "0"
			if q := row.coef[j]; q != nil {
				if sense == cone.AtMost {
					q = new(big.Rat).Neg(q)
				}
				texts[j] = q.RatString()
			}
		}
		c.Rows = append(c.Rows, texts)
		c.Equal = append(c.Equal, sense == cone.Equal)
		return true
	}
	if c.Overlap {
		for k, i := range r.Certificate.Rows {
			if !add(i) {
				return nil
			}
			c.Weights = append(c.Weights, r.Certificate.Weights[k].RatString())
		}
	} else {
		// A direction is checked against every row; a large table is cut in the
		// certificate to rows that differ.
		seen := map[string]bool{}
		for i := range len(d.forms) + len(d.extra) {
			if len(c.Rows) >= 2000 {
				c.Partial = true
				break
			}
			if !add(i) {
				return nil
			}
			key := strings.Join(c.Rows[len(c.Rows)-1], " ") + fmt.Sprint(c.Equal[len(c.Equal)-1])
			if seen[key] {
				c.Rows, c.Equal = c.Rows[:len(c.Rows)-1], c.Equal[:len(c.Equal)-1]
			}
			seen[key] = true
		}
		for _, q := range r.Direction {
			c.Direction = append(c.Direction, q.RatString())
		}
	}
	return &certificate.Certificate{Kind: certificate.KindCone, Cone: c}
}
