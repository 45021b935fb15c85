package thermal

import "math"

// layer is the convecting layer a flux law is made for. In the one-layer model
// it is the whole body: its mean density, surface gravity and radius.
type layer struct {
	density      float64 // kg/m³
	gravity      float64 // m/s²
	depth        float64 // m
	conductivity float64 // W/m/K
	diffusivity  float64 // m²/s
	expansivity  float64 // 1/K
}

// convection is the heat flux that convection carries out of a layer, as
//
//	ln q, q in W/m²,
//
// a function of the temperature drop to the surface, K, of the rheological
// temperature scale, K, and of ln η, η in Pa s, with its derivatives to the
// three. A negative drop, which no body reaches that its surface cools, counts
// as its size.
type convection interface {
	logFlux(drop, scale, lnViscosity float64) (ln, dDrop, dScale, dViscosity float64)
}

var convections = registry[func(layer) convection]{
	{stagnantLidLaw, newStagnantLid},
	{mobileLidLaw, newMobileLid},
}

// Convections are the laws of convective heat loss a scenario can name.
var Convections = convections.family("law of convection", "law")

// powerLaw is q = (k/D) ΔT · C θ^{−g} Ra^b with θ = ΔT/(scale) and
// Ra = ρ g α ΔT D³/(κ η), the shape of most scalings of convection, collected
// into powers of the three variables.
type powerLaw struct {
	constant, drop, scale, viscosity float64
}

func newPowerLaw(l layer, coefficient, theta, rayleigh float64) powerLaw {
	depth := l.depth * l.depth * l.depth
	drop := 1 - theta + rayleigh
	if math.Abs(drop) < 1e-12 {
		drop = 0 // 1 − 4/3 + 1/3 up to rounding
	}
	return powerLaw{
		constant: math.Log(coefficient*l.conductivity/l.depth) +
			rayleigh*math.Log(l.density*l.gravity*l.expansivity*depth/l.diffusivity),
		drop:      drop,
		scale:     theta,
		viscosity: -rayleigh,
	}
}

func (p powerLaw) logFlux(drop, scale, lnViscosity float64) (ln, dDrop, dScale, dViscosity float64) {
	ln = p.constant + p.viscosity*lnViscosity
	if p.scale != 0 {
		ln += p.scale * math.Log(scale)
		dScale = p.scale / scale
	}
	if p.drop != 0 {
		ln += p.drop * math.Log(math.Abs(drop))
		dDrop = p.drop / drop
	}
	return ln, dDrop, dScale, p.viscosity
}
