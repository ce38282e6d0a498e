package objective

import (
	"context"
	"errors"
	"fmt"
	"math/big"
	"slices"
	"strings"

	sy "wellposed/checks/objective/symbolic"
	"wellposed/parser/model"
)

// information is the expected (Fisher) information of a whole analysis about
// some parameters, the others held.
type information struct {
	parameters []*Parameter
	entries    [][]sy.Expr
	// says are lines for a derivation, assumed what is assumed about the plan.
	says, assumed []string
	// exact is false when sums over rows were taken in floating point or an
	// entry is an expectation without closed form.
	exact bool
}

// mostParameters bounds the size of an information matrix.
const mostParameters = 40

// mostDistinctRows bounds the rows that are summed in symbols.
const mostDistinctRows = 6

// errNoLikelihood says that nothing observed depends on the unknowns.
var errNoLikelihood = errors.New("no observation depends on it")

func (s *space) information(ctx context.Context, ps []*Parameter) (*information, error) {
	if len(ps) == 0 {
		return nil, errors.New("there is nothing to derive a prior for")
	}
	if len(ps) > mostParameters {
		return nil, fmt.Errorf("%d components are more than the %d that are followed", len(ps), mostParameters)
	}
	in := &information{parameters: ps, exact: true, entries: make([][]sy.Expr, len(ps))}
	for i := range in.entries {
		in.entries[i] = make([]sy.Expr, len(ps))
		for j := range in.entries[i] {
			in.entries[i][j] = sy.Zero
		}
	}
	s.watch = map[string]bool{}
	for _, p := range ps {
		s.watch[p.Symbol.Name] = true
	}
	found := false
	for _, o := range s.a.Observations {
		if err := ctx.Err(); err != nil {
			return nil, err
		}
		if !s.concerns(o) {
			continue
		}
		found = true
		if err := s.observe(ctx, in, o); err != nil {
			return nil, err
		}
	}
	if !found {
		return nil, errNoLikelihood
	}
	return in, nil
}

// concerns reports whether an observation depends on a watched parameter, also
// through the population model of a varying effect.
func (s *space) concerns(o *model.Observation) bool {
	return s.distConcerns(o.Dist, 0)
}

func (s *space) distConcerns(d *model.Dist, depth int) bool {
	for _, u := range unknownsOf(d) {
		for _, p := range s.parameters[u] {
			if p != nil && s.watch[p.Symbol.Name] {
				return true
			}
		}
		if u.Population != nil && depth < 10 && s.distConcerns(u.Population.Dist, depth+1) {
			return true
		}
	}
	return false
}

func (in *information) say(lines ...string) {
	for _, l := range lines {
		if l != "" && !slices.Contains(in.says, l) {
			in.says = append(in.says, l)
		}
	}
}

func (in *information) assume(line string) {
	if line != "" && !slices.Contains(in.assumed, line) {
		in.assumed = append(in.assumed, line)
	}
}

// observe adds the information of one observation statement.
func (s *space) observe(ctx context.Context, in *information, o *model.Observation) error {
	switch o.Dist.Spec.Name {
	case "Cox":
		return errors.New("a partial likelihood has no sampling law to take expectations over")
	case "Point":
		return errors.New("a point has no information")
	}
	dependsOnPrevious := false
	visitDist(o.Dist, func(e model.Expr) {
		if c, ok := e.(*model.Call); ok && c.Func == "previous" {
			dependsOnPrevious = true
		}
	})
	if dependsOnPrevious {
		return errors.New("with previous() the design itself is random; use AR1 for the stationary likelihood")
	}
	rows := o.Rows
	if len(rows) == 0 {
		rows = []int{0}
	}
	if o.Dist.Spec.Name == "AR1" {
		l, err := s.law(o.Dist, rows[0], len(rows))
		if err != nil {
			return err
		}
		return s.addLaw(ctx, in, o, l, rows[:1])
	}
	if done, err := s.varying(ctx, in, o, rows); done || err != nil {
		return err
	}
	if o.Dist.Spec.Name == "Mixture" || o.Truncated != nil || o.Left != nil {
		return s.expected(ctx, in, o, rows)
	}
	if o.Reading == model.Between {
		in.assume("interval readings count as if they had been exact")
	}
	limit, err := s.limit(in, o, rows)
	if err != nil {
		return err
	}
	if limit != nil && o.Dist.Spec.Name != "Exponential" && o.Dist.Spec.Name != "Weibull" {
		return s.expected(ctx, in, o, rows)
	}
	for _, group := range s.patterns(o.Dist, rows) {
		var l *law
		if limit != nil {
			if l = s.censoredLaw(o.Dist, group[0], sy.Rat(limit)); l == nil {
				return fmt.Errorf("the information of %s under censoring is not followed", o.Dist.Spec.Name)
			}
		} else if l, err = s.law(o.Dist, group[0], len(o.What)); err != nil {
			return err
		}
		if err := s.addLaw(ctx, in, o, l, group); err != nil {
			return err
		}
	}
	return nil
}

