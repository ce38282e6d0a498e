package quad

import (
	"math"
	"sort"
)

// farthest is where the search for an end gives up.
const farthest = 1e12

// scan are the places looked at when nothing is known.
var scan = func() []float64 {
	s := []float64{0}
	for u := 1.0; u < 1e6; {
		s = append(s, u, -u)
		if u < 16 {
			u++
		} else {
			u *= 1.7
		}
	}
	sort.Float64s(s)
	return s
}()

// locate finds the modes and the range, and proposes ends of panels.
func (l *Line) locate(log LogDensity, hints []Hint) (breaks []float64, tails float64, err error) {
	if len(hints) == 0 {
		hints = scanned(log)
	}
	l.Modes = l.Modes[:0]
	l.Top = math.Inf(-1)
	var tops []float64
	for _, h := range hints {
		mode, top := climb(log, h)
		if math.IsInf(top, -1) {
			continue
		}
		if math.IsInf(top, 1) {
			return nil, 0, ErrNotIntegrable
		}
		same := false
		for i, m := range l.Modes {
			if math.Abs(m.Mode-mode) <= 1e-3*m.Width+1e-12*math.Abs(mode) {
				same = true
				if top > tops[i] {
					l.Modes[i].Mode, tops[i] = mode, top
				}
			}
		}
		if !same {
			l.Modes = append(l.Modes, Hint{mode, math.Max(h.Width, 1e-300)})
			tops = append(tops, top)
		}
		l.Top = math.Max(l.Top, top)
	}
	if len(l.Modes) == 0 {
		return nil, 0, ErrEmpty
	}
	kept := l.Modes[:0]
	for i, m := range l.Modes {
		if tops[i] < l.Top-l.depth() {
			continue
		}
		wide := 0.0
		for _, side := range []float64{-1, 1} {
			points, width, tail, err := ladder(log, m, tops[i], l.Top-l.depth(), side)
			if err != nil {
				return nil, 0, err
			}
			breaks = append(breaks, points...)
			tails += tail
			if wide == 0 || width < wide {
				wide = width
			}
		}
		breaks = append(breaks, m.Mode)
		kept = append(kept, Hint{m.Mode, wide})
	}
	l.Modes = kept
	sort.Float64s(breaks)
	out := breaks[:1]
	for _, b := range breaks[1:] {
		if last := out[len(out)-1]; b-last > 1e-13*math.Max(math.Abs(b), math.Abs(last)) {
			out = append(out, b)
		}
	}
	if len(out) < 2 {
		return nil, 0, ErrUnresolved
	}
	return out, tails, nil
}

// scanned looks over the whole range and returns the local maxima that count.
func scanned(log LogDensity) []Hint {
	values := make([]float64, len(scan))
	top := math.Inf(-1)
	for i, u := range scan {
		values[i] = log(u)
		top = math.Max(top, values[i])
	}
	var hints []Hint
	for i, v := range values {
		left, right := math.Inf(-1), math.Inf(-1)
		if i > 0 {
			left = values[i-1]
		}
		if i < len(values)-1 {
			right = values[i+1]
		}
		if math.IsInf(v, -1) || v < left || v <= right {
			continue
		}
		gap := 1.0
		if i > 0 && i < len(scan)-1 {
			gap = math.Min(scan[i]-scan[i-1], scan[i+1]-scan[i])
		}
		// The top between two places can be far above both of them.
		hints = append(hints, Hint{scan[i], gap})
	}
	return hints
}

