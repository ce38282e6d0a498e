package objective

import (
	"math"
	"strings"
)

const regressionTable = `table d
| x  | y |
| -1 | 0 |
| 0  | 1 |
| 2  | 3 |
| 3  | 2 |
`

const countTable = `table d
| x | y |
| 0 | 1 |
| 1 | 0 |
| 2 | 3 |
`

const clinics = `table d
| clinic | y |
| a | 1 |
| a | 2 |
| a | 4 |
`

const binaryTable = `table d
| x  | y |
| -1 | 0 |
| 0  | 1 |
| 2  | 0 |
| 3  | 1 |
`

func product(a, b float64) func(x []float64) float64 {
	return func(x []float64) float64 { return math.Pow(x[0], a) * math.Pow(x[1], b) }
}

// bivariateText declares five unknowns in the order given by names.
func bivariateText(s1, s2, rule, names string) string {
	return "unknown m1, m2 : location\nunknown s1, s2 : scale\nunknown r : correlation\ngiven y1 = 1, y2 = 2\n" +
		"observe (y1, y2) as multivariate-Normal((m1, m2), sd = (" + s1 + ", " + s2 + "), correlation = r)\n" +
		"prior (" + names + ") " + rule + "\n"
}

func jeffreysSeveral() []published {
	jointly, separately := "jeffreys jointly", "jeffreys separately"
	inverseSquare, inverse := second(-2), second(-1)
	return []published{
		{"normal", jeffreys61, [2]parametrisation{
			{"sd", twoOf("location scale", "Normal(t, sd = u)", jointly), inverseSquare, "1/u^2"},
			{"precision", twoOf("location positive", "Normal(t, precision = u)", jointly), second(-0.5), "1/sqrt(u)"}}},
		{"lognormal", derivation, [2]parametrisation{
			{"sd", twoOf("location scale", "log-Normal(log mean = t, log sd = u)", jointly), inverseSquare, "1/u^2"},
			{"median", twoOf("positive scale", "log-Normal(median = t, log sd = u)", jointly), product(-1, -2), "1/(t * u^2)"}}},
		{"gamma", yangBerger, [2]parametrisation{
			{"rate", twoOf("shape rate", "Gamma(shape = t, rate = u)", jointly), func(x []float64) float64 { return math.Sqrt(x[0]*trigammaOf(x[0])-1) / x[1] }, "sqrt(t * trigamma(t) - 1) / u"},
			{"mean", twoOf("shape positive", "Gamma(shape = t, mean = u)", jointly), func(x []float64) float64 { return math.Sqrt(x[0]*trigammaOf(x[0])-1) / x[1] }, ""}}},
		{"weibull", yangBerger, [2]parametrisation{
			{"scale", twoOf("shape scale", "Weibull(shape = t, scale = u)", jointly), inverse, "1/u"},
			{"log", twoOf("positive real", "Weibull(shape = 1 / t, scale = exp(u))", jointly), powerOf(-2), "1/t^2"}}},
		{"gumbel", derivation, [2]parametrisation{
			{"scale", twoOf("location scale", "Gumbel(t, u)", jointly), inverseSquare, "1/u^2"},
			{"log", twoOf("location real", "Gumbel(t, exp(u))", jointly), func(x []float64) float64 { return math.Exp(-x[1]) }, "exp(-u)"}}},
		{"logistic", derivation, [2]parametrisation{
			{"scale", twoOf("location scale", "logistic(t, u)", jointly), inverseSquare, "1/u^2"},
			{"reciprocal", twoOf("location positive", "logistic(t, 1 / u)", jointly), constant, "flat"}}},
		{"cauchy", derivation, [2]parametrisation{
			{"scale", twoOf("location scale", "Cauchy(t, u)", jointly), inverseSquare, "1/u^2"},
			{"square", twoOf("location positive", "Cauchy(t, sqrt(u))", jointly), second(-1.5), "1/u^(3/2)"}}},
		{"laplace", derivation, [2]parametrisation{
			{"scale", twoOf("location scale", "Laplace(t, scale = u)", jointly), inverseSquare, "1/u^2"},
			{"rate", twoOf("location rate", "Laplace(t, scale = 1 / u)", jointly), constant, "flat"}}},
		{"student", derivation, [2]parametrisation{
			{"scale", twoOf("location scale", "Student-t(degrees = 5, location = t, scale = u)", jointly), inverseSquare, "1/u^2"},
			{"square", twoOf("location positive", "Student-t(degrees = 5, location = t, scale = sqrt(u))", jointly), second(-1.5), "1/u^(3/2)"}}},
		{"beta", yangBerger, [2]parametrisation{
			{"ab", "unknown t, u : shape\ngiven y = 1/2\nobserve y as Beta(t, u)\nprior (t, u) jeffreys jointly\n", func(x []float64) float64 { return betaBoth(x[0], x[1]) }, ""},
			{"mean", "unknown t : probability\nunknown u : positive\ngiven y = 1/2\nobserve y as Beta(mean = t, total = u)\nprior (t, u) jeffreys jointly\n",
				func(x []float64) float64 { return x[1] * betaBoth(x[0]*x[1], (1-x[0])*x[1]) }, ""}}},
		{"invgauss", yangBerger, [2]parametrisation{
			{"mean", twoOf("positive shape", "inverse-Gaussian(mean = t, shape = u)", jointly), product(-1.5, -0.5), "1/(t^(3/2) * sqrt(u))"},
			{"reciprocal", twoOf("positive shape", "inverse-Gaussian(mean = 1 / t, shape = u)", jointly), product(-0.5, -0.5), "1/(sqrt(t) * sqrt(u))"}}},
		{"gpareto", "Castellanos & Cabras (2007), J. Statist. Plann. Inference 137; from memory, recomputed in testdata/catalogue.py", [2]parametrisation{
			{"shape", twoOf("scale real", "generalized-Pareto(scale = t, shape = u)", jointly), func(x []float64) float64 { return 1 / (x[0] * (1 + x[1]) * math.Sqrt(1+2*x[1])) }, "1/(t * (1 + u) * sqrt(1 + 2 * u))"},
			{"square", twoOf("scale positive", "generalized-Pareto(scale = t, shape = u^2)", jointly), func(x []float64) float64 {
				s := x[1] * x[1]
				return x[1] / (x[0] * (1 + s) * math.Sqrt(1+2*s))
			}, ""}}},
		{"negbin-both", derivation, [2]parametrisation{
			{"size", twoOf("positive positive", "negative-Binomial(mean = t, size = u)", jointly), func(x []float64) float64 { return negbinBoth(x[0], x[1]) }, ""},
			{"reciprocal", twoOf("positive positive", "negative-Binomial(mean = t, size = 1 / u)", jointly), func(x []float64) float64 { return negbinBoth(x[0], 1/x[1]) / (x[1] * x[1]) }, ""}}},
		{"trinomial", yangBerger, [2]parametrisation{
			{"cells", "unknown w : proportions(3)\ngiven y1 = 1, y2 = 1, y3 = 1\nobserve (y1, y2, y3) as Multinomial(3, w)\nprior w jeffreys\n", func(x []float64) float64 { return 1 / math.Sqrt(x[0]*x[1]*x[2]) }, "Dirichlet(1/2)"},
			{"sticks", sticks("probability", "t", "u", "jeffreys jointly"), func(x []float64) float64 {
				return 1 / math.Sqrt(x[0]*x[1]*(1-x[1]))
			}, ""}}},
		{"regression", boxTiao, [2]parametrisation{
			{"sd", regressionTable + "unknown a, b : effect\nunknown s : scale\nobserve y as Normal(a + b * x, sd = s)\nprior (a, b, s) jeffreys jointly\n", func(x []float64) float64 { return math.Pow(x[2], -3) }, "1/s^3"},
			{"precision", regressionTable + "unknown a, b : effect\nunknown s : positive\nobserve y as Normal(a + b * x, precision = s)\nprior (a, b, s) jeffreys jointly\n", func([]float64) float64 { return 1 }, "flat"}}},
		{"logit-regression", "Ibrahim & Laud (1991), J. Amer. Statist. Assoc. 86; from memory, recomputed in testdata/catalogue.py", [2]parametrisation{
			{"slope", binaryTable + "unknown a, b : effect\nobserve y as Bernoulli(expit(a + b * x))\nprior (a, b) jeffreys jointly\n", func(x []float64) float64 { return logitDesign(x[0], x[1], 0) }, ""},
			{"centred", binaryTable + "unknown a, b : effect\nobserve y as Bernoulli(expit(a + b * (x - 1)))\nprior (a, b) jeffreys jointly\n", func(x []float64) float64 { return logitDesign(x[0], x[1], 1) }, ""}}},
		{"poisson-regression", derivation, [2]parametrisation{
			{"slope", countTable + "unknown a, b : effect\nobserve y as Poisson(exp(a + b * x))\nprior (a, b) jeffreys jointly\n", func(x []float64) float64 { return poissonDesign(x[0], x[1]) }, ""},
			{"base", countTable + "unknown a : rate\nunknown b : effect\nobserve y as Poisson(a * exp(b * x))\nprior (a, b) jeffreys jointly\n", func(x []float64) float64 { return poissonDesign(math.Log(x[0]), x[1]) / x[0] }, ""}}},
		{"bivariate", yangBerger, [2]parametrisation{
			{"sd", bivariateText("s1", "s2", jointly, "m1, m2, s1, s2, r"), func(x []float64) float64 {
				return 1 / (x[2] * x[2] * x[3] * x[3] * math.Pow(1-x[4]*x[4], 2))
			}, "1/(s1^2 * s2^2 * (1 - r^2)^2)"},
			{"variance", bivariateText("sqrt(s1)", "sqrt(s2)", jointly, "m1, m2, s1, s2, r"), func(x []float64) float64 {
				return 1 / (math.Pow(x[2]*x[3], 1.5) * math.Pow(1-x[4]*x[4], 2))
			}, ""}}},
		{"normal-separately", jeffreys61, [2]parametrisation{
			{"sd", twoOf("location scale", "Normal(t, sd = u)", separately), inverse, "1/u"},
			{"precision", twoOf("location positive", "Normal(t, precision = u)", separately), inverse, "1/u"}}},
		{"weibull-separately", "Sun (1997), J. Statist. Plann. Inference 61; from memory, recomputed in testdata/catalogue.py", [2]parametrisation{
			{"scale", twoOf("shape scale", "Weibull(shape = t, scale = u)", separately), product(-1, -1), "1/(t * u)"},
			{"reciprocal", twoOf("positive scale", "Weibull(shape = 1 / t, scale = u)", separately), product(-1, -1), "1/(t * u)"}}},
		{"gamma-separately", derivation, [2]parametrisation{
			{"rate", twoOf("shape rate", "Gamma(shape = t, rate = u)", separately), func(x []float64) float64 { return math.Sqrt(trigammaOf(x[0])) / x[1] }, "sqrt(trigamma(t)) / u"},
			{"scale", twoOf("shape scale", "Gamma(shape = t, scale = u)", separately), func(x []float64) float64 { return math.Sqrt(trigammaOf(x[0])) / x[1] }, ""}}},
		{"student-df-separately", "Fonseca, Ferreira & Migon (2008), Biometrika 95, independence form; from memory, recomputed in testdata/catalogue.py", [2]parametrisation{
			{"scale", studentText("s"), func(x []float64) float64 { return math.Sqrt(studentDegrees(x[2])) / x[1] }, ""},
			{"square", studentText("sqrt(s)"), func(x []float64) float64 { return math.Sqrt(studentDegrees(x[2])) / x[1] }, ""}}},
	}
}

