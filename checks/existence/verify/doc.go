// Package verify accepts or refuses the certificates of the existence engine.
// It is small, shares no code with the engine, and computes with exact
// rationals where a claim is algebraic.
package verify
