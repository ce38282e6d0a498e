package cone

import "math/bits"

// Arithmetic modulo the Mersenne prime 2^61 − 1. A minor that is not 0 modulo
// the prime is not 0, so independence found here is proved; dependence found
// here is only a guess, and is followed by an exact check.
const prime = 1<<61 - 1

func residue(v int64) uint64 {
	r := v % prime
	if r < 0 {
		r += prime
	}
	return uint64(r)
}

func fold(hi, lo uint64) uint64 {
	// 2^61 ≡ 1: add the limbs of 61 bits. hi < 2^64 gives three of them.
	r := lo&prime + (lo>>61 | (hi<<3)&prime) + hi>>58
	r = r&prime + r>>61
	if r >= prime {
		r -= prime
	}
	return r
}

func mulMod(a, b uint64) uint64 {
	hi, lo := bits.Mul64(a, b)
	return fold(hi, lo)
}

func invMod(a uint64) uint64 {
	// Fermat: a^(prime−2).
	r, e := uint64(1), uint64(prime-2)
	for ; e > 0; e >>= 1 {
		if e&1 == 1 {
			r = mulMod(r, a)
		}
		a = mulMod(a, a)
	}
	return r
}

// dotMod is Σ a_j·b_j. Sums of 32 products stay below 2^127.
func dotMod(a, b []uint64) uint64 {
	b = b[:len(a)]
	var total uint64
	for len(a) > 0 {
		n := min(32, len(a))
		var hi, lo uint64
		for j, x := range a[:n] {
			h, l := bits.Mul64(x, b[j])
			var c uint64
			lo, c = bits.Add64(lo, l, 0)
			hi += h + c
		}
		total += fold(hi, lo)
		if total >= prime {
			total -= prime
		}
		a, b = a[n:], b[n:]
	}
	return total
}

// echelon collects independent rows, in reduced form modulo the prime.
type echelon struct {
	p       int
	reduced [][]uint64 // 1 at its own pivot, 0 at those of the rows before
	pivots  []int
	rows    []int32 // which rows of the problem
	scratch []uint64
}

func newEchelon(p int) *echelon {
	return &echelon{p: p, scratch: make([]uint64, p)}
}

func (e *echelon) rank() int { return len(e.rows) }

// add takes a row unless it depends on those taken; it says whether it did.
func (e *echelon) add(x []int64, row int32) bool {
	if len(e.rows) == e.p {
		return false
	}
	s := e.scratch
	for j, v := range x {
		s[j] = residue(v)
	}
	for k, y := range e.reduced {
		f := s[e.pivots[k]]
		if f == 0 {
			continue
		}
		f = prime - f
		for j, v := range y {
			if v != 0 {
				t := s[j] + mulMod(f, v)
				if t >= prime {
					t -= prime
				}
				s[j] = t
			}
		}
	}
	for j, v := range s {
		if v == 0 {
			continue
		}
		inv := invMod(v)
		y := make([]uint64, e.p)
		for i := range y {
			y[i] = mulMod(s[i], inv)
		}
		e.reduced, e.pivots, e.rows = append(e.reduced, y), append(e.pivots, j), append(e.rows, row)
		return true
	}
	return false
}

// clone shares the rows, which are never written again.
func (e *echelon) clone() *echelon {
	return &echelon{
		p: e.p, scratch: make([]uint64, e.p),
		reduced: e.reduced[:len(e.reduced):len(e.reduced)],
		pivots:  e.pivots[:len(e.pivots):len(e.pivots)],
		rows:    e.rows[:len(e.rows):len(e.rows)],
	}
}

// free lists the columns that are no pivot.
func (e *echelon) free() []int {
	taken := make([]bool, e.p)
	for _, j := range e.pivots {
		taken[j] = true
	}
	var out []int
	for j, t := range taken {
		if !t {
			out = append(out, j)
		}
	}
	return out
}
