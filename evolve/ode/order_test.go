package ode

import (
	"math"
	"testing"
)

// solved is a problem with its solution and the integral of its quadrature.
type solved interface {
	System
	Quadratures
	exact(t float64, y []float64)
	integral(t float64) float64
}

// errorsOf are the largest errors over a run.
type errorsOf struct{ ends, quadratures, dense, denseQuadratures float64 }

func fixedStepErrors(t *testing.T, f formula, sys solved, h, end float64) (e errorsOf) {
	var y, exact, part [2]float64
	sys.exact(0, y[:])
	r := f.start(t, sys, Options{RTol: 1e-13, ATol: same(2, 1e-14), FixedStep: h}, 0, y[:])
	q := 0.0
	run(t, r, end, func(seg *Segment) {
		for k := 1; k < 10; k++ {
			at := seg.T0 + (seg.T1-seg.T0)*float64(k)/10
			sys.exact(at, exact[:])
			seg.Eval(at, y[:])
			seg.QuadraturesTo(at, part[:])
			e.dense = max(e.dense, math.Abs(y[0]-exact[0]))
			e.denseQuadratures = max(e.denseQuadratures, math.Abs(q+part[0]-sys.integral(at)))
		}
		q += seg.Quadratures()[0]
		sys.exact(seg.T1, exact[:])
		e.ends = max(e.ends, math.Abs(r.State()[0]-exact[0]))
		e.quadratures = max(e.quadratures, math.Abs(q-sys.integral(seg.T1)))
	})
	return e
}

// The order at the ends of steps and between them, on an autonomous problem and on
// one that depends on time. Slopes over one halving are off the limit by terms of
// the next order in h: ± 0.3 at these steps (common practice, no source), and ± 0.4
// for DOP853, which reaches rounding before its steps are shorter. The exact orders
// are proven by TestOrderConditions.
func TestOrder(t *testing.T) {
	for _, c := range []struct {
		formula
		name                     string
		sys                      solved
		h                        float64
		ends, quadratures, dense int
	}{
		{radauThree, "spin", spin{}, 0.2, 5, 5, 4},
		{radauFive, "spin", spin{}, 1, 9, 9, 6},
		{rodas, "spin", spin{}, 0.1, 5, 5, 5},
		{dop, "spin", spin{}, 0.25, 8, 8, 8},
		{radauThree, "KPR", mildKPR, 0.02, 5, 5, 4},
		{radauFive, "KPR", mildKPR, 0.15, 9, 9, 6},
		{rodas, "KPR", mildKPR, 0.02, 5, 5, 5},
		{dop, "KPR", mildKPR, 0.09, 8, 8, 8},
	} {
		coarse, fine := fixedStepErrors(t, c.formula, c.sys, c.h, 6), fixedStepErrors(t, c.formula, c.sys, c.h/2, 6)
		for _, m := range []struct {
			what         string
			coarse, fine float64
			order        int
		}{
			{"steps", coarse.ends, fine.ends, c.ends},
			{"quadratures", coarse.quadratures, fine.quadratures, c.quadratures},
			{"dense output", coarse.dense, fine.dense, c.dense},
			{"dense quadratures", coarse.denseQuadratures, fine.denseQuadratures, c.dense},
		} {
			slope := math.Log2(m.coarse / m.fine)
			t.Logf("%v, %s, %s: order %.2f (error %.1e)", c.formula, c.name, m.what, slope, m.fine)
			within := 0.3
			if c.formula == dop {
				within = 0.4
			}
			if math.Abs(slope-float64(m.order)) > within {
				t.Errorf("%v, %s, %s: order %.2f, want %d", c.formula, c.name, m.what, slope, m.order)
			}
		}
	}
}

// In the stiff limit k → ∞ the ends of steps are right to h^p/k, p = s for Radau
// (Hairer & Wanner II, IV.15: stiffly accurate collocation on the problem of
// Prothero and Robinson) and 3 for Rosenbrock, and the inside, where no formula is
// stiffly accurate, to h^(s+1) and h⁴ whatever k (both measured here for Rosenbrock,
// no source).
func TestStiffOrder(t *testing.T) {
	sys := kpr{a: -1e6, b: 10, c: 1, d: -1, omega: 5}
	for _, c := range []struct {
		formula
		h           float64
		ends, dense float64
	}{{radauThree, 0.05, 3, 4}, {radauFive, 0.1, 5, 6}, {rodas, 0.025, 3, 4}} {
		coarse, fine := fixedStepErrors(t, c.formula, sys, c.h, 6), fixedStepErrors(t, c.formula, sys, c.h/2, 6)
		ends, dense := math.Log2(coarse.ends/fine.ends), math.Log2(coarse.dense/fine.dense)
		t.Logf("%v: order %.2f at ends (error %.1e), %.2f inside (%.1e)", c.formula, ends, fine.ends, dense, fine.dense)
		if math.Abs(ends-c.ends) > 0.3 || math.Abs(dense-c.dense) > 0.3 {
			t.Errorf("%v: order %.2f at ends and %.2f inside, want %g and %g", c.formula, ends, dense, c.ends, c.dense)
		}
		if fine.ends > 0.01*fine.dense {
			t.Errorf("%v: ends no better than the inside: %g, %g", c.formula, fine.ends, fine.dense)
		}
	}
}

// A segment ends on the states it joins, to the bit.
func TestSegmentEnds(t *testing.T) {
	for _, f := range formulas {
		r := f.start(t, spin{}, Options{RTol: 1e-8, ATol: same(2, 1e-8)}, 0, []float64{1, 0})
		old := r.State()[0]
		run(t, r, 10, func(seg *Segment) {
			var y, q [2]float64
			if seg.Eval(seg.T0, y[:]); y[0] != old {
				t.Errorf("%v: at T0 = %g: %g, state %g", f, seg.T0, y[0], old)
			}
			old = r.State()[0]
			if seg.Eval(seg.T1, y[:]); y[0] != old {
				t.Errorf("%v: at T1 = %g: %g, state %g", f, seg.T1, y[0], old)
			}
			if seg.QuadraturesTo(seg.T1, q[:]); q[0] != seg.Quadratures()[0] {
				t.Errorf("%v: quadratures to T1: %g, whole step %g", f, q[0], seg.Quadratures()[0])
			}
			if seg.T1 != r.T() {
				t.Errorf("%v: segment ends at %g, time is %g", f, seg.T1, r.T())
			}
		})
		if r.T() != 10 {
			t.Errorf("%v: ended at %v, not exactly 10", f, r.T())
		}
	}
}
