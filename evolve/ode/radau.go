package ode

// Radau integrates a System with the Radau IIA methods of 3 and 5 stages (Hairer &
// Wanner, Solving Ordinary Differential Equations II, IV.8; Hairer & Wanner 1999,
// J. Comput. Appl. Math. 111, 93).
type Radau struct {
	implicit
	tab     *tableau
	history bool // seg may start the Newton iteration
	poor    int  // consecutive failures of the iteration
	good    int  // consecutive fast contractions

	// Decompositions of the Newton matrices, for the step luStep with luTab.
	real  *lu[float64]
	pairs [maxStages / 2]*lu[complex128]
	luTab *tableau

	newton newton
}

// NewRadau prepares an integration; Start must follow. The integrals and kinks
// of a sys that implements Quadratures or Piecewise are taken care of. An error
// says which option does not make sense.
func NewRadau(sys System, opt Options) (*Radau, error) {
	im, err := newImplicit(MethodRadau, sys, opt, maxStages, maxStages)
	if err != nil {
		return nil, err
	}
	r := &Radau{implicit: im}
	r.scheme = r
	r.real = newRealLU(r.n)
	for k := range r.pairs {
		r.pairs[k] = newComplexLU(r.n)
	}
	r.newton = newNewton(r.n, opt.RTol)
	return r, nil
}

func (r *Radau) begin() {
	tab := radau5()
	if r.opt.Stages == 3 || r.opt.Stages == 0 && r.opt.RTol > 1e-5 {
		tab = radau3()
	}
	r.use(tab)
}

func (r *Radau) use(tab *tableau) {
	r.tab, r.control.order = tab, float64(tab.s+1)
	r.poor, r.good, r.control.smooth = 0, 0, false
}

func (r *Radau) forget() {
	r.haveJac, r.jacHere, r.history = false, false, false
	r.newton.restart()
}

func (r *Radau) prepare() error { return r.linearise() }

// decompose prepares the Newton matrices of step h.
func (r *Radau) decompose(h float64) bool {
	if r.luStep == h && r.luTab == r.tab {
		return true
	}
	r.luStep = 0
	r.stats.Decompositions++
	if !shiftReal(r.real, r.tab.gamma/h, r.jac) {
		return false
	}
	for k := range r.tab.s / 2 {
		// For u = p + iq the real pair [α β; −β α] is the factor α − iβ.
		if !shiftComplex(r.pairs[k], complex(r.tab.alpha[k]/h, -r.tab.beta[k]/h), r.jac) {
			return false
		}
	}
	r.luStep, r.luTab = h, r.tab
	return true
}

func (r *Radau) attempt(h float64) (bool, error) {
	if !r.decompose(h) {
		return false, r.noStages(h, 0.5, StopError{Reason: Singular, Component: -1})
	}
	if !r.solveStages(h) {
		return false, r.newtonFailed(h)
	}
	s := r.next
	s.begin(r.tab.form, r.t, h, r.y)
	for i, z := range s.term(r.tab.s - 1) {
		s.y1[i] = r.y[i] + z
	}
	return true, nil
}

// newtonFailed answers stages that did not converge: a Jacobian of this state
// first, a shorter step then.
func (r *Radau) newtonFailed(h float64) error {
	nt := &r.newton
	nt.restart()
	r.chooseStages(false)
	if !r.jacHere && !nt.outside {
		r.stats.NewtonFailures++
		r.control.fails++
		r.control.rejected = true
		r.haveJac = false
		return nil
	}
	if nt.outside {
		return r.refused(h, nt.worst)
	}
	return r.noStages(h, nt.shorten, StopError{Reason: StepTooSmall, Component: nt.worst, Detail: "the Newton iteration does not converge"})
}

// estimate returns the error of the step in tolerances and its worst component.
// The difference to the embedded formula passes through (1 − hJ/γ)⁻¹, twice where
// the step may be too long for one passage (Hairer & Wanner II, IV.8).
func (r *Radau) estimate(h float64) (size float64, worst int) {
	sum := r.newton.d[:r.n]
	clear(sum)
	for j := range r.tab.s {
		e := r.tab.errWeights[j] / h
		for k, v := range r.next.term(j) {
			sum[k] += e * v
		}
	}
	for k, v := range sum {
		r.err[k] = v + r.f[k]
	}
	r.real.solve(r.err)
	size, worst = norm(r.err, r.inv)
	if size < 1 || r.control.smooth && !r.control.rejected {
		return size, worst
	}
	for k, v := range r.err {
		r.point[k] = r.y[k] + v
	}
	r.derivs(r.t, r.point, r.err)
	for k, v := range sum {
		r.err[k] += v
	}
	r.real.solve(r.err)
	if again, i := norm(r.err, r.inv); again < size {
		size, worst = again, i
	}
	return size, worst
}

// safe is smaller after an expensive Newton iteration.
func (r *Radau) safe() float64 {
	most := float64(r.tab.iterations)
	return safety * (1 + 2*most) / (float64(r.newton.iterations) + 2*most)
}

func (r *Radau) reject(h, size float64, worst int) error {
	r.haveJac = r.jacHere
	return r.errorTooLarge(h, size, r.safe(), worst)
}

func (r *Radau) accept(h, size float64, cut bool) {
	r.chooseStages(true)
	keepJac := r.newton.theta <= slowContraction
	r.lengthen(h, size, r.safe(), cut, keepJac)
	r.haveF, r.haveJac, r.jacHere, r.history = false, keepJac, false, true
}

// chooseStages follows the Newton iteration when the number of stages is free:
// two failures running mean that steps of five stages are too long for it, and
// steps of three are taken until the contraction is fast again.
func (r *Radau) chooseStages(converged bool) {
	if r.opt.Stages != 0 || r.opt.RTol > 1e-5 {
		return
	}
	if converged {
		r.poor = 0
	} else {
		r.poor++
	}
	if converged && r.newton.theta < 0.01 {
		r.good++
	} else {
		r.good = 0
	}
	switch {
	case r.tab.s == 5 && r.poor >= 2:
		r.use(radau3())
	case r.tab.s == 3 && r.good >= 4:
		r.use(radau5())
	}
}
