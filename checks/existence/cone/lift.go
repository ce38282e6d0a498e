package cone

import (
	"context"
	"math/big"
	"math/bits"
)

// solveExact solves A·x = b for a square integer matrix (row-major, n × n) by
// p-adic lifting (Dixon 1982): the inverse modulo the prime gives one digit of
// x after another, and a rational of bounded size is read off the digits. The
// result is x = num/den with den > 0, checked exactly against the system; ok is
// false when A is singular modulo the prime.
//
// Every |entry|·n must be below 2^64, |entry| below 2^62, and |b_i| below 2^120.
func solveExact(ctx context.Context, a []int64, n int, b []*big.Int) (num []*big.Int, den *big.Int, ok bool, err error) {
	if n == 0 {
		return nil, big.NewInt(1), true, nil
	}
	inverse := invertMod(ctx, a, n)
	if inverse == nil {
		return nil, nil, false, ctx.Err()
	}
	// Cramer and Hadamard bound num and den; a little beyond the product of
	// both bounds the answer is unique and must have been found.
	limit := 8
	for i := range n {
		sum := 0.0
		for _, v := range a[i*n : i*n+n] {
			sum += float64(v) * float64(v)
		}
		limit += bits.Len64(uint64(min(sum, 1e18)))/2 + 1
		if sum > 1e18 {
			limit += 31
		}
	}
	longest := 0
	for _, v := range b {
		longest = max(longest, v.BitLen())
	}
	limit = 2*limit + longest + bits.Len(uint(n)) + 2
	steps := limit/60 + 2

	type wide struct {
		hi int64
		lo uint64
	}
	rest := make([]wide, n)
	t := new(big.Int)
	for i, v := range b {
		mask := new(big.Int).SetUint64(^uint64(0))
		rest[i].lo = t.And(t.Abs(v), mask).Uint64()
		rest[i].hi = int64(t.Rsh(t.Abs(v), 64).Uint64())
		if v.Sign() < 0 {
			rest[i].lo, rest[i].hi = -rest[i].lo, ^rest[i].hi
			if rest[i].lo == 0 {
				rest[i].hi++
			}
		}
	}
	digits := make([][]uint64, n)
	for i := range digits {
		digits[i] = make([]uint64, 0, steps)
	}
	r, x := make([]uint64, n), make([]uint64, n)
	modulus := big.NewInt(1)
	q := new(big.Int).SetUint64(prime)
	try := 2
	for step := 1; step <= steps; step++ {
		if step&15 == 0 || n > 50 {
			if err := ctx.Err(); err != nil {
				return nil, nil, false, err
			}
		}
		for i, v := range rest {
			hi, lo, negative := uint64(v.hi), v.lo, v.hi < 0
			if negative {
				lo = -lo
				hi = ^hi
				if lo == 0 {
					hi++
				}
			}
			r[i] = fold(hi, lo)
			if negative && r[i] != 0 {
				r[i] = prime - r[i]
			}
		}
		for i := range x {
			x[i] = dotMod(inverse[i*n:i*n+n], r)
			digits[i] = append(digits[i], x[i])
		}
		modulus.Mul(modulus, q)
		if step >= try || step == steps {
			num, den = reconstruct(ctx, digits, modulus, a, b)
			if den != nil {
				return num, den, true, nil
			}
			try = step + max(2, step/2)
		}
		for i := range rest {
			hi, lo := rest[i].hi, rest[i].lo
			row := a[i*n : i*n+n]
			for j, d := range x {
				// signed × unsigned, 128 bits
				h, l := bits.Mul64(uint64(row[j]), d)
				h -= uint64(row[j]>>63) & d
				var c uint64
				lo, c = bits.Sub64(lo, l, 0)
				hi -= int64(h + c)
			}
			rest[i].hi, rest[i].lo = divPrime(hi, lo)
		}
	}
	return nil, nil, false, ctx.Err()
}

// divPrime divides a multiple of the prime, exactly.
func divPrime(hi int64, lo uint64) (int64, uint64) {
	negative := hi < 0
	h := uint64(hi)
	if negative {
		lo = -lo
		h = ^h
		if lo == 0 {
			h++
		}
	}
	top := h / prime
	l, _ := bits.Div64(h%prime, lo, prime)
	h = top
	if negative {
		l = -l
		h = ^h
		if l == 0 {
			h++
		}
	}
	return int64(h), l
}

