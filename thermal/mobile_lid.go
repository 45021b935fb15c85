package thermal

import (
	"math"

	"tidekiln/scenarios/key"
)

var mobileLidLaw = &key.Law{
	Name:    "mobile-lid",
	Meaning: "convection that renews the surface, Nu = (Ra/Ra_c)^b",
	Source:  "Turcotte & Schubert 2002, Geodynamics, ch. 6",
	Keys: []key.Key{
		{Name: "critical_rayleigh", Kind: key.Number, Default: 1100.65, Range: key.Positive(),
			Meaning: "Ra_c, Rayleigh number at the onset of convection",
			Source:  "rigid below, free above: Chandrasekhar 1961"},
		{Name: "rayleigh_exponent", Kind: key.Number, Default: 1.0 / 3, Range: key.Between(0, 1),
			Meaning: "b: power of the Rayleigh number",
			Source:  "boundary-layer theory, Turcotte & Schubert 2002, ch. 6"},
	},
}

// newMobileLid makes q = (k ΔT/D)(Ra/Ra_c)^b, W/m², with Ra = ρgαΔT D³/(κη).
func newMobileLid(v key.Values) func(layer) convection {
	b := v.Float("rayleigh_exponent")
	return func(l layer) convection {
		return newPowerLaw(l, math.Pow(v.Float("critical_rayleigh"), -b), 0, b)
	}
}
