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

// PrimaryTide is the tide that one orbiter raises in the central body, as it
// acts on that orbiter.
//
// On a circular orbit it is the torque T = (3/2)(k2/Q) G m² R_c⁵/a⁶, raising Λ
// alone. The sum over all modes of an eccentric orbit, with A = G m² R_c⁵/a⁶
// and K = −k2/Q for every m = 2 mode, is
//
//	Λ̇ = A (k2/Q) [ ¾ Σ_q (2+q) G_20q² − ½ Σ_{q>0} q G_21q² ]
//	Γ̇ = A (k2/Q) [ ¾ Σ_q    q  G_20q² − ½ Σ_{q>0} q G_21q² ]
//
// from dΛ = dE/n and dΓ = dΛ − dL (Kaula 1964, Rev. Geophys. 2, 661; Boué &
// Efroimsky 2019, CeMDA 131, 30).
type PrimaryTide struct {
	m         *member
	k         float64
	eccentric bool
	h         *Harmonics
}

// NewPrimaryTide returns the tide of member k of the group.
func NewPrimaryTide(g Group, k int, law CentralTide) *PrimaryTide {
	_, lone := g.(*Lone)
	t := &PrimaryTide{m: g.member(k), k: law.K2OverQ, eccentric: lone, h: NewHarmonics()}
	if law.Eccentric != nil {
		t.eccentric = *law.Eccentric
	}
	return t
}

// Silent reports a tide that does nothing.
func (c *PrimaryTide) Silent() bool { return c.k == 0 }

// nearCircularSquare is the e² below which Γ̇/e² is taken as its limit: the
// difference is of the order of e² itself.
const nearCircularSquare = 1e-9

// Kick fills t with the tide at l = Λ/Λ0 − 1 and g = Γ/Λ0 and its derivatives.
// Outside the domain of the eccentricity functions it fills t with NaN.
func (c *PrimaryTide) Kick(l, g float64, t *Kick) {
	p := 1 / (1 + l)
	p6 := p * p * p * p * p * p
	torque := c.m.push * c.k * p6 * p6
	if !c.eccentric {
		t.Raise, t.RaiseU, t.RaiseG = torque, -12*p*torque, 0
		t.Pump, t.PumpU, t.PumpG = 0, 0, 0
		return
	}
	ratio := g * p
	x := ratio * (2 - ratio)
	if !c.h.At(x) {
		t.Raise, t.Pump = math.NaN(), math.NaN()
		return
	}
	var sum, dsum, pump, dpump float64
	for q := -c.h.Order; q <= c.h.Order; q++ {
		f := float64(q)
		w, dw := c.h.Wave(q)
		sum += 0.75 * (2 + f) * w
		dsum += 0.75 * (2 + f) * dw
		pump += 0.75 * f * w
		dpump += 0.75 * f * dw
		if q > 0 {
			b, db := c.h.Breath(q)
			sum -= 0.5 * f * b
			dsum -= 0.5 * f * db
			pump -= 0.5 * f * b
			dpump -= 0.5 * f * db
		}
	}
	perSquare, dPerSquare := dpump, 0.0
	if math.Abs(x) > nearCircularSquare {
		perSquare = pump / x
		dPerSquare = (dpump - perSquare) / x
	}
	torque /= 1.5
	ratioU, ratioG := -ratio*p, p
	xU, xG := (2-2*ratio)*ratioU, (2-2*ratio)*ratioG
	shape := 0.5 * (2 - ratio) * p // e²/(2g)
	shapeU, shapeG := 0.5*(-ratioU-(2-ratio)*p)*p, -0.5*ratioG*p
	t.Raise = torque * sum
	t.RaiseU = torque * (-12*p*sum + dsum*xU)
	t.RaiseG = torque * dsum * xG
	t.Pump = torque * shape * perSquare
	t.PumpU = torque * (-12*p*shape*perSquare + shapeU*perSquare + shape*dPerSquare*xU)
	t.PumpG = torque * (shapeG*perSquare + shape*dPerSquare*xG)
}

// torqueScale returns (3/2) G m² R_c⁵/a⁶ at a reference semi-major axis, N m:
// the torque on a circular orbit is that times k2/Q (Murray & Dermott 1999,
// eq. 4.159). A changed a enters as (a₀/a)⁶ = (1+l)^{−12}.
func (p Primary) torqueScale(mass, a float64) float64 {
	return 1.5 * G * mass * mass * math.Pow(p.Radius, 5) / math.Pow(a, 6)
}
