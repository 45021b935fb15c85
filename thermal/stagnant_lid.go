package thermal

import "tidekiln/scenarios/key"

var stagnantLidLaw = &key.Law{
	Name:    "stagnant-lid",
	Meaning: "convection under a lid too stiff to move, Nu = C θ^{−g} Ra^b",
	Source:  "Solomatov & Moresi 2000, JGR 105, 21795",
	Keys: []key.Key{
		{Name: "coefficient", Kind: key.Number, Default: 0.53, Range: key.Positive(),
			Meaning: "C", Source: "Solomatov & Moresi 2000, JGR 105, 21795 (from memory)"},
		{Name: "theta_exponent", Kind: key.Number, Default: 4.0 / 3, Range: key.Between(0, 3),
			Meaning: "g: power of 1/θ, the rheological temperature scale over the drop of temperature",
			Source:  "4/3, Solomatov & Moresi 2000, JGR 105, 21795"},
		{Name: "rayleigh_exponent", Kind: key.Number, Default: 1.0 / 3, Range: key.Between(0, 1),
			Meaning: "b: power of the Rayleigh number",
			Source:  "1/3, Solomatov & Moresi 2000, JGR 105, 21795"},
	},
}

// newStagnantLid makes Nu = C θ^{−g} Ra^b. With the default exponents neither
// the drop of temperature nor the depth of the layer is left in the flux,
//
//	q = 0.53 k (ρgα/(κη))^{1/3} s^{4/3}, W/m²,
//
// s the rheological temperature scale, R T²/E of an Arrhenius law (Solomatov &
// Moresi 2000). Valid while the lid is stagnant, θ = ΔT/s above about 8.
func newStagnantLid(v key.Values) func(layer) convection {
	return func(l layer) convection {
		return newPowerLaw(l, v.Float("coefficient"), v.Float("theta_exponent"), v.Float("rayleigh_exponent"))
	}
}
