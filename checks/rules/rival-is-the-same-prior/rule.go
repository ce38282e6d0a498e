// Package rivalisthesameprior reports rivals that are the declared prior in other
// words.
package rivalisthesameprior

import (
	_ "embed"
	"fmt"
	"math/big"

	"wellposed/checks/facts"
	"wellposed/checks/rule"
	"wellposed/checks/wording"
	"wellposed/parser/diag"
	"wellposed/parser/model"
)

//go:embed doc.md
var page string

// Rule compares the kernels of rivals with those of the declared priors.
var Rule = &rule.Rule{
	Name: "rival-is-the-same-prior", Severity: diag.Note, Group: rule.Scale, Phase: rule.Exact,
	Brief:   "A rival is proportional to the declared prior, so it shows nothing.",
	Doc:     page,
	Sources: []string{"derivation"},
	Check:   check,
}

func check(f *facts.Facts) []diag.Finding {
	m := f.Model
	if !wording.Whole(m) {
		return nil
	}
	declared := f.Resolved(m.Declared())
	var found []diag.Finding
	for _, r := range m.Rivals {
		if f.Context().Err() != nil {
			break
		}
		rival := f.Resolved(wording.Under(m.Declared(), r))
		same, name, related := len(r.Priors) > 0, "", []diag.Related(nil)
		for _, p := range r.Priors {
			for _, u := range p.About {
				a, b := declared.PriorOf(u), rival.PriorOf(u)
				if a == nil || b == nil || !equal(a, b, u) {
					same = false
					continue
				}
				name = kernel(a, u)
				if own := m.Declared().PriorOf(u); own != nil {
					related = append(related, diag.Related{Span: own.Span, Message: "the declared prior"})
				}
			}
		}
		if !same {
			continue
		}
		d := diag.Finding{
			Rule: "rival-is-the-same-prior", Severity: diag.Note, Path: m.File.Path, Span: r.Span, Target: r.Name, Related: related,
			Headline: fmt.Sprintf("The rival %q is the declared prior in other words: the reports move by 0.", r.Name),
			Notes:    []string{"It goes away with another prior in the rival."},
			Evidence: []diag.Evidence{{Name: "ratio of the kernels", Text: "constant", Value: wording.Undefined, How: diag.Proved, Method: "exact exponents"}},
		}
		if name != "" {
			d.Notes = append([]string{"Both are proportional to " + name + "."}, d.Notes...)
		}
		found = append(found, d)
	}
	return found
}

// equal reports whether two priors on an unknown are proportional; what can't be
// compared exactly is not equal.
func equal(a, b *model.Prior, u *model.Unknown) bool {
	if a.Text == b.Text && a.Form == b.Form && a.Form != model.ByRule {
		return true
	}
	x, okX := shapeOf(a, u)
	y, okY := shapeOf(b, u)
	return okX && okY && x.low.Cmp(y.low) == 0 && x.high.Cmp(y.high) == 0 && x.decay.Cmp(y.decay) == 0
}

// shape is the kernel x^low · (1 − x)^high · exp(−decay · x) of a scalar x; high is for
// probabilities, decay for positive unknowns.
type shape struct{ low, high, decay *big.Rat }

func integers(low, high, decay int64) shape {
	return shape{big.NewRat(low, 1), big.NewRat(high, 1), big.NewRat(decay, 1)}
}

// kernel writes a shape; empty where there is none or it is flat.
func kernel(p *model.Prior, u *model.Unknown) string {
	s, ok := shapeOf(p, u)
	if !ok {
		return ""
	}
	text := ""
	part := func(base string, e *big.Rat) {
		if e.Sign() == 0 {
			return
		}
		if text != "" {
			text += " · "
		}
		text += base + "^(" + e.RatString() + ")"
	}
	part(u.Name, s.low)
	part("(1 − "+u.Name+")", s.high)
	if s.decay.Sign() != 0 {
		if text != "" {
			text += " · "
		}
		text += "exp(−" + s.decay.RatString() + " " + u.Name + ")"
	}
	if text == "" {
		return "1"
	}
	return text
}

