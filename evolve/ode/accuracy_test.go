package ode

import (
	"fmt"
	"math"
	"testing"
)

// The true error follows the tolerance. Without stiffness the embedded estimate,
// of order s + 1, exceeds the error of the step and damping keeps steps from adding
// up: below 1 tolerance. In the stiff limit the error of a step is s times the
// estimate (TestEstimateStiffLimit), and the second filter, on a first step and
// after a rejection, lowers that further: 52 tolerances measured, 100 allowed.
func TestErrorFollowsTolerance(t *testing.T) {
	for _, c := range []struct {
		name    string
		sys     kpr
		allowed float64 // tolerances
	}{{"mild", mildKPR, 1}, {"stiff", stiffKPR, 100}} {
		for _, stages := range []int{3, 5} {
			for _, tol := range []float64{1e-4, 1e-6, 1e-8, 1e-10} {
				r := mustRadau(t, c.sys, Options{RTol: tol, ATol: same(2, tol), Stages: stages}, 0, []float64{2, math.Sqrt(6)})
				worst := 0.0
				run(t, r, 10, func(*Segment) {
					var exact [2]float64
					c.sys.exact(r.T(), exact[:])
					worst = max(worst, maxDiff(r.State(), exact[:]))
				})
				t.Logf("%s, %d stages, tolerance %.0e: error %.2g tolerances, %+v", c.name, stages, tol, worst/tol, r.Stats())
				if worst > c.allowed*tol {
					t.Errorf("%s, %d stages, tolerance %g: error %g", c.name, stages, tol, worst)
				}
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

// Values at t = 2 of y₁ and y₂ for ε = 1e-6 from (2, 0): Test Set for IVP Solvers,
// problem VDPOL (Mazzia & Magherini 2008; from memory), confirmed by our run at
// 1e-12 to 1e-13. The flow damps errors: the last steps count, few tolerances.
func TestVanDerPol(t *testing.T) {
	want := []float64{1.706167732170483, -0.8928097010247975}
	for _, tol := range []float64{1e-5, 1e-8, 1e-11} {
		r := mustRadau(t, vanDerPol{1e-6}, Options{RTol: tol, ATol: same(2, tol)}, 0, []float64{2, 0})
		run(t, r, 2, nil)
		d := maxDiff(r.State(), want)
		t.Logf("tolerance %.0e: error %.2g, %+v", tol, d, r.Stats())
		if d > 5*tol {
			t.Errorf("tolerance %g: error %g", tol, d)
		}
	}
}

// Values at t = 1e11: Test Set for IVP Solvers, problem ROBER (from memory),
// confirmed by our run at 1e-10 to 1e-13. y₁ and y₂ are compared relative to
// themselves; both decay like 1/t, so the relative error is of the order of
// tolerances summed over the run's 20 doublings a decade.
func TestRobertson(t *testing.T) {
	want := []float64{0.2083340149701255e-07, 0.8333360770334713e-13, 0.9999999791665050}
	for _, stages := range []int{3, 5} {
		const tol = 1e-8
		r := mustRadau(t, robertson{}, Options{RTol: tol, ATol: []float64{1e-18, 1e-24, 1e-8}, Stages: stages}, 0, []float64{1, 0, 0})
		run(t, r, 1e11, nil)
		for i, y := range r.State() {
			if d := math.Abs(y/want[i] - 1); d > 20*tol {
				t.Errorf("%d stages: component %d off by %g", stages, i, d)
			}
		}
	}
}

// L-stability: a step 1e10 times longer than the decay time forgets the start and
// leaves y = cos t + O(1/k) (the slow solution to first order, exact mathematics).
func TestStrongDecay(t *testing.T) {
	const k = 1e12
	for _, stages := range []int{3, 5} {
		r := mustRadau(t, relax{k}, Options{RTol: 1e-6, ATol: same(1, 1e-6), Stages: stages, FixedStep: 0.01}, 0, []float64{2})
		run(t, r, 1, nil)
		if d := math.Abs(r.State()[0] - math.Cos(1)); d > 2/k {
			t.Errorf("%d stages: off by %g", stages, d)
		}
		// The same under error control from the slow solution: as long as the
		// smooth cosine allows.
		r = mustRadau(t, relax{k}, Options{RTol: 1e-6, ATol: same(1, 1e-6), Stages: stages}, 0, []float64{1})
		run(t, r, 10, nil)
		if d := math.Abs(r.State()[0] - math.Cos(10)); d > 1e-6 {
			t.Errorf("%d stages, controlled: off by %g", stages, d)
		}
		if n := r.Stats().Steps; n > 100 {
			t.Errorf("%d stages, controlled: %d steps", stages, n)
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

// Equal inputs give equal bits, also after another start of the same Radau.
func TestDeterminism(t *testing.T) {
	trace := func(r *Radau) string {
		s := ""
		run(t, r, 1, func(seg *Segment) { s += fmt.Sprintf("%x %x\n", seg.T1, r.State()) })
		return s
	}
	opt := Options{RTol: 1e-7, ATol: same(2, 1e-7)}
	a := mustRadau(t, vanDerPol{1e-6}, opt, 0, []float64{2, 0})
	b := mustRadau(t, vanDerPol{1e-6}, opt, 0, []float64{2, 0})
	first := trace(a)
	if first != trace(b) {
		t.Error("two runs differ")
	}
	steps := a.Stats().Steps
	if err := a.Restart(0, []float64{2, 0}); err != nil {
		t.Fatal(err)
	}
	if first != trace(a) {
		t.Error("the run after Restart differs")
	}
	if a.Stats().Steps != 2*steps {
		t.Errorf("%d steps after Restart, want twice %d", a.Stats().Steps, steps)
	}
}
