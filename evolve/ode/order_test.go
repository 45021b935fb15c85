package ode

import (
	"math"
	"testing"
)

// fixedStepErrors returns the largest errors over a fixed-step run of spin from
// 0 to 6.
func fixedStepErrors(t *testing.T, stages int, h float64) (end, quad, dense, denseQuad float64) {
	r := mustRadau(t, spin{}, Options{RTol: 1e-13, ATol: same(2, 1e-14), Stages: stages, FixedStep: h}, 0, []float64{1, 0})
	q := 1.0
	run(t, r, 6, func(seg *Segment) {
		var y, exact, part [2]float64
		for k := 1; k < 10; k++ {
			at := seg.T0 + (seg.T1-seg.T0)*float64(k)/10
			spin{}.exact(at, exact[:])
			seg.Eval(at, y[:])
			seg.QuadraturesTo(at, part[:])
			dense = max(dense, math.Abs(y[0]-exact[0]))
			denseQuad = max(denseQuad, math.Abs(q+part[0]-exact[0]))
		}
		q += seg.Quadratures()[0]
		spin{}.exact(seg.T1, exact[:])
		end = max(end, math.Abs(r.State()[0]-exact[0]))
		quad = max(quad, math.Abs(q-exact[0]))
	})
	return end, quad, dense, denseQuad
}

// Order 2s − 1 at the ends of steps, s + 1 between them. Slopes over one halving
// are off the limit by terms of the next order in h: ± 0.3 at these steps (common
// practice, no source).
func TestOrder(t *testing.T) {
	for _, c := range []struct {
		stages int
		h      float64
	}{{3, 0.2}, {5, 1}} {
		e1, q1, d1, p1 := fixedStepErrors(t, c.stages, c.h)
		e2, q2, d2, p2 := fixedStepErrors(t, c.stages, c.h/2)
		for _, m := range []struct {
			what         string
			coarse, fine float64
			order        int
		}{
			{"steps", e1, e2, 2*c.stages - 1},
			{"quadratures", q1, q2, 2*c.stages - 1},
			{"dense output", d1, d2, c.stages + 1},
			{"dense quadratures", p1, p2, c.stages + 1},
		} {
			slope := math.Log2(m.coarse / m.fine)
			t.Logf("%d stages, %s: order %.2f (error %.1e)", c.stages, m.what, slope, m.fine)
			if math.Abs(slope-float64(m.order)) > 0.3 {
				t.Errorf("%d stages, %s: order %.2f, want %d", c.stages, m.what, slope, m.order)
			}
		}
	}
}

// A segment ends on the states it joins, to the bit.
func TestSegmentEnds(t *testing.T) {
	r := mustRadau(t, spin{}, Options{RTol: 1e-8, ATol: same(2, 1e-8)}, 0, []float64{1, 0})
	old := r.State()[0]
	run(t, r, 10, func(seg *Segment) {
		var y, q [2]float64
		if seg.Eval(seg.T0, y[:]); y[0] != old {
			t.Errorf("at T0 = %g: %g, state %g", seg.T0, y[0], old)
		}
		old = r.State()[0]
		if seg.Eval(seg.T1, y[:]); y[0] != old {
			t.Errorf("at T1 = %g: %g, state %g", seg.T1, y[0], old)
		}
		if seg.QuadraturesTo(seg.T1, q[:]); q[0] != seg.Quadratures()[0] {
			t.Errorf("quadratures to T1: %g, whole step %g", q[0], seg.Quadratures()[0])
		}
		if seg.T1 != r.T() {
			t.Errorf("segment ends at %g, time is %g", seg.T1, r.T())
		}
	})
	if r.T() != 10 {
		t.Errorf("ended at %v, not exactly 10", r.T())
	}
}
