// Package certificate is the form in which the existence engine shows its
// proofs. A certificate stands by itself: it carries the numbers that the
// verifier needs and no reference to the engine. Exact numbers are texts of
// rationals, "3/2".
package certificate

// The kinds of certificates.
const (
	KindEnds       = "ends"
	KindNowhere    = "nowhere"
	KindConditions = "conditions"
	KindCone       = "cone"
	KindParts      = "parts"
)

// Certificate is a claim with what is needed to check it. Exactly one of the
// pointers beside Kind is set.
type Certificate struct {
	Kind       string      `json:"kind"`
	Ends       *Ends       `json:"ends,omitempty"`
	Nowhere    *Nowhere    `json:"nowhere,omitempty"`
	Conditions *Conditions `json:"conditions,omitempty"`
	Cone       *Cone       `json:"cone,omitempty"`
	Parts      *Parts      `json:"parts,omitempty"`
}

// Ends claims that a kernel, positive and continuous between neighbouring ends,
// has the given order at each of them; it is integrable when every end is, and
// not when one is not.
type Ends struct {
	Unknown string `json:"unknown"`
	Finite  bool   `json:"finite"`
	Ends    []End  `json:"ends"`
	// Slice says that the other unknowns are held in a box of positive volume, or
	// tied to this one.
	Slice bool `json:"slice,omitempty"`
}

// End is the order x^Power · log(1/x)^LogPower in the coordinate x → 0+ of the
// end, with the measure dx; at an infinite end x = 1/|θ| and the Jacobian
// x^(−2) is part of the order.
type End struct {
	At   string `json:"at"`
	Side int    `json:"side"`
	// Rapid is −1 for a kernel that falls faster than any power, 1 for one
	// that grows faster.
	Rapid     int     `json:"rapid,omitempty"`
	Power     string  `json:"power,omitempty"`
	LogPower  string  `json:"logPower,omitempty"`
	PowerLow  float64 `json:"powerLow,omitempty"`
	PowerHigh float64 `json:"powerHigh,omitempty"`
	Finite    bool    `json:"finite"`
	// Parts are the factors whose exponents add up to Power.
	Parts []Part `json:"parts,omitempty"`
}

// Part is the exponent that one factor contributes.
type Part struct {
	From  string `json:"from"`
	Power string `json:"power"`
}

// Nowhere claims that the likelihood vanishes on the prior's support.
type Nowhere struct {
	Unknown string `json:"unknown"`
}

// Conditions claims strict inequalities between exact sums; the verdict is
// that all hold (Finite) or that the one at Fails does not.
type Conditions struct {
	Theorem string      `json:"theorem"`
	Finite  bool        `json:"finite"`
	List    []Condition `json:"list"`
}

// Condition is Σ Terms > 0.
type Condition struct {
	Text  string   `json:"text"`
	Terms []string `json:"terms"`
	Holds bool     `json:"holds"`
}

// Cone is a claim about {d : C d ≥ 0}, C given by its rows. Overlap: weights
// λ > 0 with C'λ = 0 on rows of rank p prove that it is {0}. Otherwise
// Direction is a d ≠ 0 inside it. Rows in Equal are equations.
type Cone struct {
	Columns   int        `json:"columns"`
	Rows      [][]string `json:"rows"`
	Equal     []bool     `json:"equal,omitempty"`
	Overlap   bool       `json:"overlap"`
	Weights   []string   `json:"weights,omitempty"`
	Direction []string   `json:"direction,omitempty"`
	// Partial is set when only the first of very many different rows are listed.
	Partial bool `json:"partial,omitempty"`
}

// Parts is a proof that rests on several.
type Parts struct {
	List []*Certificate `json:"list"`
}
