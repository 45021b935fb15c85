package orbit

import "math"

// Chain is a set of neighbouring orbiters linked by first-order resonances, as
// the Hamiltonian
//
//	H = Σ_k [ −μ²β³/(2Λ²) − (G M β J₂ R_c²/2a³)(1 − Γ/Λ)⁻³ ]
//	  − Σ_r (G m_i m_o/a_o) Re[ (f₁ X̄_i/√Λ_i + f₂ X̄_o/√Λ_o) e^{iψ_r} ]
//
// with Λ = β√(μa), Γ = Λ(1 − √(1−e²)), X = √(2Γ) e^{iϖ} and
// ψ_r = (j+1)λ_o − jλ_i (Murray & Dermott 1999, ch. 8; Malhotra 1991, Icarus
// 94, 399). In the frame that turns with ψ_1 it depends on the angles only
// through φ_r = ψ_r − ψ_1, so the state of N members has 4N − 2 numbers:
//
//	y[k]        l_k = Λ_k/Λ0_k − 1
//	y[N+k]      Re z_k,  z = X e^{−iψ_1}/√Λ0
//	y[2N+k]     Im z_k
//	y[3N+r−1]   φ_r − centre_r, rad, r = 1…N−2 (counting the first pair as 0)
//
// The reference Λ0 and the mean motions at it are those of the start, where
// dψ_r/dt is known exactly: the given offset of a locked start ([Lock]), the
// one the elements give of a free start ([Free]), whose centres are all 0.
// Every later rate is that plus a deviation computed without cancellation. A
// Chain is immutable.
type Chain struct {
	members []member
	pairs   []pair
	offset  []float64 // dψ_r/dt at the reference, rad/s
	rateRef []float64 // oblate and resonant part of dλ/dt at the reference
}

// pair is the resonance of members k and k+1.
type pair struct {
	j      float64 // (j+1):j
	f1, f2 float64
	energy float64 // G m_i m_o/a_o0, J
	centre float64 // 0 or π; 0 for the first pair
	sign   float64 // cos(centre)
}

// Members returns the number N of orbiters.
func (c *Chain) Members() int { return len(c.members) }

// Dim returns the number of state variables, 4N − 2.
func (c *Chain) Dim() int { return 4*len(c.members) - 2 }

// Centre returns the libration centre of φ_r, 0 or π, for r = 1…N−2.
func (c *Chain) Centre(r int) float64 { return c.pairs[r].centre }

// Commensurability returns j of pair r, locked at (j+1):j.
func (c *Chain) Commensurability(r int) int { return int(c.pairs[r].j) }

// terms are the resonant pieces of one pair at a state: with
// p = E f₁ u_o⁻² u_i^{−1/2} and q = E f₂ u_o^{−5/2},
// P = p z̄_i e^{iφ} and Q = q z̄_o e^{iφ}; H_r = −Re(P + Q).
type terms struct {
	p, q       float64
	cos, sin   float64 // of φ_r
	reP, imP   float64
	reQ, imQ   float64
	ui, uo     float64
	xi, wi     float64
	xo, wo     float64
	angleIndex int // state index of φ_r, −1 for the first pair
}

func (c *Chain) terms(r int, y []float64, t *terms) {
	n := len(c.members)
	pr := &c.pairs[r]
	t.ui, t.uo = 1+y[r], 1+y[r+1]
	t.xi, t.wi = y[n+r], y[2*n+r]
	t.xo, t.wo = y[n+r+1], y[2*n+r+1]
	t.cos, t.sin, t.angleIndex = 1, 0, -1
	if r > 0 {
		t.angleIndex = 3*n + r - 1
		s, k := math.Sincos(y[t.angleIndex])
		t.cos, t.sin = pr.sign*k, pr.sign*s
	}
	w := 1 / (t.uo * t.uo)
	t.p = pr.energy * pr.f1 * w / math.Sqrt(t.ui)
	t.q = pr.energy * pr.f2 * w / math.Sqrt(t.uo)
	t.reP = t.p * (t.xi*t.cos + t.wi*t.sin)
	t.imP = t.p * (t.xi*t.sin - t.wi*t.cos)
	t.reQ = t.q * (t.xo*t.cos + t.wo*t.sin)
	t.imQ = t.q * (t.xo*t.sin - t.wo*t.cos)
}

// Rates holds what the flow finds on its way, for tides and output.
type Rates struct {
	Longitude []float64 // dλ_k/dt − reference, rad/s
	Slope     []float64 // oblate ∂H/∂Γ_k, rad/s: −(apsidal rate by J₂)
	Radial    []float64 // Σ Re(P or Q) of member k, J: −X·∇H of the resonant part
	Offset    []float64 // dψ_r/dt, rad/s
	pair      []terms
}

// NewRates makes the workspace of a chain.
func (c *Chain) NewRates() *Rates {
	n := len(c.members)
	return &Rates{
		Longitude: make([]float64, n), Slope: make([]float64, n), Radial: make([]float64, n),
		Offset: make([]float64, n-1), pair: make([]terms, n-1),
	}
}

