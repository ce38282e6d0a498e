package cone

import "math/big"

// Verdict is the answer.
type Verdict int

// The four answers.
const (
	NotDecided    Verdict = iota // the work limit was reached
	RankDeficient                // some d ≠ 0 makes every row 0
	Separated                    // some d satisfies every row, and not all are 0
	Overlapped                   // only d = 0 satisfies every row
)

func (v Verdict) String() string {
	switch v {
	case RankDeficient:
		return "rank deficient"
	case Separated:
		return "separated"
	case Overlapped:
		return "overlapped"
	}
	return "not decided"
}

// Result is the answer with its proof, in the units of the problem as it was
// given. Everything in it has been verified in integer arithmetic.
type Result struct {
	Verdict Verdict

	// Direction, for RankDeficient and Separated, has one entry per column.
	// It is scaled to coprime integers where the columns are integers, and its
	// sign is free (the first entry that is not 0 is positive) when it is a
	// null vector.
	Direction []*big.Rat
	// Support lists the columns in which Direction is not 0.
	Support []int
	// Touching lists, in order, the rows of sense AtLeast or AtMost that are 0
	// along Direction; Apart counts those that are not. Set for Separated.
	Touching []int
	Apart    int
	// Complete says that no row touches: every row is off 0 along Direction,
	// and there is no row of sense Equal.
	Complete bool

	// Certificate is set for Overlapped.
	Certificate *Certificate

	// Way names the method that found the answer; it has no bearing on the
	// proof.
	Way string
}

// Certificate proves overlap. With x_k the row Rows[k], multiplied by −1 when
// its sense is AtMost, Σ Weights[k]·x_k = 0; the weight is positive unless the
// sense is Equal (then it may have any sign, or be 0); and the rows listed have
// rank p. For if d satisfies every row then the products x_k·d ≥ 0 have a
// positive combination that is 0, so all are 0, and d = 0 by the rank.
type Certificate struct {
	Rows    []int
	Weights []*big.Rat
	// Basis holds p places in Rows whose rows are linearly independent.
	Basis []int
}

// direction turns integer d, in units of the integer columns, into a result.
func (pr *Problem) direction(v Verdict, d []*big.Int, way string) *Result {
	r := &Result{Verdict: v, Way: way, Direction: make([]*big.Rat, pr.p)}
	num, den := new(big.Int), new(big.Int)
	var g *big.Int
	lcm := big.NewInt(1)
	for j := range d {
		q := new(big.Rat).SetInt(d[j])
		if d[j].Sign() != 0 {
			q.Quo(q, pr.columns[j].scale)
			r.Support = append(r.Support, j)
			den.GCD(nil, nil, lcm, q.Denom())
			lcm.Mul(lcm, num.Quo(q.Denom(), den))
		}
		r.Direction[j] = q
	}
	scale := new(big.Rat).SetInt(lcm)
	for _, j := range r.Support {
		q := r.Direction[j]
		q.Mul(q, scale)
		if g == nil {
			g = new(big.Int).Abs(q.Num())
		} else {
			g.GCD(nil, nil, g, num.Abs(q.Num()))
		}
	}
	if g == nil {
		return r
	}
	scale.SetFrac(big.NewInt(1), g)
	if v == RankDeficient && r.Direction[r.Support[0]].Sign() < 0 {
		scale.Neg(scale)
	}
	for _, j := range r.Support {
		r.Direction[j].Mul(r.Direction[j], scale)
	}
	return r
}
