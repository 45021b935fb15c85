package ode

import (
	"fmt"
	"math"
)

// Step takes one step forward that ends at tEnd at the latest, on it exactly if
// the step reaches so far, or on the first kink met. The error is a *StopError if
// the integration cannot go on; the state then stays as it was.
func (r *Radau) Step(tEnd float64) (*Segment, error) {
	if !r.started {
		return nil, fmt.Errorf("ode: Step before a successful Start")
	}
	if !(tEnd > r.t) || math.IsInf(tEnd, 0) {
		return nil, fmt.Errorf("ode: step end %g must be finite and after t = %g", tEnd, r.t)
	}
	for {
		attempts := r.stats.Steps + r.stats.Rejected + r.stats.NewtonFailures
		if r.opt.MaxSteps > 0 && attempts >= r.opt.MaxSteps {
			return nil, &StopError{Reason: StepBudget, T: r.t, H: r.control.h, Component: -1,
				Detail: fmt.Sprintf("%d steps attempted", attempts)}
		}
		if err := r.linearise(); err != nil {
			return nil, err
		}
		h, cut := r.propose(tEnd)
		if !cut && h <= r.resolution() {
			return nil, &StopError{Reason: StepTooSmall, T: r.t, H: h, Component: -1, Detail: "below the resolution of t"}
		}
		done, err := r.attempt(h)
		if err != nil {
			return nil, err
		}
		if !done {
			continue
		}
		size := 0.0
		if r.opt.FixedStep == 0 {
			var worst int
			if size, worst = r.estimate(h); !(size < 1) {
				if err := r.errorTooLarge(h, size, worst); err != nil {
					return nil, err
				}
				continue
			}
		}
		t1 := r.t + h
		if cut && h == tEnd-r.t {
			t1 = tEnd
		}
		r.next.T0, r.next.T1 = r.t, t1
		met, again, err := r.landOnKink(h, tEnd)
		if err != nil {
			return nil, err
		}
		if again {
			continue
		}
		r.accepted(h, size, cut)
		if err := r.advance(met); err != nil {
			return nil, err
		}
		return r.seg, nil
	}
}

// attempt computes the stages of a step h into r.next; false if another length is
// to be tried.
func (r *Radau) attempt(h float64) (bool, error) {
	r.setTolerances(h)
	if !r.decompose(h) {
		r.stats.NewtonFailures++
		r.control.rejected = true
		return false, r.shrink(h, 0.5, StopError{Reason: Singular, Component: -1})
	}
	if !r.solveStages(h) {
		return false, r.newtonFailed(h)
	}
	s := r.next
	s.tab, s.h, s.kink = r.tab, h, -1
	copy(s.y0, r.y)
	s.atStage(r.tab.s-1, s.y1)
	return true, nil
}

// estimate returns the error of the step in tolerances and its worst component.
// The difference to the embedded formula passes through (1 − hJ/γ)⁻¹, twice where
// the step may be too long for one passage (Hairer & Wanner II, IV.8).
func (r *Radau) estimate(h float64) (size float64, worst int) {
	n, s := r.n, r.tab.s
	sum := r.newton.d[:n]
	clear(sum)
	for j := range s {
		e := r.tab.errWeights[j] / h
		for k, v := range r.next.z[j*n : (j+1)*n] {
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

// advance makes the step tried the last one, and crosses the kink it ends on.
func (r *Radau) advance(met crossing) error {
	s := r.next
	if r.quad != nil {
		m := len(s.dq)
		for j := range s.tab.s {
			s.atStage(j, r.point)
			r.quad.Integrands(s.T0+s.tab.c[j]*s.h, r.point, s.q[j*m:(j+1)*m])
		}
		s.integrate(s.tab.a[s.tab.s-1][:s.tab.s], s.dq)
	}
	r.stats.Steps++
	r.kinks.arrived(s.T1, s.y1)
	r.t = s.T1
	copy(r.y, s.y1)
	r.seg, r.next = s, r.seg
	r.haveF, r.jacHere, r.history = false, false, true
	if met.kink < 0 {
		return nil
	}
	s.kink = met.kink
	err := r.cross(met)
	copy(s.y1, r.y)
	return err
}
