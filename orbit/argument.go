package orbit

import "math"

// Argument returns |z_k| cos θ and |z_k| sin θ of the resonance argument
// θ = ψ_r − ϖ_k of pair r and member k at state y, |z_k| = √(2Γ/Λ0) about e.
func (c *Chain) Argument(r, k int, y []float64) (re, im float64) {
	n := len(c.members)
	x, v := y[n+k], y[2*n+k]
	if r == 0 {
		return x, -v
	}
	sin, cos := math.Sincos(c.pairs[r].centre + y[3*n+r-1])
	return x*cos + v*sin, x*sin - v*cos
}

// Strongest returns the member of pair r whose eccentricity the resonance
// drives faster, and the sign of cos θ at the centre about which its argument
// librates deep in the resonance (dψ/dt < 0): + for θ = 0, which is where
// dz/dt = i(−dψ/dt z + (E f/Λ0) e^{iφ}) leaves an f < 0.
func (c *Chain) Strongest(r int) (k int, sign float64) {
	p := &c.pairs[r]
	f := p.f1
	if math.Abs(p.f2)/c.members[r+1].ref > math.Abs(p.f1)/c.members[r].ref {
		k, f = 1, p.f2
	}
	return r + k, -math.Copysign(1, f)
}
