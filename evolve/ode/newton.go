package ode

import "math"

// newton is the simplified Newton iteration for the stages (Hairer & Wanner II,
// IV.8): with z = (t⊗1) w it solves, in the transformed increments,
//
//	(Λ/h ⊗ 1 − 1 ⊗ J) Δw = t⁻¹ F(z) − (Λ/h) w
//
// as one real and (s − 1)/2 complex systems.
type newton struct {
	kappa float64 // fraction of the tolerance at which it stops
	w, d  []float64
	f     []float64
	u     []complex128

	eta        float64 // θ/(1 − θ) of the last iteration: error over last increment
	theta      float64 // contraction; 0 if one iteration was enough
	iterations int
	worst      int
	outside    bool    // f refused a stage
	shorten    float64 // factor for the step after a failure
}

// slowContraction is the θ above which the Jacobian is not kept for another step.
const slowContraction = 1e-3

func newNewton(n int, rtol float64) newton {
	const eps = 0x1p-52
	return newton{
		// Rounding in z, relative to the tolerance, must not be iterated on.
		kappa: max(10*eps/rtol, min(0.03, math.Sqrt(rtol))),
		w:     make([]float64, maxStages*n),
		d:     make([]float64, maxStages*n),
		f:     make([]float64, maxStages*n),
		u:     make([]complex128, n),
		eta:   1,
	}
}

func (nt *newton) restart() { nt.eta = 1 }

// predict starts the stages of r.next from the last step's polynomial, or from
// zero increments.
func (r *Radau) predict(h float64) {
	n, s := r.n, r.tab.s
	z := r.next.z[:s*n]
	if !r.history {
		clear(z)
		clear(r.newton.w[:s*n])
		return
	}
	old := r.seg
	for i := range s {
		var b [maxStages]float64
		old.form.basis(1+r.tab.c[i]*h/old.h, b[:])
		b[old.form.s-1]-- // relative to the end of the old step
		zi := z[i*n : (i+1)*n]
		clear(zi)
		for j := range old.form.s {
			for k, v := range old.term(j) {
				zi[k] += b[j] * v
			}
		}
	}
	transform(&r.tab.tinv, s, n, z, r.newton.w)
}

// transform writes (m ⊗ 1) src to dst.
func transform(m *square, s, n int, src, dst []float64) {
	x0, x1, x2 := src[:n], src[n:2*n], src[2*n:3*n]
	for i := range s {
		row, out := &m[i], dst[i*n:(i+1)*n]
		if s == 3 {
			for k := range out {
				out[k] = row[0]*x0[k] + row[1]*x1[k] + row[2]*x2[k]
			}
			continue
		}
		x3, x4 := src[3*n:4*n], src[4*n:5*n]
		for k := range out {
			out[k] = row[0]*x0[k] + row[1]*x1[k] + row[2]*x2[k] + row[3]*x3[k] + row[4]*x4[k]
		}
	}
}

// solveStages iterates for the increments r.next.z of a step h from (t, y) with
// the decomposed matrices; false if they do not converge.
func (r *Radau) solveStages(h float64) bool {
	nt, tab, n, s := &r.newton, r.tab, r.n, r.tab.s
	r.predict(h)
	z := r.next.z[:s*n]
	w, d, f := nt.w[:s*n], nt.d[:s*n], nt.f[:s*n]
	nt.eta = math.Pow(max(nt.eta, 0x1p-52), 0.8)
	nt.theta, nt.outside, nt.shorten = 0, false, 0.5
	most := tab.iterations
	if r.opt.FixedStep > 0 {
		most *= 10 // a shorter step is no alternative
	}
	var size, ratio float64
	for it := 1; it <= most; it++ {
		nt.iterations = it
		for i := range s {
			for k, v := range z[i*n : (i+1)*n] {
				r.point[k] = r.y[k] + v
			}
			r.derivs(r.t+tab.c[i]*h, r.point, f[i*n:(i+1)*n])
		}
		transform(&tab.tinv, s, n, f, d)
		r.solveIncrements(h, w, d)

		old := size
		sum, big := 0.0, -1.0
		for i := range s {
			for k, v := range d[i*n : (i+1)*n] {
				v *= r.inv[k]
				v *= v
				sum += v
				if v > big || v != v {
					big, nt.worst = v, k
				}
			}
		}
		size = math.Sqrt(sum / float64(s*n))
		if math.IsNaN(size) || math.IsInf(size, 0) {
			nt.outside, nt.shorten = true, 0.25
			if i := notFinite(f); i >= 0 {
				nt.worst = i % n
			}
			return false
		}
		if it > 1 {
			oldRatio := ratio
			ratio = size / old
			nt.theta = ratio
			if it > 2 {
				nt.theta = math.Sqrt(ratio * oldRatio)
			}
			if nt.theta >= 0.99 {
				return false
			}
			nt.eta = nt.theta / (1 - nt.theta)
			left := float64(most - it)
			// The increment that the last iteration allowed would leave.
			if end := nt.eta * size * math.Pow(nt.theta, left) / nt.kappa; end >= 1 {
				nt.shorten = 0.8 * math.Pow(max(1e-4, min(20, end)), -1/(4+left))
				return false
			}
		}
		for k, v := range d {
			w[k] += v
		}
		transform(&tab.t, s, n, w, z)
		if nt.eta*size <= nt.kappa {
			return true
		}
	}
	return false
}

// solveIncrements turns d = t⁻¹F into the increment Δw.
func (r *Radau) solveIncrements(h float64, w, d []float64) {
	tab, n := r.tab, r.n
	g := tab.gamma / h
	for k := range n {
		d[k] -= g * w[k]
	}
	r.real.solve(d[:n])
	u := r.newton.u
	for p := range tab.s / 2 {
		a, b := tab.alpha[p]/h, tab.beta[p]/h
		wp, wq := w[(1+2*p)*n:(2+2*p)*n], w[(2+2*p)*n:(3+2*p)*n]
		dp, dq := d[(1+2*p)*n:(2+2*p)*n], d[(2+2*p)*n:(3+2*p)*n]
		for k := range u {
			u[k] = complex(dp[k]-a*wp[k]-b*wq[k], dq[k]+b*wp[k]-a*wq[k])
		}
		r.pairs[p].solve(u)
		for k, v := range u {
			dp[k], dq[k] = real(v), imag(v)
		}
	}
}
