package thermal

import "tidekiln/scenarios/key"

// Rheology is a linear viscoelastic law as its complex compliance
//
//	J*(ω) = 1/μ*(ω), 1/Pa, time factor e^{+iωt}, so Im J* ≤ 0
//
// at a frequency w > 0, rad/s, a rigidity mu > 0, Pa, and a viscosity eta > 0,
// Pa s. It returns J* and its derivatives to w, mu and eta.
type Rheology interface {
	Compliance(w, mu, eta float64) (j, dw, dmu, deta complex128)
}

// harmonicRheology is a rheology that gains by computing J* at w, 2w, 3w, … at
// once, into j.
type harmonicRheology interface {
	Harmonics(w, mu, eta float64, j []complex128)
}

var rheologies = registry[Rheology]{
	{maxwellLaw, newMaxwell},
	{andradeLaw, newAndrade},
}

// Rheologies are the rheologies a scenario can name.
var Rheologies = rheologies.family("rheology", "model")

// NewRheology builds the rheology the values chose; it fails on a name that is
// not in Rheologies.
func NewRheology(v key.Values) (Rheology, error) { return rheologies.build("rheology", v) }

// rigidityKeys are those of every rheology whose rigidity melt may soften,
// followed by the law's own.
func rigidityKeys(own ...key.Key) []key.Key {
	return append([]key.Key{
		{Name: "rigidity", Kind: key.Quantity, Unit: "GPa", Range: key.Positive(),
			Meaning: "unrelaxed shear modulus of the melt-free rock, μ₀ in μ = μ₀ exp(−b f)",
			Source:  "rock 50–65 GPa"},
		{Name: "melt_exponent", Kind: key.Number, Default: 0.0, Range: key.Between(0, 200),
			Meaning: "b: how fast melt softens the rigidity, μ = μ₀ exp(−b f)",
			Source:  "0 leaves the rigidity alone"},
	}, own...)
}
