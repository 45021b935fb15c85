package ode

import "math"

// beginBlock finds the centres, holds what Hold holds and chooses the step for a
// stretch that ends at tEnd at the latest.
func (s *Splitting) beginBlock(tEnd float64) error {
	length := math.Min(s.opt.Block, tEnd-s.t)
	for i, y := range s.y {
		s.inv[i] = 1 / (s.opt.RTol*math.Abs(y) + s.opt.ATol[i])
	}
	copy(s.a, s.y)
	longest := math.Inf(1)
	for _, o := range s.osc {
		block := s.a[o.from : o.from+o.m]
		if err := o.settle(block, s.inv[o.from:o.from+o.m]); err != nil {
			return s.placed(err)
		}
		s.stats.Jacobians++
		copy(block, o.centre)
		longest = math.Min(longest, longestTurn/o.radius)
	}
	if s.first {
		// No mean over an oscillation is known yet: the rates at the centre, held
		// at the start, which an oscillation leaves right but for its square.
		s.sys.Hold(s.t, s.a)
		s.sys.Drift(s.a, s.slow, s.q)
	}
	for i := range s.a {
		s.b[i] = s.y[i] + 0.5*length*s.slow[i]
	}
	for _, o := range s.osc {
		copy(s.b[o.from:o.from+o.m], o.centre)
	}
	s.sys.Hold(s.t+0.5*length, s.b)
	s.sys.Drift(s.b, s.g, s.q)
	if i := notFinite(s.g); i >= 0 {
		return &StopError{Reason: NotFinite, T: s.t, H: s.h, Component: i}
	}
	clear(s.drive)
	for _, o := range s.osc {
		copy(o.drift, s.g[o.from:o.from+o.m])
		copy(s.drive[o.from:], o.drift)
	}
	h, err := s.choose(length, longest)
	if err != nil {
		return err
	}
	s.left = int(math.Ceil(length / h * (1 - 1e-12)))
	s.h = h
	s.blockEnd = s.t + length
	if length == tEnd-s.t {
		s.blockEnd = tEnd
	}
	s.start = s.t
	copy(s.origin, s.y)
	s.drifting(s.y, s.g, s.q)
	return nil
}

// drifting computes g at y less what the oscillations already have of it, and the
// integrands.
func (s *Splitting) drifting(y, g, q []float64) {
	s.sys.Drift(y, g, q)
	for i, v := range s.drive {
		g[i] -= v
	}
}

// endBlock notes the mean rates of a block that ends here.
func (s *Splitting) endBlock() {
	if s.t > s.start && !s.ended() {
		for i, y := range s.y {
			s.slow[i] = (y - s.origin[i]) / (s.t - s.start)
		}
		s.first = false
	}
	s.left, s.since, s.start = 0, 0, s.t
}

// ended reports that no block is open.
func (s *Splitting) ended() bool { return s.start == s.t }

// choose returns a step that divides length and whose error passes, and prepares
// the exponentials for it.
func (s *Splitting) choose(length, longest float64) (float64, error) {
	h := longest
	if s.want > 0 {
		h = math.Min(h, s.want)
	}
	if s.opt.FixedStep > 0 {
		h = s.opt.FixedStep
	}
	for {
		h = length / math.Ceil(length/h*(1-1e-12))
		if h < s.opt.MinStep && h < length || s.t+h == s.t {
			return 0, &StopError{Reason: StepTooSmall, T: s.t, H: h, Component: s.osc[0].from}
		}
		s.prepare(h)
		if s.opt.FixedStep > 0 {
			return h, nil
		}
		size := s.estimate()
		if size < 1 {
			s.want = h * math.Min(2, 0.9*math.Pow(math.Max(size, 1e-12), -1./splittingOrder))
			return h, nil
		}
		if math.IsNaN(size) {
			size = math.Inf(1)
		}
		s.stats.Rejected++
		h *= math.Max(0.2, 0.9*math.Pow(size, -1./splittingOrder))
	}
}

func (s *Splitting) prepare(h float64) {
	for _, o := range s.osc {
		o.prepare(&o.whole, h)
		o.prepare(&o.half, 0.5*h)
		s.stats.Decompositions++
	}
}

// estimate returns the difference, in tolerances, of one step by f from here to
// two halves: the greatest of the oscillators.
func (s *Splitting) estimate() float64 {
	worst := 0.0
	for _, o := range s.osc {
		y := s.y[o.from : o.from+o.m]
		copy(o.one, y)
		copy(o.two, y)
		o.advance(&o.whole, o.one)
		o.advance(&o.half, o.two)
		o.advance(&o.half, o.two)
		for i, v := range o.two {
			o.one[i] -= v
		}
		size, _ := norm(o.one, s.inv[o.from:o.from+o.m])
		if !(size <= worst) {
			worst = size
		}
	}
	return worst
}

// placed tells a StopError when it happened.
func (s *Splitting) placed(err error) error {
	if stop, ok := err.(*StopError); ok {
		stop.T, stop.H = s.t, s.want
	}
	return err
}
