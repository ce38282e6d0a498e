package objective

import (
	"errors"
	"fmt"
	"math"
	"math/big"

	sy "wellposed/checks/objective/symbolic"
)

// constrained is the prior of least information relative to Jeffreys' that has a
// given mean: π ∝ sqrt(I(θ)) exp(βθ) (Atwood 1996, Reliability Engineering and
// System Safety 53; NUREG/CR-6823, section 6.2; from memory).
func (w *work) constrained() error {
	ps := w.of(w.about)
	if len(ps) != 1 {
		return errors.New("a constrained prior is defined for one unknown")
	}
	p := ps[0]
	mean, ok := exactIn(w.rule.Mean, 0)
	if !ok {
		return errors.New("the mean must be a known number")
	}
	low, high := p.Symbol.Low, p.Symbol.High
	if low != nil && mean.Cmp(low) <= 0 || high != nil && mean.Cmp(high) >= 0 {
		return fmt.Errorf("the mean %s is not inside the support of %s", mean.RatString(), p.Symbol.Name)
	}
	if err := w.jeffreys(); err != nil {
		return err
	}
	if w.kernel == nil {
		return errors.New("Jeffreys' kernel is numeric only here, so it is not tilted")
	}
	w.d.Source = "Atwood (1996), Reliab. Eng. Syst. Saf. 53; NUREG/CR-6823, section 6.2 (from memory)"
	k, _ := sy.Kernel(w.kernel, symbolsOf(ps))
	x := sy.Sym(p.Symbol)
	w.step("least information relative to Jeffreys' %s with E[%s] = %s: π ∝ %s · exp(β %s)", sy.Text(k), p.Symbol.Name, mean.RatString(), sy.Text(k), p.Symbol.Name)
	switch {
	case isRat(low, 0, 1) && high == nil:
		e, argument, ok := powers(k, x)
		if !ok || !isZero(argument) {
			return errors.New("the tilt has no closed form here")
		}
		shape := plus(e[0], 1)
		if shape.Sign() <= 0 {
			return fmt.Errorf("Jeffreys' kernel %s has no integral at 0 under any tilt, so no prior with a given mean exists", sy.Text(k))
		}
		rate := new(big.Rat).Quo(shape, mean)
		w.step("β = −%s makes it Gamma(shape = %s, rate = %s), whose mean is %s", rate.RatString(), shape.RatString(), rate.RatString(), mean.RatString())
		w.kernel = sy.Mul(k, sy.Exp(sy.Neg(sy.Mul(sy.Rat(rate), x))))
		return nil
	case low != nil && high != nil:
		if !integrableAtEnds(k, p) {
			return fmt.Errorf("Jeffreys' kernel %s has no integral, so its tilt is not followed", sy.Text(k))
		}
		return w.tilt(k, p, mean)
	}
	return errors.New("a constrained prior needs a support with an end")
}

// tilt finds β for a finite support by Newton steps kept inside a bracket.
func (w *work) tilt(k sy.Expr, p *Parameter, mean *big.Rat) error {
	h, err := halved(k, p.Symbol, nil)
	if err != nil {
		return err
	}
	low, high := h.low, h.high
	target, _ := mean.Float64()
	moments := func(beta float64) (m, v float64) {
		shift := math.Max(beta*low, beta*high)
		s := h.integrate(3, func(half int, d, weight float64, into [][]float64) {
			l, _ := h.from[half].LogAbs([]float64{d})
			t := h.place(half, d)
			f := math.Exp(l+beta*t-shift) * weight
			into[0][0] += f
			into[1][1] += f * (t - low)
			into[2][2] += f * (t - low) * (t - low)
		})
		m = s[1][1] / s[0][0]
		return low + m, s[2][2]/s[0][0] - m*m
	}
	a, b := -1.0, 1.0
	for m, _ := moments(a); m > target; m, _ = moments(a) {
		if a *= 2; a < -1e9 {
			return errors.New("no tilt gives that mean")
		}
	}
	for m, _ := moments(b); m < target; m, _ = moments(b) {
		if b *= 2; b > 1e9 {
			return errors.New("no tilt gives that mean")
		}
	}
	beta := (a + b) / 2
	var m, v float64
	for range 200 {
		m, v = moments(beta)
		if m < target {
			a = beta
		} else {
			b = beta
		}
		next := beta + (target-m)/v
		if !(next > a && next < b) {
			next = (a + b) / 2
		}
		if math.Abs(next-beta) <= 1e-13*(1+math.Abs(next)) {
			beta = next
			break
		}
		beta = next
	}
	_, v = moments(beta)
	// A decimal with 12 significant digits stands for β.
	text := fmt.Sprintf("%.11e", beta)
	r, _ := new(big.Rat).SetString(text)
	if math.Abs(beta) < 1e-10 {
		r = new(big.Rat)
	}
	shown, _ := r.Float64()
	w.step("β = %.8g solves the constraint, by quadrature", shown)
	mu := (target - low) / (high - low)
	total := mu*(1-mu)*(high-low)*(high-low)/v - 1
	if low == 0 && high == 1 && total > 0 {
		w.step("published approximation (NUREG/CR-6823, from memory: the Beta with the same mean and variance): Beta(%.4g, %.4g)", mu*total, (1-mu)*total)
	}
	w.kernel = sy.Mul(k, sy.Exp(sy.Mul(sy.Rat(r), sy.Sym(p.Symbol))))
	return nil
}
