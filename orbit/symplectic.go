package orbit

// action returns the action ½Ω(Re v, Im v) of the oscillation δy = Re(v e^{iθ})
// of the chain, J s: (1/2π)∮ p dq over its cycle. In complex form its magnitude
// is ¼|v^H Ω v|; the sign is that of the mode's energy in the frame of the lock.
//
// Ω is the symplectic form Σ dλ∧dΛ + Σ dRe X∧dIm X in the variables of the
// chain. With dΛ = Λ0 dl and X = √Λ0 z e^{iψ_1} it is
//
//	Ω = Σ_k Λ0_k (dλ_k∧dl_k + dRe z_k∧dIm z_k)
//
// where the two angles that the chain does not hold, ψ_1 and one longitude, may
// be given any change: they are conjugate to the sums the flow conserves,
// Σ(Λ − Γ) and Σ a_k Λ_k with a_k j_k = a_{k+1}(j_k + 1), and an oscillation
// changes neither (a tide lets it by a part in its period over the tide's time
// scale). Here dψ_1 = 0 and dλ_1 = 0, so dλ_2 = 0 and
// dλ_{r+1} = (dφ_r + j_r dλ_r)/(j_r + 1) outward.
func (c *Chain) action(v []complex128) float64 {
	n := len(c.members)
	sum := 0.0
	longitude := complex128(0)
	for k := range c.members {
		if k >= 2 {
			j := c.pairs[k-1].j
			longitude = (v[3*n+k-2] + complex(j, 0)*longitude) / complex(j+1, 0)
		}
		sum += c.members[k].ref * (cross(longitude, v[k]) + cross(v[n+k], v[2*n+k]))
	}
	return 0.5 * sum
}

// cross returns Re a Im b − Im a Re b.
func cross(a, b complex128) float64 { return real(a)*imag(b) - imag(a)*real(b) }

// Angles returns the number of angles a chain librates in, 2N − 2: arg Y_k of
// each member, the angle between the first resonance and its pericentre, and
// then φ_r for r = 1…N−2.
func (c *Chain) Angles() int { return 2*len(c.members) - 2 }

// Widths writes to out the half-width of every angle, rad, in the oscillation
// δy = Re(v e^{iθ}) about y, to first order in v:
//
//	arg Y_k   |Re z_k v_{Im z_k} − Im z_k v_{Re z_k}|/|z_k|²
//	φ_r       |v_{φ_r}|
//
// A member whose eccentricity is 0 has no pericentre, and a half-width of 0.
func (c *Chain) Widths(y []float64, v []complex128, out []float64) {
	n := len(c.members)
	for k := range c.members {
		x, w := y[n+k], y[2*n+k]
		out[k] = 0
		if s := x*x + w*w; s > 0 {
			out[k] = abs(complex(x/s, 0)*v[2*n+k] - complex(w/s, 0)*v[n+k])
		}
	}
	for r := 1; r < n-1; r++ {
		out[n+r-1] = abs(v[3*n+r-1])
	}
}
