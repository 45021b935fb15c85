package orbit

import (
	"fmt"
	"math"
)

// Lone is an orbiter in no resonance. Without a resonance its phases are
// ignorable and two numbers are its state:
//
//	y[0]  l = Λ/Λ0 − 1
//	y[1]  x = √(2Γ/Λ0), about e, so that a circular orbit is no boundary
type Lone struct {
	m       member
	rateRef float64 // oblate part of dλ/dt at the reference
}

// NewLone returns the orbiter and its start state. One of period, the mean
// 2π/(dλ/dt) in s, and axis, m, is positive; 0 ≤ e ≤ MaxEccentricity.
func NewLone(p Primary, mass, period, axis, e float64) (*Lone, []float64, error) {
	if !(e >= 0 && e <= MaxEccentricity) {
		return nil, nil, fmt.Errorf("an eccentricity of %g is outside 0 … %g", e, MaxEccentricity)
	}
	g := e * e / (1 + math.Sqrt(1-e*e))
	if period > 0 {
		// λ̇ = n(a) + oblate(a): the second is O(J₂) of the first.
		wanted, excess := 2*math.Pi/period, 0.0
		for range 50 {
			if !(wanted > excess) {
				return nil, nil, fmt.Errorf("a period of %.6g d is shorter than the oblateness of the central body lets an orbit be", period/Day)
			}
			n := wanted - excess
			axis = math.Cbrt(G * (p.Mass + mass) / (n * n))
			m := newMember(p, mass, axis)
			excess, _ = m.oblate(1, g)
		}
	}
	l := &Lone{m: newMember(p, mass, axis)}
	l.rateRef, _ = l.m.oblate(1, g)
	return l, []float64{0, math.Sqrt(2 * g)}, nil
}

// Members returns 1.
func (o *Lone) Members() int { return 1 }

// Dim returns 2.
func (o *Lone) Dim() int { return 2 }

// NewRates makes the workspace.
func (o *Lone) NewRates() *Rates {
	return &Rates{Longitude: make([]float64, 1), Slope: make([]float64, 1), Radial: make([]float64, 1)}
}

func (o *Lone) member(int) *member { return &o.m }

// Actions returns l and g.
func (o *Lone) Actions(_ int, y []float64) (l, g float64) { return y[0], 0.5 * y[1] * y[1] }

// Flow writes zeros: without tides Λ and Γ are constants.
func (o *Lone) Flow(y, dy []float64, w *Rates) {
	dn, _ := o.m.kepler(y[0])
	rate, slope := o.m.oblate(1+y[0], 0.5*y[1]*y[1])
	w.Longitude[0] = dn + (rate - o.rateRef)
	w.Slope[0] = slope
	dy[0], dy[1] = 0, 0
}

// Jacobian writes zeros.
func (o *Lone) Jacobian(_ []float64, _ *Rates, jac []float64, stride int) {
	jac[0], jac[1], jac[stride], jac[stride+1] = 0, 0, 0, 0
}

// Push adds the kick to dy.
func (o *Lone) Push(_ int, t *Kick, y, dy []float64) {
	dy[0] += t.Raise
	dy[1] += y[1] * t.Pump
}

// PushDerivs adds the derivatives of Push.
func (o *Lone) PushDerivs(_ int, t *Kick, y, jac []float64, stride, col int) {
	x := y[1]
	jac[0] += t.RaiseU
	jac[1] += t.RaiseG * x
	jac[stride] += x * t.PumpU
	jac[stride+1] += t.Pump + x*x*t.PumpG
	if col >= 0 {
		for i := range t.RaiseX {
			jac[col+i] += t.RaiseX[i]
			jac[stride+col+i] += x * t.PumpX[i]
		}
	}
}

// Power returns Λ0 (Raise λ̇ + 2g Pump ∂H/∂Γ).
func (o *Lone) Power(_ int, t *Kick, y []float64, w *Rates) float64 {
	longitude := o.m.n + o.rateRef + w.Longitude[0]
	return o.m.ref * (t.Raise*longitude + y[1]*y[1]*t.Pump*w.Slope[0])
}

// Torque returns d(Λ − Γ)/dt.
func (o *Lone) Torque(_ int, t *Kick, y []float64) float64 {
	return o.m.ref * (t.Raise - y[1]*y[1]*t.Pump)
}

// PowerDerivs adds the derivatives of Power.
func (o *Lone) PowerDerivs(_ int, t *Kick, y []float64, w *Rates, scale float64, row []float64, col int) {
	m := &o.m
	u, g := 1+y[0], 0.5*y[1]*y[1]
	p := 1 / u
	rateU, rateG, slopeU, slopeG := m.oblateDerivs(u, g)
	longitude := m.n + o.rateRef + w.Longitude[0]
	f := scale * m.ref
	row[0] += f * (t.RaiseU*longitude + t.Raise*(-3*m.n*p*p*p*p+rateU) + 2*g*(t.PumpU*w.Slope[0]+t.Pump*slopeU))
	row[1] += y[1] * f * (t.RaiseG*longitude + t.Raise*rateG + 2*t.Pump*w.Slope[0] + 2*g*(t.PumpG*w.Slope[0]+t.Pump*slopeG))
	if col >= 0 {
		for i := range t.RaiseX {
			row[col+i] += f * (t.RaiseX[i]*longitude + 2*g*t.PumpX[i]*w.Slope[0])
		}
	}
}

// Elements returns the orbit.
func (o *Lone) Elements(_ int, y []float64, w *Rates) Elements {
	u := 1 + y[0]
	_, kepler := o.m.kepler(y[0])
	return Elements{
		SemimajorAxis: o.m.a * u * u,
		Eccentricity:  math.Sqrt(eccentricitySquared(u, 0.5*y[1]*y[1])),
		MeanMotion:    o.m.n + o.rateRef + w.Longitude[0],
		KeplerMotion:  kepler,
	}
}

// Energy returns H less its Kepler part at the reference, J.
func (o *Lone) Energy(y []float64) float64 { return o.m.energy(y[0], 0.5*y[1]*y[1]) }

// TotalEnergy returns H, J.
func (o *Lone) TotalEnergy(y []float64) float64 { return o.Energy(y) - 0.5*o.m.ref*o.m.n }

// AngularMomentum returns Λ − Γ − Λ0, kg m² s⁻¹.
func (o *Lone) AngularMomentum(y []float64) float64 { return o.m.ref * (y[0] - 0.5*y[1]*y[1]) }

// TotalAngularMomentum returns Λ − Γ, kg m² s⁻¹.
func (o *Lone) TotalAngularMomentum(y []float64) float64 {
	return o.AngularMomentum(y) + o.m.ref
}
