package ode

import (
	"fmt"
	"math"
)

// Step takes one step forward that ends at tEnd at the latest, on it exactly if
// the step reaches so far, or on the first kink met. The error is a *StopError if
// the integration cannot go on; the state then stays as it was.
func (e *engine) Step(tEnd float64) (*Segment, error) {
	if !e.started {
		return nil, fmt.Errorf("ode: Step before a successful Start")
	}
	if !(tEnd > e.t) || math.IsInf(tEnd, 0) {
		return nil, fmt.Errorf("ode: step end %g must be finite and after t = %g", tEnd, e.t)
	}
	for {
		attempts := e.stats.Steps + e.stats.Rejected + e.stats.NewtonFailures
		if e.opt.MaxSteps > 0 && attempts >= e.opt.MaxSteps {
			return nil, &StopError{Reason: StepBudget, T: e.t, H: e.control.h, Component: -1,
				Detail: fmt.Sprintf("%d steps attempted", attempts)}
		}
		if err := e.scheme.prepare(); err != nil {
			return nil, err
		}
		h, cut := e.propose(tEnd)
		if !cut && h <= e.resolution() {
			return nil, &StopError{Reason: StepTooSmall, T: e.t, H: h, Component: -1, Detail: "below the resolution of t"}
		}
		done, err := e.try(h)
		if err != nil {
			return nil, err
		}
		if !done {
			continue
		}
		size := 0.0
		if e.opt.FixedStep == 0 {
			var worst int
			if size, worst = e.scheme.estimate(h); !(size < 1) {
				e.stats.Rejected++
				e.control.rejected = true
				if err := e.scheme.reject(h, size, worst); err != nil {
					return nil, err
				}
				continue
			}
		}
		e.next.T1 = e.t + h
		if cut && h == tEnd-e.t {
			e.next.T1 = tEnd
		}
		met, again, err := e.landOnKink(h, tEnd)
		if err != nil {
			return nil, err
		}
		if again {
			continue
		}
		e.scheme.accept(h, size, cut)
		if err := e.advance(met); err != nil {
			return nil, err
		}
		return e.seg, nil
	}
}

// try computes a step h into next; false if another length is to be tried.
func (e *engine) try(h float64) (bool, error) {
	e.setTolerances(h)
	return e.scheme.attempt(h)
}

// advance makes the step tried the last one, and crosses the kink it ends on.
func (e *engine) advance(met crossing) error {
	s := e.next
	if e.quad != nil {
		s.sample(e.quad, e.point)
	}
	e.stats.Steps++
	e.kinks.arrived(s.T1, s.y1)
	e.t = s.T1
	copy(e.y, s.y1)
	e.seg, e.next = s, e.seg
	if met.kink < 0 {
		return nil
	}
	s.complete() // while f is still that of the step
	s.kink = met.kink
	err := e.cross(met)
	copy(s.y1, e.y)
	return err
}
