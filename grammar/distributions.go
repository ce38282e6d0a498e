package grammar

// Param is one argument of a distribution.
type Param struct {
	// Label is the argument's name, "log sd".
	Label string
	// Named says that the label must be written, because the field has rival
	// conventions for this place.
	Named bool
	// Optional arguments may be left out.
	Optional bool
	// Variadic takes all remaining positional arguments.
	Variadic bool
	Doc      string
}

// Distribution is a distribution's name, its parametrisations and what it
// lives on.
type Distribution struct {
	// Name is the canonical spelling; any case is read.
	Name string
	// Forms are the accepted parametrisations; the first is offered first. An
	// argument list must fit exactly one.
	Forms [][]Param
	// On says which values it can produce.
	On  Support
	Doc string
}

// Support is the kind of value that a distribution produces.
type Support string

// What a distribution lives on, before its parameters narrow it.
const (
	OnReals       Support = "real numbers"
	OnPositive    Support = "positive numbers"
	OnUnit        Support = "numbers between 0 and 1"
	OnInterval    Support = "numbers of an interval"
	OnCounts      Support = "counts 0, 1, 2, …"
	OnBinary      Support = "0 or 1"
	OnLevels      Support = "levels"
	OnSimplex     Support = "proportions that sum to 1"
	OnVectors     Support = "vectors"
	OnMatrices    Support = "covariance matrices"
	OnAngles      Support = "angles in radians"
	OnAnything    Support = "whatever its parts produce"
	OnTimes       Support = "times with events"
	OnCountVector Support = "vectors of counts"
)

func at(label, doc string) Param    { return Param{Label: label, Doc: doc} }
func named(label, doc string) Param { return Param{Label: label, Named: true, Doc: doc} }
func maybe(label, doc string) Param {
	return Param{Label: label, Named: true, Optional: true, Doc: doc}
}
func rest(label, doc string) Param { return Param{Label: label, Variadic: true, Doc: doc} }

var origin = maybe("origin", "where the waiting time starts; 0 when left out")

