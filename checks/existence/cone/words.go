package cone

import (
	"fmt"
	"math/big"
	"strings"
)

// mostTerms is how many terms Words spells out.
const mostTerms = 6

// Words spells out the half-space x·d ≥ 0 over columns with these names, with
// the intercept column (−1 for none) on the right: "x3 ≥ 2.5",
// "a + b − 2·c ≥ 0", "−x ≥ 4". A null vector (null true) reads
// "a + b − c = 0". Beyond six terms it gives the number of columns and the first
// six names. Coefficients are exact where they are short, and otherwise shown to
// four digits and marked by "about".
func Words(names []string, d []*big.Rat, intercept int, null bool) string {
	var support []int
	for j, v := range d {
		if v.Sign() != 0 && j != intercept {
			support = append(support, j)
		}
	}
	relation := "≥"
	if null {
		relation = "="
	}
	if len(support) == 0 {
		if intercept >= 0 && intercept < len(d) && d[intercept].Sign() != 0 {
			return "every row alike"
		}
		return "no column"
	}
	if len(support) > mostTerms {
		list := make([]string, mostTerms)
		for k := range list {
			list[k] = names[support[k]]
		}
		return fmt.Sprintf("a combination of %d columns (%s, …)", len(support), strings.Join(list, ", "))
	}
	// Divide by the size of the first coefficient where that keeps all short.
	scale := new(big.Rat).Inv(new(big.Rat).Abs(d[support[0]]))
	unscaled := big.NewRat(1, 1)
	right := new(big.Rat)
	if intercept >= 0 && intercept < len(d) {
		right.Neg(d[intercept])
	}
	short := func(by *big.Rat) bool {
		for _, j := range support {
			if _, ok := brief(new(big.Rat).Mul(d[j], by)); !ok {
				return false
			}
		}
		_, ok := brief(new(big.Rat).Mul(right, by))
		return ok
	}
	about := ""
	by := scale
	if !short(scale) {
		if by = unscaled; !short(unscaled) {
			by, about = scale, "about "
		}
	}
	var b strings.Builder
	b.WriteString(about)
	for k, j := range support {
		v := new(big.Rat).Mul(d[j], by)
		switch {
		case k == 0 && v.Sign() < 0:
			b.WriteString("−")
		case k > 0 && v.Sign() < 0:
			b.WriteString(" − ")
		case k > 0:
			b.WriteString(" + ")
		}
		v.Abs(v)
		if v.Cmp(big.NewRat(1, 1)) != 0 {
			text, _ := brief(v)
			b.WriteString(text + "·")
		}
		b.WriteString(names[j])
	}
	text, _ := brief(right.Mul(right, by))
	return fmt.Sprintf("%s %s %s", b.String(), relation, text)
}

// brief writes v as a decimal of at most eight digits; ok is false when it had
// to be rounded.
func brief(v *big.Rat) (text string, ok bool) {
	if places, exact := v.FloatPrec(); exact && places <= 6 {
		if text = v.FloatString(places); len(text) <= 10 {
			return strings.Replace(text, "-", "−", 1), true
		}
	}
	f, _ := v.Float64()
	return strings.ReplaceAll(fmt.Sprintf("%.4g", f), "-", "−"), false
}
