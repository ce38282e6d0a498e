package quad

import "math"

// order is the number of Gauss–Legendre nodes of a panel.
const order = 16

var (
	nodes, weights [order]float64
	// legendre[k][i] is (2k+1)/2 · weight i · P_k(node i): the row that turns
	// values at the nodes into the k-th Legendre coefficient of their interpolant.
	legendre [order][order]float64
)

func init() {
	for i := range order {
		x := math.Cos(math.Pi * (float64(order-i) - 0.25) / (order + 0.5))
		var slope float64
		for range 100 {
			p, q := 1.0, 0.0
			for k := range order {
				p, q = (float64(2*k+1)*x*p-float64(k)*q)/float64(k+1), p
			}
			slope = order * (x*p - q) / (x*x - 1)
			step := p / slope
			if x -= step; math.Abs(step) < 1e-16 {
				break
			}
		}
		nodes[i], weights[i] = x, 2/((1-x*x)*slope*slope)
		p, q := 1.0, 0.0
		for k := range order {
			legendre[k][i] = float64(2*k+1) / 2 * weights[i] * p
			p, q = (float64(2*k+1)*x*p-float64(k)*q)/float64(k+1), p
		}
	}
}

// antiderivative is the integral of Σ c_k P_k from −1 to t, and the sum at t.
func antiderivative(c *[order]float64, t float64) (integral, value float64) {
	// ∫P_0 = t + 1 and ∫P_k = (P_(k+1) − P_(k−1)) / (2k + 1), DLMF 18.9 and 18.17.
	before, p := 1.0, t
	integral, value = c[0]*(t+1), c[0]
	for k := 1; k < order; k++ {
		next := (float64(2*k+1)*t*p - float64(k)*before) / float64(k+1)
		integral += c[k] * (next - before) / float64(2*k+1)
		value += c[k] * p
		before, p = p, next
	}
	return integral, value
}
