package orbit

// Restore changes the actions Λ of the innermost and the outermost member of
// the state y, and nothing else, so that the two sums that the tide-free flow
// conserves,
//
//	Σ (Λ_k − Γ_k)   and   Σ a_k Λ_k,   a_k j_k = a_{k+1}(j_k + 1),
//
// are those of the state of: what changes no resonance angle when all longitudes
// turn by it (a_k), or all pericentres too, is conjugate to a constant. A state on
// the slow manifold and one that librates about it share them.
func (c *Chain) Restore(y, of []float64) {
	last := len(c.members) - 1
	turned, a := 0.0, 1.0
	for k := range c.members {
		turned += a * c.members[k].ref * (y[k] - of[k])
		if k < last {
			a *= c.pairs[k].j / (c.pairs[k].j + 1)
		}
	}
	spun := c.AngularMomentum(y) - c.AngularMomentum(of)
	// ΔΛ_0 + ΔΛ_last = −spun, ΔΛ_0 + a ΔΛ_last = −turned
	outer := (turned - spun) / (1 - a)
	y[last] += outer / c.members[last].ref
	y[0] -= (spun + outer) / c.members[0].ref
}