func studentText(scale string) string {
	return "unknown m : location\nunknown s : scale\nunknown v : degrees\ngiven y = 1\nobserve y as Student-t(degrees = v, location = m, scale = " + scale + ")\nprior (m, s, v) jeffreys separately\n"
}

// sticks is a trinomial by successive splits.
func sticks(kind, first, second, rule string) string {
	return "unknown t, u : " + kind + "\ngiven y1 = 1, y2 = 1, y3 = 1\nlet p = " + first + "\nlet q = " + second + "\nobserve (y1, y2, y3) as Multinomial(3, (p, (1 - p) * q, (1 - p) * (1 - q)))\nprior (t, u) " + rule + "\n"
}

func betaBoth(a, b float64) float64 {
	c := trigammaOf(a + b)
	return math.Sqrt(trigammaOf(a)*trigammaOf(b) - c*(trigammaOf(a)+trigammaOf(b)))
}

// negbinBoth uses I(k, k) = Σ P(Y > j)/(k + j)² − m/(k(k + m)).
func negbinBoth(m, k float64) float64 {
	p := math.Pow(k/(k+m), k)
	tail, total := 1-p, 0.0
	for j := 0.0; j < 5000; j++ {
		total += tail / ((k + j) * (k + j))
		p *= (j + k) / (j + 1) * m / (k + m)
		tail -= p
		if tail < 1e-17 {
			break
		}
	}
	return math.Sqrt(k / (m * (m + k)) * (total - m/(k*(k+m))))
}

