package ode

import (
	"fmt"
	"math"
)

const (
	safety     = 0.9
	maxGrowth  = 8.0
	maxShrink  = 0.2
	keepGrowth = 1.2 // a step may stay as it is, with its matrices, if it could grow by up to this
	maxFails   = 100 // consecutive attempts; at 0.5 or less each, no scale is out of reach
)

// control chooses the length of steps: the predictive controller of Gustafsson
// 1994, ACM Trans. Math. Softw. 20, 496, as in Hairer & Wanner II, IV.8.
type control struct {
	h      float64 // next step wanted, 0: to be guessed
	smooth bool    // hLast and errLast are of the step before
	hLast  float64
	eLast  float64

	fails    int // attempts since the last accepted step
	rejected bool
	poor     int // consecutive failures of the iteration
	good     int // consecutive fast contractions
}

func (c *control) restart(first float64) { *c = control{h: first} }

// propose returns the next step: the wanted one, cut to end on tEnd or halved so
// that the rest is not tiny; cut reports that.
func (r *Radau) propose(tEnd float64) (h float64, cut bool) {
	rest := tEnd - r.t
	if fixed := r.opt.FixedStep; fixed > 0 {
		// Rounding of t may leave a step a little longer.
		if rest <= fixed*(1+1e-9) {
			return rest, true
		}
		return fixed, false
	}
	if r.control.h == 0 {
		r.control.h = r.firstStep(rest)
	}
	if r.opt.MaxStep > 0 {
		r.control.h = min(r.control.h, r.opt.MaxStep)
	}
	switch h = r.control.h; {
	case rest <= h || rest <= 4*r.resolution():
		return rest, true
	case rest < 2*h:
		return rest / 2, true
	}
	return h, false
}

// firstStep guesses a step from the time y takes to change by itself, shortened
// by the tolerance; odd components, which hardly matter, do not count.
func (r *Radau) firstStep(rest float64) float64 {
	slope := r.f
	if r.filter != nil {
		slope = r.filter.slow // f itself is rounding noise times the fast frequency
	}
	var d0, d1 float64
	for i, y := range r.y {
		if r.opt.Odd != nil && r.opt.Odd[i] {
			continue
		}
		w := 1 / (r.opt.RTol*math.Abs(y) + r.opt.ATol[i])
		d0 += y * w * y * w
		d1 += slope[i] * w * slope[i] * w
	}
	h := rest
	if d1 > 0 {
		shorter := 0.3 * math.Pow(r.opt.RTol, 1/float64(r.tab.s+1))
		// A state of zeros moves by some tolerances.
		h = min(rest, shorter*math.Sqrt(max(d0, 1)/d1))
	}
	return max(h, r.opt.MinStep)
}

// resolution is the shortest step that t can tell, a few units in its last
// place.
func (r *Radau) resolution() float64 { return 4 * 0x1p-52 * math.Abs(r.t) }

// shrink answers a failed attempt of length h with a shorter step, or says that
// none is left to try.
func (r *Radau) shrink(h, factor float64, stop StopError) error {
	c := &r.control
	c.fails++
	c.h = h * factor
	if c.h < r.opt.MinStep && h > r.opt.MinStep {
		c.h = r.opt.MinStep
	}
	if c.h >= r.opt.MinStep && c.h > r.resolution() && c.fails <= maxFails && r.opt.FixedStep == 0 {
		return nil
	}
	stop.T, stop.H = r.t, c.h
	if r.opt.FixedStep > 0 {
		stop.H = h
	}
	return &stop
}

// newtonFailed answers stages that did not converge: a Jacobian of this state
// first, a shorter step then.
func (r *Radau) newtonFailed(h float64) error {
	c, nt := &r.control, &r.newton
	r.stats.NewtonFailures++
	c.rejected = true
	nt.restart()
	r.chooseStages(false)
	if !r.jacHere && !nt.outside {
		c.fails++
		r.haveJac = false
		return nil
	}
	stop := StopError{Reason: StepTooSmall, Component: nt.worst, Detail: "the Newton iteration does not converge"}
	if nt.outside {
		stop = StopError{Reason: NotFinite, Component: nt.worst, Detail: "at a stage of the step"}
	}
	return r.shrink(h, nt.shorten, stop)
}

// factor returns what an error estimate of err tolerances allows to multiply the
// step by, and more carefully after an expensive Newton iteration.
func (r *Radau) factor(err float64) float64 {
	most := float64(r.tab.iterations)
	safe := safety * (1 + 2*most) / (float64(r.newton.iterations) + 2*most)
	return min(maxGrowth, max(maxShrink, safe/r.root(err)))
}

func (r *Radau) root(err float64) float64 { return math.Pow(err, 1/float64(r.tab.s+1)) }

// errorTooLarge answers an estimate of err ≥ 1 tolerances.
func (r *Radau) errorTooLarge(h, err float64, worst int) error {
	r.stats.Rejected++
	r.control.rejected = true
	factor := r.factor(err)
	if r.stats.Steps == 0 || math.IsNaN(err) {
		factor = 0.1
	}
	r.haveJac = r.jacHere
	return r.shrink(h, factor, StopError{Reason: StepTooSmall, Component: worst,
		Detail: fmt.Sprintf("the error is %.2g tolerances", err)})
}

// accepted chooses the step after one of length h with an error of err
// tolerances; cut says that it was shorter than wanted.
func (r *Radau) accepted(h, err float64, cut bool) {
	c := &r.control
	r.chooseStages(true)
	keepJac := r.newton.theta <= slowContraction
	if r.opt.FixedStep == 0 {
		err = max(err, 1e-10)
		factor := r.factor(err)
		if c.smooth {
			ratio := h / c.hLast * safety / r.root(err*err/c.eLast)
			factor = min(factor, max(maxShrink, ratio))
		}
		wanted := h * factor
		if c.rejected {
			wanted = min(wanted, h)
		}
		switch {
		case cut:
			// The step cut had been found right by the one before.
			c.h = max(c.h, wanted)
		case keepJac && factor >= 1 && factor <= keepGrowth:
			c.h = h
		default:
			c.h = wanted
		}
		c.h = max(c.h, r.opt.MinStep)
		c.smooth, c.hLast, c.eLast = true, h, max(1e-2, err)
	}
	c.fails, c.rejected = 0, false
	r.haveJac = keepJac
}

// chooseStages follows the Newton iteration when the number of stages is free:
// two failures running mean that steps of five stages are too long for it, and
// steps of three are taken until the contraction is fast again.
func (r *Radau) chooseStages(converged bool) {
	if r.opt.Stages != 0 || r.opt.RTol > 1e-5 {
		return
	}
	c := &r.control
	if converged {
		c.poor = 0
	} else {
		c.poor++
	}
	if converged && r.newton.theta < 0.01 {
		c.good++
	} else {
		c.good = 0
	}
	switch {
	case r.tab.s == 5 && c.poor >= 2:
		r.tab = radau3()
	case r.tab.s == 3 && c.good >= 4:
		r.tab = radau5()
	default:
		return
	}
	c.poor, c.good, c.smooth = 0, 0, false
}
