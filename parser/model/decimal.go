package model

import (
	"math/big"
	"strconv"
	"time"
)

// ParseDecimal reads a decimal literal such as -0.86, 1e-3 or 40 as the exact
// rational that its text says; nil when it is none, or when its exponent is
// beyond ±10,000.
func ParseDecimal(text string) *big.Rat {
	if m, places, ok := shortParts(text); ok {
		if places == 0 {
			return new(big.Rat).SetInt64(m)
		}
		return new(big.Rat).SetFrac64(m, wholeTens[places])
	}
	if !isDecimal(text) {
		return nil
	}
	r, ok := new(big.Rat).SetString(text)
	if !ok {
		return nil
	}
	return r
}

// decimalFloat is the double nearest to a decimal literal; ok is false when the
// text is none. Out of range it is ±Inf or 0.
//
// Up to 15 digits and the powers of ten up to 10^15 are exact doubles, so that
// their quotient is
// rounded once, correctly (Clinger 1990); other forms go the long way.
func decimalFloat(s string) (x float64, ok bool) {
	i, neg := 0, false
	if i < len(s) && (s[i] == '-' || s[i] == '+') {
		neg = s[i] == '-'
		i++
	}
	var mantissa uint64
	start, point := i, -1
	for ; i < len(s); i++ {
		c := s[i] - '0'
		if c > 9 {
			if s[i] != '.' || point >= 0 {
				break
			}
			point = i
			continue
		}
		mantissa = mantissa*10 + uint64(c)
	}
	digits, places := i-start, 0
	if point >= 0 {
		digits--
		places = i - point - 1
	}
	if i < len(s) || digits < 1 || digits > 15 {
		if !isDecimal(s) {
			return 0, false
		}
		x, _ = strconv.ParseFloat(s, 64)
		return x, true
	}
	return shortDecimal(mantissa, places, neg), true
}

// shortDecimal is the double nearest to mantissa / 10^places, for up to 15
// digits.
func shortDecimal(mantissa uint64, places int, neg bool) float64 {
	x := float64(mantissa)
	if places > 0 {
		x /= tens[places&15]
	}
	if neg {
		x = -x
	}
	return x
}

// tens are the powers of ten that are exact doubles and needed here.
var tens = [16]float64{1, 1e1, 1e2, 1e3, 1e4, 1e5, 1e6, 1e7, 1e8, 1e9, 1e10, 1e11, 1e12, 1e13, 1e14, 1e15}

// wholeTens are the powers of ten that fit.
var wholeTens = func() (list [19]int64) {
	list[0] = 1
	for i := 1; i < len(list); i++ {
		list[i] = 10 * list[i-1]
	}
	return list
}()

// isDecimal checks the form [sign] digits [. digits] [e [sign] digits] with a
// bounded exponent, so that SetString can't be asked for a gigantic power.
func isDecimal(s string) bool {
	i, digits := 0, 0
	if i < len(s) && (s[i] == '+' || s[i] == '-') {
		i++
	}
	for i < len(s) && s[i] >= '0' && s[i] <= '9' {
		i, digits = i+1, digits+1
	}
	if i < len(s) && s[i] == '.' {
		i++
		for i < len(s) && s[i] >= '0' && s[i] <= '9' {
			i, digits = i+1, digits+1
		}
	}
	if digits == 0 {
		return false
	}
	if i < len(s) && (s[i] == 'e' || s[i] == 'E') {
		i++
		if i < len(s) && (s[i] == '+' || s[i] == '-') {
			i++
		}
		exponent, any := 0, false
		for i < len(s) && s[i] >= '0' && s[i] <= '9' {
			exponent, any, i = exponent*10+int(s[i]-'0'), true, i+1
			if exponent > 10000 {
				return false
			}
		}
		if !any {
			return false
		}
	}
	return i == len(s)
}

// validDate reports whether a text is a day of the calendar, 2027-06-30.
func validDate(text string) bool {
	_, err := time.Parse(time.DateOnly, text)
	return err == nil
}
