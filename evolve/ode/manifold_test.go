package ode

import (
	"errors"
	"fmt"
	"math"
	"testing"
)

// oscillator is a fast pair (u, v) about s²/2 that gives to a driven slow s what it
// takes, without damping:
//
//	s' = cos t − s − aωv,  u' = ωv,  v' = −ω(u − s²/2).
//
// v multiplies ω: it is the odd variable. With the fast motion absent u = s²/2,
// and s + au moves with cos t − s: (1 + as) s' = cos t − s, up to O(1/ω²).
type oscillator struct{ omega, a float64 }

func (oscillator) Dim() int { return 3 }
func (p oscillator) Derivs(t float64, y, dy []float64) {
	s, u, v := y[0], y[1], y[2]
	dy[0] = math.Cos(t) - s - p.a*p.omega*v
	dy[1] = p.omega * v
	dy[2] = -p.omega * (u - s*s/2)
}
func (p oscillator) Jacobian(t float64, y, dy, j []float64) {
	p.Derivs(t, y, dy)
	copy(j, []float64{-1, 0, -p.a * p.omega, 0, 0, p.omega, p.omega * y[0], -p.omega, 0})
}

// slow is its limit.
type slow struct{ a float64 }

func (slow) Dim() int { return 1 }
func (p slow) Derivs(t float64, y, dy []float64) {
	dy[0] = (math.Cos(t) - y[0]) / (1 + p.a*y[0])
}
func (p slow) Jacobian(t float64, y, dy, j []float64) {
	p.Derivs(t, y, dy)
	j[0] = -(1 + p.a*dy[0]) / (1 + p.a*y[0])
}

// A start 1e-6 off the slow manifold, ω = 1e6. With projection and odd tolerances
// the run takes steps of the drive's period (a factor 10 above what the limit itself
// needs is allowed); without, and tight tolerances, it follows the oscillation and
// the budget ends it.
func TestSlowManifold(t *testing.T) {
	for _, c := range []struct {
		formula
		tol    float64
		error  float64
		stalls bool // without the cures
	}{
		// 1/ω² times the drive's accelerations, plus the limit's own 1e-13 a step.
		{formula{}, 1e-10, 1e-11, true},
		// Some tolerances, as without the oscillation (TestErrorFollowsTolerance).
		{rodas, 1e-8, 1e-7, true},
		{rodas, 1e-5, 1e-4, false},
	} {
		t.Run(fmt.Sprintf("%v, %.0e", c.formula, c.tol), func(t *testing.T) { testSlowManifold(t, c.formula, c.tol, c.error, c.stalls) })
	}
}

func testSlowManifold(t *testing.T, f formula, tol, allowed float64, stalls bool) {
	const end = 20
	cured := Options{RTol: tol, ATol: same(3, tol/100), MaxSteps: 20000,
		Odd: []bool{false, false, true}, OddTime: 1,
		Fast: []bool{true, true, true}, ProjectionStep: 1e-3}
	start := []float64{0.3, 0.045 + 1e-6, 0}

	r := f.start(t, oscillator{1e6, 0.7}, cured, 0, start)
	if d := math.Abs(r.State()[1] - r.State()[0]*r.State()[0]/2); d > 1e-11 {
		t.Errorf("projected start is %g off the manifold", d)
	}
	limit := mustRadau(t, slow{0.7}, Options{RTol: 1e-13, ATol: same(1, 1e-13)}, 0, r.State()[:1])
	run(t, limit, end, nil)
	run(t, r, end, nil)
	t.Logf("%+v", r.Stats())
	if d := math.Abs(r.State()[0] - limit.State()[0]); d > allowed {
		t.Errorf("slow state off its limit by %g", d)
	}
	alone := f.start(t, slow{0.7}, Options{RTol: tol, ATol: []float64{tol / 100}}, 0, start[:1])
	run(t, alone, end, nil)
	if n, m := r.Stats().Steps, alone.Stats().Steps; n > 10*m {
		t.Errorf("%d steps, the limit takes %d", n, m)
	}
	if !stalls {
		return
	}

	plain := cured
	plain.Odd, plain.Fast = nil, nil
	r = f.start(t, oscillator{1e6, 0.7}, plain, 0, start)
	var err error
	for err == nil && r.T() < end {
		_, err = r.Step(end)
	}
	var stop *StopError
	if !errors.As(err, &stop) || stop.Reason != StepBudget || r.T() > end/10 {
		t.Errorf("without projection: t = %g, error %v; expected the budget to end it early", r.T(), err)
	}
}

// The tolerance of odd components is a real one: kept at h = OddTime, ten times
// looser at a tenth of it.
func TestOddTolerance(t *testing.T) {
	opt := Options{RTol: 1e-6, ATol: []float64{1e-3, 1e-3}, Odd: []bool{false, true}, OddTime: 1}
	r := mustRadau(t, spin{}, opt, 0, []float64{0, 0})
	for _, c := range []struct{ h, want float64 }{{2, 1e-3}, {1, 1e-3}, {0.1, 1e-2}} {
		r.setTolerances(c.h)
		if math.Abs(1/r.inv[0]-1e-3) > 1e-18 || math.Abs(1/r.inv[1]-c.want) > 1e-17 {
			t.Errorf("h = %g: tolerances %g and %g, want 1e-3 and %g", c.h, 1/r.inv[0], 1/r.inv[1], c.want)
		}
	}
}
