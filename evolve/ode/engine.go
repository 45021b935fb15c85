package ode

import (
	"fmt"
	"math"
)

// engine is what all methods share: state, steps and their length, kinks,
// integrals and stops. The scheme on it computes one step.
type engine struct {
	scheme scheme
	rhs    RightHandSide
	quad   Quadratures // nil if rhs has none
	opt    Options
	n      int
	stats  Stats
	kinks  kinks

	started bool
	t       float64
	y       []float64
	f       []float64 // at (t, y) if haveF
	haveF   bool

	seg, next *Segment // last accepted step, the one being tried

	control control
	err     []float64 // estimate, and scratch
	inv     []float64 // reciprocal tolerances at the present step
	point   []float64 // scratch state
}

// scheme is one method.
type scheme interface {
	begin()         // a start: choose tables and control.order
	forget()        // the path so far says nothing about what follows
	project() error // move the state onto the slow manifold, if asked to
	// velocity is f, or f without its fast part.
	velocity() []float64
	// prepare makes f, and what else the stages need, available at the state.
	prepare() error
	// attempt computes a step h into next; false if another length is to be tried.
	attempt(h float64) (bool, error)
	// estimate returns the error of the step in tolerances and its worst component.
	estimate(h float64) (size float64, worst int)
	// reject answers an estimate of size ≥ 1.
	reject(h, size float64, worst int) error
	// accept chooses the step after one of length h; cut says that it was
	// shorter than wanted. The state is still the old one.
	accept(h, size float64, cut bool)
}

// newEngine checks the options, and prepares for steps of a form of so many
// terms and nodes at most.
func newEngine(m Method, rhs RightHandSide, opt Options, terms, nodes int) (engine, error) {
	n := rhs.Dim()
	if n <= 0 {
		return engine{}, fmt.Errorf("ode: system has %d components, needs at least 1", n)
	}
	if err := opt.check(n, m); err != nil {
		return engine{}, err
	}
	e := engine{rhs: rhs, opt: opt, n: n}
	numQuadratures := 0
	if q, ok := rhs.(Quadratures); ok {
		e.quad, numQuadratures = q, q.NumQuadratures()
	}
	if p, ok := rhs.(Piecewise); ok {
		e.kinks = newKinks(p)
	}
	vector := func() []float64 { return make([]float64, n) }
	e.y, e.f, e.err, e.inv, e.point = vector(), vector(), vector(), vector(), vector()
	e.seg, e.next = newSegment(n, terms, nodes, numQuadratures), newSegment(n, terms, nodes, numQuadratures)
	return e, nil
}

// Start sets the state, chooses the branches of a Piecewise system there and
// projects the state onto the slow manifold if Options.Fast is given. The y given
// is not kept.
func (e *engine) Start(t float64, y []float64) error {
	e.started = false
	if len(y) != e.n {
		return fmt.Errorf("ode: start state has %d values for %d components", len(y), e.n)
	}
	for i, v := range y {
		if math.IsNaN(v) || math.IsInf(v, 0) {
			return &StopError{Reason: NotFinite, T: t, Component: i, Detail: "start state"}
		}
	}
	if math.IsNaN(t) || math.IsInf(t, 0) {
		return &StopError{Reason: NotFinite, T: t, Component: -1, Detail: "start time"}
	}
	e.t = t
	copy(e.y, y)
	e.kinks.freeze(t, e.y)
	e.control = control{h: e.opt.FirstStep}
	e.scheme.begin()
	e.startAfresh()
	if err := e.scheme.project(); err != nil {
		return err
	}
	e.started = true
	return nil
}

// Restart continues from another state, after an event or an edit: the same as
// Start, and Stats go on counting.
func (e *engine) Restart(t float64, y []float64) error { return e.Start(t, y) }

// startAfresh drops all that holds only while f and the path are smooth.
func (e *engine) startAfresh() {
	e.haveF = false
	e.control.smooth = false
	e.scheme.forget()
}

// T returns the time reached.
func (e *engine) T() float64 { return e.t }

// State returns the state at T; it is not to be modified.
func (e *engine) State() []float64 { return e.y }

// Stats returns the work done so far.
func (e *engine) Stats() Stats { return e.stats }

func (e *engine) derivs(t float64, y, dy []float64) {
	e.stats.Derivs++
	e.rhs.Derivs(t, y, dy)
}

// checkDerivs takes f at the state as known if it is finite.
func (e *engine) checkDerivs() error {
	e.haveF = true
	if i := notFinite(e.f); i >= 0 {
		e.haveF = false
		return &StopError{Reason: NotFinite, T: e.t, H: e.control.h, Component: i, Detail: "f at an accepted state"}
	}
	return nil
}

// notFinite returns the index of the first NaN or infinity, or −1.
func notFinite(v []float64) int {
	for i, x := range v {
		if math.IsNaN(x) || math.IsInf(x, 0) {
			return i
		}
	}
	return -1
}

// setTolerances computes the reciprocal tolerances at the state for step h.
func (e *engine) setTolerances(h float64) {
	odd := 1.0
	if e.opt.OddTime > h {
		odd = e.opt.OddTime / h
	}
	for i, y := range e.y {
		e.inv[i] = 1 / (e.opt.RTol*math.Abs(y) + e.opt.ATol[i])
	}
	if odd > 1 {
		for i, is := range e.opt.Odd {
			if is {
				e.inv[i] /= odd
			}
		}
	}
}

// norm returns the root mean square of v over the tolerances and the component
// that contributes most, or a component that is not finite.
func norm(v, inv []float64) (rms float64, worst int) {
	sum, big := 0.0, -1.0
	for i, x := range v {
		x *= inv[i]
		x *= x
		sum += x
		if x > big || x != x {
			big, worst = x, i
		}
	}
	return math.Sqrt(sum / float64(len(v))), worst
}
