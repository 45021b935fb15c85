package ode

import (
	"fmt"
	"math"
	"testing"
)

// The true error follows the tolerance over the useful range of each method.
//
// Without stiffness Radau's embedded estimate, of order s + 1, exceeds the error of
// the step, and damping keeps steps from adding up: below 1 tolerance. The error of
// a step of Rosenbrock and DOP853 is of one order more than the estimate, a
// fraction of about h of it, and 1/h of them add up within the damping time 1: some
// tolerances, whatever the tolerance; 10 allowed.
//
// In the stiff limit the error of a step of Radau is s times the estimate
// (TestEstimateStiffLimit), and the second filter, on a first step and after a
// rejection, lowers that further: 52 tolerances measured, 100 allowed.
func TestErrorFollowsTolerance(t *testing.T) {
	for _, c := range []struct {
		name string
		sys  kpr
		formula
		loosest, tightest float64
		allowed           float64 // tolerances
	}{
		{"mild", mildKPR, radauThree, 1e-4, 1e-10, 1},
		{"mild", mildKPR, radauFive, 1e-4, 1e-12, 1},
		{"mild", mildKPR, rodas, 1e-4, 1e-10, 10},
		{"mild", mildKPR, dop, 1e-5, 1e-12, 10},
		{"stiff", stiffKPR, radauThree, 1e-4, 1e-10, 100},
		{"stiff", stiffKPR, radauFive, 1e-4, 1e-12, 100},
		{"stiff", stiffKPR, rodas, 1e-4, 1e-10, 100},
	} {
		for tol := c.loosest; tol > 0.9*c.tightest; tol /= 10 {
			r := c.start(t, c.sys, Options{RTol: tol, ATol: same(2, tol)}, 0, []float64{2, math.Sqrt(6)})
			worst := 0.0
			run(t, r, 10, func(*Segment) {
				var exact [2]float64
				c.sys.exact(r.T(), exact[:])
				worst = max(worst, maxDiff(r.State(), exact[:]))
			})
			t.Logf("%s, %v, tolerance %.0e: error %.2g tolerances, %+v", c.name, c.formula, tol, worst/tol, r.Stats())
			if worst > c.allowed*tol {
				t.Errorf("%s, %v, tolerance %g: error %g", c.name, c.formula, tol, worst)
			}
			// An estimate that says nothing would make steps far too short.
			if worst < 1e-5*tol {
				t.Errorf("%s, %v, tolerance %g: error only %g", c.name, c.formula, tol, worst)
			}
		}
	}
}

// With y' = −k(y − φ) + φ′, φ = t^(s+1), k → ∞, one step of 1 from the exact start
// ends off by Π(1 − c_i)/k, and the estimate is Σ e_i c_i^(s+1)/k: a ratio of −s,
// for both methods (computed from the tables, no source).
func TestEstimateStiffLimit(t *testing.T) {
	for name, tab := range tableaus() {
		s := tab.s
		err, est := 1.0, 0.0
		for i, c := range tab.c[:s] {
			if i < s-1 {
				err *= 1 - c
			}
			est += tab.errWeights[i] * math.Pow(c, float64(s+1))
		}
		// est cancels 28 to 0.01: rounding 28e-16/0.01·s.
		if d := err/est + float64(s); math.Abs(d) > 1e-11 {
			t.Errorf("%s: ratio of error and estimate %g", name, err/est)
		}
	}
}

// L-stability: a step 1e10 times longer than the decay time forgets the start and
// leaves y = cos t + O(1/k) (the slow solution to first order, exact mathematics).
func TestStrongDecay(t *testing.T) {
	const k = 1e12
	for _, f := range stiffFormulas {
		r := f.start(t, relax{k}, Options{RTol: 1e-6, ATol: same(1, 1e-6), FixedStep: 0.01}, 0, []float64{2})
		run(t, r, 1, nil)
		if d := math.Abs(r.State()[0] - math.Cos(1)); d > 2/k {
			t.Errorf("%v: off by %g", f, d)
		}
		// The same under error control from the slow solution: as long as the
		// smooth cosine allows.
		r = f.start(t, relax{k}, Options{RTol: 1e-6, ATol: same(1, 1e-6)}, 0, []float64{1})
		run(t, r, 10, nil)
		if d := math.Abs(r.State()[0] - math.Cos(10)); d > 1e-6 {
			t.Errorf("%v, controlled: off by %g", f, d)
		}
		if n := r.Stats().Steps; n > 100 {
			t.Errorf("%v, controlled: %d steps", f, n)
		}
	}
}

// The number of stages left free follows RTol.
func TestStagesChosen(t *testing.T) {
	for _, c := range []struct {
		tol    float64
		stages int
	}{{1e-4, 3}, {1e-8, 5}} {
		stages := 0
		r := mustRadau(t, spin{}, Options{RTol: c.tol, ATol: same(2, c.tol)}, 0, []float64{1, 0})
		run(t, r, 3, func(seg *Segment) { stages = seg.form.s })
		if stages != c.stages {
			t.Errorf("RTol %g: %d stages, want %d", c.tol, stages, c.stages)
		}
	}
}

// Where steps grow over several radians of the drive of stiffKPR, five stages fail to
// converge twice running at a loose tolerance: three take over, and give back.
func TestStagesFollowNewton(t *testing.T) {
	r := mustRadau(t, stiffKPR, Options{RTol: 1e-6, ATol: same(2, 1e-6)}, 0, []float64{2, math.Sqrt(6)})
	down, up, last := 0, 0, 5
	run(t, r, 10, func(seg *Segment) {
		if seg.form.s < last {
			down++
		}
		if seg.form.s > last {
			up++
		}
		last = seg.form.s
	})
	if down == 0 || up == 0 {
		t.Errorf("%d changes to three stages and %d to five, want some of both", down, up)
	}
}

// Equal inputs give equal bits, also after another start of the same integrator.
func TestDeterminism(t *testing.T) {
	trace := func(r Integrator) string {
		s := ""
		run(t, r, 1, func(seg *Segment) { s += fmt.Sprintf("%x %x\n", seg.T1, r.State()) })
		return s
	}
	opt := Options{RTol: 1e-7, ATol: same(2, 1e-7)}
	for _, f := range formulas {
		a := f.start(t, mildKPR, opt, 0, []float64{2, 2})
		b := f.start(t, mildKPR, opt, 0, []float64{2, 2})
		first := trace(a)
		if first != trace(b) {
			t.Errorf("%v: two runs differ", f)
		}
		steps := a.Stats().Steps
		if err := a.Restart(0, []float64{2, 2}); err != nil {
			t.Fatal(err)
		}
		if first != trace(a) {
			t.Errorf("%v: the run after Restart differs", f)
		}
		if a.Stats().Steps != 2*steps {
			t.Errorf("%v: %d steps after Restart, want twice %d", f, a.Stats().Steps, steps)
		}
	}
}
