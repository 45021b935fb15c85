package orbit

// Jacobian writes the derivative of Flow to the state, row-major Dim × Dim,
// into the leading block of jac, whose rows are stride apart; w must hold the
// rates at y. Every entry is an analytic second derivative of H.
func (c *Chain) Jacobian(y []float64, w *Rates, jac []float64, stride int) {
	n := len(c.members)
	dim := c.Dim()
	for i := 0; i < dim; i++ {
		row := jac[i*stride : i*stride+dim]
		for j := range row {
			row[j] = 0
		}
	}
	at := func(i, j int) *float64 { return &jac[i*stride+j] }

	// Rows 3N… hold dψ_r/dt for r ≥ 1; dψ_1/dt is gathered in the turn rows.
	for k := range c.members {
		m := &c.members[k]
		u, x, v := 1+y[k], y[n+k], y[2*n+k]
		p := 1 / u
		rateU, rateG, slopeU, slopeG := m.oblateDerivs(u, 0.5*(x*x+v*v))
		lambdaU := -3*m.n*p*p*p*p + rateU
		c.spread(jac, stride, y, k, k, lambdaU)
		c.spread(jac, stride, y, k, n+k, rateG*x)
		c.spread(jac, stride, y, k, 2*n+k, rateG*v)
		*at(n+k, k) += slopeU * v
		*at(2*n+k, k) -= slopeU * x
		*at(n+k, n+k) += slopeG * x * v
		*at(n+k, 2*n+k) += slopeG * v * v
		*at(2*n+k, n+k) -= slopeG * x * x
		*at(2*n+k, 2*n+k) -= slopeG * v * x
		turn := w.Slope[k] + w.Offset[0]
		*at(n+k, 2*n+k) += turn
		*at(2*n+k, n+k) -= turn
	}
	for r := range c.pairs {
		c.pairJacobian(r, y, &w.pair[r], jac, stride)
	}
}

// spread adds d(dλ_k/dt)/dy[col] = value to every row dλ_k/dt enters: those of
// the angles φ_r, and through dψ_1/dt those of all z.
func (c *Chain) spread(jac []float64, stride int, y []float64, k, col int, value float64) {
	if k < len(c.pairs) {
		c.spreadOffset(jac, stride, y, k, col, -c.pairs[k].j*value)
	}
	if k > 0 {
		c.spreadOffset(jac, stride, y, k-1, col, (c.pairs[k-1].j+1)*value)
	}
}

// spreadOffset adds d(dψ_r/dt)/dy[col] = value.
func (c *Chain) spreadOffset(jac []float64, stride int, y []float64, r, col int, value float64) {
	n := len(c.members)
	if r > 0 {
		jac[(3*n+r-1)*stride+col] += value
		return
	}
	for s := 1; s < len(c.pairs); s++ {
		jac[(3*n+s-1)*stride+col] -= value
	}
	for k := 0; k < n; k++ {
		jac[(n+k)*stride+col] += value * y[2*n+k]
		jac[(2*n+k)*stride+col] -= value * y[n+k]
	}
}

// pairJacobian adds what pair r contributes.
func (c *Chain) pairJacobian(r int, y []float64, t *terms, jac []float64, stride int) {
	n := len(c.members)
	pr := &c.pairs[r]
	in, out := c.members[r].ref, c.members[r+1].ref
	i, o := r, r+1
	xi, wi, xo, wo := n+i, 2*n+i, n+o, 2*n+o
	pc, ps, qc, qs := t.p*t.cos, t.p*t.sin, t.q*t.cos, t.q*t.sin

	// dΛ: l̇_i = j Im W/Λ_i, l̇_o = −(j+1) Im W/Λ_o.
	for _, e := range [2]struct {
		row int
		f   float64
	}{{i, pr.j / in}, {o, -(pr.j + 1) / out}} {
		row := jac[e.row*stride:]
		row[i] -= e.f * 0.5 * t.imP / t.ui
		row[o] -= e.f * (2*t.imP + 2.5*t.imQ) / t.uo
		row[xi] += e.f * ps
		row[wi] -= e.f * pc
		row[xo] += e.f * qs
		row[wo] -= e.f * qc
		if t.angleIndex >= 0 {
			row[t.angleIndex] += e.f * (t.reP + t.reQ)
		}
	}

	// dz: ż_i gains i (p/Λ_i) e^{iφ}, ż_o gains i (q/Λ_o) e^{iφ}.
	p, q := t.p/in, t.q/out
	jac[xi*stride+i] += 0.5 * p * t.sin / t.ui
	jac[wi*stride+i] -= 0.5 * p * t.cos / t.ui
	jac[xi*stride+o] += 2 * p * t.sin / t.uo
	jac[wi*stride+o] -= 2 * p * t.cos / t.uo
	jac[xo*stride+o] += 2.5 * q * t.sin / t.uo
	jac[wo*stride+o] -= 2.5 * q * t.cos / t.uo
	if a := t.angleIndex; a >= 0 {
		jac[xi*stride+a] -= p * t.cos
		jac[wi*stride+a] -= p * t.sin
		jac[xo*stride+a] -= q * t.cos
		jac[wo*stride+a] -= q * t.sin
	}

	// dλ_i/dt gains ½ Re P/(u_i Λ_i).
	f := 1 / (in * t.ui)
	c.spread(jac, stride, y, i, i, -0.75*f*t.reP/t.ui)
	c.spread(jac, stride, y, i, o, -f*t.reP/t.uo)
	c.spread(jac, stride, y, i, xi, 0.5*f*pc)
	c.spread(jac, stride, y, i, wi, 0.5*f*ps)
	// dλ_o/dt gains (2 Re P + 2.5 Re Q)/(u_o Λ_o).
	g := 1 / (out * t.uo)
	c.spread(jac, stride, y, o, i, -g*t.reP/t.ui)
	c.spread(jac, stride, y, o, o, -g*(6*t.reP+8.75*t.reQ)/t.uo)
	c.spread(jac, stride, y, o, xi, 2*g*pc)
	c.spread(jac, stride, y, o, wi, 2*g*ps)
	c.spread(jac, stride, y, o, xo, 2.5*g*qc)
	c.spread(jac, stride, y, o, wo, 2.5*g*qs)
	if a := t.angleIndex; a >= 0 {
		c.spread(jac, stride, y, i, a, -0.5*f*t.imP)
		c.spread(jac, stride, y, o, a, -g*(2*t.imP+2.5*t.imQ))
	}
}