func logitDesign(a, b, centre float64) float64 {
	var s0, s1, s2 float64
	for _, x := range []float64{-1, 0, 2, 3} {
		x -= centre
		e := a + b*x
		w := 1 / (4 * math.Pow(math.Cosh(e/2), 2))
		s0, s1, s2 = s0+w, s1+w*x, s2+w*x*x
	}
	return math.Sqrt(s0*s2 - s1*s1)
}

func poissonDesign(a, b float64) float64 {
	var s0, s1, s2 float64
	for _, x := range []float64{0, 1, 2} {
		w := math.Exp(a + b*x)
		s0, s1, s2 = s0+w, s1+w*x, s2+w*x*x
	}
	return math.Sqrt(s0*s2 - s1*s1)
}

func references() []published {
	inOrder := reference("t u")
	return []published{
		{"ref-normal-mean", bernSmith, [2]parametrisation{
			{"sd", twoOf("location scale", "Normal(t, sd = u)", inOrder), second(-1), "1/u"},
			{"variance", twoOf("location positive", "Normal(t, variance = u)", inOrder), second(-1), "1/u"}}},
		{"ref-normal-sd", bernSmith, [2]parametrisation{
			{"sd", twoOf("scale location", "Normal(u, sd = t)", inOrder), powerOf(-1), "1/t"},
			{"precision", twoOf("positive location", "Normal(u, precision = t)", inOrder), powerOf(-1), "1/t"}}},
		{"ref-standardised-mean", bernSmith, [2]parametrisation{
			{"sd", twoOf("real scale", "Normal(t * u, sd = u)", inOrder), func(x []float64) float64 { return 1 / (x[1] * math.Sqrt(2+x[0]*x[0])) }, "1/(u * sqrt(2 + t^2))"},
			{"precision", twoOf("real positive", "Normal(t / sqrt(u), precision = u)", inOrder), func(x []float64) float64 { return 1 / (x[1] * math.Sqrt(2+x[0]*x[0])) }, "1/(u * sqrt(2 + t^2))"}}},
		{"ref-variation", derivation, [2]parametrisation{
			{"mean", twoOf("positive positive", "Normal(u, sd = t * u)", inOrder), func(x []float64) float64 { return 1 / (x[0] * math.Sqrt(1+2*x[0]*x[0]) * x[1]) }, "1/(t * u * sqrt(1 + 2 * t^2))"},
			{"reciprocal", twoOf("positive positive", "Normal(1 / u, sd = t / u)", inOrder), func(x []float64) float64 { return 1 / (x[0] * math.Sqrt(1+2*x[0]*x[0]) * x[1]) }, ""}}},
		{"ref-gamma-shape", yangBerger, [2]parametrisation{
			{"rate", twoOf("shape rate", "Gamma(shape = t, rate = u)", inOrder), func(x []float64) float64 { return math.Sqrt(trigammaOf(x[0])-1/x[0]) / x[1] }, ""},
			{"mean", twoOf("shape positive", "Gamma(shape = t, mean = u)", inOrder), func(x []float64) float64 { return math.Sqrt(trigammaOf(x[0])-1/x[0]) / x[1] }, ""}}},
		{"ref-weibull-shape", "Sun (1997), J. Statist. Plann. Inference 61; from memory, recomputed in testdata/catalogue.py", [2]parametrisation{
			{"scale", twoOf("shape scale", "Weibull(shape = t, scale = u)", inOrder), product(-1, -1), "1/(t * u)"},
			{"reciprocal", twoOf("positive scale", "Weibull(shape = 1 / t, scale = u)", inOrder), product(-1, -1), "1/(t * u)"}}},
		{"ref-weibull-scale", "Sun (1997), J. Statist. Plann. Inference 61; from memory, recomputed in testdata/catalogue.py", [2]parametrisation{
			{"scale", twoOf("scale shape", "Weibull(shape = u, scale = t)", inOrder), product(-1, -1), "1/(t * u)"},
			{"log", twoOf("real shape", "Weibull(shape = u, scale = exp(t))", inOrder), second(-1), "1/u"}}},
		{"ref-invgauss-mean", yangBerger, [2]parametrisation{
			{"mean", twoOf("positive shape", "inverse-Gaussian(mean = t, shape = u)", inOrder), product(-1.5, -1), "1/(t^(3/2) * u)"},
			{"reciprocal", twoOf("positive shape", "inverse-Gaussian(mean = 1 / t, shape = u)", inOrder), product(-0.5, -1), "1/(sqrt(t) * u)"}}},
		{"ref-poisson-ratio", bernSmith, [2]parametrisation{
			{"ratio", twoOf("positive positive", "Poisson(t * u) ; Poisson(u)", inOrder), func(x []float64) float64 { return 1 / math.Sqrt(x[0]*(1+x[0])*x[1]) }, ""},
			{"share", twoOf("probability positive", "Poisson(u * t / (1 - t)) ; Poisson(u)", inOrder), func(x []float64) float64 { return 1 / (math.Sqrt(x[0]*x[1]) * (1 - x[0])) }, ""}}},
		{"ref-exponential-ratio", derivation, [2]parametrisation{
			{"mean", twoOf("positive positive", "Exponential(mean = t * u) ; Exponential(mean = u)", inOrder), product(-1, -1), "1/(t * u)"},
			{"rate", twoOf("positive positive", "Exponential(rate = u / t) ; Exponential(rate = u)", inOrder), product(-1, -1), "1/(t * u)"}}},
		{"ref-trinomial", bergBern, [2]parametrisation{
			{"sticks", sticks("probability", "t", "u", inOrder), func(x []float64) float64 { return 1 / math.Sqrt(x[0]*(1-x[0])*x[1]*(1-x[1])) }, ""},
			{"odds", sticks("positive", "t / (1 + t)", "u / (1 + u)", inOrder), func(x []float64) float64 { return 1 / (math.Sqrt(x[0]*x[1]) * (1 + x[0]) * (1 + x[1])) }, ""}}},
		{"ref-correlation", bergBern, [2]parametrisation{
			{"rho", bivariateText("s1", "s2", reference("r m1 m2 s1 s2"), "r, m1, m2, s1, s2"), func(x []float64) float64 { return 1 / ((1 - x[0]*x[0]) * x[3] * x[4]) }, "1/(s1 * s2 * (1 - r^2))"},
			{"variance", bivariateText("sqrt(s1)", "sqrt(s2)", reference("r m1 m2 s1 s2"), "r, m1, m2, s1, s2"), func(x []float64) float64 { return 1 / ((1 - x[0]*x[0]) * x[3] * x[4]) }, ""}}},
		{"ref-two-normals", bernSmith, [2]parametrisation{
			{"sd", twoNormals("unknown a, b : location\nunknown s, v : scale", "Normal(a, sd = s)", "Normal(b, sd = v)", "a, b, s, v"), func(x []float64) float64 { return 1 / (x[2] * x[3]) }, "1/(s * v)"},
			{"variance", twoNormals("unknown a, b : location\nunknown s, v : positive", "Normal(a, variance = s)", "Normal(b, variance = v)", "a, b, s, v"), func(x []float64) float64 { return 1 / (x[2] * x[3]) }, "1/(s * v)"}}},
		{"ref-sd-ratio", derivation, [2]parametrisation{
			{"sd", twoNormals("unknown a, b : location\nunknown s, v : positive", "Normal(a, sd = v * s)", "Normal(b, sd = s)", "v, a, b, s"), func(x []float64) float64 { return 1 / (x[0] * x[3]) }, "1/(s * v)"},
			{"precision", twoNormals("unknown a, b : location\nunknown s, v : positive", "Normal(a, variance = v / s)", "Normal(b, precision = s)", "v, a, b, s"), func(x []float64) float64 { return 1 / (x[0] * x[3]) }, "1/(s * v)"}}},
		{"ref-gpareto-shape", derivation, [2]parametrisation{
			{"scale", twoOf("real scale", "generalized-Pareto(scale = u, shape = t)", inOrder), func(x []float64) float64 { return 1 / ((1 + x[0]) * x[1]) }, ""},
			{"reciprocal", twoOf("real positive", "generalized-Pareto(scale = 1 / u, shape = t)", inOrder), func(x []float64) float64 { return 1 / ((1 + x[0]) * x[1]) }, ""}}},
		{"ref-gpareto-scale", derivation, [2]parametrisation{
			{"scale", twoOf("scale real", "generalized-Pareto(scale = t, shape = u)", inOrder), func(x []float64) float64 { return 1 / (x[0] * math.Sqrt((1+x[1])*(1+2*x[1]))) }, ""},
			{"log", twoOf("real real", "generalized-Pareto(scale = exp(t), shape = u)", inOrder), func(x []float64) float64 { return 1 / math.Sqrt((1+x[1])*(1+2*x[1])) }, ""}}},
		{"ref-regression", bergBern, [2]parametrisation{
			{"slope", regressionTable + "unknown a, b : effect\nunknown s : scale\nobserve y as Normal(a + b * x, sd = s)\nprior (b, a, s) reference b before a before s\n", func(x []float64) float64 { return 1 / x[2] }, "1/s"},
			{"precision", regressionTable + "unknown a, b : effect\nunknown s : positive\nobserve y as Normal(a + b * x, precision = s)\nprior (b, a, s) reference b before a before s\n", func(x []float64) float64 { return 1 / x[2] }, "1/s"}}},
		{"ref-variance-ratio", bergBern, [2]parametrisation{
			{"ratio", clinics + "unknown r, v : positive\nunknown m : location\nvary th across clinic as Normal(m, variance = v * r)\nobserve y as Normal(th[clinic], variance = v)\nprior (r, v, m) reference r before v before m\n",
				func(x []float64) float64 { return 1 / ((1 + 3*x[0]) * x[1]) }, "1/(v * (1 + 3 * r))"},
			{"sd", clinics + "unknown r, v : positive\nunknown m : location\nvary th across clinic as Normal(m, sd = v * r)\nobserve y as Normal(th[clinic], sd = v)\nprior (r, v, m) reference r before v before m\n",
				func(x []float64) float64 { return x[0] / ((1 + 3*x[0]*x[0]) * x[1]) }, "r / (v * (1 + 3 * r^2))"}}},
		{"ref-gumbel", derivation, [2]parametrisation{
			{"scale", twoOf("location scale", "Gumbel(t, u)", inOrder), second(-1), "1/u"},
			{"reciprocal", twoOf("location positive", "Gumbel(t, 1 / u)", inOrder), second(-1), "1/u"}}},
		{"ref-student", "Fernández & Steel (1999), Statist. Probab. Lett. 43; from memory, recomputed in testdata/catalogue.py", [2]parametrisation{
			{"scale", twoOf("location scale", "Student-t(degrees = 5, location = t, scale = u)", inOrder), second(-1), "1/u"},
			{"square", twoOf("location positive", "Student-t(degrees = 5, location = t, scale = sqrt(u))", inOrder), second(-1), "1/u"}}},
	}
}

func twoNormals(declared, first, second, order string) string {
	return declared + "\ngiven y1 = 1, y2 = 2\nobserve y1 as " + first + "\nobserve y2 as " + second + "\nprior (" + order + ") reference " + reorder(order) + "\n"
}

func reorder(order string) string { return strings.ReplaceAll(order, ",", " before") }
