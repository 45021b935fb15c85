package thermal

import (
	"fmt"
	"math"

	"tidekiln/scenarios/key"
)

var rockLaw = &key.Law{
	Name:    "rock",
	Meaning: "one convecting layer of rock that fills the body, warm enough to melt in part",
	Source:  "Fischer & Spohn 1990, Icarus 83, 39; Moore 2003, JGR 108(E8), 5096",
	Keys: []key.Key{
		{Name: "temperature", Kind: key.Quantity, Unit: "K", Range: key.Positive(),
			Meaning: "temperature at the start"},
		{Name: "surface_temperature", Kind: key.Quantity, Unit: "K", Range: key.AtLeast(0),
			Meaning: "temperature of the surface"},
		{Name: "heat_capacity", Kind: key.Quantity, Unit: "J/kg/K", Range: key.Positive(),
			Meaning: "c_p, specific heat of solid and melt"},
		{Name: "conductivity", Kind: key.Quantity, Unit: "W/m/K", Range: key.Positive(),
			Meaning: "k, thermal conductivity"},
		{Name: "expansivity", Kind: key.Quantity, Unit: "/K", Range: key.Positive(),
			Meaning: "α, volume expansion with temperature"},
		{Name: "solidus", Kind: key.Quantity, Unit: "K", Range: key.Positive(),
			Meaning: "temperature at which melting begins"},
		{Name: "liquidus", Kind: key.Quantity, Unit: "K", Range: key.Positive(),
			Meaning: "temperature at which melting is complete"},
		{Name: "latent_heat", Kind: key.Quantity, Unit: "J/kg", Range: key.AtLeast(0),
			Meaning: "L, heat of melting"},
		{Name: "radiogenic", Kind: key.Quantity, Unit: "W/kg", Default: 0.0, Range: key.AtLeast(0),
			Meaning: "radiogenic heat, constant in time", Source: "0: none"},
		{Name: "rheology", Kind: key.Table, Family: Rheologies,
			Meaning: "how the rock yields to a tide"},
		{Name: "viscosity", Kind: key.Table, Family: Viscosities,
			Meaning: "viscosity against temperature and melt"},
		{Name: "convection", Kind: key.Table, Family: Convections,
			Meaning: "heat loss through the lid, never less than conduction"},
		{Name: "melt_loss", Kind: key.Table, Family: MeltLosses, Optional: true,
			Meaning: "heat loss by melt that rises to the surface; without it none rises"},
	},
	Check: checkRock,
}

func checkRock(v key.Values) []key.Problem {
	start, surface := v.Float("temperature"), v.Float("surface_temperature")
	solidus, liquidus := v.Float("solidus"), v.Float("liquidus")
	var p []key.Problem
	if solidus >= liquidus {
		p = append(p, key.Problem{Key: "solidus",
			What: fmt.Sprintf("solidus %g K is not below the liquidus %g K", solidus, liquidus),
			Hint: "give the temperature at which melting begins, then the one at which it is complete"})
	}
	if surface >= solidus {
		p = append(p, key.Problem{Key: "surface_temperature",
			What: fmt.Sprintf("surface temperature %g K is not below the solidus %g K", surface, solidus),
			Hint: "this model needs a solid surface, colder than the solidus"})
	}
	if start <= surface {
		p = append(p, key.Problem{Key: "temperature",
			What: fmt.Sprintf("temperature %g K is not above the surface temperature %g K", start, surface),
			Hint: "the interior loses heat through its surface: start it warmer"})
	}
	return p
}

// rock is one layer of rock that fills the body; its state is the specific
// enthalpy h, J/kg:
//
//	m dh/dt = P_tide + P_radiogenic − 4πR² (q + q_m)
//	η = η(T) exp(−B f), μ = μ₀ exp(−b f)
//	k₂ = (3/2) J*/(J* + 19/(2ρgR)), J* of the rheology at ω, μ, η
//
// with q of the convection law, never less than 5k(T − T_surface)/R, the flux
// out of a uniformly heated conducting sphere whose mean temperature is T, and
// q_m of the melt. Density is the mean one everywhere.
type rock struct {
	mass, area  float64
	radiogenic  float64 // W/kg
	surface     float64 // K
	start       float64 // J/kg
	conductance float64 // 5k/R, W/m²/K
	enthalpy
	layer
	sphere
	rheology      Rheology
	harmonic      harmonicRheology // the same, if it is one
	compliances   []complex128     // scratch of Harmonics
	rigidity      float64          // μ₀, Pa
	rigidityMelt  float64          // b
	viscosity     viscosity
	viscosityMelt float64 // B
	convection    convection
	meltLoss      meltLoss // nil: none rises

	phase      phase
	convecting bool
	now        rockState
}

var _ Interior = (*rock)(nil)

func newRock(v key.Values) func(Body) (Interior, error) {
	return func(b Body) (Interior, error) {
		volume := 4 * math.Pi / 3 * b.Radius * b.Radius * b.Radius
		l := layer{
			density:      b.Mass / volume,
			gravity:      gravitation * b.Mass / (b.Radius * b.Radius),
			depth:        b.Radius,
			conductivity: v.Float("conductivity"),
			expansivity:  v.Float("expansivity"),
		}
		l.diffusivity = l.conductivity / (l.density * v.Float("heat_capacity"))
		r := &rock{
			mass:       b.Mass,
			area:       4 * math.Pi * b.Radius * b.Radius,
			radiogenic: v.Float("radiogenic"),
			surface:    v.Float("surface_temperature"),
			enthalpy: enthalpy{
				heatCapacity: v.Float("heat_capacity"),
				latentHeat:   v.Float("latent_heat"),
				solidus:      v.Float("solidus"),
				liquidus:     v.Float("liquidus"),
			},
			layer:         l,
			sphere:        newSphere(l.density, l.gravity, b.Radius),
			rigidity:      v.Table("rheology").Float("rigidity"),
			rigidityMelt:  v.Table("rheology").Float("melt_exponent"),
			viscosityMelt: v.Table("viscosity").Float("melt_exponent"),
		}
		r.conductance = 5 * r.conductivity / r.depth
		var err error
		if r.rheology, err = NewRheology(v.Table("rheology")); err != nil {
			return nil, err
		}
		r.harmonic, _ = r.rheology.(harmonicRheology)
		if r.viscosity, err = viscosities.build("viscosity law", v.Table("viscosity")); err != nil {
			return nil, err
		}
		lid, err := convections.build("law of convection", v.Table("convection"))
		if err != nil {
			return nil, err
		}
		r.convection = lid(l)
		if v.Has("melt_loss") {
			if r.meltLoss, err = meltLosses.build("melt loss", v.Table("melt_loss")); err != nil {
				return nil, err
			}
		}
		r.start = r.enthalpy.of(v.Float("temperature"))
		r.Freeze(0, []float64{r.start})
		return r, nil
	}
}

// States implements [Interior]: the specific enthalpy of the mantle.
func (r *rock) States() []StateVar {
	return []StateVar{{Name: "enthalpy", Start: r.start, Scale: r.enthalpy.of(r.solidus)}}
}
