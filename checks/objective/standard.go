package objective

import (
	"context"
	"fmt"
	"math"
	"math/big"
	"slices"
	"strconv"
	"strings"

	sy "wellposed/checks/objective/symbolic"
	"wellposed/parser/model"
)

// Choice is a standard default prior, as a text of the language. Listing one is
// no recommendation.
type Choice struct {
	// Text is the statement without keyword: "p as Beta(1/2, 1/2)".
	Text string
	// Label is the name people give it, Source where it is published or "common
	// practice", Note what it does.
	Label, Source, Note string
}

// role is what an unknown does in the likelihood.
type role int

const (
	unclear role = iota
	probabilityOf
	rateOf
	meanOfTimes
	locationOf
	scaleOf
	spreadBetween
	shapeOf
	degreesOf
	sizeOf
	coefficientOf
	correlationOf
	proportionsOf
	countOf
	covarianceOf
	cutpointsOf
)

// Standard lists the standard default choices for an unknown in this likelihood,
// the same prior once.
func Standard(ctx context.Context, a *model.Analysis, u *model.Unknown) []Choice {
	if u.Population != nil {
		return nil
	}
	r, scale := roleOf(a, u)
	var out []Choice
	add := func(text, label, source, note string) {
		text = u.Name + " " + text
		for _, c := range out {
			if c.Text == text {
				return
			}
		}
		out = append(out, Choice{text, label, source, note})
	}
	practice := "common practice"
	switch r {
	case probabilityOf:
		add("as Beta(1, 1)", "uniform", "Bayes (1763); Laplace (1774)", "proper; counts as 2 trials with 1 success")
		addJeffreys(ctx, a, u, add)
		add("as Beta(1/3, 1/3)", "neutral", "Kerman (2011), Electron. J. Statist. 5 (from memory)", "proper; the posterior median stays near the observed share")
		add("as Beta(0, 0)", "flat log odds", "Haldane (1932), Proc. Camb. Phil. Soc. 28", "improper; leaves no posterior when all or none succeed")
	case rateOf:
		add("flat", "flat rate", practice, "improper; counts as one event more")
		addJeffreys(ctx, a, u, add)
		add(fmt.Sprintf("∝ 1/%s", u.Name), "flat log rate", practice, "improper; leaves no posterior without an event")
		add(fmt.Sprintf("∝ %s^(-2/3)", u.Name), "neutral", "Kerman (2011), Electron. J. Statist. 5 (from memory)", "improper; the posterior median stays near the observed rate")
	case meanOfTimes:
		add(fmt.Sprintf("∝ 1/%s", u.Name), "flat logarithm, Jeffreys for complete times", "Jeffreys (1961)", "improper; needs a failure")
		add("flat", "flat mean", practice, "improper; needs two failures")
	case locationOf:
		add("flat", "flat", "Box & Tiao (1973), section 1.3", "improper; Jeffreys' rule for a location")
		if scale > 0 {
			add(fmt.Sprintf("as Normal(0, sd = %s)", decimal(10*scale, 1)), "wide Normal, ten sds of the data", practice, "proper; pulls to 0 when the data lie far from it")
		}
	case scaleOf:
		add(fmt.Sprintf("∝ 1/%s", u.Name), "flat logarithm", "Jeffreys (1961); Box & Tiao (1973)", "improper; matches Student-t intervals with a flat location")
		add("flat", "flat sd", practice, "improper; needs one reading more than the flat logarithm")
		if scale > 0 {
			add(fmt.Sprintf("as half-Normal(sd = %s)", decimal(2*scale, 1)), "half-Normal, two sds of the data", practice, "proper; tied to the scale of the data, so they are used twice")
			add(fmt.Sprintf("as half-Cauchy(%s)", decimal(scale, 1)), "half-Cauchy, one sd of the data", "Gelman (2006), Bayesian Analysis 1; the scale by common practice", "proper; tied to the scale of the data, so they are used twice")
		}
	case spreadBetween:
		add("flat", "flat sd", "Gelman (2006), Bayesian Analysis 1", "improper; needs at least three groups")
		half, one := "1/2", "1"
		if scale > 0 && (scale > 5 || scale < 0.05) {
			half, one = decimal(scale/2, 1), decimal(scale, 1)
		}
		add(fmt.Sprintf("as half-Normal(sd = %s)", half), "half-Normal", practice, "proper; on log odds ratios 1/2 allows heterogeneity up to about 1")
		add(fmt.Sprintf("as half-Normal(sd = %s)", one), "half-Normal, wider", practice, "proper; allows twice the spread")
		add(fmt.Sprintf("as half-Cauchy(%s)", half), "half-Cauchy", "Gelman (2006), Bayesian Analysis 1", "proper; a heavy tail that few groups leave open")
		add(fmt.Sprintf("∝ 1/%s", u.Name), "flat logarithm", practice, "improper; never leaves a posterior when no spread at all is possible")
	case shapeOf:
		add(fmt.Sprintf("∝ 1/%s", u.Name), "flat logarithm", "Sun (1997), J. Statist. Plann. Inference 61 (from memory)", "improper; Weibull needs two failures at different times")
		add("flat", "flat shape", practice, "improper; favours large shapes")
		add("as log-Normal(log mean = 0, log sd = 1)", "log-Normal around the Exponential", practice, "proper; 95 % between 0.14 and 7.1")
	case degreesOf:
		add("as Gamma(shape = 2, rate = 1/10)", "Gamma", "Juárez & Steel (2010), J. Appl. Econometrics 25 (from memory)", "proper; keeps to 2 … 56 with 95 %")
		add("as Exponential(mean = 29)", "Exponential", practice, "proper; allows nearly Normal tails")
		addJeffreys(ctx, a, u, add)
	case sizeOf:
		add("as half-Cauchy(1)", "half-Cauchy", practice, "proper; a heavy tail towards the limit without extra spread")
		add(fmt.Sprintf("∝ 1/%s^(3/2)", u.Name), "flat in 1/sqrt(size)", practice, "improper at 0 only")
	case coefficientOf:
		add("flat", "flat", practice, "improper; no posterior under separation or without full rank")
		add("as Normal(0, sd = 2.5)", "Normal, for columns in units of their sds", practice, "proper; on columns that are not standardised its meaning changes")
		add("as Cauchy(0, 2.5)", "Cauchy, for standardised columns", "Gelman, Jakulin, Pittau & Su (2008), Ann. Appl. Statist. 2", "proper; heavy tails")
		if !u.Scalar() {
			add("jeffreys", "Jeffreys, all coefficients together", "Ibrahim & Laud (1991); Firth (1993), Biometrika 80", "exists under separation; depends on the design")
		}
	case correlationOf:
		add("as Uniform(-1, 1)", "uniform", practice, "proper")
		add(fmt.Sprintf("∝ 1/(1 - %s^2)", u.Name), "flat Fisher z", "Lindley (1965) (from memory); reference prior, Berger & Bernardo (1992)", "improper at ±1")
		addJeffreys(ctx, a, u, add)
	case proportionsOf:
		k := int64(max(u.Size, 1))
		add("as Dirichlet(1)", "uniform on the simplex", "Laplace", fmt.Sprintf("proper; weighs as %d observations", k))
		add("as Dirichlet(1/2)", "Jeffreys", "Jeffreys (1946)", fmt.Sprintf("proper; weighs as %s observations", rat(k, 2).RatString()))
		add(fmt.Sprintf("as Dirichlet(1/%d)", k), "total weight 1", "Perks (1947); Berger, Bernardo & Sun (2015), Bayesian Analysis 10", "proper; weighs as 1 observation whatever the number of categories")
	case countOf:
		add(fmt.Sprintf("∝ 1/%s", u.Name), "one over the count", "Raftery (1988), Biometrika 75", "improper; a mean need not exist")
		add("flat", "flat", practice, "improper; with an unknown uniform probability it leaves no posterior")
	case covarianceOf:
		addJeffreys(ctx, a, u, add)
	case cutpointsOf:
		add("flat", "flat on ordered thresholds", practice, "improper; needs every category seen")
	default:
		switch low, high := u.Support.Low, u.Support.High; {
		case low == nil && high == nil:
			add("flat", "flat", practice, "improper")
			add("as Normal(0, sd = 10)", "Normal", practice, "proper; vague only when the unknown is of order 1")
		case low != nil && high != nil:
			add(fmt.Sprintf("as Uniform(%s, %s)", low.RatString(), high.RatString()), "uniform", practice, "proper; another scale would not be uniform")
		case isRat(low, 0, 1):
			add(fmt.Sprintf("∝ 1/%s", u.Name), "flat logarithm", practice, "improper")
			add("flat", "flat", practice, "improper")
			addJeffreys(ctx, a, u, add)
		}
	}
	return out
}