// Distributions lists every distribution of the language, in the order of the
// reference page.
var Distributions = []*Distribution{
	{Name: "Bernoulli", On: OnBinary, Doc: "one trial that succeeds with the given probability",
		Forms: [][]Param{{at("probability", "of a 1")}}},
	{Name: "Binomial", On: OnCounts, Doc: "successes in a fixed number of trials",
		Forms: [][]Param{{at("trials", "number of trials"), at("probability", "of success in a trial")}}},
	{Name: "beta-Binomial", On: OnCounts, Doc: "successes in trials whose probability varies as a Beta",
		Forms: [][]Param{
			{at("trials", "number of trials"), at("a", "first weight of the Beta"), at("b", "second weight of the Beta")},
			{at("trials", "number of trials"), named("mean", "of the Beta"), named("total", "a + b")}}},
	{Name: "geometric", On: OnCounts, Doc: "trials until the first success; first says whether the smallest value is 0 (failures before it) or 1 (trials with it)",
		Forms: [][]Param{{at("probability", "of success in a trial"), named("first", "smallest value, 0 or 1")}}},
	{Name: "negative-Binomial", On: OnCounts, Doc: "failures before the size-th success; a Poisson count whose mean varies as a Gamma",
		Forms: [][]Param{
			{named("mean", "expected count"), named("size", "shape of the mixing Gamma")},
			{named("size", "number of successes"), named("probability", "of success in a trial")}}},
	{Name: "hypergeometric", On: OnCounts, Doc: "marked units in a sample drawn without putting back",
		Forms: [][]Param{{named("population", "units in all"), named("marked", "marked units"), named("drawn", "units drawn")}}},
	{Name: "Poisson", On: OnCounts, Doc: "counts at a constant rate",
		Forms: [][]Param{{at("mean", "expected count")}}},
	{Name: "discrete-Uniform", On: OnCounts, Doc: "whole numbers of a range, all alike",
		Forms: [][]Param{{at("low", "smallest"), at("high", "largest")}}},
	{Name: "Multinomial", On: OnCountVector, Doc: "counts of several categories in a fixed number of trials",
		Forms: [][]Param{{at("trials", "number of trials"), at("proportions", "of the categories")}}},
	{Name: "categorical", On: OnLevels, Doc: "one of several categories",
		Forms: [][]Param{{at("proportions", "of the categories")}}},
	{Name: "cumulative-logit", On: OnLevels, Doc: "ordered categories 1, 2, … with P(at most k) = expit(cutpoint k − predictor)",
		Forms: [][]Param{{at("predictor", "linear predictor"), at("cutpoints", "increasing")}}},
	{Name: "cumulative-probit", On: OnLevels, Doc: "ordered categories 1, 2, … with P(at most k) = Phi(cutpoint k − predictor)",
		Forms: [][]Param{{at("predictor", "linear predictor"), at("cutpoints", "increasing")}}},
	{Name: "multinomial-logit", On: OnLevels, Doc: "categories 1, 2, … with log odds given by one predictor each",
		Forms: [][]Param{{rest("predictors", "one for each category; one of them is usually 0")}}},
	{Name: "Normal", On: OnReals, Doc: "the Gaussian law",
		Forms: [][]Param{
			{at("mean", "centre"), named("sd", "standard deviation")},
			{at("mean", "centre"), named("variance", "sd squared")},
			{at("mean", "centre"), named("precision", "1 / variance")}}},
	{Name: "log-Normal", On: OnPositive, Doc: "the logarithm is Normal",
		Forms: [][]Param{
			{named("log mean", "mean of the logarithm"), named("log sd", "sd of the logarithm"), origin},
			{named("median", "exp(log mean)"), named("log sd", "sd of the logarithm"), origin}}},
	{Name: "Student-t", On: OnReals, Doc: "Normal with a heavier tail",
		Forms: [][]Param{{named("degrees", "degrees of freedom"), named("location", "centre"), named("scale", "not the sd")}}},
	{Name: "Cauchy", On: OnReals, Doc: "Student-t with one degree of freedom",
		Forms: [][]Param{{at("location", "centre"), at("scale", "half the distance between the quartiles")}}},
	{Name: "Laplace", On: OnReals, Doc: "double exponential",
		Forms: [][]Param{{at("location", "centre"), named("scale", "mean absolute deviation")}}},
	{Name: "logistic", On: OnReals, Doc: "the logistic law",
		Forms: [][]Param{{at("location", "centre"), at("scale", "not the sd")}}},
	{Name: "skew-Normal", On: OnReals, Doc: "Normal with a skewness parameter: 2/scale · φ(z) Φ(shape · z)",
		Forms: [][]Param{{named("location", "not the mean"), named("scale", "not the sd"), named("shape", "skewness; 0 is Normal")}}},
	{Name: "Exponential", On: OnPositive, Doc: "waiting time at a constant rate",
		Forms: [][]Param{
			{named("rate", "1 / mean"), origin},
			{named("mean", "1 / rate"), origin}}},
	{Name: "Gamma", On: OnPositive, Doc: "sum of waiting times",
		Forms: [][]Param{
			{named("shape", "number of stages"), named("rate", "1 / scale"), origin},
			{named("shape", "number of stages"), named("scale", "1 / rate"), origin},
			{named("shape", "number of stages"), named("mean", "shape / rate"), origin}}},
	{Name: "inverse-Gamma", On: OnPositive, Doc: "the reciprocal is Gamma with that shape and rate = scale",
		Forms: [][]Param{{named("shape", "tail exponent"), named("scale", "rate of the reciprocal")}}},
	{Name: "chi-square", On: OnPositive, Doc: "sum of squares of standard normals",
		Forms: [][]Param{{at("degrees", "degrees of freedom")}}},
	{Name: "Weibull", On: OnPositive, Doc: "survival exp(−(t/scale)^shape)",
		Forms: [][]Param{{named("shape", "1 is Exponential"), named("scale", "the 63.2 % point"), origin}}},
	{Name: "Gumbel", On: OnReals, Doc: "largest of many: exp(−exp(−(x − location)/scale))",
		Forms: [][]Param{{at("location", "the mode"), at("scale", "spread")}}},
	{Name: "generalized-extreme-value", On: OnReals, Doc: "largest of many; a positive shape is a heavy upper tail",
		Forms: [][]Param{{named("location", "near the mode"), named("scale", "spread"), named("shape", "0 is Gumbel; positive is heavy-tailed")}}},
	{Name: "generalized-Pareto", On: OnPositive, Doc: "excess over a high threshold; a positive shape is a heavy tail",
		Forms: [][]Param{{named("scale", "spread"), named("shape", "0 is Exponential; positive is heavy-tailed"), origin}}},
	{Name: "Pareto", On: OnPositive, Doc: "density shape · minimum^shape / x^(shape + 1) above the minimum",
		Forms: [][]Param{{named("minimum", "smallest value"), named("shape", "tail exponent")}}},
	{Name: "inverse-Gaussian", On: OnPositive, Doc: "first passage time of a drifting Brownian motion",
		Forms: [][]Param{{named("mean", "expected value"), named("shape", "mean³ / variance")}}},
	{Name: "Beta", On: OnUnit, Doc: "proportions",
		Forms: [][]Param{
			{at("a", "weight of 1"), at("b", "weight of 0")},
			{named("mean", "a / (a + b)"), named("total", "a + b")}}},
	{Name: "Uniform", On: OnInterval, Doc: "all values of an interval alike",
		Forms: [][]Param{{at("low", "lower end"), at("high", "upper end")}}},
	{Name: "triangular", On: OnInterval, Doc: "rises to the mode and falls again",
		Forms: [][]Param{{at("low", "lower end"), at("mode", "peak"), at("high", "upper end")}}},
	{Name: "half-Normal", On: OnPositive, Doc: "absolute value of a centred Normal",
		Forms: [][]Param{{named("sd", "of the Normal")}, {named("variance", "of the Normal")}, {named("precision", "of the Normal")}}},
	{Name: "half-Cauchy", On: OnPositive, Doc: "absolute value of a centred Cauchy",
		Forms: [][]Param{{at("scale", "the median")}}},
	{Name: "half-Student-t", On: OnPositive, Doc: "absolute value of a centred Student-t",
		Forms: [][]Param{{named("degrees", "degrees of freedom"), named("scale", "not the sd")}}},
	{Name: "von-Mises", On: OnAngles, Doc: "angles around a direction",
		Forms: [][]Param{{named("direction", "mean angle"), named("concentration", "0 is uniform")}}},
	{Name: "Dirichlet", On: OnSimplex, Doc: "proportions of several categories",
		Forms: [][]Param{{rest("weights", "one for each category, or one number for all")}}},
	{Name: "multivariate-Normal", On: OnVectors, Doc: "several values that vary together",
		Forms: [][]Param{
			{at("mean", "one for each value, or one for all"), named("covariance", "matrix")},
			{at("mean", "one for each value, or one for all"), named("precision", "matrix")},
			{at("mean", "one for each value, or one for all"), named("sd", "of each value"), named("correlation", "a number, or a function of distance()")}}},
	{Name: "Wishart", On: OnMatrices, Doc: "sum of outer products of centred normal vectors",
		Forms: [][]Param{{named("degrees", "degrees of freedom"), named("scale", "matrix, or a number for a multiple of the identity")}}},
	{Name: "inverse-Wishart", On: OnMatrices, Doc: "the inverse is Wishart",
		Forms: [][]Param{{named("degrees", "degrees of freedom"), named("scale", "matrix, or a number for a multiple of the identity")}}},
	{Name: "correlation-matrix", On: OnMatrices, Doc: "density ∝ det^(concentration − 1) over correlation matrices",
		Forms: [][]Param{{named("concentration", "1 is flat")}}},
	{Name: "Mixture", On: OnAnything, Doc: "one of several laws, with the weights before the colons",
		Forms: [][]Param{{rest("parts", "weight: distribution")}}},
	{Name: "Point", On: OnAnything, Doc: "one value for certain",
		Forms: [][]Param{{at("value", "the value")}}},
	{Name: "Cox", On: OnTimes, Doc: "proportional hazards by partial likelihood (Breslow's treatment of ties)",
		Forms: [][]Param{{at("predictor", "log relative hazard")}}},
	{Name: "AR1", On: OnReals, Doc: "first-order autoregression by its stationary likelihood",
		Forms: [][]Param{{named("mean", "of the series"), named("coefficient", "between −1 and 1"), named("sd", "of the innovations")}}},
	{Name: "g-prior", On: OnVectors, Doc: "Normal with covariance g · sd² · (X'X)⁻¹ over the columns of the unknown",
		Forms: [][]Param{{at("g", "multiplier"), named("sd", "of the residuals")}}},
}
