package posterior

import (
	"math"

	"wellposed/checks/posterior/special"
	"wellposed/parser/model"
)

// coordinate maps a number without limits to a variable.
type coordinate struct {
	slot int
	kind coordinateKind
	// a is the lower end, the upper end or the centre; b the length or the scale.
	a, b float64
	// logb is log b.
	logb float64
	// last is the slot of the share that takes what is left, −1 for none.
	last int
	// fromZero and fromOne say that the logarithms of x and 1 − x are not those of
	// the distances from the ends.
	fromZero, fromOne bool
}

type coordinateKind int

const (
	wholeLine  coordinateKind = iota // x = a + b sinh u
	aboveLow                         // x = a + exp u
	belowHigh                        // x = a − exp(−u)
	interval                         // x = a + b expit u
	stick                            // a share expit u of what the shares before it left
	increasing                       // x = previous + exp u
)

// coordinateOf is the coordinate of a variable by its support.
func coordinateOf(v variable, slot int, support model.Bounds) coordinate {
	low, high := support.Low, support.High
	c := coordinate{slot: slot, last: -1}
	switch v.unknown.Kind.Name {
	case "proportions":
		c.kind, c.a = stick, float64(slot-v.component)
		if v.component == v.unknown.Components()-2 {
			c.last = slot + 1
		}
		return c
	case "cutpoints":
		if v.component > 0 {
			c.kind = increasing
			return c
		}
	case "covariance":
		refuse("covariance matrices are not integrated here")
	}
	switch {
	case low != nil && high != nil:
		c.kind = interval
		c.a, _ = low.Float64()
		h, _ := high.Float64()
		c.b = h - c.a
	case low != nil:
		c.kind, c.b = aboveLow, 1
		c.a, _ = low.Float64()
	case high != nil:
		c.kind, c.b = belowHigh, 1
		c.a, _ = high.Float64()
	default:
		c.kind, c.b = wholeLine, 1
	}
	c.logb = math.Log(c.b)
	c.fromZero = c.kind != aboveLow && c.kind != interval || c.a != 0
	c.fromOne = c.kind != interval || c.a+c.b != 1
	return c
}

// set puts the variable at u and returns the logarithm of |dx/du|.
func (c *coordinate) set(s *state, u float64) float64 {
	j := c.put(s, u)
	if c.kind != stick {
		if c.fromZero {
			s.low[c.slot] = math.Log(s.x[c.slot])
		}
		if c.fromOne {
			s.high[c.slot] = math.Log1p(-s.x[c.slot])
		}
	}
	return j
}

func (c *coordinate) put(s *state, u float64) float64 {
	i := c.slot
	switch c.kind {
	case aboveLow:
		s.low[i] = u
		e := math.Exp(u)
		s.x[i] = c.a + e
		return u
	case belowHigh:
		s.high[i] = -u
		s.x[i] = c.a - math.Exp(-u)
		return -u
	case interval:
		p := math.Exp(-math.Abs(u))
		d := math.Log1p(p)
		p /= 1 + p
		s.low[i], s.high[i] = -d, -d-u
		if u < 0 {
			s.low[i], s.high[i] = u-d, -d
		} else {
			p = 1 - p
		}
		j := s.low[i] + s.high[i] + c.logb
		s.x[i] = c.a + c.b*p
		if c.b != 1 {
			s.low[i] += c.logb
			s.high[i] += c.logb
		}
		return j
	case stick:
		rest := 0.0
		if i > c.first() {
			rest = s.rest[i-1]
		}
		d, e := special.Log1pExp(-u), special.Log1pExp(u)
		s.low[i] = rest - d
		s.x[i] = math.Exp(s.low[i])
		s.high[i] = math.Log1p(-s.x[i])
		s.rest[i] = rest - e
		if c.last >= 0 {
			s.low[c.last] = rest - e
			s.x[c.last] = math.Exp(rest - e)
			s.high[c.last] = math.Log1p(-s.x[c.last])
		}
		return rest - d - e
	case increasing:
		s.x[i] = s.x[i-1] + math.Exp(u)
		return u
	}
	s.x[i] = c.a + c.b*math.Sinh(u)
	a := math.Abs(u)
	return c.logb + a + math.Log1p(math.Exp(-2*a)) - math.Ln2
}

func (c *coordinate) first() int { return int(c.a) }

// value is the variable at u.
func (c *coordinate) value(u float64) float64 {
	switch c.kind {
	case aboveLow:
		return c.a + math.Exp(u)
	case belowHigh:
		return c.a - math.Exp(-u)
	case interval:
		if u > 0 {
			return c.a + c.b - c.b*math.Exp(-special.Log1pExp(u))
		}
		return c.a + c.b*math.Exp(-special.Log1pExp(-u))
	}
	return c.a + c.b*math.Sinh(u)
}

// variablesOf lists the free components of unknowns in order of declaration.
func variablesOf(unknowns []*model.Unknown) []variable {
	var out []variable
	for _, u := range unknowns {
		for k := range max(1, u.Components()) {
			if !u.Scalar() && u.Relative >= 0 && k == u.Relative {
				continue
			}
			out = append(out, variable{u, k})
		}
	}
	return out
}