// addJeffreys adds the prior by Jeffreys' rule where it is derived.
func addJeffreys(ctx context.Context, a *model.Analysis, u *model.Unknown, add func(text, label, source, note string)) {
	d, err := Derive(ctx, a, &model.RulePrior{Name: model.Jeffreys}, []*model.Unknown{u})
	if err != nil {
		return
	}
	text := strings.TrimPrefix(d.Prior.Text, u.Name+" ")
	note := "derived from this likelihood"
	if len(d.Assumed) > 0 {
		note += ", taking it that " + d.Assumed[0]
	}
	add(text, "Jeffreys", d.Source, note)
}

// decimal writes a positive number with a few significant digits.
func decimal(v float64, digits int) string {
	s := strconv.FormatFloat(v, 'e', digits-1, 64)
	r, ok := new(big.Rat).SetString(s)
	if !ok {
		return s
	}
	if r.IsInt() {
		return r.RatString()
	}
	return strings.TrimRight(strings.TrimRight(r.FloatString(12), "0"), ".")
}

// roleOf finds what an unknown does, and a scale of the data where one matters.
func roleOf(a *model.Analysis, u *model.Unknown) (role, float64) {
	switch u.Kind.Name {
	case "proportions":
		return proportionsOf, 0
	case "covariance":
		return covarianceOf, 0
	case "cutpoints":
		return cutpointsOf, 0
	case "count":
		return countOf, 0
	case "correlation":
		return correlationOf, 0
	case "degrees":
		return degreesOf, 0
	}
	s := newSpace(a)
	for _, v := range a.Unknowns {
		if v.Population == nil || !slices.Contains(unknownsOf(v.Population.Dist), u) {
			continue
		}
		for _, label := range []string{"sd", "variance", "precision", "log sd", "scale"} {
			if e := v.Population.Dist.Args[label]; e != nil && mentions(e, u) {
				return spreadBetween, spreadOfGroups(a, v)
			}
		}
		if e := v.Population.Dist.Args["mean"]; e != nil && mentions(e, u) {
			return locationOf, spreadOfGroups(a, v)
		}
	}
	for _, o := range a.Observations {
		d := o.Dist
		if !slices.Contains(unknownsOf(d), u) {
			continue
		}
		is := func(label string) bool { return isPlain(s, d.Args[label], u) }
		within := func(label string) bool { return d.Args[label] != nil && mentions(d.Args[label], u) }
		switch d.Spec.Name {
		case "Bernoulli", "Binomial", "geometric":
			if is("probability") {
				return probabilityOf, 0
			}
		case "Poisson":
			if multiple(s, d.Args["mean"], u, firstRow(o)) {
				return rateOf, 0
			}
		case "negative-Binomial":
			switch {
			case is("size"):
				return sizeOf, 0
			case is("probability"):
				return probabilityOf, 0
			case multiple(s, d.Args["mean"], u, firstRow(o)):
				return rateOf, 0
			}
		case "Exponential":
			switch {
			case within("rate") && multiple(s, d.Args["rate"], u, firstRow(o)):
				return rateOf, 0
			case within("mean") && multiple(s, d.Args["mean"], u, firstRow(o)):
				return meanOfTimes, 0
			}
		case "Weibull", "Gamma":
			switch {
			case is("shape"):
				return shapeOf, 0
			case is("scale"), is("mean"):
				return meanOfTimes, 0
			case is("rate"):
				return rateOf, 0
			}
		case "Normal", "Student-t", "Cauchy", "Laplace", "logistic", "Gumbel", "log-Normal", "skew-Normal":
			switch {
			case is("sd"), is("scale"), is("log sd"), is("variance"), is("precision"):
				return scaleOf, spreadOf(o)
			case is("degrees"):
				return degreesOf, 0
			case is("mean"), is("location"), is("log mean"):
				return locationOf, spreadOf(o)
			}
		}
		if u.Kind.Name == "effect" || len(u.For) > 0 {
			return coefficientOf, 0
		}
	}
	switch u.Kind.Name {
	case "probability":
		return probabilityOf, 0
	case "location":
		return locationOf, 0
	case "effect":
		return coefficientOf, 0
	case "scale":
		return scaleOf, 0
	case "rate":
		return rateOf, 0
	case "shape":
		return shapeOf, 0
	}
	return unclear, 0
}

