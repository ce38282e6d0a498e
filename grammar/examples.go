package grammar

import "strings"

// Examples of the statements, for the reference page and for hovers. Names in
// them are invented.
var statementExamples = map[string][]string{
	"title":   {`title "Relay endurance demonstration"`},
	"note":    {`note "Invented data."`},
	"field":   {`field "reliability"`},
	"matters": {`matters 10%`, `matters 1/10`},
	"given":   {`given n = 40, y = 0`, `given reading = [1.2, 0.7, 3.1]`},
	"table":   {`table trials from "trials.csv"`, "table assay\n| dose  | n | deaths |\n| -0.86 | 5 | 0      |\n| -0.30 | 5 | 1      |"},
	"unknown": {
		`unknown p : probability "failure within one mission"`, `unknown mu, nu : location`,
		`unknown phi : real in (-1, 1)`, `unknown x : real limited to x >= 0 by nature`,
		`unknown gamma per region : effect`, `unknown gamma per site by year : effect`,
		`unknown gamma per region relative to "north" : effect`,
		`unknown ability per (winner, loser) : effect`, `unknown beta for (age, dose) : effect`},
	"vary": {`vary theta across study as Normal(mu, sd = tau)`, `vary delta across site by year as Normal(0, sd = omega)`},
	"let":  {`let eta = alpha + slope * dose`},
	"observe": {
		`observe deaths as Binomial(n, expit(eta))`, `observe 0 of 40 with probability p`, `observe 10 in 6 at rate lambda`,
		`observe hours as Weibull(shape = k, scale = s), right-censored where failed == 0`,
		`observe conc as log-Normal(log mean = m, log sd = s), left-censored where flag == "<"`,
		`observe y as Poisson(m), truncated to (1, inf), weighted by w, only where used == 1`,
		`observe between(low, high) as Normal(mu, sd = sigma)`,
		`observe summary(n = 15, mean = 12.1, sd = 3.2) as Normal(mu, sd = sigma)`,
		`observe (a, b, c) as Multinomial(n, w)`},
	"prior": {
		`prior p as Beta(1/2, 1/2) because "standard at this station" from "plan 4.2"`, `prior logit(p) flat`,
		`prior sigma ∝ 1/sigma`, `prior (alpha, beta) ∝ (alpha + beta)^(-5/2)`, `prior p jeffreys`,
		`prior (mu, sigma) jeffreys jointly`, `prior (mu, sigma) jeffreys separately`,
		`prior (mu, sigma) reference mu before sigma`, `prior p matching`, `prior p constrained to mean 0.05`,
		`prior p maximal-data-information`, `prior mu as Normal(0, sd = 10), truncated to (0, 50)`},
	"rival":    {`rival "uniform" p as Beta(1, 1)`, `rival "sceptical": p as Beta(2, 20); q as Beta(2, 20)`},
	"rivals":   {`rivals for p, q: standard`},
	"report":   {`report p, upper 95%`, `report odds = p / (1 - p), central 50%, 95%, median`, `report mu, shortest 90%, mean, sd`},
	"conclude": {`conclude "meets 0.05" when P(p < 0.05) >= 0.95`},
	"await":    {`await y`},
	"suppose":  {`suppose p in 0.01, 0.02, 0.05`, `suppose p from 0.01 to 0.2`, `suppose p as Beta(2, 60)`, `suppose (mu, sigma) in (0, 1), (0, 2)`},
	"require": {
		`require a posterior for every outcome`, `require a posterior with probability >= 99.9%`,
		`require long-run coverage of p: lowest >= 88%, average >= 94%, p from 0.01 to 0.2`,
		`require chance of "meets 0.05" <= 5% when p = 0.05`, `require rivals agree on odds within 10%`},
	"accept":   {`accept flat-on-unbounded for mu because "location, n = 200; plan 9.3" by "trial statistician" until 2027-06-30`},
	"override": {`override posterior-does-not-exist for p because "shown to the board on purpose"`},
}

// Examples are complete statements.
func (s *StatementSpec) Examples() []string { return statementExamples[s.Keyword] }

// Example declares an unknown of the kind.
func (k *KindSpec) Example() string {
	if k.Sized {
		return "unknown x : " + k.Name + "(3)"
	}
	return "unknown x : " + k.Name
}

// arguments are values that go with an argument's label.
var arguments = map[string]string{
	"probability": "p", "trials": "n", "a": "1/2", "b": "1/2", "mean": "mu", "total": "10", "first": "0", "size": "k",
	"population": "500", "marked": "m", "drawn": "20", "low": "0", "high": "10", "proportions": "w", "predictor": "eta",
	"cutpoints": "c", "predictors": "0, eta", "sd": "sigma", "variance": "sigma^2", "precision": "lambda", "log mean": "m",
	"log sd": "s", "median": "12", "degrees": "4", "location": "mu", "scale": "tau", "shape": "k", "rate": "r", "minimum": "1",
	"mode": "3", "direction": "0", "concentration": "kappa", "weights": "1, 1, 1", "covariance": "S", "correlation": "rho",
	"parts": "w: Point(0), 1 - w: Poisson(m)", "value": "0", "coefficient": "rho", "g": "n", "origin": "t0",
}

// Examples spell the distribution once for each of its forms, with every
// argument that must be there.
func (d *Distribution) Examples() []string {
	var out []string
	for _, form := range d.Forms {
		var args []string
		for _, p := range form {
			switch value := arguments[p.Label]; {
			case p.Optional:
			case p.Named:
				args = append(args, p.Label+" = "+value)
			default:
				args = append(args, value)
			}
		}
		out = append(out, d.Name+"("+strings.Join(args, ", ")+")")
	}
	return out
}

// Example is an expression that uses the function.
func (f *Function) Example() string {
	switch f.Name {
	case "min", "max":
		return f.Name + "(x, 1)"
	case "distance":
		return "exp(-distance(east, north) / phi)"
	case "previous":
		return "phi * previous(x)"
	case "linear":
		return "alpha + linear(beta)"
	case "P":
		return "P(p < 0.05)"
	case "between":
		return "between(low, high)"
	case "summary":
		return "summary(n = 15, mean = 12.1, sd = 3.2)"
	case "Phi":
		return "Phi((x - mu) / sigma)"
	case "det":
		return "det(S)"
	}
	return f.Name + "(x)"
}
