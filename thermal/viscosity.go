package thermal

import "tidekiln/scenarios/key"

// viscosity is the temperature dependence of the melt-free viscosity,
//
//	ln η(T), its first derivative, 1/K, and its second, 1/K²
//
// for T > 0. The first is negative; −1/(d ln η/dT) is the rheological
// temperature scale, the drop over which viscosity grows e-fold, which sets
// the flux under a stagnant lid.
type viscosity interface {
	logViscosity(T float64) (ln, slope, curvature float64)
}

var viscosities = registry[viscosity]{
	{arrheniusLaw, newArrhenius},
	{frankKamenetskiiLaw, newFrankKamenetskii},
}

// Viscosities are the viscosity laws a scenario can name.
var Viscosities = viscosities.family("viscosity law", "law")

// viscosityKeys are those of every law given by a viscosity at a temperature
// and weakened by melt, around the law's own.
func viscosityKeys(own key.Key) []key.Key {
	return []key.Key{
		{Name: "reference", Kind: key.Quantity, Unit: "Pa s", Range: key.Positive(),
			Meaning: "η_ref, viscosity of the melt-free rock at the temperature `at`"},
		{Name: "at", Kind: key.Quantity, Unit: "K", Range: key.Positive(),
			Meaning: "T_ref, temperature of the reference viscosity"},
		own,
		{Name: "melt_exponent", Kind: key.Number, Default: 25.0, Range: key.Between(0, 200),
			Meaning: "B: how fast melt weakens the viscosity, η = η(T) exp(−B f)",
			Source:  "25–30 in the laboratory, Mei et al. 2002, JGR 107(B8), 2143 (from memory); 10–40 in Moore 2003, JGR 108(E8), 5096"},
	}
}