func mentions(e model.Expr, u *model.Unknown) bool {
	found := false
	visit(e, func(x model.Expr) {
		if r, ok := x.(*model.UnknownRef); ok && r.Unknown == u {
			found = true
		}
	})
	return found
}

// isPlain reports whether an argument is the unknown itself or a component.
func isPlain(_ *space, e model.Expr, u *model.Unknown) bool {
	r, ok := e.(*model.UnknownRef)
	return ok && r.Unknown == u
}

// multiple reports whether an argument is the unknown times known numbers.
func multiple(s *space, e model.Expr, u *model.Unknown, row int) bool {
	if e == nil || !u.Scalar() {
		return isPlain(s, e, u)
	}
	x, err := s.lower(e, row)
	if err != nil {
		return false
	}
	q := sy.Div(x, sy.Sym(s.parameters[u][0].Symbol))
	return len(parametersIn(q)) == 0
}

// spreadOf is the sample sd of what is observed; 0 when it is not known.
func spreadOf(o *model.Observation) float64 {
	if o.Reading == model.Summary {
		if v, ok := exactIn(o.SD, firstRow(o)); ok {
			f, _ := v.Float64()
			return f
		}
		return 0
	}
	if o.Reading != model.Values || len(o.What) != 1 {
		return 0
	}
	return sampleSD(func(yield func(float64)) {
		for _, row := range o.Rows {
			if v, ok := exactIn(o.What[0], row); ok {
				f, _ := v.Float64()
				if o.Dist.Spec.Name == "log-Normal" {
					f = math.Log(f)
				}
				yield(f)
			}
		}
	})
}

func sampleSD(each func(yield func(float64))) float64 {
	var n, mean, m2 float64
	each(func(x float64) {
		n++
		d := x - mean
		mean += d / n
		m2 += d * (x - mean)
	})
	if n < 2 || math.IsNaN(m2) || math.IsInf(m2, 0) {
		return 0
	}
	return math.Sqrt(m2 / (n - 1))
}

// spreadOfGroups is the sample sd of the observations of a varying effect.
func spreadOfGroups(a *model.Analysis, v *model.Unknown) float64 {
	for _, o := range a.Observations {
		if o.Dist.Spec.Name == "Normal" && slices.Contains(unknownsOf(o.Dist), v) {
			return spreadOf(o)
		}
	}
	return 0
}
