// Package design examines an analysis before the data: which outcomes leave no
// posterior and how likely they are, how often intervals hold the true value and
// conclusions are drawn, and whether the promises of the model file are kept.
//
// Counts (Binomial, Bernoulli, Poisson) are enumerated. Where the file awaits
// nothing, the plan that gave the observed counts is examined as if it were
// carried out again. Every chance carries the bound of its error; a promise is
// kept only when the bound keeps it.
package design
