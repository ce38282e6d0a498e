package verify

import (
	"errors"
	"fmt"
	"math/big"

	"wellposed/checks/existence/certificate"
)

// Verify returns nil when a certificate proves what it claims. exists is the
// verdict that it is offered for.
//
// What it proves depends on the kind. For "cone" it proves the claim about the
// rows given. For "conditions" it proves the arithmetic of the inequalities. For
// "ends" it proves that the orders given add up from their parts and imply what
// is claimed about the integral; that the kernel has these orders is the
// calculus of orders, stated in the package documentation of order.
func Verify(c *certificate.Certificate, exists bool) error {
	if c == nil {
		return errors.New("no certificate")
	}
	set := 0
	for _, is := range []bool{c.Ends != nil, c.Nowhere != nil, c.Conditions != nil, c.Cone != nil, c.Parts != nil} {
		if is {
			set++
		}
	}
	if set != 1 {
		return fmt.Errorf("a certificate has one body, not %d", set)
	}
	switch {
	case c.Kind == certificate.KindEnds && c.Ends != nil:
		return ends(c.Ends, exists)
	case c.Kind == certificate.KindNowhere && c.Nowhere != nil:
		if exists {
			return errors.New("a likelihood that vanishes leaves no posterior")
		}
		return nil
	case c.Kind == certificate.KindConditions && c.Conditions != nil:
		return conditions(c.Conditions, exists)
	case c.Kind == certificate.KindCone && c.Cone != nil:
		return cone(c.Cone, exists)
	case c.Kind == certificate.KindParts && c.Parts != nil:
		if len(c.Parts.List) == 0 {
			return errors.New("no parts")
		}
		for i, p := range c.Parts.List {
			if err := Verify(p, exists); err != nil {
				return fmt.Errorf("part %d: %w", i+1, err)
			}
		}
		return nil
	}
	return fmt.Errorf("kind %q does not fit its body", c.Kind)
}

func rat(s string) (*big.Rat, error) {
	r, ok := new(big.Rat).SetString(s)
	if !ok {
		return nil, fmt.Errorf("%q is no rational number", s)
	}
	return r, nil
}

func conditions(c *certificate.Conditions, exists bool) error {
	if c.Finite != exists {
		return errors.New("the certificate is for the other verdict")
	}
	if len(c.List) == 0 {
		return errors.New("no condition")
	}
	all := true
	for _, x := range c.List {
		sum := new(big.Rat)
		for _, t := range x.Terms {
			r, err := rat(t)
			if err != nil {
				return err
			}
			sum.Add(sum, r)
		}
		if (sum.Sign() > 0) != x.Holds {
			return fmt.Errorf("%s: the sum is %s", x.Text, sum.RatString())
		}
		all = all && x.Holds
	}
	if all != c.Finite {
		return errors.New("the conditions do not give the verdict")
	}
	return nil
}

// ends: the integral of x^p (log 1/x)^q over x → 0 is finite iff p > −1, or
// p = −1 and q < −1.
func ends(c *certificate.Ends, exists bool) error {
	if c.Finite != exists {
		return errors.New("the certificate is for the other verdict")
	}
	if len(c.Ends) == 0 {
		return errors.New("no end")
	}
	minusOne := big.NewRat(-1, 1)
	all := true
	for i, e := range c.Ends {
		finite := false
		switch {
		case e.Rapid < 0:
			finite = true
		case e.Rapid > 0:
		case e.Power == "":
			switch {
			case e.PowerLow > -1 && e.PowerLow <= e.PowerHigh:
				finite = true
			case e.PowerHigh < -1 && e.PowerLow <= e.PowerHigh:
			default:
				return fmt.Errorf("end %d: the exponent is not told from −1", i+1)
			}
		default:
			p, err := rat(e.Power)
			if err != nil {
				return err
			}
			if len(e.Parts) > 0 {
				sum := new(big.Rat)
				for _, t := range e.Parts {
					r, err := rat(t.Power)
					if err != nil {
						return err
					}
					sum.Add(sum, r)
				}
				if sum.Cmp(p) != 0 {
					return fmt.Errorf("end %d: the parts add up to %s, not %s", i+1, sum.RatString(), e.Power)
				}
			}
			switch cmp := p.Cmp(minusOne); {
			case cmp > 0:
				finite = true
			case cmp == 0 && e.LogPower != "":
				q, err := rat(e.LogPower)
				if err != nil {
					return err
				}
				finite = q.Cmp(minusOne) < 0
			}
		}
		if finite != e.Finite {
			return fmt.Errorf("end %d: the order does not give what is claimed", i+1)
		}
		all = all && finite
	}
	if all != c.Finite {
		return errors.New("the ends do not give the verdict")
	}
	if c.Slice && c.Finite {
		return errors.New("a slice can't prove that a posterior exists")
	}
	if c.Finite {
		return paired(c.Ends)
	}
	return nil
}

