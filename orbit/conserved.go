package orbit

// Restore changes the actions Λ of the innermost and the outermost member of
// the state y, and nothing else, so that the two sums that the tide-free flow
// conserves come nearer by a part, 0…1, of the way,
//
//	Σ (Λ_k − Γ_k)   and   Σ a_k Λ_k,   a_k j_k = a_{k+1}(j_k + 1),
//
// to those of the state of: what changes no resonance angle when all longitudes
// turn by it (a_k), or all pericentres too, is conjugate to a constant. A state on
// the slow manifold and one that librates about it share them.
func (c *Chain) Restore(y, of []float64, part float64) {
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
	turned, spun = part*turned, part*spun
	outer := (turned - spun) / (1 - a)
	y[last] += outer / c.members[last].ref
	y[0] -= (spun + outer) / c.members[0].ref
}

// off returns what the mode has of the displacement from where the rates f have
// no part in it: w·δy = (w·f)/λ.
func (m *Eigenmode) off(f []float64) complex128 {
	part := complex128(0)
	for j, w := range m.Left {
		part += w * complex(f[j], 0)
	}
	return part / m.value()
}

// Off returns √I, in (J s)^½, of the libration of the mode that the
// rates f stand for.
func (m *Eigenmode) Off(f []float64) float64 { return 2 * abs(m.off(f)) }

// Filter moves the state y by one of Newton's steps to where its rates f have no
// part in any of the librations, δy = −2 Re Σ v (w·f)/λ.
func (l *Librations) Filter(f, y []float64) {
	for i := range l.Modes {
		m := &l.Modes[i]
		part := m.off(f)
		for j, v := range m.Right {
			y[j] -= 2 * real(v*part)
		}
	}
}
