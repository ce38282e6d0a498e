package posterior

import "math"

// remember1 keeps the last value of a function, which most parameters ask again.
func remember1(f func(float64) float64) func(float64) float64 {
	last, value := math.NaN(), 0.0
	return func(x float64) float64 {
		if x != last {
			last, value = x, f(x)
		}
		return value
	}
}

func remember2(f func(a, b float64) float64) func(a, b float64) float64 {
	lastA, lastB, value := math.NaN(), math.NaN(), 0.0
	return func(a, b float64) float64 {
		if a != lastA || b != lastB {
			lastA, lastB, value = a, b, f(a, b)
		}
		return value
	}
}
