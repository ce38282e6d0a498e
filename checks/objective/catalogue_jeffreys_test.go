package objective

import "math"

func trigammaOf(x float64) float64 {
	s := 0.0
	for x < 40 {
		s += 1 / (x * x)
		x++
	}
	y := 1 / (x * x)
	return s + 1/x + y/2 + y/x*(1.0/6-y*(1.0/30-y*(1.0/42-y/30)))
}

// sqrtTrigamma is sqrt ψ′(c x^p) times the Jacobian's x^j.
func sqrtTrigamma(c, p, j float64) func(x []float64) float64 {
	return func(x []float64) float64 {
		return math.Sqrt(trigammaOf(c*math.Pow(x[0], p))) * math.Pow(x[0], j)
	}
}

func oddsKernel(a, b float64) func(x []float64) float64 {
	// p^a (1−p)^b at p = o/(1+o), times dp/do.
	return func(x []float64) float64 {
		o := x[0]
		return math.Pow(o/(1+o), a) * math.Pow(1/(1+o), b+2)
	}
}

func betaKernel(a, b float64) func(x []float64) float64 {
	return func(x []float64) float64 { return math.Pow(x[0], a) * math.Pow(1-x[0], b) }
}

func logitKernel(x []float64) float64 { return 1 / (2 * math.Cosh(x[0]/2)) }

func catalogue() []published {
	return append(append(jeffreysOne(), jeffreysSeveral()...), references()...)
}