// paired checks that the ends bound whole intervals: one approached from above
// and then a higher one approached from below, without overlap.
func paired(es []certificate.End) error {
	value := func(s string) (*big.Rat, int, error) {
		switch s {
		case "inf":
			return nil, 1, nil
		case "-inf":
			return nil, -1, nil
		}
		r, err := rat(s)
		return r, 0, err
	}
	less := func(a, b string, strict bool) (bool, error) {
		x, i, err := value(a)
		if err != nil {
			return false, err
		}
		y, j, err := value(b)
		if err != nil {
			return false, err
		}
		if i != 0 || j != 0 {
			return i < j || !strict && i == j, nil
		}
		if strict {
			return x.Cmp(y) < 0, nil
		}
		return x.Cmp(y) <= 0, nil
	}
	if es[0].Side < 0 { // a sum over whole numbers has only the far end
		if len(es) != 1 {
			return errors.New("the ends do not pair up")
		}
		return nil
	}
	if len(es)%2 != 0 {
		return errors.New("the ends do not pair up")
	}
	for i := 0; i < len(es); i += 2 {
		if es[i].Side != 1 || es[i+1].Side != -1 {
			return errors.New("the ends do not pair up")
		}
		if ok, err := less(es[i].At, es[i+1].At, true); err != nil || !ok {
			return errors.New("an interval is empty")
		}
		if i > 0 {
			if ok, err := less(es[i-1].At, es[i].At, false); err != nil || !ok {
				return errors.New("intervals overlap")
			}
		}
	}
	return nil
}

func cone(c *certificate.Cone, exists bool) error {
	if c.Overlap != exists {
		return errors.New("the certificate is for the other verdict")
	}
	if len(c.Equal) != 0 && len(c.Equal) != len(c.Rows) || c.Columns < 1 {
		return errors.New("malformed rows")
	}
	rows := make([][]*big.Rat, len(c.Rows))
	for i, texts := range c.Rows {
		if len(texts) != c.Columns {
			return fmt.Errorf("row %d has %d entries, not %d", i+1, len(texts), c.Columns)
		}
		rows[i] = make([]*big.Rat, c.Columns)
		for j, t := range texts {
			r, err := rat(t)
			if err != nil {
				return err
			}
			rows[i][j] = r
		}
	}
	equal := func(i int) bool { return len(c.Equal) > 0 && c.Equal[i] }
	if c.Overlap {
		return overlap(c, rows, equal)
	}
	if len(c.Direction) != c.Columns {
		return errors.New("the direction has the wrong length")
	}
	d := make([]*big.Rat, c.Columns)
	nonzero := false
	for j, t := range c.Direction {
		r, err := rat(t)
		if err != nil {
			return err
		}
		d[j] = r
		nonzero = nonzero || r.Sign() != 0
	}
	if !nonzero {
		return errors.New("the direction is 0")
	}
	for i, row := range rows {
		s := new(big.Rat)
		for j, v := range row {
			s.Add(s, new(big.Rat).Mul(v, d[j]))
		}
		if s.Sign() < 0 || equal(i) && s.Sign() != 0 {
			return fmt.Errorf("row %d is not free along the direction: %s", i+1, s.RatString())
		}
	}
	return nil
}

func overlap(c *certificate.Cone, rows [][]*big.Rat, equal func(int) bool) error {
	if len(c.Weights) != len(rows) {
		return errors.New("the weights have the wrong length")
	}
	sum := make([]*big.Rat, c.Columns)
	for j := range sum {
		sum[j] = new(big.Rat)
	}
	for i, t := range c.Weights {
		w, err := rat(t)
		if err != nil {
			return err
		}
		if w.Sign() <= 0 && !equal(i) {
			return fmt.Errorf("weight %d is not positive", i+1)
		}
		for j, v := range rows[i] {
			sum[j].Add(sum[j], new(big.Rat).Mul(w, v))
		}
	}
	for j, s := range sum {
		if s.Sign() != 0 {
			return fmt.Errorf("column %d of the combination is %s, not 0", j+1, s.RatString())
		}
	}
	if r := rank(rows, c.Columns); r != c.Columns {
		return fmt.Errorf("the rows have rank %d, not %d", r, c.Columns)
	}
	return nil
}
