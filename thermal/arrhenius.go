package thermal

import (
	"math"

	"tidekiln/scenarios/key"
)

var arrheniusLaw = &key.Law{
	Name:    "arrhenius",
	Meaning: "thermally activated creep, η = η_ref exp[(E/R)(1/T − 1/T_ref)] exp(−B f)",
	Source:  "Karato & Wu 1993, Science 260, 771",
	Keys: viscosityKeys(key.Key{Name: "activation_energy", Kind: key.Quantity, Unit: "kJ/mol", Range: key.Positive(),
		Meaning: "E, activation energy of creep",
		Source:  "300–375 kJ/mol for diffusion creep of dry olivine, Hirth & Kohlstedt 2003 (from memory)"}),
}

// arrhenius is ln η = ln η_ref + (E/R)(1/T − 1/T_ref).
type arrhenius struct {
	constant    float64 // ln η as T → ∞
	temperature float64 // E/R, K
}

func newArrhenius(v key.Values) viscosity {
	t := v.Float("activation_energy") / gasConstant
	return arrhenius{math.Log(v.Float("reference")) - t/v.Float("at"), t}
}

func (a arrhenius) logViscosity(T float64) (ln, slope, curvature float64) {
	ratio := a.temperature / T
	slope = -ratio / T
	return a.constant + ratio, slope, -2 * slope / T
}