// shapeOf reads the kernel of a prior on the unknown itself; not ok for other forms.
func shapeOf(p *model.Prior, u *model.Unknown) (shape, bool) {
	none := shape{}
	if p.Joint || len(p.About) != 1 || !u.Scalar() || p.Truncated != nil {
		return none, false
	}
	unit := isUnit(u)
	positive := u.Support.Low != nil && u.Support.Low.Sign() == 0 && u.Support.High == nil
	itself := wording.OnItself(p)
	switch p.Form {
	case model.ByFlat:
		return slope(p.Target, u, unit, positive)
	case model.ByKernel:
		if itself {
			return power(p.Kernel, u, unit, positive)
		}
	case model.ByDist:
		if !itself {
			return none, false
		}
		one := big.NewRat(1, 1)
		minus := func(x *big.Rat) *big.Rat { return new(big.Rat).Sub(x, one) }
		switch p.Dist.Spec.Name {
		case "Uniform":
			args, ok := wording.Arguments(p.Dist, "low", "high")
			if ok && unit && args[0].Sign() == 0 && args[1].Cmp(one) == 0 {
				return integers(0, 0, 0), true
			}
		case "Beta":
			if args, ok := wording.Arguments(p.Dist, "a", "b"); ok && unit {
				return shape{minus(args[0]), minus(args[1]), new(big.Rat)}, true
			}
		case "Gamma":
			if args, ok := wording.Arguments(p.Dist, "shape", "rate"); ok && positive && p.Dist.Arg("origin") == nil {
				return shape{minus(args[0]), new(big.Rat), args[1]}, true
			}
			if args, ok := wording.Arguments(p.Dist, "shape", "scale"); ok && positive && p.Dist.Arg("origin") == nil && args[1].Sign() > 0 {
				return shape{minus(args[0]), new(big.Rat), new(big.Rat).Inv(args[1])}, true
			}
		case "Exponential":
			if args, ok := wording.Arguments(p.Dist, "rate"); ok && positive && p.Dist.Arg("origin") == nil {
				return shape{new(big.Rat), new(big.Rat), args[0]}, true
			}
			if args, ok := wording.Arguments(p.Dist, "mean"); ok && positive && p.Dist.Arg("origin") == nil && args[0].Sign() > 0 {
				return shape{new(big.Rat), new(big.Rat), new(big.Rat).Inv(args[0])}, true
			}
		}
	}
	return none, false
}

func isUnit(u *model.Unknown) bool {
	s := u.Support
	return s.Low != nil && s.High != nil && s.Low.Sign() == 0 && s.High.Cmp(big.NewRat(1, 1)) == 0
}

// slope is the kernel of flat on a target: the target's derivative.
func slope(target model.Expr, u *model.Unknown, unit, positive bool) (shape, bool) {
	switch e := target.(type) {
	case *model.UnknownRef:
		return integers(0, 0, 0), unit || positive || u.Support.Low == nil && u.Support.High == nil
	case *model.Call:
		if len(e.Args) != 1 || !isItself(e.Args[0], u) {
			return shape{}, false
		}
		switch {
		case e.Func == "logit" && unit:
			return integers(-1, -1, 0), true
		case e.Func == "odds" && unit:
			return integers(0, -2, 0), true
		case e.Func == "log" && (positive || unit):
			return integers(-1, 0, 0), true
		}
	case *model.Op:
		if s, ok := power(e, u, unit, positive); ok && s.high.Sign() == 0 && s.decay.Sign() == 0 && s.low.Sign() != 0 {
			s.low.Sub(s.low, big.NewRat(1, 1))
			return s, true
		}
	}
	return shape{}, false
}

// power reads products, quotients and powers of x and 1 − x.
func power(e model.Expr, u *model.Unknown, unit, positive bool) (shape, bool) {
	if !unit && !positive {
		return shape{}, false
	}
	if model.Known(e) {
		x, err := model.EvalExact(e, 0)
		return integers(0, 0, 0), err == nil && x.Sign() > 0
	}
	if isItself(e, u) {
		return integers(1, 0, 0), true
	}
	var a, b shape
	okA, okB := false, false
	scaled := func(s shape, by *big.Rat) shape {
		return shape{new(big.Rat).Mul(s.low, by), new(big.Rat).Mul(s.high, by), new(big.Rat)}
	}
	switch e := e.(type) {
	case *model.Call:
		if e.Func == "sqrt" && len(e.Args) == 1 {
			a, okA = power(e.Args[0], u, unit, positive)
			return scaled(a, big.NewRat(1, 2)), okA
		}
	case *model.Op:
		if len(e.Args) != 2 {
			return shape{}, false
		}
		if e.Op == "-" && unit && isItself(e.Args[1], u) && model.Known(e.Args[0]) {
			x, err := model.EvalExact(e.Args[0], 0)
			return integers(0, 1, 0), err == nil && x.Cmp(big.NewRat(1, 1)) == 0
		}
		if e.Op == "^" && model.Known(e.Args[1]) {
			x, err := model.EvalExact(e.Args[1], 0)
			if err != nil {
				return shape{}, false
			}
			a, okA = power(e.Args[0], u, unit, positive)
			if !okA {
				return shape{}, false
			}
			return scaled(a, x), true
		}
		if e.Op != "*" && e.Op != "/" {
			return shape{}, false
		}
		a, okA = power(e.Args[0], u, unit, positive)
		b, okB = power(e.Args[1], u, unit, positive)
		if !okA || !okB {
			return shape{}, false
		}
		if e.Op == "/" {
			b = scaled(b, big.NewRat(-1, 1))
		}
		return shape{new(big.Rat).Add(a.low, b.low), new(big.Rat).Add(a.high, b.high), new(big.Rat)}, true
	}
	return shape{}, false
}

func isItself(e model.Expr, u *model.Unknown) bool {
	ref, ok := e.(*model.UnknownRef)
	return ok && ref.Unknown == u
}
