package ode

import (
	"math"
	"testing"
)

// feedback is a moon whose eccentricity a resonance raises and its tide lowers,
// the tide heating a mantle that convection cools, both scaled to the steady state
// (x = e, y = T, k₂/Q ∝ yⁿ, flux ∝ y^m; Ojakangas & Stevenson 1986, Icarus 66, 341):
//
//	d(x²)/dt = (1 − x² yⁿ)/τ_e,  dy/dt = (x² yⁿ − y^m)/τ_T
//
// τ_e is the damping time of e². Linear in a = x² − 1 and b = y − 1:
//
//	a' = −(a + nb)/τ_e,  b' = (a + (n − m) b)/τ_T
//	trace = (n − m)/τ_T − 1/τ_e = (n − m − p)/τ_T,  p = τ_T/τ_e
//	det   = m/(τ_e τ_T)
//
// so it oscillates with growing amplitude iff n > m + p, and at onset with the
// angular frequency √(m/(τ_e τ_T)).
type feedback struct{ n, m, tauE, tauT float64 }

func (feedback) Dim() int { return 2 }
func (p feedback) Derivs(t float64, y, dy []float64) {
	heat := y[0] * y[0] * math.Pow(y[1], p.n)
	dy[0] = (1 - heat) / (2 * y[0] * p.tauE)
	dy[1] = (heat - math.Pow(y[1], p.m)) / p.tauT
}
func (p feedback) Jacobian(t float64, y, dy, j []float64) {
	p.Derivs(t, y, dy)
	x, k := y[0], math.Pow(y[1], p.n)
	j[0] = -(1/(x*x) + k) / (2 * p.tauE)
	j[1] = -x * p.n * k / y[1] / (2 * p.tauE)
	j[2] = 2 * x * k / p.tauT
	j[3] = (p.n*x*x*k - p.m*math.Pow(y[1], p.m)) / y[1] / p.tauT
}

// oscillate starts 1e-4 off the steady state and returns the growth rate of the
// maxima of y and the angular frequency, from nine cycles.
func oscillate(t *testing.T, p feedback) (growth, frequency float64) {
	omega := math.Sqrt(p.m / (p.tauE * p.tauT))
	r := mustRadau(t, p, Options{RTol: 1e-10, ATol: same(2, 1e-12)}, 0, []float64{1, 1 + 1e-4})
	f := make([]float64, 2)
	maxima := locate(t, r, 10.5*2*math.Pi/omega, []Event{{Name: "maximum of y", Direction: -1,
		Value: func(t float64, y []float64) float64 { p.Derivs(t, y, f); return f[1] }}})
	first, last := maxima[0], maxima[9]
	span := last.T - first.T
	return math.Log((last.Y[1]-1)/(first.Y[1]-1)) / span, 9 * 2 * math.Pi / span
}

func TestThermalOscillation(t *testing.T) {
	const m, tauE, tauT = 3.0, 2.0, 5.0 // p = 2.5
	const p = tauT / tauE
	for _, excess := range []float64{-0.2, 0, 0.2} {
		sys := feedback{n: m + p + excess, m: m, tauE: tauE, tauT: tauT}
		growth, frequency := oscillate(t, sys)
		trace, det := excess/tauT, m/(tauE*tauT)
		// The linear rates, to the amplitude (1e-4, up to 3e-3 after growth) squared
		// times the powers of n.
		if d := math.Abs(growth - trace/2); d > 1e-3*math.Sqrt(det) {
			t.Errorf("n − m − p = %g: growth %g, want %g", excess, growth, trace/2)
		}
		if excess != 0 && math.Signbit(growth) != math.Signbit(excess) {
			t.Errorf("n − m − p = %g: growth %g", excess, growth)
		}
		want := math.Sqrt(det - trace*trace/4)
		if d := math.Abs(frequency/want - 1); d > 0.01 {
			t.Errorf("n − m − p = %g: frequency %g, want %g", excess, frequency, want)
		}
	}
}
