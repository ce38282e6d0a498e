package cone

import (
	"cmp"
	"context"
	"math"
	"slices"
)

// steps bounds Newton's method; separated margins grow by about one per step,
// so beyond this the weights of separated rows no longer show in the Hessian.
const steps = 30

// newton minimises Σ log(1 + exp(−g_i·β)) over the m rows of g (k entries
// each). With w_i = 1/(1 + exp(g_i·β)) and D the Newton step, the normal
// equations say that Σ w_i (1 − (1 − w_i) g_i·D) g_i = 0 at every step, converged
// or not: weights that prove overlap when all are positive. When the rows are
// separated the step tends to a separating direction instead.
//
// overlap is offered such weights, direction is offered D and the products
// g_i·D; either returns true to stop.
func newton(ctx context.Context, g []float64, m, k int, overlap func(weights []float64) bool, direction func(step int, d, u []float64) bool) error {
	beta, d := make([]float64, k), make([]float64, k)
	margin, u := make([]float64, m), make([]float64, m)
	w, lambda := make([]float64, m), make([]float64, m)
	h := make([]float64, k*k)
	gradient := make([]float64, k)
	loss := float64(m) * math.Ln2
	for step := range steps {
		clear(gradient)
		for i, v := range margin {
			w[i] = 1 / (1 + math.Exp(v))
			lambda[i] = w[i] * (1 - w[i])
			row := g[i*k : i*k+k]
			for j, x := range row {
				gradient[j] += w[i] * x
			}
		}
		if err := gram(ctx, g, lambda, m, k, h); err != nil {
			return err
		}
		if ok, err := cholesky(ctx, h, k); !ok || err != nil {
			return err
		}
		copy(d, gradient)
		solveCholesky(h, k, d)
		largest := math.Inf(-1)
		for i := range u {
			s := 0.0
			row := g[i*k : i*k+k]
			for j, x := range row {
				s += x * d[j]
			}
			u[i] = s
			largest = max(largest, (1-w[i])*s)
		}
		if math.IsNaN(largest) || math.IsInf(largest, 1) {
			return nil
		}
		if largest < 1-1e-7 {
			for i := range lambda {
				lambda[i] = w[i] * (1 - (1-w[i])*u[i])
			}
			if overlap(lambda) {
				return nil
			}
		} else if step > 0 && direction(step, d, u) {
			return nil
		}
		// A full step, halved while it makes the sum larger.
		for size := 1.0; ; size /= 2 {
			next := 0.0
			for i, v := range margin {
				next += softplus(-(v + size*u[i]))
			}
			if next <= loss || size < 1e-3 {
				for i := range margin {
					margin[i] += size * u[i]
				}
				for j := range beta {
					beta[j] += size * d[j]
				}
				loss = next
				break
			}
		}
		// Margins all positive: β itself separates completely.
		least := math.Inf(1)
		for _, v := range margin {
			least = min(least, v)
		}
		if least > 0 && direction(step, beta, margin) {
			return nil
		}
	}
	return nil
}

func softplus(x float64) float64 {
	if x > 30 {
		return x
	}
	return math.Log1p(math.Exp(x))
}

// gram puts Σ v_i g_i g_i' into the lower triangle of h, four rows at a time.
func gram(ctx context.Context, g, v []float64, m, k int, h []float64) error {
	clear(h)
	i := 0
	for ; i+4 <= m; i += 4 {
		if (i*k)%(1<<14) < 4*k {
			if err := ctx.Err(); err != nil {
				return err
			}
		}
		r0, r1, r2, r3 := g[i*k:i*k+k], g[i*k+k:i*k+2*k], g[i*k+2*k:i*k+3*k], g[i*k+3*k:i*k+4*k]
		for a := range k {
			f0, f1, f2, f3 := v[i]*r0[a], v[i+1]*r1[a], v[i+2]*r2[a], v[i+3]*r3[a]
			if f0 == 0 && f1 == 0 && f2 == 0 && f3 == 0 {
				continue
			}
			row := h[a*k : a*k+a+1]
			s0, s1, s2, s3 := r0[:len(row)], r1[:len(row)], r2[:len(row)], r3[:len(row)]
			for b := range row {
				row[b] += f0*s0[b] + f1*s1[b] + f2*s2[b] + f3*s3[b]
			}
		}
	}
	for ; i < m; i++ {
		r := g[i*k : i*k+k]
		for a := range k {
			f := v[i] * r[a]
			row := h[a*k : a*k+a+1]
			for b := range row {
				row[b] += f * r[b]
			}
		}
	}
	return nil
}

// cholesky factors the lower triangle in place; false when it is not positive
// definite beyond rounding.
func cholesky(ctx context.Context, h []float64, k int) (bool, error) {
	for j := range k {
		if k > 100 && ctx.Err() != nil {
			return false, ctx.Err()
		}
		rj := h[j*k : j*k+j+1]
		s := rj[j]
		top := s
		for _, v := range rj[:j] {
			s -= v * v
		}
		if !(s > top*1e-15) || s <= 0 {
			return false, nil
		}
		pivot := math.Sqrt(s)
		rj[j] = pivot
		for i := j + 1; i < k; i++ {
			ri := h[i*k : i*k+j+1]
			t := ri[j]
			for c, v := range rj[:j] {
				t -= v * ri[c]
			}
			ri[j] = t / pivot
		}
	}
	return true, nil
}

