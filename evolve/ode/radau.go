package ode

import (
	"fmt"
	"math"
)

// Radau integrates a System with the Radau IIA methods of 3 and 5 stages (Hairer &
// Wanner, Solving Ordinary Differential Equations II, IV.8; Hairer & Wanner 1999,
// J. Comput. Appl. Math. 111, 93).
type Radau struct {
	sys    System
	quad   Quadratures // nil if sys has none
	opt    Options
	n      int
	tab    *tableau
	stats  Stats
	kinks  kinks
	filter *projector // nil without a fast block

	started bool
	t       float64
	y       []float64
	f, jac  []float64 // at (t, y) if haveF; jac maybe of an earlier step
	haveF   bool
	haveJac bool
	jacHere bool // jac is of this (t, y)

	seg, next *Segment // last accepted step, the one being tried
	history   bool     // seg may start the Newton iteration

	// Decompositions of the Newton matrices, for the step luStep with luTab.
	real   *lu[float64]
	pairs  [maxStages / 2]*lu[complex128]
	luStep float64
	luTab  *tableau

	newton  newton
	control control
	err     []float64 // estimate, and scratch
	inv     []float64 // reciprocal tolerances at the present step
	point   []float64 // scratch state
}

// Stats counts the work since NewRadau.
type Stats struct {
	Steps          int // accepted
	Rejected       int // by the error test
	NewtonFailures int // attempts whose stages did not converge
	Derivs         int
	Jacobians      int
	Decompositions int // of one real and (s − 1)/2 complex matrices
	Projections    int
	KinksCrossed   int
}

// NewRadau prepares an integration; Start must follow. The integrals and kinks
// of a sys that implements Quadratures or Piecewise are taken care of. An error
// says which option does not make sense.
func NewRadau(sys System, opt Options) (*Radau, error) {
	n := sys.Dim()
	if n <= 0 {
		return nil, fmt.Errorf("ode: system has %d components, needs at least 1", n)
	}
	if err := opt.check(n); err != nil {
		return nil, err
	}
	r := &Radau{sys: sys, opt: opt, n: n}
	numQuadratures := 0
	if q, ok := sys.(Quadratures); ok {
		r.quad, numQuadratures = q, q.NumQuadratures()
	}
	if p, ok := sys.(Piecewise); ok {
		r.kinks = newKinks(p)
	}
	r.filter = newProjector(opt.Fast)
	vector := func() []float64 { return make([]float64, n) }
	r.y, r.f, r.jac = vector(), vector(), make([]float64, n*n)
	r.err, r.inv, r.point = vector(), vector(), vector()
	r.seg, r.next = newSegment(n, numQuadratures), newSegment(n, numQuadratures)
	r.real = newRealLU(n)
	for k := range r.pairs {
		r.pairs[k] = newComplexLU(n)
	}
	r.newton = newNewton(n, opt.RTol)
	return r, nil
}

// Start sets the state, chooses the branches of a Piecewise system there and
// projects the state onto the slow manifold if Options.Fast is given. The y given
// is not kept.
func (r *Radau) Start(t float64, y []float64) error {
	r.started = false
	if len(y) != r.n {
		return fmt.Errorf("ode: start state has %d values for %d components", len(y), r.n)
	}
	for i, v := range y {
		if math.IsNaN(v) || math.IsInf(v, 0) {
			return &StopError{Reason: NotFinite, T: t, Component: i, Detail: "start state"}
		}
	}
	if math.IsNaN(t) || math.IsInf(t, 0) {
		return &StopError{Reason: NotFinite, T: t, Component: -1, Detail: "start time"}
	}
	if r.tab = radau5(); r.opt.Stages == 3 || r.opt.Stages == 0 && r.opt.RTol > 1e-5 {
		r.tab = radau3()
	}
	r.t = t
	copy(r.y, y)
	r.kinks.freeze(t, r.y)
	r.forget()
	r.control.restart(r.opt.FirstStep)
	if err := r.project(); err != nil {
		return err
	}
	r.started = true
	return nil
}

// Restart continues from another state, after an event or an edit: the same as
// Start, and Stats go on counting.
func (r *Radau) Restart(t float64, y []float64) error { return r.Start(t, y) }

// forget drops all that holds only while f and the path are smooth.
func (r *Radau) forget() {
	r.haveF, r.haveJac, r.jacHere = false, false, false
	r.history = false
	r.newton.restart()
	r.control.smooth = false
}

// T returns the time reached.
func (r *Radau) T() float64 { return r.t }

// State returns the state at T; it is not to be modified.
func (r *Radau) State() []float64 { return r.y }

// Stats returns the work done so far.
func (r *Radau) Stats() Stats { return r.stats }

func (r *Radau) derivs(t float64, y, dy []float64) {
	r.stats.Derivs++
	r.sys.Derivs(t, y, dy)
}

// linearise makes f and a Jacobian available at the state.
func (r *Radau) linearise() error {
	switch {
	case !r.haveJac:
		r.stats.Jacobians++
		r.sys.Jacobian(r.t, r.y, r.f, r.jac)
		r.haveJac, r.jacHere, r.luStep = true, true, 0
		for k, v := range r.jac {
			if math.IsNaN(v) || math.IsInf(v, 0) {
				r.haveJac = false
				return &StopError{Reason: NotFinite, T: r.t, H: r.control.h, Component: k / r.n,
					Detail: fmt.Sprintf("derivative with respect to component %d", k%r.n)}
			}
		}
	case !r.haveF:
		r.derivs(r.t, r.y, r.f)
	default:
		return nil
	}
	r.haveF = true
	if i := notFinite(r.f); i >= 0 {
		r.haveF = false
		return &StopError{Reason: NotFinite, T: r.t, H: r.control.h, Component: i, Detail: "f at an accepted state"}
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

// setTolerances computes the reciprocal tolerances at the state for step h.
func (r *Radau) setTolerances(h float64) {
	odd := 1.0
	if r.opt.OddTime > h {
		odd = r.opt.OddTime / h
	}
	for i, y := range r.y {
		r.inv[i] = 1 / (r.opt.RTol*math.Abs(y) + r.opt.ATol[i])
	}
	if odd > 1 {
		for i, is := range r.opt.Odd {
			if is {
				r.inv[i] /= odd
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
