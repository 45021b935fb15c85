package ode

import (
	"fmt"
	"math"
	"sync"
)

// SplittingOptions of a [Splitting]. RTol, ATol and Block are required.
type SplittingOptions struct {
	RTol  float64   // relative tolerance of a step, 1e-14…0.1
	ATol  []float64 // absolute tolerance of each component, > 0, as in [Options]; only those of the oscillators are used
	Block float64   // longest time over which Hold's state and the centres of the oscillations are kept, > 0

	FixedStep float64 // > 0: no error control; steps are shortened to fit blocks
	MinStep   float64 // a shorter step stops the run; 0: the resolution of t
	MaxSteps  int     // since NewSplitting; 0: no limit
}

// Splitting integrates a [Split] whose oscillators stay near their centres: f, and
// g at the centre, by exponentials of the linear part and small remainders, what
// else g is by kicks of half a step before and after, and what Hold holds by the
// midpoint rule over blocks of many steps. With ε the size of the oscillation, the error per unit of time is of order
// εh⁸ + ε²h⁶ + ε³h² for f, gh² + g²h for g, and of order Block² for what is held. There are no kinks: a Split is smooth, or its kinks lie in what is held.
//
// The error of a step is estimated at the start of a block and every so often by
// comparing it with two halves, and the step shortened as an oscillation widens:
// so a lock is followed to its loss and beyond, there at more cost than by DOP853.
type Splitting struct {
	sys Split
	opt SplittingOptions
	n   int
	osc []*oscillation

	started bool
	t       float64
	y       []float64
	g, q    []float64 // at the last kick; g less drive
	stats   Stats

	want     float64 // length of step wanted for the next block; 0: the longest
	h        float64 // of the present block
	blockEnd float64
	left     int // steps to blockEnd; 0 outside a block
	since    int // steps since the error was last estimated

	first   bool    // no block has ended since Start
	start   float64 // time and state at the start of the block
	origin  []float64
	slow    []float64 // mean rates over the last block
	drive   []float64 // the part of g that is in the linear flow of the oscillators
	inv     []float64 // reciprocal tolerances
	a, b    []float64 // scratch
	seg     *Segment
	gBefore []float64 // g at the start of seg
}

const (
	// checkEvery is the number of steps after which the error of one is estimated
	// again, at the cost of three.
	checkEvery = 64
	// longestTurn bounds h times the fastest frequency: kicks must sample every
	// oscillation more than twice a turn, or g would act on it as if it stood still.
	longestTurn = 2.5
	// splittingOrder is the power of h by which the step follows the estimate.
	splittingOrder = 6
)

// splittingForm interpolates at the nodes of a collocation of 7 stages, within a
// step of longestTurn to 1e-6 of the oscillation, and samples at the end alone.
var splittingForm = sync.OnceValue(func() *form {
	return newForm(newNodes(1), maxNodes, splittingNodes().basis)
})

var splittingNodes = sync.OnceValue(func() *nodes {
	inner := newNodes(maxNodes)
	return &inner
})

// NewSplitting prepares an integration; Start must follow.
func NewSplitting(sys Split, opt SplittingOptions) (*Splitting, error) {
	n := sys.Dim()
	if n <= 0 {
		return nil, fmt.Errorf("ode: system has %d components, needs at least 1", n)
	}
	common := Options{RTol: opt.RTol, ATol: opt.ATol, MinStep: opt.MinStep, FixedStep: opt.FixedStep, MaxSteps: opt.MaxSteps}
	if err := common.check(n, MethodDOP853); err != nil {
		return nil, err
	}
	if !(opt.Block > 0) || math.IsInf(opt.Block, 0) {
		return nil, fmt.Errorf("ode: Block is %g, must be > 0 and finite: many oscillations, short beside the times of g", opt.Block)
	}
	s := &Splitting{sys: sys, opt: opt, n: n}
	for i, r := range sys.Oscillators() {
		if r[0] < 0 || r[1] <= r[0] || r[1] > n {
			return nil, fmt.Errorf("ode: oscillator %d has components %d to %d of %d", i, r[0], r[1], n)
		}
		s.osc = append(s.osc, newOscillation(sys, i))
	}
	if len(s.osc) == 0 {
		return nil, fmt.Errorf("ode: a splitting needs an oscillator; integrate a system without one by Radau or DOP853")
	}
	vector := func() []float64 { return make([]float64, n) }
	s.y, s.g, s.slow, s.origin, s.inv = vector(), vector(), vector(), vector(), vector()
	s.a, s.b, s.gBefore, s.drive = vector(), vector(), vector(), vector()
	m := sys.NumQuadratures()
	s.q = make([]float64, m)
	s.seg = newSegment(n, maxNodes, 1, m)
	s.seg.finish = s.interpolate
	return s, nil
}

