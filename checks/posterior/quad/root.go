package quad

import "math"

// Root finds a sign change of f between a and b, where f has different signs, to
// the accuracy of doubles (Brent 1973, chapter 4). At a jump it is the jump.
func Root(f func(float64) float64, a, b, fa, fb float64) float64 {
	if fa == 0 {
		return a
	}
	if fb == 0 {
		return b
	}
	c, fc := a, fa
	d := b - a
	e := d
	for range 200 {
		if (fb > 0) == (fc > 0) {
			c, fc, d = a, fa, b-a
			e = d
		}
		if math.Abs(fc) < math.Abs(fb) {
			a, b, c = b, c, b
			fa, fb, fc = fb, fc, fb
		}
		tolerance := 4e-16 * math.Abs(b)
		m := (c - b) / 2
		if math.Abs(m) <= tolerance || fb == 0 {
			return b
		}
		if math.Abs(e) < tolerance || math.Abs(fa) <= math.Abs(fb) || math.IsInf(fa, 0) || math.IsInf(fc, 0) {
			d, e = m, m
		} else {
			var p, q float64
			s := fb / fa
			if a == c {
				p, q = 2*m*s, 1-s
			} else {
				q, r := fa/fc, fb/fc
				p = s * (2*m*q*(q-r) - (b-a)*(r-1))
				q = (q - 1) * (r - 1) * (s - 1)
				if p > 0 {
					q = -q
				}
				p = math.Abs(p)
				if 2*p < math.Min(3*m*q-math.Abs(tolerance*q), math.Abs(e*q)) {
					e, d = d, p/q
				} else {
					d, e = m, m
				}
				goto step
			}
			if p > 0 {
				q = -q
			}
			p = math.Abs(p)
			if 2*p < math.Min(3*m*q-math.Abs(tolerance*q), math.Abs(e*q)) {
				e, d = d, p/q
			} else {
				d, e = m, m
			}
		}
	step:
		a, fa = b, fb
		if math.Abs(d) > tolerance {
			b += d
		} else {
			b += math.Copysign(tolerance, m)
		}
		fb = f(b)
		if fb != fb {
			return math.NaN()
		}
	}
	return b
}