func solveCholesky(l []float64, k int, x []float64) {
	for i := range k {
		s := x[i]
		for j, v := range l[i*k : i*k+i] {
			s -= v * x[j]
		}
		x[i] = s / l[i*k+i]
	}
	for i := k - 1; i >= 0; i-- {
		s := x[i] / l[i*k+i]
		x[i] = s
		for j := range i {
			x[j] -= s * l[i*k+j]
		}
	}
}

// spread picks k of the m rows, scaled by their weights, one after another,
// each with the largest part orthogonal to those before: a basis in which the
// others have small coefficients. It returns fewer when no part is left.
func spread(ctx context.Context, g, weights []float64, m, k int) []int {
	norm := make([]float64, m)
	order := make([]int, m)
	for i := range m {
		for _, v := range g[i*k : i*k+k] {
			norm[i] += v * v
		}
		norm[i] *= weights[i] * weights[i]
		order[i] = i
	}
	// The longest rows will do as candidates, unless they miss a dimension.
	few := 3*k + 10
	if m > 2*few {
		slices.SortFunc(order, func(a, b int) int {
			return cmp.Or(cmp.Compare(norm[b], norm[a]), a-b)
		})
		if picked := spreadOver(ctx, g, weights, order[:few], k); len(picked) == k {
			return picked
		}
	}
	return spreadOver(ctx, g, weights, order, k)
}

func spreadOver(ctx context.Context, g, weights []float64, rows []int, k int) []int {
	a := make([]float64, len(rows)*k)
	norm := make([]float64, len(rows))
	longest := 0.0
	for c, i := range rows {
		for j := range k {
			v := g[i*k+j] * weights[i]
			a[c*k+j] = v
			norm[c] += v * v
		}
		longest = max(longest, norm[c])
	}
	picked := make([]int, 0, k)
	q := make([]float64, k)
	for range k {
		if ctx.Err() != nil {
			return nil
		}
		best := -1
		for i, v := range norm {
			if v > 0 && (best < 0 || v > norm[best]) {
				best = i
			}
		}
		if best < 0 || norm[best] < 1e-24*longest {
			return picked
		}
		picked = append(picked, rows[best])
		s := 0.0
		for j := range q {
			q[j] = a[best*k+j]
			s += q[j] * q[j]
		}
		s = 1 / math.Sqrt(s)
		for j := range q {
			q[j] *= s
		}
		norm[best] = 0
		for i := range norm {
			if norm[i] == 0 {
				continue
			}
			row := a[i*k : i*k+k]
			s := 0.0
			for j, v := range row {
				s += v * q[j]
			}
			n := 0.0
			for j := range row {
				row[j] -= s * q[j]
				n += row[j] * row[j]
			}
			norm[i] = n
		}
	}
	return picked
}

// complement gives k = p − r orthonormal columns (p × k, row-major) orthogonal
// to r independent rows of p entries.
func complement(ctx context.Context, rows []float64, r, p int) ([]float64, int) {
	basis := make([][]float64, 0, p)
	reduce := func(x []float64) float64 {
		for range 2 {
			for _, q := range basis {
				s := 0.0
				for j, v := range q {
					s += v * x[j]
				}
				for j, v := range q {
					x[j] -= s * v
				}
			}
		}
		n := 0.0
		for _, v := range x {
			n += v * v
		}
		return math.Sqrt(n)
	}
	push := func(x []float64, n float64) {
		for j := range x {
			x[j] /= n
		}
		basis = append(basis, x)
	}
	for i := range r {
		if ctx.Err() != nil {
			return nil, 0
		}
		x := append([]float64(nil), rows[i*p:i*p+p]...)
		n := 0.0
		for _, v := range x {
			n += v * v
		}
		if n = math.Sqrt(n); n == 0 {
			return nil, 0
		}
		for j := range x {
			x[j] /= n
		}
		left := reduce(x)
		if left < 1e-13 {
			return nil, 0
		}
		push(x, left)
	}
	k := p - r
	// Unit vectors in order of what the rows leave of them.
	for len(basis) < p {
		if ctx.Err() != nil {
			return nil, 0
		}
		best, most := -1, 0.0
		for j := range p {
			left := 1.0
			for _, q := range basis {
				left -= q[j] * q[j]
			}
			if left > most {
				best, most = j, left
			}
		}
		if best < 0 || most < 1e-9 {
			return nil, 0
		}
		x := make([]float64, p)
		x[best] = 1
		n := reduce(x)
		push(x, n)
	}
	z := make([]float64, p*k)
	for c := range k {
		for j, v := range basis[r+c] {
			z[j*k+c] = v
		}
	}
	return z, k
}