// climb finds a local maximum from a hint: it brackets by doubling steps, then
// halves the bracket by golden section with parabolic steps (Brent 1973).
func climb(log LogDensity, h Hint) (mode, top float64) {
	step := h.Width
	if !(step > 0) || math.IsInf(step, 0) {
		step = 1
	}
	step *= 0.5
	b, fb := h.Mode, log(h.Mode)
	a, fa := b-step, log(b-step)
	c, fc := b+step, log(b+step)
	for range 200 {
		if fb >= fa && fb >= fc {
			break
		}
		step *= 2
		if fc > fa {
			a, fa, b, fb = b, fb, c, fc
			c = b + step
			fc = log(c)
		} else {
			c, fc, b, fb = b, fb, a, fa
			a = b - step
			fa = log(a)
		}
		if math.Abs(b) > farthest {
			break
		}
	}
	if math.IsInf(fb, -1) {
		return b, fb
	}
	for range 80 {
		if fb-math.Min(fa, fc) < 0.05 || c-a < 1e-13*math.Max(math.Abs(a), math.Abs(c)) {
			break
		}
		// Vertex of the parabola, else the middle of the larger side.
		p, q := b-a, b-c
		num := p*p*(fb-fc) - q*q*(fb-fa)
		den := p*(fb-fc) - q*(fb-fa)
		x := b - num/(2*den)
		room := 0.02 * (c - a)
		if !(x > a+room && x < c-room) || math.Abs(x-b) < room/2 {
			if b-a > c-b {
				x = b - 0.382*(b-a)
			} else {
				x = b + 0.382*(c-b)
			}
		}
		fx := log(x)
		switch {
		case fx > fb && x > b:
			a, fa, b, fb = b, fb, x, fx
		case fx > fb:
			c, fc, b, fb = b, fb, x, fx
		case x > b:
			c, fc = x, fx
		default:
			a, fa = x, fx
		}
	}
	// A smooth top falls by a quarter at half the distance, a pointed one by more;
	// its point must end a panel exactly.
	reach := math.Max(c-b, b-a) / 2
	if half, whole := fb-log(b+reach/2), fb-log(b+reach); half > 0.4*whole && !math.IsInf(whole, 1) {
		b, fb = point(log, b-reach, b+reach)
	}
	return b, fb
}

// point finds a maximum as exactly as doubles allow, by golden section.
func point(log LogDensity, a, b float64) (at, top float64) {
	const g = 0.6180339887498949
	x, y := b-g*(b-a), a+g*(b-a)
	fx, fy := log(x), log(y)
	for range 90 {
		if fx > fy {
			b, y, fy = y, x, fx
			x = b - g*(b-a)
			fx = log(x)
		} else {
			a, x, fx = x, y, fy
			y = a + g*(b-a)
			fy = log(y)
		}
	}
	if fx > fy {
		return x, fx
	}
	return y, fy
}

// ladder goes outward from a mode by doubling steps until the density no longer
// counts. It returns the rungs, the width of the mode on that side (where the
// logarithm has fallen by about a half to two), and the mass beyond the last
// rung as an exponential tail would have it.
func ladder(log LogDensity, m Hint, top, bottom, side float64) (points []float64, width, tail float64, err error) {
	step := m.Width
	fall := top - log(m.Mode+side*step)
	for range 300 {
		switch {
		case fall > 2:
			step /= 2
		case fall < 0.3:
			step *= 2
		default:
			goto found
		}
		if step > farthest {
			return nil, 0, 0, ErrNotIntegrable
		}
		if step < 1e-15*math.Abs(m.Mode) || step < 1e-300 {
			// A jump beside the mode: the density ends there.
			return []float64{m.Mode + side*step}, step, 0, nil
		}
		before := fall
		fall = top - log(m.Mode+side*step)
		if before > 2 && fall < 0.3 {
			goto found // a jump between step and 2 step
		}
	}
found:
	width = step
	previous, at := top, step
	for k := 0; ; k++ {
		at *= 2
		if at > farthest {
			return nil, 0, 0, ErrNotIntegrable
		}
		v := log(m.Mode + side*at)
		if v > bottom {
			points = append(points, m.Mode+side*at)
			previous = v
			continue
		}
		// Halve back to where the density just stops counting.
		inside, outside, fo := at/2, at, v
		for range 3 {
			mid := (inside + outside) / 2
			if w := log(m.Mode + side*mid); w > bottom {
				inside, previous = mid, w
			} else {
				outside, fo = mid, w
			}
		}
		points = append(points, m.Mode+side*outside)
		// One look further, for a second hill beyond the end.
		if slope := (previous - fo) / (outside - inside); slope > 0 && !math.IsInf(fo, -1) {
			tail = math.Exp(fo-bottom-42) / slope
		}
		return points, width, tail, nil
	}
}

// Modes looks for the local maxima and their widths without integrating.
func Modes(log LogDensity, hints ...Hint) ([]Hint, error) {
	l := &Line{}
	clean := func(u float64) float64 {
		if v := log(u); v == v {
			return v
		}
		return math.Inf(-1)
	}
	if _, _, err := l.locate(clean, hints); err != nil {
		return nil, err
	}
	return l.Modes, nil
}
