package grammar

import "strings"

// KindSpec is a kind of unknown with its support and what it is for.
type KindSpec struct {
	Name string
	// Low and High are the ends of the support as text: "0", "1", "-inf", "inf".
	// Both are empty for kinds that are not one number.
	Low, High string
	// Sized kinds take a number in brackets: proportions(4).
	Sized bool
	// Discrete kinds take whole numbers.
	Discrete bool
	Doc      string
}

// Kinds lists the kinds of unknown.
var Kinds = []*KindSpec{
	{Name: "real", Low: "-inf", High: "inf", Doc: "any number"},
	{Name: "location", Low: "-inf", High: "inf", Doc: "shifts the data: a mean or a median"},
	{Name: "effect", Low: "-inf", High: "inf", Doc: "a coefficient or a difference; 0 means none"},
	{Name: "positive", Low: "0", High: "inf", Doc: "a number above 0"},
	{Name: "scale", Low: "0", High: "inf", Doc: "a standard deviation or another spread"},
	{Name: "rate", Low: "0", High: "inf", Doc: "events per unit of exposure"},
	{Name: "shape", Low: "0", High: "inf", Doc: "a shape parameter of a law on positive numbers"},
	{Name: "degrees", Low: "0", High: "inf", Doc: "degrees of freedom"},
	{Name: "probability", Low: "0", High: "1", Doc: "a chance"},
	{Name: "correlation", Low: "-1", High: "1", Doc: "a correlation"},
	{Name: "proportions", Sized: true, Doc: "shares that sum to 1"},
	{Name: "covariance", Sized: true, Doc: "a covariance matrix"},
	{Name: "cutpoints", Sized: true, Doc: "increasing thresholds between ordered categories"},
	{Name: "count", Low: "0", High: "inf", Discrete: true, Doc: "a whole number 0, 1, 2, …"},
}

// Function is a function of the expression language.
type Function struct {
	Name string
	// Min and Max are the numbers of arguments; Max < 0 means any number.
	Min, Max int
	Doc      string
}

// Functions lists the functions.
var Functions = []*Function{
	{"log", 1, 1, "natural logarithm"},
	{"exp", 1, 1, "exponential"},
	{"sqrt", 1, 1, "square root"},
	{"abs", 1, 1, "absolute value"},
	{"logit", 1, 1, "log odds, log(p / (1 − p))"},
	{"expit", 1, 1, "inverse of logit"},
	{"probit", 1, 1, "inverse of Phi"},
	{"Phi", 1, 1, "standard normal distribution function"},
	{"cloglog", 1, 1, "log(−log(1 − p))"},
	{"odds", 1, 1, "p / (1 − p)"},
	{"atan", 1, 1, "arc tangent"},
	{"tanh", 1, 1, "hyperbolic tangent"},
	{"atanh", 1, 1, "Fisher's z"},
	{"log-gamma", 1, 1, "logarithm of the gamma function"},
	{"sum", 1, 1, "sum over components, items or rows"},
	{"mean", 1, 1, "mean over components, items or rows"},
	{"length", 1, 1, "number of components, items or rows"},
	{"min", 1, -1, "smallest"},
	{"max", 1, -1, "largest"},
	{"det", 1, 1, "determinant"},
	{"distance", 1, -1, "distance between rows by these columns"},
	{"previous", 1, 1, "the value in the row before"},
	{"linear", 1, 1, "sum of coefficient times column"},
	{"P", 1, 1, "probability of a condition"},
	{"between", 2, 2, "an interval-censored reading, low to high"},
	{"summary", 3, 3, "n, mean and sd in place of the readings"},
}

// Constants are the named numbers.
var Constants = []string{"pi", "inf"}

// Keywords lead statements and are reserved.
var Keywords = []string{
	"title", "note", "field", "matters", "given", "table", "unknown", "vary", "let", "observe",
	"prior", "rival", "rivals", "report", "conclude", "await", "suppose", "require", "accept", "override",
}

// FindDistribution looks a distribution up in any case; nil when there is none.
func FindDistribution(name string) *Distribution { return distributionByName[strings.ToLower(name)] }

// FindKind looks a kind up; nil when there is none.
func FindKind(name string) *KindSpec { return kindByName[name] }

// FindFunction looks a function up; nil when there is none.
func FindFunction(name string) *Function { return functionByName[name] }

var (
	distributionByName = map[string]*Distribution{}
	kindByName         = map[string]*KindSpec{}
	functionByName     = map[string]*Function{}
)

func init() {
	for _, d := range Distributions {
		distributionByName[strings.ToLower(d.Name)] = d
	}
	for _, k := range Kinds {
		kindByName[k.Name] = k
	}
	for _, f := range Functions {
		functionByName[f.Name] = f
	}
}
