package design

import (
	"context"
	"fmt"
	"math/big"
	"strconv"
	"strings"

	"wellposed/checks/existence"
	"wellposed/checks/posterior/longrun"
	"wellposed/parser/diag"
	"wellposed/parser/model"
)

// MaxCombinations bounds an enumeration over several counts.
const MaxCombinations = 20000

// Chance is a probability under a planning value.
type Chance struct {
	Plan  Planned
	Value float64
	// Error bounds |Value − truth|.
	Error float64
	// Undecided is the probability of outcomes about which nothing was decided.
	Undecided float64
	Err       error
}

// Breaks are the outcomes of a plan that leave no posterior.
type Breaks struct {
	Cells []Cell
	// Outcomes is how many there are, −1 for infinitely many; Bad and Undecided
	// count those that leave no posterior and those not decided.
	Outcomes, Bad, Undecided int
	// Text says which: "y = 0 or y = 40".
	Text string
	How  diag.How
	// Reason is the verdict for one of the bad outcomes.
	Reason *existence.Verdict
	// Chances are under the planning values of the file.
	Chances []Chance

	status map[string]byte
	open   *existence.Outcomes
}

const (
	bad       = 'b'
	undecided = 'u'
)

// Breaking decides for each outcome of the plan whether it leaves a posterior.
// The analysis is one of a prospective model, its rules resolved.
func Breaking(ctx context.Context, a *model.Analysis) (*Breaks, error) {
	cells, err := Cells(a.Model)
	if err != nil {
		return nil, err
	}
	b := &Breaks{Cells: cells, How: diag.Proved, status: map[string]byte{}}
	if len(cells) == 1 && (cells[0].Trials == 0 || cells[0].Trials > 60) {
		return b, b.single(ctx, a)
	}
	counts := make([]longrun.Count, len(cells))
	for i, c := range cells {
		if c.Trials == 0 {
			return nil, fmt.Errorf("the outcomes of several counts are enumerated only when each has a last one")
		}
		counts[i] = longrun.Count{Trials: c.Trials}
	}
	var list []int64
	b.Outcomes, err = longrun.Enumerate(ctx, counts, MaxCombinations, func(y []int) error {
		r := existence.Decide(ctx, Given(a, cells, y))
		switch status, _ := r.Overall(); {
		case status == existence.DoesNotExist:
			b.Bad++
			b.status[key(y)] = bad
			if len(y) == 1 {
				list = append(list, int64(y[0]))
			}
			if b.Reason == nil {
				for _, v := range r.Verdicts {
					if v.Status == existence.DoesNotExist {
						b.Reason = v
						break
					}
				}
			}
		case status == existence.NotDecided:
			b.Undecided++
			b.status[key(y)] = undecided
		}
		return ctx.Err()
	})
	if err != nil {
		return nil, err
	}
	switch {
	case b.Bad == 0:
		b.Text = "none"
	case b.Bad == b.Outcomes:
		b.Text = "every outcome"
	case len(list) > 0:
		b.Text = inWords(cells[0].Name, list)
	default:
		b.Text = fmt.Sprintf("%s of %s outcomes", whole(b.Bad), whole(b.Outcomes))
	}
	if b.Undecided > 0 {
		b.How = diag.NotDecided
	}
	for _, p := range Plans(a.Model) {
		b.Chances = append(b.Chances, b.Under(p))
	}
	return b, nil
}

// single takes one count with many outcomes from the existence room.
func (b *Breaks) single(ctx context.Context, a *model.Analysis) error {
	list := existence.Breaking(ctx, a)
	if len(list) != 1 {
		return fmt.Errorf("the outcomes of %s that leave no posterior were not found", b.Cells[0].Name)
	}
	b.open = list[0]
	b.How, b.Text, b.Bad, b.Outcomes = b.open.How, b.open.Text, len(b.open.Bad), -1
	if t := b.open.Trials; t >= 0 {
		b.Outcomes = int(t) + 1
	}
	if b.How == diag.NotDecided {
		b.Undecided = 1
	}
	if len(b.open.Reasons) > 0 {
		b.Reason = b.open.Reasons[0]
	}
	if b.open.All {
		b.Bad = b.Outcomes
	}
	for _, p := range Plans(a.Model) {
		b.Chances = append(b.Chances, b.Under(p))
	}
	return nil
}

// Under is the probability of no posterior under a planning value.
func (b *Breaks) Under(p Planned) Chance {
	c := Chance{Plan: p}
	arms := make([]longrun.Arm, len(b.Cells))
	for i, cell := range b.Cells {
		if arms[i], c.Err = cell.arm(p); c.Err != nil {
			return c
		}
	}
	if b.open != nil {
		if b.How == diag.NotDecided {
			c.Undecided = 1
		}
		in := map[int]bool{}
		for _, y := range b.open.Bad {
			in[int(y)] = true
		}
		last := -1
		if n := len(b.open.Bad); n > 0 && b.open.Open {
			last = int(b.open.Bad[n-1])
		}
		c.Value, c.Error, c.Err = longrun.Chance(arms[0].Count, func(y int) bool {
			return b.open.All || in[y] || last >= 0 && y > last
		}, arms[0].Value)
		return c
	}
	masses := longrun.Masses(arms)
	counts := make([]longrun.Count, len(arms))
	for i, a := range arms {
		counts[i] = a.Count
	}
	_, c.Err = longrun.Enumerate(context.Background(), counts, MaxCombinations, func(y []int) error {
		switch b.status[key(y)] {
		case bad:
			c.Value += longrun.Product(masses, y)
		case undecided:
			c.Undecided += longrun.Product(masses, y)
		}
		return nil
	})
	c.Error = 1e-10
	return c
}

func key(y []int) string { return fmt.Sprint(y) }

// Given is the analysis with an outcome filled in.
func Given(a *model.Analysis, cells []Cell, y []int) *model.Analysis {
	values := map[string][]*big.Rat{}
	for i, c := range cells {
		v := values[c.Awaited.Name]
		size := 1
		switch {
		case c.Awaited.Column != nil:
			size = c.Awaited.Column.Rows()
		case c.Awaited.Given != nil && c.Awaited.Given.Vector != nil:
			size = c.Awaited.Given.Vector.Rows()
		}
		if v == nil {
			v = make([]*big.Rat, size)
			for j := range v {
				v[j] = new(big.Rat)
			}
		}
		at := c.Row
		if size == 1 {
			at = 0
		}
		v[at] = big.NewRat(int64(y[i]), 1)
		values[c.Awaited.Name] = v
	}
	return &model.Analysis{Model: a.Model.WithOutcome(values), Name: a.Name, Use: a.Use}
}

// inWords writes a set of outcomes: "y = 0 or y = 40", "y from 0 to 3".
func inWords(name string, list []int64) string {
	var parts []string
	for i := 0; i < len(list); {
		j := i
		for j+1 < len(list) && list[j+1] == list[j]+1 {
			j++
		}
		if j > i+1 {
			parts = append(parts, fmt.Sprintf("%s from %d to %d", name, list[i], list[j]))
		} else {
			for k := i; k <= j; k++ {
				parts = append(parts, fmt.Sprintf("%s = %d", name, list[k]))
			}
		}
		i = j + 1
	}
	return strings.Join(parts, " or ")
}

// whole prints a whole number with commas from 10,000 on.
func whole(n int) string {
	text := strconv.Itoa(n)
	if len(text) > 4 {
		for i := len(text) - 3; i > 0; i -= 3 {
			text = text[:i] + "," + text[i:]
		}
	}
	return text
}
