package ode

import (
	"fmt"
	"math"
)

// kinks follows on which side of each kink of a Piecewise system the state is.
// The side is remembered, not read off: at a kink the sign of the function is
// rounding noise.
type kinks struct {
	sys   Piecewise
	side  []int8    // of the branch chosen: +1, −1, 0 not known
	armed []bool    // the function has left zero since the last crossing
	noise []float64 // what it must exceed to have left
	turns []int     // branches changed without a step between

	last  []float64 // scratch of firstCrossing
	ready []bool
}

func newKinks(sys Piecewise) kinks {
	m := sys.Kinks()
	return kinks{sys: sys, side: make([]int8, m), armed: make([]bool, m), noise: make([]float64, m),
		turns: make([]int, m), last: make([]float64, m), ready: make([]bool, m)}
}

func sign(x float64) int8 {
	switch {
	case x > 0:
		return 1
	case x < 0:
		return -1
	}
	return 0
}

func (k *kinks) freeze(t float64, y []float64) {
	if k.sys == nil {
		return
	}
	k.sys.Freeze(t, y)
	for i := range k.side {
		k.side[i] = sign(k.sys.Kink(i, t, y))
		k.armed[i], k.noise[i], k.turns[i] = k.side[i] != 0, 0, 0
	}
}

// arrived notes the end of an accepted step.
func (k *kinks) arrived(t float64, y []float64) {
	for i := range k.side {
		k.turns[i] = 0
		if !k.armed[i] {
			g := k.sys.Kink(i, t, y)
			k.armed[i] = math.Abs(g) > k.noise[i] && sign(g) == k.side[i]
		}
	}
}

// crossing is a kink met by the step tried, at T0 + θh.
type crossing struct {
	kink  int // −1: none
	theta float64
	up    bool
}

// firstCrossing looks for the first change of side seen at the nodes of the step
// tried and locates it on the polynomial.
func (e *engine) firstCrossing() crossing {
	k, seg := &e.kinks, e.next
	copy(k.ready, k.armed)
	first := crossing{kink: -1}
	before := 0.0
	for j := -1; j < seg.form.s; j++ {
		theta := seg.atNode(j, e.point)
		for i := range k.side {
			g := k.sys.Kink(i, seg.T0+theta*seg.h, e.point)
			to := sign(g)
			at := -1.0
			switch {
			case to == 0 || k.turns[i] > 1:
				// On the kink, or both branches lead back to it.
			case k.side[i] == 0:
				at = 0
			case !k.ready[i]:
				if math.Abs(g) > k.noise[i] {
					if k.ready[i] = to == k.side[i]; !k.ready[i] {
						at = 0 // it turned back where it had crossed
					}
				}
			case to != k.side[i]:
				if at = 0; j >= 0 {
					at = root(func(x float64) float64 {
						seg.at(x, e.err)
						return k.sys.Kink(i, seg.T0+x*seg.h, e.err)
					}, before, theta, k.last[i], g)
				}
			}
			k.last[i] = g
			if at >= 0 && (first.kink < 0 || at < first.theta) {
				first = crossing{kink: i, theta: at, up: to > 0}
			}
		}
		if first.kink >= 0 {
			break
		}
		before = theta
	}
	return first
}

// landOnKink shortens the step tried, of length h, to end on the first kink in
// it. With again the step is to be tried anew: a branch changed at its start, or
// the shorter one failed.
func (e *engine) landOnKink(h, tEnd float64) (met crossing, again bool, err error) {
	if len(e.kinks.side) == 0 {
		return crossing{kink: -1}, false, nil
	}
	met = e.firstCrossing()
	if met.kink < 0 {
		return met, false, nil
	}
	if h*met.theta <= max(1e-14*math.Abs(e.t), e.opt.MinStep, 1e-12*h) {
		return met, true, e.turn(met, h)
	}
	k, seg := &e.kinks, e.next
	target := h * met.theta
	value := func(theta float64) float64 {
		seg.at(theta, e.point)
		return k.sys.Kink(met.kink, seg.T0+theta*seg.h, e.point)
	}
	// The shorter step ends off the kink by the error of the long step's
	// polynomial; each repetition takes a secant of its own.
	for range 5 {
		target = min(target, tEnd-e.t)
		if done, err := e.try(target); !done {
			return met, true, err
		}
		const d = 1e-3
		g := value(1)
		move := -d * g / (g - value(1-d))
		if !(math.Abs(move) < 0.1) || math.Abs(move) <= 1e-12+e.resolution()/target {
			break
		}
		target *= 1 + move
	}
	if seg.T1 = e.t + seg.h; seg.h == tEnd-e.t {
		seg.T1 = tEnd
	}
	return met, false, nil
}

// cross takes the branch beyond a kink the state is on and starts afresh there.
func (e *engine) cross(c crossing) error {
	k := &e.kinks
	e.stats.KinksCrossed++
	k.sys.Cross(c.kink, c.up)
	k.side[c.kink] = -1
	if c.up {
		k.side[c.kink] = 1
	}
	e.startAfresh()
	err := e.scheme.project()
	k.armed[c.kink] = false
	// Projection and landing leave it a little off zero on either side.
	k.noise[c.kink] = 4 * math.Abs(k.sys.Kink(c.kink, e.t, e.y))
	return err
}

// turn crosses a kink at the start of the step tried, of length h. If both
// branches lead back to the kink, it is of no consequence where f is continuous,
// and the step is taken on either; where f jumps there is no solution to follow.
func (e *engine) turn(c crossing, h float64) error {
	k := &e.kinks
	k.turns[c.kink]++
	if k.turns[c.kink] > 1 {
		k.sys.Cross(c.kink, c.up)
		e.derivs(e.t, e.y, e.err)
		jump, worst := 0.0, 0
		for i, f := range e.f {
			if d := h * math.Abs(f-e.err[i]) * e.inv[i]; d > jump {
				jump, worst = d, i
			}
		}
		if jump > 1 {
			return &StopError{Reason: StepTooSmall, T: e.t, H: h, Component: worst,
				Detail: fmt.Sprintf("f jumps at kink %d and leads back to it from both sides", c.kink)}
		}
	}
	return e.cross(c)
}
