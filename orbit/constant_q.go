package orbit

import (
	"math"

	"tidekiln/scenarios/key"
)

var constantQLaw = &key.Law{
	Name:    "constant-q",
	Meaning: "the same k2/Q at every frequency, K(ω) = (k2/Q) sign ω",
	Source:  "Goldreich & Soter 1966, Icarus 5, 375",
	Keys: []key.Key{
		{Name: "k2_over_Q", Kind: key.Number, Range: key.AtLeast(0), Meaning: "k2/Q of the central body"},
		eccentricKey,
	},
}

// constantQ is K(ω) = (k2/Q) sign ω, K(0) = 0.
type constantQ float64

func newConstantQ(v key.Values) Response {
	if k := v.Float("k2_over_Q"); k != 0 {
		return constantQ(k)
	}
	return nil
}

// K implements [Response].
func (k constantQ) K(w float64) float64 {
	if w == 0 {
		return 0
	}
	return math.Copysign(1, w) * float64(k)
}

// Harmonics implements [Response].
func (k constantQ) Harmonics(_ float64, out []float64) {
	for j := range out {
		out[j] = float64(k)
	}
}

// KDerivs implements [Response].
func (k constantQ) KDerivs(w float64, _ []float64) (float64, float64) { return k.K(w), 0 }