// Flow writes dy/dt of the tide-free chain at state y into dy (both of length
// Dim, 1/s and rad/s) and fills w:
//
//	dλ/dt = ∂H/∂Λ, dΛ/dt = −∂H/∂λ, dX/dt = −2i ∂H/∂X̄.
//
// ∂H/∂Λ is kept whole, the derivatives of the resonant and oblate terms
// included, so the flow conserves H and Σ(Λ − Γ).
func (c *Chain) Flow(y, dy []float64, w *Rates) {
	n := len(c.members)
	c.longitudes(y, w)
	for k := range dy[:n] {
		dy[k] = 0
	}
	first := w.Offset[0]
	for k := range c.members {
		turn := -(w.Slope[k] + first)
		x, v := y[n+k], y[2*n+k]
		dy[n+k] = -turn * v
		dy[2*n+k] = turn * x
	}
	for r := range c.pairs {
		pr, t := &c.pairs[r], &w.pair[r]
		in, out := c.members[r].ref, c.members[r+1].ref
		im := t.imP + t.imQ
		dy[r] += pr.j * im / in
		dy[r+1] -= (pr.j + 1) * im / out
		p, q := t.p/in, t.q/out
		dy[n+r] -= p * t.sin
		dy[2*n+r] += p * t.cos
		dy[n+r+1] -= q * t.sin
		dy[2*n+r+1] += q * t.cos
		if r > 0 {
			dy[t.angleIndex] = w.Offset[r] - first
		}
	}
}

// longitudes fills w: the terms of every pair, dλ/dt and dψ/dt.
func (c *Chain) longitudes(y []float64, w *Rates) {
	n := len(c.members)
	for k := range c.members {
		m := &c.members[k]
		dn, _ := m.kepler(y[k])
		x, v := y[n+k], y[2*n+k]
		rate, slope := m.oblate(1+y[k], 0.5*(x*x+v*v))
		w.Longitude[k] = dn + (rate - c.rateRef[k])
		w.Slope[k] = slope
		w.Radial[k] = 0
	}
	for r := range c.pairs {
		t := &w.pair[r]
		c.terms(r, y, t)
		w.Longitude[r] += 0.5 * t.reP / (t.ui * c.members[r].ref)
		w.Longitude[r+1] += (2*t.reP + 2.5*t.reQ) / (t.uo * c.members[r+1].ref)
		w.Radial[r] += t.reP
		w.Radial[r+1] += t.reQ
	}
	for r := range c.pairs {
		j := c.pairs[r].j
		w.Offset[r] = c.offset[r] + (j+1)*w.Longitude[r+1] - j*w.Longitude[r]
	}
}

// Energy returns H less a constant (Kepler's part at the reference), J.
func (c *Chain) Energy(y []float64) float64 {
	n := len(c.members)
	h := 0.0
	var t terms
	for k := range c.members {
		x, v := y[n+k], y[2*n+k]
		h += c.members[k].energy(y[k], 0.5*(x*x+v*v))
	}
	for r := range c.pairs {
		c.terms(r, y, &t)
		h -= t.reP + t.reQ
	}
	return h
}

// TotalEnergy returns H whole, J: the measure of a relative error.
func (c *Chain) TotalEnergy(y []float64) float64 {
	h := c.Energy(y)
	for k := range c.members {
		h -= 0.5 * c.members[k].ref * c.members[k].n
	}
	return h
}

// AngularMomentum returns Σ(Λ − Γ) less its reference Σ Λ0, kg m² s⁻¹.
func (c *Chain) AngularMomentum(y []float64) float64 {
	n := len(c.members)
	sum := 0.0
	for k := range c.members {
		x, v := y[n+k], y[2*n+k]
		sum += c.members[k].ref * (y[k] - 0.5*(x*x+v*v))
	}
	return sum
}

// TotalAngularMomentum returns Σ(Λ − Γ), kg m² s⁻¹.
func (c *Chain) TotalAngularMomentum(y []float64) float64 {
	sum := c.AngularMomentum(y)
	for k := range c.members {
		sum += c.members[k].ref
	}
	return sum
}

// Elements returns the orbit of member k; w must hold the rates at y.
func (c *Chain) Elements(k int, y []float64, w *Rates) Elements {
	n := len(c.members)
	m := &c.members[k]
	x, v := y[n+k], y[2*n+k]
	u := 1 + y[k]
	_, kepler := m.kepler(y[k])
	return Elements{
		SemimajorAxis: m.a * u * u,
		Eccentricity:  math.Sqrt(eccentricitySquared(u, 0.5*(x*x+v*v))),
		MeanMotion:    m.n + c.rateRef[k] + w.Longitude[k],
		KeplerMotion:  kepler,
	}
}

// Angle returns φ_r in [0, 2π) for r ≥ 1.
func (c *Chain) Angle(r int, y []float64) float64 {
	a := math.Mod(c.pairs[r].centre+y[3*len(c.members)+r-1], 2*math.Pi)
	if a < 0 {
		a += 2 * math.Pi
	}
	return a
}