// Start sets the state. The y given is not kept.
func (s *Splitting) Start(t float64, y []float64) error {
	s.started = false
	if len(y) != s.n {
		return fmt.Errorf("ode: start state has %d values for %d components", len(y), s.n)
	}
	if i := notFinite(y); i >= 0 {
		return &StopError{Reason: NotFinite, T: t, Component: i, Detail: "start state"}
	}
	if math.IsNaN(t) || math.IsInf(t, 0) {
		return &StopError{Reason: NotFinite, T: t, Component: -1, Detail: "start time"}
	}
	s.t, s.start, s.left, s.want, s.first = t, t, 0, 0, true
	copy(s.y, y)
	s.started = true
	return nil
}

// Restart continues from another state: the same as Start, and Stats go on
// counting.
func (s *Splitting) Restart(t float64, y []float64) error { return s.Start(t, y) }

// T returns the time reached.
func (s *Splitting) T() float64 { return s.t }

// State returns the state at T; it is not to be modified.
func (s *Splitting) State() []float64 { return s.y }

// Stats returns the work done so far; Derivs counts f, with its remainders.
func (s *Splitting) Stats() Stats {
	st := s.stats
	for _, o := range s.osc {
		st.Derivs += o.evals
	}
	return st
}

// Step takes one step forward that ends at tEnd at the latest, on it exactly if
// it reaches so far. The error is a *StopError if the integration cannot go on;
// the state then stays as it was.
func (s *Splitting) Step(tEnd float64) (*Segment, error) {
	if !s.started {
		return nil, fmt.Errorf("ode: Step before a successful Start")
	}
	if !(tEnd > s.t) || math.IsInf(tEnd, 0) {
		return nil, fmt.Errorf("ode: step end %g must be finite and after t = %g", tEnd, s.t)
	}
	if s.opt.MaxSteps > 0 && s.stats.Steps+s.stats.Rejected >= s.opt.MaxSteps {
		return nil, &StopError{Reason: StepBudget, T: s.t, H: s.h, Component: -1, Detail: fmt.Sprintf("%d steps attempted", s.opt.MaxSteps)}
	}
	if s.left > 0 && s.opt.FixedStep == 0 && s.since >= checkEvery {
		s.since = 0
		if size := s.estimate(); !(size < 1) {
			s.stats.Rejected++
			s.endBlock()
		}
	}
	if s.left == 0 || tEnd < s.blockEnd {
		s.endBlock()
		if err := s.beginBlock(tEnd); err != nil {
			return nil, err
		}
	}
	seg, h := s.seg, s.h
	seg.begin(splittingForm(), s.t, h, s.y)
	seg.T1 = s.t + h
	if s.left == 1 {
		seg.T1 = s.blockEnd
	}
	copy(s.gBefore, s.g)
	copy(seg.dq, s.q)
	copy(seg.y1, s.y)
	kick(seg.y1, 0.5*h, s.g)
	for _, o := range s.osc {
		o.advance(&o.whole, seg.y1[o.from:o.from+o.m])
	}
	s.drifting(seg.y1, s.a, s.q)
	kick(seg.y1, 0.5*h, s.a)
	if i := notFinite(seg.y1); i >= 0 {
		s.left = 0
		return nil, &StopError{Reason: NotFinite, T: s.t, H: h, Component: i}
	}
	for i, v := range s.q {
		seg.q[i] = 0.5 * (seg.dq[i] + v)
		seg.dq[i] = h * seg.q[i]
	}
	copy(s.g, s.a)
	copy(s.y, seg.y1)
	seg.pending = true
	s.t = seg.T1
	s.stats.Steps++
	s.since++
	if s.left--; s.left == 0 {
		s.endBlock()
	}
	return seg, nil
}

// kick adds τ g to y.
func kick(y []float64, tau float64, g []float64) {
	for i, v := range g {
		y[i] += tau * v
	}
}

// interpolate fills in the inside of the step.
func (s *Splitting) interpolate(seg *Segment) {
	for j, theta := range splittingNodes().c {
		z := seg.term(j)
		for i, y := range seg.y0 {
			z[i] = theta * (seg.y1[i] - y)
		}
		if j == maxNodes-1 {
			break
		}
		for _, o := range s.osc {
			y0, w := seg.y0[o.from:o.from+o.m], o.inside
			g0, g1 := s.gBefore[o.from:o.from+o.m], s.g[o.from:o.from+o.m]
			copy(w, y0)
			kick(w, 0.5*theta*seg.h, g0)
			o.advanceBy(theta*seg.h, w)
			for i, v := range w {
				z[o.from+i] = v + 0.5*theta*seg.h*(g0[i]+theta*(g1[i]-g0[i])) - y0[i]
			}
		}
	}
}
