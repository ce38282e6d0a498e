// Package longrun says how a procedure behaves over repeated data: how often an
// interval holds the true value, how often a conclusion is drawn, how many
// observations a demonstration needs.
//
// Counts are enumerated, not simulated. Long-run coverage jumps at every end of
// an interval and is smooth between jumps; its lowest value is looked for on both
// sides of every jump. A numerical error bound stands beside each result; it
// covers the rounding of the distribution functions (package family) and the
// outcomes left out of an infinite sum.
//
// Long-run coverage is a property of the procedure under the model. It is not the
// probability of one interval, and not what metrology calls a coverage interval.
//
// Sources: Brown, Cai and DasGupta (2001), Interval estimation for a binomial
// proportion, Statistical Science 16 (from memory); the identities between the
// binomial and the beta, the Poisson and the gamma distribution functions are
// DLMF 8.17.5 and 8.4.10.
package longrun

// rounding bounds the error of one distribution function value; the tests of
// package family hold both tails to 1e-10 in the logarithm.
const rounding = 1e-10
