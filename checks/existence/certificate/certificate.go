// Package certificate is the form in which the existence engine shows its
// proofs. A certificate stands by itself: it carries the numbers that the
// verifier needs and no reference to the engine.
package certificate

// Certificate is a claim with what is needed to check it. Exactly one of the
// pointers beside Kind is set.
type Certificate struct {
	Kind string `json:"kind"`
}
