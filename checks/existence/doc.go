// Package existence decides whether the posterior exists: whether the integral
// (for whole-number unknowns, the sum) of likelihood times prior is positive and
// finite, for the data at hand.
//
// # How a verdict is found
//
// The unknowns are split into the connected components of the factor graph
// (split): the integral of a product over separate variables is the product of
// the integrals, so each group stands alone. The methods of decide.go are then
// tried in turn; each either proves an answer or stands aside. "Not decided" is
// the answer when none does.
//
//   - One unknown (one.go). The log kernel is evaluated over open intervals to
//     show where it is continuous, splitting at exact roots of linear arguments;
//     a kernel that is continuous and positive on an open interval is integrable
//     there exactly when it is at both ends, and each end is decided by the
//     calculus of orders (package order). An interval on which some factor is
//     exactly 0 drops out; when all do, the likelihood vanishes on the prior's
//     support.
//   - Proportions (conjugate.go): Dirichlet kernels.
//   - Log-concave likelihoods in linear forms (free.go, link.go). Let g be
//     concave and finite on an open set. If g∞(d) = lim g(θ0 + t d)/t < 0 for all
//     d ≠ 0, compactness of the sphere and concavity give g(θ) ≤ a − b|θ| with
//     b > 0, so exp(g) is integrable. If g∞(d) ≥ 0 for some d ≠ 0, concavity makes
//     t ↦ g(θ + t d) non-decreasing for every θ, so exp(g) is bounded below by a
//     positive constant on a tube of infinite volume. Which directions are free
//     is a system of linear inequalities, decided exactly by package cone.
//     Bounded priors that are not log-concave may be left out of a proof of
//     existence, never of one of non-existence.
//   - The Gaussian block (gaussian.go, marginal.go): means that enter linearly
//     are integrated out; the rest is a kernel in one spread.
//   - The one-way layout (variance.go), location–scale samples (locscale.go),
//     the beta-binomial (betabinomial.go): conditions with proofs beside them.
//   - Closed-form blocks (block.go): Beta, Gamma and Weibull integrals leave a
//     kernel in one unknown.
//   - Proper priors and a bounded likelihood (proper.go).
//   - Slices (slice.go): a divergent one-dimensional integral for every value of
//     the others in a box of positive volume, along lines or curves. Only ever a
//     proof that there is no posterior.
//
// Every proved verdict carries a certificate that package verify accepts.
//
// # Moments and awaited outcomes
//
// Moment repeats the analysis with the kernel times a power of the reported
// quantity. Breaking lists the outcomes of an awaited count that leave no
// posterior.
//
// # Sources
//
// Albert & Anderson 1984; Box & Tiao 1973; Chen & Shao 2001; Fernández & Steel
// 1998, 1999; Ford 1957; Gelman 2006; Hobert & Casella 1996; Kahn 1987; Natarajan
// & McCulloch 1995; Silvapulle 1981; Tak & Morris 2017. Conditions are derived
// here; the sources are where they were first published, cited from memory.
package existence
