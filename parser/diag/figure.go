package diag

import (
	"math"
	"strconv"
	"strings"
)

// Figure prints a number for people with at most `most` significant digits (3
// when most is 0), and only those that hold when |value − truth| ≤ bound. Very
// large and very small numbers are printed as 2.0·10⁻²⁶; zero, infinite and
// undefined values as "0", "∞", "−∞", "undefined".
func Figure(value, bound float64, most int) string {
	if most <= 0 {
		most = 3
	}
	switch {
	case math.IsNaN(value):
		return "undefined"
	case math.IsInf(value, 1):
		return "∞"
	case math.IsInf(value, -1):
		return "−∞"
	case value == 0:
		return "0"
	}
	size := math.Abs(value)
	if bound > 0 {
		// The last printed digit has place 10^(e-most+1) and holds when the
		// bound is at most half of it.
		e := math.Floor(math.Log10(size))
		holds := int(e-math.Ceil(math.Log10(2*bound))) + 1
		if holds < 1 {
			return "about " + Figure(value, 0, 1)
		}
		most = min(most, holds)
	}
	text := strconv.FormatFloat(size, 'e', most-1, 64)
	mantissa, exponent, _ := strings.Cut(text, "e")
	e, _ := strconv.Atoi(exponent)
	switch {
	case e < -4 || e > max(5, most):
		text = mantissa + "·10" + superscript(e)
	case e >= most:
		// Digits left of the point that do not hold are still needed as places.
		text = group(strconv.FormatFloat(roundTo(size, most), 'f', 0, 64))
	default:
		text = group(strconv.FormatFloat(size, 'f', max(0, most-1-e), 64))
	}
	if value < 0 {
		return "−" + text
	}
	return text
}

// roundTo rounds to a number of significant digits.
func roundTo(x float64, digits int) float64 {
	rounded, err := strconv.ParseFloat(strconv.FormatFloat(x, 'e', digits-1, 64), 64)
	if err != nil {
		return x
	}
	return rounded
}

// group sets commas between thousands from 10,000 on.
func group(digits string) string {
	whole, fraction, point := strings.Cut(digits, ".")
	if len(whole) > 4 {
		var b strings.Builder
		for i, d := range whole {
			if i > 0 && (len(whole)-i)%3 == 0 {
				b.WriteByte(',')
			}
			b.WriteRune(d)
		}
		whole = b.String()
	}
	if point {
		return whole + "." + fraction
	}
	return whole
}

func superscript(n int) string {
	const digits = "⁰¹²³⁴⁵⁶⁷⁸⁹"
	var b strings.Builder
	if n < 0 {
		b.WriteString("⁻")
		n = -n
	}
	for _, d := range strconv.Itoa(n) {
		b.WriteString(string([]rune(digits)[d-'0']))
	}
	return b.String()
}

// Percent prints a share as a percentage: 0.446 as "44.6 %".
func Percent(share, bound float64, most int) string { return Figure(100*share, 100*bound, most) + " %" }
