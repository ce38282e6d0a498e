package tell

import (
	"math/big"
	"strings"

	"wellposed/checks/facts"
	"wellposed/parser/model"
)

// kernel restates a prior as a kernel in its unknown's own scale, up to a
// constant: "p^(−1) · (1 − p)^(−1)". It is empty where there is no short form.
func kernel(f *facts.Facts, p *model.Prior) string {
	if len(p.About) != 1 || p.Joint {
		if p.Form == model.ByKernel {
			return model.Text(p.Kernel)
		}
		return ""
	}
	u := p.About[0]
	own := &model.UnknownRef{Unknown: u}
	_, plain := p.Target.(*model.UnknownRef)
	switch p.Form {
	case model.ByKernel:
		return model.Text(p.Kernel)
	case model.ByFlat:
		if plain {
			return "1"
		}
		return f.Induced(p, own)
	case model.ByDist:
		if plain && p.Truncated == nil {
			return lawKernel(u.Name, p.Dist)
		}
	}
	return ""
}

// lawKernel is the kernel of a named law with known numbers.
func lawKernel(x string, d *model.Dist) string {
	number := func(label string) *big.Rat {
		e := d.Arg(label)
		if e == nil {
			return nil
		}
		v, err := model.EvalExact(e, 0)
		if err != nil {
			return nil
		}
		return v
	}
	one := big.NewRat(1, 1)
	less := func(a *big.Rat) *big.Rat { return new(big.Rat).Sub(a, one) }
	switch d.Spec.Name {
	case "Beta":
		if a, b := number("a"), number("b"); a != nil && b != nil {
			return product(power(x, less(a)), power("(1 − "+x+")", less(b)))
		}
	case "Gamma":
		if a, r := number("shape"), number("rate"); a != nil && r != nil {
			return product(power(x, less(a)), exponential(x, r))
		}
	case "Exponential":
		if r := number("rate"); r != nil {
			return product(exponential(x, r))
		}
	case "inverse-Gamma":
		if a, s := number("shape"), number("scale"); a != nil && s != nil {
			p := new(big.Rat).Neg(new(big.Rat).Add(a, one))
			return product(power(x, p), exponential("(1/"+x+")", s))
		}
	case "Uniform":
		return "1 on (" + model.Text(d.Arg("low")) + ", " + model.Text(d.Arg("high")) + ")"
	}
	return ""
}

func power(base string, exponent *big.Rat) string {
	switch {
	case exponent.Sign() == 0:
		return ""
	case exponent.IsInt() && exponent.Num().IsInt64() && exponent.Num().Int64() == 1:
		return base
	case exponent.IsInt() && exponent.Sign() > 0:
		return base + "^" + exponent.Num().String()
	}
	return base + "^(" + strings.Replace(exponent.RatString(), "-", "−", 1) + ")"
}

func exponential(x string, rate *big.Rat) string {
	if rate.Sign() == 0 {
		return ""
	}
	factor := strings.TrimPrefix(rate.RatString(), "-")
	sign := "−"
	if rate.Sign() < 0 {
		sign = ""
	}
	if factor == "1" {
		return "exp(" + sign + x + ")"
	}
	return "exp(" + sign + factor + " · " + x + ")"
}

// product joins factors; without any it is 1.
func product(factors ...string) string {
	var list []string
	for _, f := range factors {
		if f != "" {
			list = append(list, f)
		}
	}
	if len(list) == 0 {
		return "1"
	}
	return strings.Join(list, " · ")
}
