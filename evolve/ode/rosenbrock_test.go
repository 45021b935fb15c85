package ode

import (
	"math"
	"testing"
)

// timedKPR gives ∂f/∂t.
type timedKPR struct{ kpr }

func (p timedKPR) TimeDerivative(t float64, y, d []float64) {
	u, v, w := y[0], y[1], p.omega
	g, h := w*math.Sin(w*t)/(2*u), math.Sin(t)/(2*v)
	d[0] = p.a*g + p.b*h - w*w*math.Cos(w*t)/(2*u)
	d[1] = p.c*g + p.d*h - math.Cos(t)/(2*v)
}

// The difference for ∂f/∂t is right to ε^(2/3) f/h, ε = 2⁻⁵² t/h, and needs two
// values of f more.
func TestTimeDerivative(t *testing.T) {
	const h = 0.01
	for _, at := range []float64{0.3, 1e3} {
		y := []float64{2, 2.3}
		opt := Options{RTol: 1e-6, ATol: same(2, 1e-6), FixedStep: h}
		var dfdt [2][]float64
		var derivs [2]int
		for i, sys := range []System{mildKPR, timedKPR{mildKPR}} {
			r, err := NewRosenbrock(sys, opt)
			if err != nil {
				t.Fatal(err)
			}
			if err := r.Start(at, y); err != nil {
				t.Fatal(err)
			}
			if _, err := r.Step(at + 1); err != nil {
				t.Fatal(err)
			}
			dfdt[i], derivs[i] = r.dfdt, r.Stats().Derivs
		}
		for i, want := range dfdt[1] {
			got := dfdt[0][i]
			// f is of size 10.
			if d := math.Abs(got - want); d > math.Pow(0x1p-52*at/h, 2./3)*10/h {
				t.Errorf("t = %g: ∂f_%d/∂t = %.12g by difference, %.12g", at, i, got, want)
			}
		}
		if derivs[0] != derivs[1]+2 {
			t.Errorf("t = %g: %d and %d values of f, want 2 more for the difference", at, derivs[0], derivs[1])
		}
	}
}
