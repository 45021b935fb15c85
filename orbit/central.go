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

// centralLaws are the laws of the central body's tidal response, with the way to
// build each.
var centralLaws = []struct {
	law   *key.Law
	build func(key.Values) Response
}{
	{constantQLaw, newConstantQ},
}

// CentralLaws are the laws of the central body's tidal response a scenario can
// name.
var CentralLaws = func() *key.Family {
	f := &key.Family{Name: "tidal law of the central body", Selector: "law"}
	for _, l := range centralLaws {
		f.Laws = append(f.Laws, l.law)
	}
	return f
}()

// CentralTide is the central body's response as a checked scenario gives it, and
// its spin.
type CentralTide struct {
	Response  Response // nil: it raises no tide
	Eccentric *bool    // nil: the default of chain and lone orbiters
	// Spin is its rotation rate, rad/s; +Inf for a body that turns faster than
	// every tide travels, whose m = 2 modes all have the frequency −Inf.
	Spin float64
}

// eccentricKey is a key of every law.
var eccentricKey = key.Key{Name: "eccentric", Kind: key.Bool, Optional: true,
	Meaning: "sum all tidal modes of an eccentric orbit instead of the circular torque; default false for members of a chain, true for an orbiter outside one"}

// NewCentralTide builds the response from the values a scenario gave; values
// without a law raise no tide. Without a spin of its own the body turns faster
// than every orbit.
func NewCentralTide(v key.Values) CentralTide {
	t := CentralTide{Spin: math.Inf(1)}
	for _, l := range centralLaws {
		if l.law.Name == v.Law {
			t.Response = l.build(v)
		}
	}
	if v.Has("eccentric") {
		e := v.Bool("eccentric")
		t.Eccentric = &e
	}
	return t
}

// PrimaryTide is the tide that one orbiter raises in the central body, as it
// acts on that orbiter. With A = G m² R_c⁵/a⁶ and the mode frequencies
// ω_q = (2+q)n − 2W of m = 2 and qn of m = 0,
//
//	Λ̇ = −A [ ¾ Σ_q (2+q) G_20q² K(ω_q) + ½ Σ_{q>0} q G_21q² K(qn) ]
//	Γ̇ = −A [ ¾ Σ_q    q  G_20q² K(ω_q) + ½ Σ_{q>0} q G_21q² K(qn) ]
//
// from dΛ = dE/n and dΓ = dΛ − dL (Kaula 1964, Rev. Geophys. 2, 661; Boué &
// Efroimsky 2019, CeMDA 131, 30). The circular torque keeps q = 0 at e = 0 and
// raises Λ alone: T = −(3/2) K(2n − 2W) A.
type PrimaryTide struct {
	m         *member
	law       CentralTide
	eccentric bool
	h         *Harmonics
}

// NewPrimaryTide returns the tide of member k of the group, or nil if the law
// raises none.
func NewPrimaryTide(g Group, k int, law CentralTide) *PrimaryTide {
	if law.Response == nil {
		return nil
	}
	_, lone := g.(*Lone)
	t := &PrimaryTide{m: g.member(k), law: law, eccentric: lone, h: NewHarmonics()}
	if law.Eccentric != nil {
		t.eccentric = *law.Eccentric
	}
	return t
}

// nearCircularSquare is the e² below which Γ̇/e² is taken as its limit: the
// difference is of the order of e² itself.
const nearCircularSquare = 1e-9

// Kick fills t with the tide at l = Λ/Λ0 − 1 and g = Γ/Λ0 and its derivatives.
// Outside the domain of the eccentricity functions it fills t with NaN.
func (c *PrimaryTide) Kick(l, g float64, t *Kick) {
	p := 1 / (1 + l)
	p6 := p * p * p * p * p * p
	a := c.m.push / 1.5 * p6 * p6
	n := c.m.n * p * p * p
	if !c.eccentric {
		k, dw := c.law.Response.KDerivs(2*(n-c.law.Spin), nil)
		t.Raise = -1.5 * a * k
		t.RaiseU = -12*p*t.Raise + 1.5*a*dw*6*n*p
		t.RaiseG, t.Pump, t.PumpU, t.PumpG = 0, 0, 0, 0
		return
	}
	ratio := g * p
	x := ratio * (2 - ratio)
	if !c.h.At(x) {
		t.Raise, t.Pump = math.NaN(), math.NaN()
		return
	}
	s := c.sums(n)
	perSquare, dPerSquare, nPerSquare := s.pumpX, 0.0, 0.0
	if math.Abs(x) > nearCircularSquare {
		perSquare = s.pump / x
		dPerSquare = (s.pumpX - perSquare) / x
		nPerSquare = s.pumpN / x
	}
	ratioU, ratioG := -ratio*p, p
	xU, xG := (2-2*ratio)*ratioU, (2-2*ratio)*ratioG
	nU := -3 * n * p
	shape := 0.5 * (2 - ratio) * p // e²/(2g)
	shapeU, shapeG := 0.5*(-ratioU-(2-ratio)*p)*p, -0.5*ratioG*p
	t.Raise = a * s.raise
	t.RaiseU = a * (-12*p*s.raise + s.raiseX*xU + s.raiseN*nU)
	t.RaiseG = a * s.raiseX * xG
	t.Pump = a * shape * perSquare
	t.PumpU = a * (-12*p*shape*perSquare + shapeU*perSquare + shape*(dPerSquare*xU+nPerSquare*nU))
	t.PumpG = a * (shapeG*perSquare + shape*dPerSquare*xG)
}

// primarySums are Λ̇ and Γ̇ over A with their derivatives to e² and n.
type primarySums struct{ raise, raiseX, raiseN, pump, pumpX, pumpN float64 }

// sums adds the modes at mean motion n; the harmonics are set.
func (c *PrimaryTide) sums(n float64) (s primarySums) {
	add := func(both, own, w, dw, k, dk float64) {
		s.raise -= both * w * k
		s.raiseX -= both * dw * k
		s.raiseN -= both * w * dk
		s.pump -= own * w * k
		s.pumpX -= own * dw * k
		s.pumpN -= own * w * dk
	}
	for q := -c.h.Order; q <= c.h.Order; q++ {
		f := float64(q)
		w, dw := c.h.Wave(q)
		k, dk := c.law.Response.KDerivs((2+f)*n-2*c.law.Spin, nil)
		add(0.75*(2+f), 0.75*f, w, dw, k, (2+f)*dk)
		if q > 0 {
			w, dw := c.h.Breath(q)
			k, dk := c.law.Response.KDerivs(f*n, nil)
			add(0.5*f, 0.5*f, w, dw, k, f*dk)
		}
	}
	return s
}

// torqueScale returns (3/2) G m² R_c⁵/a⁶ at a reference semi-major axis, N m:
// the torque on a circular orbit is that times k2/Q (Murray & Dermott 1999,
// eq. 4.159). A changed a enters as (a₀/a)⁶ = (1+l)^{−12}.
func (p Primary) torqueScale(mass, a float64) float64 {
	return 1.5 * G * mass * mass * math.Pow(p.Radius, 5) / math.Pow(a, 6)
}
