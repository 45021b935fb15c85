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
	order  float64 // the estimate is of order h^order
	h      float64 // next step wanted, 0: to be guessed
	smooth bool    // hLast and eLast are of the step before
	hLast  float64
	eLast  float64

	fails    int // attempts since the last accepted step
	rejected bool
}

// root is the factor of h that err tolerances stand for.
func (c *control) root(err float64) float64 { return math.Pow(err, 1/c.order) }

// factor returns what an error of err tolerances allows to multiply the step by.
func (c *control) factor(err, safe float64) float64 {
	return min(maxGrowth, max(maxShrink, safe/c.root(err)))
}

// propose returns the next step: the wanted one, cut to end on tEnd or halved so
// that the rest is not tiny; cut reports that.
func (e *engine) propose(tEnd float64) (h float64, cut bool) {
	rest := tEnd - e.t
	if fixed := e.opt.FixedStep; fixed > 0 {
		// Rounding of t may leave a step a little longer.
		if rest <= fixed*(1+1e-9) {
			return rest, true
		}
		return fixed, false
	}
	if e.control.h == 0 {
		e.control.h = e.firstStep(rest)
	}
	if e.opt.MaxStep > 0 {
		e.control.h = min(e.control.h, e.opt.MaxStep)
	}
	switch h = e.control.h; {
	case rest <= h || rest <= 4*e.resolution():
		return rest, true
	case rest < 2*h:
		return rest / 2, true
	}
	return h, false
}

// firstStep guesses a step from the time y takes to change by itself, shortened
// by the tolerance; odd components, which hardly matter, do not count.
func (e *engine) firstStep(rest float64) float64 {
	slope := e.scheme.velocity()
	var d0, d1 float64
	for i, y := range e.y {
		if e.opt.Odd != nil && e.opt.Odd[i] {
			continue
		}
		w := 1 / (e.opt.RTol*math.Abs(y) + e.opt.ATol[i])
		d0 += y * w * y * w
		d1 += slope[i] * w * slope[i] * w
	}
	h := rest
	if d1 > 0 {
		shorter := 0.3 * e.control.root(e.opt.RTol)
		// A state of zeros moves by some tolerances.
		h = min(rest, shorter*math.Sqrt(max(d0, 1)/d1))
	}
	return max(h, e.opt.MinStep)
}

// resolution is the shortest step that t can tell, a few units in its last
// place.
func (e *engine) resolution() float64 { return 4 * 0x1p-52 * math.Abs(e.t) }

// shrink answers a failed attempt of length h with a shorter step, or says that
// none is left to try.
func (e *engine) shrink(h, factor float64, stop StopError) error {
	c := &e.control
	c.fails++
	c.h = h * factor
	if c.h < e.opt.MinStep && h > e.opt.MinStep {
		c.h = e.opt.MinStep
	}
	if c.h >= e.opt.MinStep && c.h > e.resolution() && c.fails <= maxFails && e.opt.FixedStep == 0 {
		return nil
	}
	stop.T, stop.H = e.t, c.h
	if e.opt.FixedStep > 0 {
		stop.H = h
	}
	return &stop
}

// noStages answers an attempt of length h whose stages could not be computed.
func (e *engine) noStages(h, factor float64, stop StopError) error {
	e.stats.NewtonFailures++
	e.control.rejected = true
	return e.shrink(h, factor, stop)
}

// refused answers a stage at which component i of f or of the state is not finite.
func (e *engine) refused(h float64, i int) error {
	return e.noStages(h, 0.25, StopError{Reason: NotFinite, Component: i, Detail: "at a stage of the step"})
}

// errorTooLarge answers an estimate of err ≥ 1 tolerances.
func (e *engine) errorTooLarge(h, err, safe float64, worst int) error {
	factor := e.control.factor(err, safe)
	if e.control.hLast == 0 || math.IsNaN(err) {
		factor = 0.1 // the guess of the first step may be far off
	}
	return e.shrink(h, factor, StopError{Reason: StepTooSmall, Component: worst,
		Detail: fmt.Sprintf("the error is %.2g tolerances", err)})
}

// lengthen chooses the step after one of length h with an error of err
// tolerances; cut says that it was shorter than wanted, and hold that the same
// length again is cheaper than another.
func (e *engine) lengthen(h, err, safe float64, cut, hold bool) {
	c := &e.control
	if e.opt.FixedStep == 0 {
		err = max(err, 1e-10)
		factor := c.factor(err, safe)
		if c.smooth {
			ratio := h / c.hLast * safety / c.root(err*err/c.eLast)
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
		case hold && factor >= 1 && factor <= keepGrowth:
			c.h = h
		default:
			c.h = wanted
		}
		c.h = max(c.h, e.opt.MinStep)
		c.smooth, c.hLast, c.eLast = true, h, max(1e-2, err)
	}
	c.fails, c.rejected = 0, false
}
