package family

import "math"

// Normal is the Gaussian law with the given mean and standard deviation.
type Normal struct{ Mean, SD float64 }

// NewNormal checks the parameters; a zero sd is out of range.
func NewNormal(mean, sd float64) (Normal, error) {
	if math.IsNaN(mean) || math.IsInf(mean, 0) || sd == 0 {
		return Normal{}, ErrInvalid
	}
	return Normal{mean, sd}, positive("Normal", sd)
}

// LogDensity is the normalised log-density.
func (d Normal) LogDensity(x float64) float64 {
	z := (x - d.Mean) / d.SD
	return -z*z/2 - math.Log(d.SD) - math.Log(2*math.Pi)/2
}

// Score is the gradient of LogDensity in the mean and the sd.
func (d Normal) Score(x float64) (mean, sd float64) {
	z := (x - d.Mean) / d.SD
	return z / d.SD, (z*z - 1) / d.SD
}

// Information is the diagonal of the expected Fisher information of one
// observation in (mean, sd); the parameters are orthogonal.
func (d Normal) Information() (mean, sd float64) {
	return 1 / (d.SD * d.SD), 2 / (d.SD * d.SD)
}

// LogTails returns the logarithms of the distribution and survival functions.
func (d Normal) LogTails(x float64) (lower, upper float64) {
	z := (x - d.Mean) / d.SD
	return logPhi(z), logPhi(-z)
}

// logPhi is the logarithm of the standard normal distribution function; the
// far lower tail is Laplace's continued fraction of Mills' ratio (DLMF 7.9).
func logPhi(z float64) float64 {
	switch {
	case z > 0:
		return math.Log1p(-math.Erfc(z/math.Sqrt2) / 2)
	case z > -10:
		return math.Log(math.Erfc(-z/math.Sqrt2) / 2)
	case math.IsInf(z, -1):
		return z
	}
	f := -z
	for k := 60.0; k > 0; k-- {
		f = -z + k/f
	}
	return -z*z/2 - math.Log(2*math.Pi)/2 - math.Log(f)
}
