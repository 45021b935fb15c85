package orbit

import (
	"math"

	"tidekiln/scenarios/key"
)

// Primary is the central body as its orbiters feel it.
type Primary struct {
	Mass   float64 // kg, > 0
	Radius float64 // m, equatorial, > 0
	J2     float64 // oblateness, dimensionless
}

// CentralLaws are the laws of the central body's tidal response a scenario can
// name.
var CentralLaws = &key.Family{
	Name:     "tidal law of the central body",
	Selector: "law",
	Laws:     []*key.Law{constantQLaw},
}

var constantQLaw = &key.Law{
	Name:    "constant-q",
	Meaning: "the same k2/Q at every frequency, K(ω) = (k2/Q) sign ω",
	Source:  "Goldreich & Soter 1966, Icarus 5, 375",
	Keys: []key.Key{
		{Name: "k2_over_Q", Kind: key.Number, Range: key.AtLeast(0), Meaning: "k2/Q of the central body"},
		{Name: "eccentric", Kind: key.Bool, Optional: true,
			Meaning: "sum all tidal modes of an eccentric orbit instead of the circular torque; default false for members of a chain, true for an orbiter outside one"},
	},
}

// CentralTide is the central body's response as a checked scenario gives it.
// Without a spin of its own the body turns faster than every orbit, so every
// m = 2 mode lags with the same sign.
type CentralTide struct {
	K2OverQ   float64
	Eccentric *bool // nil: the default of chain and lone orbiters
}

// NewCentralTide builds the response from the values a scenario gave; values
// without a law raise no tide.
func NewCentralTide(v key.Values) CentralTide {
	if v.Law == "" {
		return CentralTide{}
	}
	t := CentralTide{K2OverQ: v.Float("k2_over_Q")}
	if v.Has("eccentric") {
		e := v.Bool("eccentric")
		t.Eccentric = &e
	}
	return t
}

// torqueScale returns (3/2) G m² R_c⁵/a⁶ at a reference semi-major axis, N m:
// the torque on a circular orbit is that times k2/Q (Murray & Dermott 1999,
// eq. 4.159). A changed a enters as (a₀/a)⁶ = (1+l)^{−12}.
func (p Primary) torqueScale(mass, a float64) float64 {
	return 1.5 * G * mass * mass * math.Pow(p.Radius, 5) / math.Pow(a, 6)
}