// limit reads the plan of right-censoring from the rows: when all censored rows
// stand at one time and no failure is later, follow-up ended for everybody at
// that time. Nil without censoring.
func (s *space) limit(in *information, o *model.Observation, rows []int) (*big.Rat, error) {
	if o.Right == nil {
		return nil, nil
	}
	if len(o.What) != 1 {
		return nil, errors.New("the information of several censored values is not followed")
	}
	var ends, failures []*big.Rat
	for _, row := range rows {
		v, ok := exactIn(o.What[0], row)
		if !ok {
			return nil, errors.New("the recorded times are not there yet, so the time of censoring is not known")
		}
		c, ok := conditionIn(o.Right, row)
		if !ok {
			return nil, errors.New("the condition of censoring cannot be read row by row")
		}
		if c {
			ends = append(ends, v)
		} else {
			failures = append(failures, v)
		}
	}
	if len(ends) == 0 {
		in.assume("no reading was censored, so the plan is read as one without a limit")
		return nil, nil
	}
	for _, e := range ends {
		if e.Cmp(ends[0]) != 0 {
			return nil, errors.New("the censored readings end at different times, so the plan that set them is not known: the information needs the limit of every unit, failed ones included")
		}
	}
	for _, f := range failures {
		if f.Cmp(ends[0]) > 0 {
			return nil, errors.New("some failure is later than the time of censoring, so the plan that set it is not known")
		}
	}
	in.assume(fmt.Sprintf("every unit would have been followed up to %s and no longer (fixed-time censoring)", ends[0].RatString()))
	return ends[0], nil
}

// patterns groups rows that refer to the same components.
func (s *space) patterns(d *model.Dist, rows []int) [][]int {
	var refs []*model.UnknownRef
	visitDist(d, func(e model.Expr) {
		if r, ok := e.(*model.UnknownRef); ok && r.Which == model.ByRow {
			refs = append(refs, r)
		}
	})
	if len(refs) == 0 {
		return [][]int{rows}
	}
	var out [][]int
	at := map[string]int{}
	for _, row := range rows {
		var k strings.Builder
		for _, r := range refs {
			i, err := componentOfRow(r, row)
			if err != nil {
				i = -1
			}
			fmt.Fprint(&k, i, ",")
		}
		i, ok := at[k.String()]
		if !ok {
			i = len(out)
			at[k.String()] = i
			out = append(out, nil)
		}
		out[i] = append(out[i], row)
	}
	return out
}

// addLaw adds J′ I J, summed over rows that share the form.
func (s *space) addLaw(ctx context.Context, in *information, o *model.Observation, l *law, rows []int) error {
	in.say(l.says)
	in.assume(l.assumed)
	jacobian := make([][]sy.Expr, len(l.args))
	for k, x := range l.args {
		jacobian[k] = make([]sy.Expr, len(in.parameters))
		for a, p := range in.parameters {
			d, err := sy.Diff(x, p.Symbol)
			if err != nil {
				return err
			}
			jacobian[k][a] = d
		}
	}
	times := sy.One
	if o != nil && o.Weight != nil {
		w, err := s.lower(o.Weight, rows[0])
		if err != nil {
			return err
		}
		times = w
		in.assume("the weights multiply the information of each row")
	}
	if o != nil && o.Reading == model.Summary {
		n, err := s.lower(o.N, rows[0])
		if err != nil {
			return err
		}
		times = sy.Mul(times, n)
	}
	for a := range in.parameters {
		for b := a; b < len(in.parameters); b++ {
			if err := ctx.Err(); err != nil {
				return err
			}
			var parts []sy.Expr
			for k := range l.args {
				for m := range l.args {
					if l.info[k][m] == nil || isZero(jacobian[k][a]) || isZero(jacobian[m][b]) {
						continue
					}
					parts = append(parts, sy.Mul(jacobian[k][a], l.info[k][m], jacobian[m][b], times))
				}
			}
			// Factored row by row: p − p² would lose its digits near p = 1.
			row := sy.Add(parts...)
			if !l.compact {
				row = simplified(row)
			}
			t, err := s.overRows(in, row, rows)
			if err != nil {
				return err
			}
			in.entries[a][b] = sy.Add(in.entries[a][b], t)
			in.entries[b][a] = in.entries[a][b]
		}
	}
	return nil
}

func isZero(e sy.Expr) bool { v := sy.Number(e); return v != nil && v.Sign() == 0 }