// invertMod is Gauss–Jordan elimination modulo the prime; nil when singular.
func invertMod(ctx context.Context, a []int64, n int) []uint64 {
	w := 2 * n
	m := make([]uint64, n*w)
	for i := range n {
		for j := range n {
			m[i*w+j] = residue(a[i*n+j])
		}
		m[i*w+n+i] = 1
	}
	for c := range n {
		if n > 50 && ctx.Err() != nil {
			return nil
		}
		k := c
		for k < n && m[k*w+c] == 0 {
			k++
		}
		if k == n {
			return nil
		}
		pivot := m[c*w : c*w+w]
		if k != c {
			other := m[k*w : k*w+w]
			for j := range pivot {
				pivot[j], other[j] = other[j], pivot[j]
			}
		}
		inv := invMod(pivot[c])
		for j := c; j < w; j++ {
			if pivot[j] != 0 {
				pivot[j] = mulMod(pivot[j], inv)
			}
		}
		for i := range n {
			row := m[i*w : i*w+w]
			f := row[c]
			if i == c || f == 0 {
				continue
			}
			f = prime - f
			for j := c; j < w; j++ {
				if pivot[j] != 0 {
					t := row[j] + mulMod(f, pivot[j])
					if t >= prime {
						t -= prime
					}
					row[j] = t
				}
			}
		}
	}
	out := make([]uint64, n*n)
	for i := range n {
		copy(out[i*n:i*n+n], m[i*w+n:i*w+w])
	}
	return out
}

// reconstruct reads x = num/den off its digits to base prime, den being shared,
// and checks A·num = den·b. den is nil when the digits don't suffice.
func reconstruct(ctx context.Context, digits [][]uint64, modulus *big.Int, a []int64, b []*big.Int) ([]*big.Int, *big.Int) {
	n := len(digits)
	half := uint(modulus.BitLen()-1) / 2
	bound := new(big.Int).Lsh(big.NewInt(1), half-1)
	centre := new(big.Int).Rsh(modulus, 1)
	den := big.NewInt(1)
	num := make([]*big.Int, n)
	t, u := new(big.Int), new(big.Int)
	for i := range num {
		if n > 50 && ctx.Err() != nil {
			return nil, nil
		}
		v := join(digits[i])
		num[i] = v
		v.Mul(v, den)
		v.Mod(v, modulus)
		if v.Cmp(centre) > 0 {
			v.Sub(v, modulus)
		}
		if v.CmpAbs(bound) <= 0 {
			continue
		}
		if v.Sign() < 0 {
			v.Add(v, modulus)
		}
		more := shortDenominator(ctx, v, modulus, bound)
		if more == nil {
			return nil, nil
		}
		for _, w := range num[:i+1] {
			w.Mul(w, more)
		}
		v.Mod(v, modulus)
		if v.Cmp(centre) > 0 {
			v.Sub(v, modulus)
		}
		den.Mul(den, more)
		if den.BitLen() > modulus.BitLen() {
			return nil, nil
		}
	}
	for i := range num {
		if n > 50 && ctx.Err() != nil {
			return nil, nil
		}
		t.SetInt64(0)
		for j, v := range a[i*n : i*n+n] {
			if v != 0 {
				t.Add(t, u.Mul(u.SetInt64(v), num[j]))
			}
		}
		if t.Cmp(u.Mul(den, b[i])) != 0 {
			return nil, nil
		}
	}
	return num, den
}

// join is Σ digit_k·prime^k, by halves.
func join(d []uint64) *big.Int {
	if len(d) <= 4 {
		v, q := new(big.Int), new(big.Int).SetUint64(prime)
		t := new(big.Int)
		for k := len(d) - 1; k >= 0; k-- {
			v.Add(v.Mul(v, q), t.SetUint64(d[k]))
		}
		return v
	}
	h := len(d) / 2
	low, high := join(d[:h]), join(d[h:])
	// prime^h = (2^61 − 1)^h
	power := new(big.Int).Exp(new(big.Int).SetUint64(prime), big.NewInt(int64(h)), nil)
	return low.Add(low, high.Mul(high, power))
}

// shortDenominator runs Euclid's algorithm on (m, v) until the remainder is at
// most bound, and gives the positive multiplier of v that leads there; nil when
// it is beyond the bound itself.
func shortDenominator(ctx context.Context, v, m, bound *big.Int) *big.Int {
	r0, r1 := new(big.Int).Set(m), new(big.Int).Set(v)
	s0, s1 := new(big.Int), big.NewInt(1)
	q, t := new(big.Int), new(big.Int)
	for step := 0; r1.CmpAbs(bound) > 0; step++ {
		if step&255 == 255 && ctx.Err() != nil {
			return nil
		}
		q.QuoRem(r0, r1, t)
		r0, r1, t = r1, t, r0
		t.Mul(q, s1)
		s0.Sub(s0, t)
		s0, s1 = s1, s0
	}
	if s1.Sign() == 0 || s1.CmpAbs(bound) > 0 {
		return nil
	}
	return s1.Abs(s1)
}
