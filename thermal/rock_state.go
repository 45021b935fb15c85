package thermal

import "math"

// rockState is everything that follows from one enthalpy on the frozen pieces.
// A name with d in front is a derivative to the enthalpy h.
type rockState struct {
	h         float64 // J/kg
	T, dT     float64 // K
	f, df     float64
	eta, dEta float64 // Pa s
	mu, dMu   float64 // Pa
	q, dq     float64 // W/m², through the lid
	qm, dqm   float64 // W/m², by melt
}

// stiffest bounds ln η (η in Pa s). A body that stiff is elastic and does not
// convect to all digits, while the law itself overflows in the cold.
const stiffest = 600

// slowest is ωτ, τ = η/μ, at which the limit ω → 0 is taken.
const slowest = 1e-30

// evaluate computes the state of enthalpy h on the phase p, convecting or
// conducting.
func (r *rock) evaluate(h float64, p phase, convecting bool, s *rockState) {
	s.h = h
	s.T, s.f, s.dT, s.df = r.invert(h, p)
	if !(s.T > 0) {
		s.T = math.NaN() // nothing below continues to absolute zero
	}
	lnEta, slope, curvature := r.viscosity.logViscosity(s.T)
	lnEta -= r.viscosityMelt * s.f
	dLnEta := slope*s.dT - r.viscosityMelt*s.df
	if lnEta > stiffest {
		lnEta, dLnEta = stiffest, 0
	}
	s.eta = math.Exp(lnEta)
	s.dEta = s.eta * dLnEta
	s.mu = r.rigidity * math.Exp(-r.rigidityMelt*s.f)
	s.dMu = -r.rigidityMelt * s.df * s.mu

	drop := s.T - r.surface
	if convecting {
		// The scale is −1/slope, so it grows by curvature/slope² per kelvin.
		scale := -1 / slope
		lnQ, dDrop, dScale, dViscosity := r.convection.logFlux(drop, scale, lnEta)
		s.q = math.Exp(lnQ)
		s.dq = s.q * ((dDrop+dScale*curvature*scale*scale)*s.dT + dViscosity*dLnEta)
	} else {
		s.q, s.dq = r.conductance*drop, r.conductance*s.dT
	}

	s.qm, s.dqm = 0, 0
	if r.meltLoss != nil && p != solid {
		u, du := r.meltLoss.velocity(s.f)
		content := r.density * (r.latentHeat + r.heatCapacity*drop)
		s.qm = content * u
		s.dqm = content*du*s.df + r.density*r.heatCapacity*s.dT*u
	}
}

// Set implements [Interior].
func (r *rock) Set(x []float64) { r.evaluate(x[0], r.phase, r.convecting, &r.now) }

// K implements [Interior].
func (r *rock) K(w float64) float64 {
	if w == 0 {
		return 0
	}
	j, _, _, _ := r.rheology.Compliance(math.Abs(w), r.now.mu, r.now.eta)
	k, _ := r.response(j)
	return math.Copysign(k, w)
}

// Harmonics implements [Interior].
func (r *rock) Harmonics(n float64, k []float64) {
	if r.harmonic == nil {
		for j := range k {
			k[j] = r.K(float64(j+1) * n)
		}
		return
	}
	for len(r.compliances) < len(k) {
		r.compliances = append(r.compliances, 0)
	}
	c := r.compliances[:len(k)]
	r.harmonic.Harmonics(n, r.now.mu, r.now.eta, c)
	for j := range k {
		k[j], _ = r.response(c[j])
	}
}

// frequency returns |ω|, or for ω = 0 one that stands for the limit.
func (r *rock) frequency(w float64) float64 {
	if w == 0 {
		return slowest * r.now.mu / r.now.eta
	}
	return math.Abs(w)
}

// KDerivs implements [Interior]. At ω = 0 it returns the slope of the steady
// creep that is left there, dK/dω = (3/2) B η.
func (r *rock) KDerivs(w float64, dx []float64) (k, dw float64) {
	s := &r.now
	j, jw, jmu, jeta := r.rheology.Compliance(r.frequency(w), s.mu, s.eta)
	k, slope := r.response(j)
	dw = turn(slope, jw) // even in ω
	dh := turn(slope, jmu)*s.dMu + turn(slope, jeta)*s.dEta
	switch {
	case w == 0:
		k, dh = 0, 0
	case w < 0:
		k, dh = -k, -dh
	}
	dx[0] = dh
	return k, dw
}

// Love implements [Interior]; at ω = 0 it is the fluid limit.
func (r *rock) Love(w float64) complex128 {
	j, _, _, _ := r.rheology.Compliance(r.frequency(w), r.now.mu, r.now.eta)
	k := r.love(j)
	return complex(real(k), -r.K(w))
}
