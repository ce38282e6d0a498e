package model

import (
	"math/big"
	"time"
)

// ParseDecimal reads a decimal literal such as -0.86, 1e-3 or 40 as the exact
// rational that its text says; nil when it is none, or when its exponent is
// beyond ±10,000.
func ParseDecimal(text string) *big.Rat {
	if !isDecimal(text) {
		return nil
	}
	r, ok := new(big.Rat).SetString(text)
	if !ok {
		return nil
	}
	return r
}

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