func jeffreysOne() []published {
	return []published{
		{"bernoulli", yangBerger, [2]parametrisation{
			{"p", oneOf("probability", "Bernoulli(t)"), betaKernel(-0.5, -0.5), "Beta(1/2, 1/2)"},
			{"odds", oneOf("positive", "Bernoulli(t / (1 + t))"), oddsKernel(-0.5, -0.5), "1/(sqrt(t) * (1 + t))"}}},
		{"binomial", yangBerger, [2]parametrisation{
			{"p", oneOf("probability", "Binomial(7, t)"), betaKernel(-0.5, -0.5), "Beta(1/2, 1/2)"},
			{"logit", oneOf("real", "Binomial(7, expit(t))"), logitKernel, "exp(t / 2) / (1 + exp(t))"}}},
		{"geometric", yangBerger, [2]parametrisation{
			{"p", oneOf("probability", "geometric(t, first = 0)"), betaKernel(-1, -0.5), "Beta(0, 1/2)"},
			{"odds", oneOf("positive", "geometric(t / (1 + t), first = 0)"), oddsKernel(-1, -0.5), ""}}},
		{"negbin", yangBerger, [2]parametrisation{
			{"p", oneOf("probability", "negative-Binomial(size = 5, probability = t)"), betaKernel(-1, -0.5), "Beta(0, 1/2)"},
			{"mean", oneOf("positive", "negative-Binomial(mean = t, size = 5)"), func(x []float64) float64 { return 1 / math.Sqrt(x[0]*(x[0]+5)) }, "1/(sqrt(t) * sqrt(5 + t))"}}},
		{"poisson", yangBerger, [2]parametrisation{
			{"mean", oneOf("rate", "Poisson(t)"), powerOf(-0.5), "1/sqrt(t)"},
			{"log", oneOf("real", "Poisson(exp(t))"), func(x []float64) float64 { return math.Exp(x[0] / 2) }, "exp(t / 2)"}}},
		{"poisson-exposed", derivation, [2]parametrisation{
			{"rate", "unknown t : rate\ngiven y = 1\nobserve y as Poisson(t * 3)\nobserve y as Poisson(t / 2)\nprior t jeffreys\n", powerOf(-0.5), "1/sqrt(t)"},
			{"gap", "unknown t : positive\ngiven y = 1\nobserve y as Poisson(3 / t)\nobserve y as Poisson(1 / (2 * t))\nprior t jeffreys\n", powerOf(-1.5), "1/t^(3/2)"}}},
		{"exponential", yangBerger, [2]parametrisation{
			{"rate", oneOf("rate", "Exponential(rate = t)"), powerOf(-1), "1/t"},
			{"mean", oneOf("scale", "Exponential(mean = t)"), powerOf(-1), "1/t"}}},
		{"normal-mean", boxTiao, [2]parametrisation{
			{"mean", oneOf("location", "Normal(t, sd = 2)"), constant, "flat"},
			{"exp", oneOf("positive", "Normal(log(t), sd = 2)"), powerOf(-1), "1/t"}}},
		{"normal-sd", boxTiao, [2]parametrisation{
			{"sd", oneOf("scale", "Normal(1, sd = t)"), powerOf(-1), "1/t"},
			{"variance", oneOf("positive", "Normal(1, variance = t)"), powerOf(-1), "1/t"}}},
		{"normal-precision", boxTiao, [2]parametrisation{
			{"precision", oneOf("positive", "Normal(1, precision = t)"), powerOf(-1), "1/t"},
			{"log", oneOf("real", "Normal(1, precision = exp(t))"), constant, "flat"}}},
		{"lognormal-location", derivation, [2]parametrisation{
			{"log", oneOf("real", "log-Normal(log mean = t, log sd = 2)"), constant, "flat"},
			{"median", oneOf("positive", "log-Normal(median = t, log sd = 2)"), powerOf(-1), "1/t"}}},
		{"lognormal-spread", derivation, [2]parametrisation{
			{"sd", oneOf("scale", "log-Normal(log mean = 1, log sd = t)"), powerOf(-1), "1/t"},
			{"square", oneOf("positive", "log-Normal(log mean = 1, log sd = sqrt(t))"), powerOf(-1), "1/t"}}},
		{"gamma-rate", yangBerger, [2]parametrisation{
			{"rate", oneOf("rate", "Gamma(shape = 5/2, rate = t)"), powerOf(-1), "1/t"},
			{"scale", oneOf("scale", "Gamma(shape = 5/2, scale = t)"), powerOf(-1), "1/t"}}},
		{"gamma-shape", yangBerger, [2]parametrisation{
			{"shape", oneOf("shape", "Gamma(shape = t, rate = 2)"), sqrtTrigamma(1, 1, 0), "sqrt(trigamma(t))"},
			{"square", oneOf("shape", "Gamma(shape = t^2, rate = 2)"), sqrtTrigamma(1, 2, 1), "t * sqrt(trigamma(t^2))"}}},
		{"inversegamma-scale", derivation, [2]parametrisation{
			{"scale", oneOf("scale", "inverse-Gamma(shape = 5/2, scale = t)"), powerOf(-1), "1/t"},
			{"reciprocal", oneOf("positive", "inverse-Gamma(shape = 5/2, scale = 1 / t)"), powerOf(-1), "1/t"}}},
		{"inversegamma-shape", derivation, [2]parametrisation{
			{"shape", oneOf("shape", "inverse-Gamma(shape = t, scale = 2)"), sqrtTrigamma(1, 1, 0), "sqrt(trigamma(t))"},
			{"square", oneOf("shape", "inverse-Gamma(shape = t^2, scale = 2)"), sqrtTrigamma(1, 2, 1), ""}}},
		{"chisquare", derivation, [2]parametrisation{
			{"degrees", oneOf("degrees", "chi-square(t)"), sqrtTrigamma(0.5, 1, 0), "sqrt(trigamma(t / 2))"},
			{"half", oneOf("positive", "chi-square(2 * t)"), sqrtTrigamma(1, 1, 0), "sqrt(trigamma(t))"}}},
		{"weibull-scale", yangBerger, [2]parametrisation{
			{"scale", oneOf("scale", "Weibull(shape = 3/2, scale = t)"), powerOf(-1), "1/t"},
			{"log", oneOf("real", "Weibull(shape = 3/2, scale = exp(t))"), constant, "flat"}}},
		{"weibull-shape", derivation, [2]parametrisation{
			{"shape", oneOf("shape", "Weibull(shape = t, scale = 2)"), powerOf(-1), "1/t"},
			{"reciprocal", oneOf("positive", "Weibull(shape = 1 / t, scale = 2)"), powerOf(-1), "1/t"}}},
		{"gumbel-location", derivation, [2]parametrisation{
			{"location", oneOf("location", "Gumbel(t, 2)"), constant, "flat"},
			{"exp", oneOf("positive", "Gumbel(log(t), 2)"), powerOf(-1), "1/t"}}},
		{"gumbel-scale", derivation, [2]parametrisation{
			{"scale", oneOf("scale", "Gumbel(1, t)"), powerOf(-1), "1/t"},
			{"reciprocal", oneOf("positive", "Gumbel(1, 1 / t)"), powerOf(-1), "1/t"}}},
		{"laplace-location", yangBerger, [2]parametrisation{
			{"location", oneOf("location", "Laplace(t, scale = 2)"), constant, "flat"},
			{"exp", oneOf("positive", "Laplace(log(t), scale = 2)"), powerOf(-1), "1/t"}}},
		{"laplace-scale", yangBerger, [2]parametrisation{
			{"scale", oneOf("scale", "Laplace(1, scale = t)"), powerOf(-1), "1/t"},
			{"rate", oneOf("rate", "Laplace(1, scale = 1 / t)"), powerOf(-1), "1/t"}}},
		{"cauchy-location", yangBerger, [2]parametrisation{
			{"location", oneOf("location", "Cauchy(t, 2)"), constant, "flat"},
			{"exp", oneOf("positive", "Cauchy(log(t), 2)"), powerOf(-1), "1/t"}}},
		{"cauchy-scale", yangBerger, [2]parametrisation{
			{"scale", oneOf("scale", "Cauchy(1, t)"), powerOf(-1), "1/t"},
			{"log", oneOf("real", "Cauchy(1, exp(t))"), constant, "flat"}}},
		{"logistic-location", derivation, [2]parametrisation{
			{"location", oneOf("location", "logistic(t, 2)"), constant, "flat"},
			{"exp", oneOf("positive", "logistic(log(t), 2)"), powerOf(-1), "1/t"}}},
		{"logistic-scale", derivation, [2]parametrisation{
			{"scale", oneOf("scale", "logistic(1, t)"), powerOf(-1), "1/t"},
			{"reciprocal", oneOf("positive", "logistic(1, 1 / t)"), powerOf(-1), "1/t"}}},
		{"student-location", yangBerger, [2]parametrisation{
			{"location", oneOf("location", "Student-t(degrees = 5, location = t, scale = 2)"), constant, "flat"},
			{"exp", oneOf("positive", "Student-t(degrees = 5, location = log(t), scale = 2)"), powerOf(-1), "1/t"}}},
		{"student-scale", yangBerger, [2]parametrisation{
			{"scale", oneOf("scale", "Student-t(degrees = 5, location = 1, scale = t)"), powerOf(-1), "1/t"},
			{"square", oneOf("positive", "Student-t(degrees = 5, location = 1, scale = sqrt(t))"), powerOf(-1), "1/t"}}},
		{"student-degrees", "Fonseca, Ferreira & Migon (2008), Biometrika 95, the factor of the degrees with the scale held; from memory, recomputed in testdata/catalogue.py", [2]parametrisation{
			{"degrees", oneOf("degrees", "Student-t(degrees = t, location = 1, scale = 2)"), func(x []float64) float64 { return math.Sqrt(studentDegrees(x[0])) }, ""},
			{"reciprocal", oneOf("positive", "Student-t(degrees = 1 / t, location = 1, scale = 2)"), func(x []float64) float64 { return math.Sqrt(studentDegrees(1/x[0])) / (x[0] * x[0]) }, ""}}},
		{"pareto-shape", yangBerger, [2]parametrisation{
			{"shape", oneOf("shape", "Pareto(minimum = 1/2, shape = t)"), powerOf(-1), "1/t"},
			{"reciprocal", oneOf("positive", "Pareto(minimum = 1/2, shape = 1 / t)"), powerOf(-1), "1/t"}}},
		{"invgauss-mean", yangBerger, [2]parametrisation{
			{"mean", oneOf("positive", "inverse-Gaussian(mean = t, shape = 2)"), powerOf(-1.5), "1/t^(3/2)"},
			{"reciprocal", oneOf("positive", "inverse-Gaussian(mean = 1 / t, shape = 2)"), powerOf(-0.5), "1/sqrt(t)"}}},
		{"invgauss-shape", yangBerger, [2]parametrisation{
			{"shape", oneOf("shape", "inverse-Gaussian(mean = 1, shape = t)"), powerOf(-1), "1/t"},
			{"reciprocal", oneOf("positive", "inverse-Gaussian(mean = 1, shape = 1 / t)"), powerOf(-1), "1/t"}}},
		{"halfnormal", derivation, [2]parametrisation{
			{"sd", oneOf("scale", "half-Normal(sd = t)"), powerOf(-1), "1/t"},
			{"variance", oneOf("positive", "half-Normal(variance = t)"), powerOf(-1), "1/t"}}},
		{"halfcauchy", derivation, [2]parametrisation{
			{"scale", oneOf("scale", "half-Cauchy(t)"), powerOf(-1), "1/t"},
			{"square", oneOf("positive", "half-Cauchy(sqrt(t))"), powerOf(-1), "1/t"}}},
		{"gpareto-scale", derivation, [2]parametrisation{
			{"scale", oneOf("scale", "generalized-Pareto(scale = t, shape = 1/4)"), powerOf(-1), "1/t"},
			{"reciprocal", oneOf("positive", "generalized-Pareto(scale = 1 / t, shape = 1/4)"), powerOf(-1), "1/t"}}},
		{"gpareto-shape", "Castellanos & Cabras (2007), J. Statist. Plann. Inference 137, the factor of the shape with the scale held; from memory, recomputed in testdata/catalogue.py", [2]parametrisation{
			{"shape", oneOf("real", "generalized-Pareto(scale = 2, shape = t)"), func(x []float64) float64 { return 1 / math.Sqrt((1+x[0])*(1+2*x[0])) }, "1/(sqrt(1 + t) * sqrt(1 + 2 * t))"},
			{"square", oneOf("positive", "generalized-Pareto(scale = 2, shape = t^2)"), func(x []float64) float64 {
				return x[0] / math.Sqrt((1+x[0]*x[0])*(1+2*x[0]*x[0]))
			}, ""}}},
		{"beta-power", derivation, [2]parametrisation{
			{"a", powerModel("Beta(t, 1)"), powerOf(-1), "1/t"},
			{"reciprocal", powerModel("Beta(1 / t, 1)"), powerOf(-1), "1/t"}}},
		{"beta-symmetric", derivation, [2]parametrisation{
			{"a", powerModel("Beta(t, t)"), func(x []float64) float64 { return math.Sqrt(2*trigammaOf(x[0]) - 4*trigammaOf(2*x[0])) }, ""},
			{"square", powerModel("Beta(t^2, t^2)"), func(x []float64) float64 {
				s := x[0] * x[0]
				return x[0] * math.Sqrt(2*trigammaOf(s)-4*trigammaOf(2*s))
			}, ""}}},
		{"vonmises", derivation, [2]parametrisation{
			{"concentration", oneOf("positive", "von-Mises(direction = 0, concentration = t)"), func(x []float64) float64 { return math.Sqrt(vonMises(x[0])) }, ""},
			{"square", oneOf("positive", "von-Mises(direction = 0, concentration = t^2)"), func(x []float64) float64 { return x[0] * math.Sqrt(vonMises(x[0]*x[0])) }, ""}}},
		{"correlation", yangBerger, [2]parametrisation{
			{"rho", "unknown t : correlation\ngiven y1 = 1, y2 = 1\nobserve (y1, y2) as multivariate-Normal(0, sd = 1, correlation = t)\nprior t jeffreys\n",
				func(x []float64) float64 { return math.Sqrt(1+x[0]*x[0]) / (1 - x[0]*x[0]) }, "sqrt(1 + t^2) / (1 - t^2)"},
			{"atanh", "unknown t : real\ngiven y1 = 1, y2 = 1\nobserve (y1, y2) as multivariate-Normal(0, sd = 1, correlation = tanh(t))\nprior t jeffreys\n",
				func(x []float64) float64 { r := math.Tanh(x[0]); return math.Sqrt(1 + r*r) }, ""}}},
		{"normal-mean-equals-sd", derivation, [2]parametrisation{
			{"theta", oneOf("positive", "Normal(t, sd = t)"), powerOf(-1), "1/t"},
			{"square", oneOf("positive", "Normal(sqrt(t), variance = t)"), powerOf(-1), "1/t"}}},
		{"normal-mean-equals-variance", derivation, [2]parametrisation{
			{"theta", oneOf("positive", "Normal(t, variance = t)"), func(x []float64) float64 { return math.Sqrt(x[0]+0.5) / x[0] }, "sqrt(1 + 2 * t) / t"},
			{"reciprocal", oneOf("positive", "Normal(1 / t, precision = t)"), func(x []float64) float64 { return math.Sqrt(1/x[0]+0.5) / x[0] }, ""}}},
		{"dilution", derivation, [2]parametrisation{
			{"density", "unknown t : rate\ngiven y = 1\nobserve y as Bernoulli(1 - exp(-t / 2))\nobserve y as Bernoulli(1 - exp(-2 * t))\nprior t jeffreys\n",
				func(x []float64) float64 { return dilution(x[0]) }, ""},
			{"log", "unknown t : real\ngiven y = 1\nobserve y as Bernoulli(1 - exp(-exp(t) / 2))\nobserve y as Bernoulli(1 - exp(-2 * exp(t)))\nprior t jeffreys\n",
				func(x []float64) float64 { return math.Exp(x[0]) * dilution(math.Exp(x[0])) }, ""}}},
		{"gene", derivation, [2]parametrisation{
			{"p", "unknown t : probability\ngiven y1 = 1, y2 = 1, y3 = 1\nobserve (y1, y2, y3) as Multinomial(3, (t^2, 2 * t * (1 - t), (1 - t)^2))\nprior t jeffreys\n", betaKernel(-0.5, -0.5), "Beta(1/2, 1/2)"},
			{"logit", "unknown t : real\ngiven y1 = 1, y2 = 1, y3 = 1\nlet p = expit(t)\nobserve (y1, y2, y3) as Multinomial(3, (p^2, 2 * p * (1 - p), (1 - p)^2))\nprior t jeffreys\n", logitKernel, ""}}},
	}
}

// powerModel observes a number inside (0, 1).
func powerModel(law string) string {
	return "unknown t : shape\ngiven y = 1/2\nobserve y as " + law + "\nprior t jeffreys\n"
}

func studentDegrees(v float64) float64 {
	return (trigammaOf(v/2)-trigammaOf((v+1)/2))/4 - (v+5)/(2*v*(v+1)*(v+3))
}

func vonMises(k float64) float64 {
	// A = I1/I0 from the power series.
	i0, i1, t0, t1 := 0.0, 0.0, 1.0, k/2
	for n := 1.0; n < 400; n++ {
		i0, i1 = i0+t0, i1+t1
		t0 *= k * k / 4 / (n * n)
		t1 *= k * k / 4 / (n * (n + 1))
	}
	a := i1 / i0
	return 1 - a/k - a*a
}

func dilution(t float64) float64 {
	i := 0.0
	for _, v := range []float64{0.5, 2} {
		i += v * v / math.Expm1(v*t)
	}
	return math.Sqrt(i)
}
