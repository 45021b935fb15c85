package ode

import (
	"errors"
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

// A start 1e-6 off the slow manifold, ω = 1e6, tolerance 1e-10. With projection and
// odd tolerances the run takes steps of the drive's period (a factor 10 above what
// the limit itself needs is allowed); without, it follows the oscillation and the
// budget ends it.
func TestSlowManifold(t *testing.T) {
	const tol, end = 1e-10, 20
	cured := Options{RTol: tol, ATol: same(3, tol/100), MaxSteps: 20000,
		Odd: []bool{false, false, true}, OddTime: 1,
		Fast: []bool{true, true, true}, ProjectionStep: 1e-3}
	start := []float64{0.3, 0.045 + 1e-6, 0}

	r := mustRadau(t, oscillator{1e6, 0.7}, cured, 0, start)
	if d := math.Abs(r.State()[1] - r.State()[0]*r.State()[0]/2); d > 1e-11 {
		t.Errorf("projected start is %g off the manifold", d)
	}
	limit := mustRadau(t, slow{0.7}, Options{RTol: 1e-13, ATol: same(1, 1e-13)}, 0, r.State()[:1])
	run(t, limit, end, nil)
	run(t, r, end, nil)
	t.Logf("%+v", r.Stats())
	// 1/ω² times the drive's accelerations, plus the limit's own 1e-13 a step.
	if d := math.Abs(r.State()[0] - limit.State()[0]); d > 1e-11 {
		t.Errorf("slow state off its limit by %g", d)
	}
	if n := r.Stats().Steps; n > 500 {
		t.Errorf("%d steps, want a few hundred", n)
	}

	plain := cured
	plain.Odd, plain.Fast = nil, nil
	r = mustRadau(t, oscillator{1e6, 0.7}, plain, 0, start)
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
