package ode

import (
	"math"
	"testing"
)

// chain is 11 coupled states with a stiff and an oscillating part, quadratures and
// one kink that is never reached.
type chain struct{}

func (chain) Dim() int { return 11 }
func (chain) Derivs(t float64, y, dy []float64) {
	for i := range 11 {
		left, right := y[(i+10)%11], y[(i+1)%11]
		dy[i] = -float64(1+i*i*i)*(y[i]-0.1*left*right) + math.Cos(t)
	}
}
func (c chain) Jacobian(t float64, y, dy, j []float64) {
	c.Derivs(t, y, dy)
	clear(j)
	for i := range 11 {
		k, l, r := float64(1+i*i*i), (i+10)%11, (i+1)%11
		j[i*11+i] = -k
		j[i*11+l] = 0.1 * k * y[r]
		j[i*11+r] = 0.1 * k * y[l]
	}
}
func (chain) NumQuadratures() int                        { return 2 }
func (chain) Integrands(t float64, y, q []float64)       { q[0], q[1] = y[0], y[1]*y[2] }
func (chain) Freeze(t float64, y []float64)              {}
func (chain) Kinks() int                                 { return 1 }
func (chain) Kink(i int, t float64, y []float64) float64 { return y[0] + 100 }
func (chain) Cross(i int, up bool)                       {}

func startChain(tb testing.TB, f formula) Integrator {
	opt := Options{RTol: 1e-8, ATol: same(11, 1e-8)}
	if f != dop {
		opt.Fast = make([]bool, 11)
		opt.Fast[3], opt.Fast[4] = true, true
		opt.Odd, opt.OddTime, opt.ProjectionStep = opt.Fast, 1, 1e-3
	}
	return f.start(tb, chain{}, opt, 0, same(11, 0.1))
}

func TestStepDoesNotAllocate(t *testing.T) {
	for _, f := range append([]formula{{}}, formulas...) {
		r := startChain(t, f)
		e := NewEvents([]Event{{Name: "never", Value: func(t float64, y []float64) float64 { return y[0] + 50 }}})
		e.Reset(r.T(), r.State())
		y, q := make([]float64, 11), make([]float64, 2)
		n := testing.AllocsPerRun(200, func() {
			seg, err := r.Step(1e9)
			if err != nil {
				t.Fatal(err)
			}
			mid := (seg.T0 + seg.T1) / 2
			seg.Eval(mid, y)
			seg.QuadraturesTo(mid, q)
			if len(e.Locate(seg)) != 0 {
				t.Fatal("an event that cannot occur did")
			}
		})
		if n != 0 {
			t.Errorf("%v: %g allocations a step", f, n)
		}
	}
}

// Nor does landing on a kink.
func TestKinkDoesNotAllocate(t *testing.T) {
	for _, f := range formulas {
		sys := &tide{levels: []float64{0.5, -0.3}}
		r := f.start(t, sys, Options{RTol: 1e-8, ATol: same(2, 1e-8)}, 0, []float64{0, 0})
		n := testing.AllocsPerRun(100, func() {
			if _, err := r.Step(1e9); err != nil {
				t.Fatal(err)
			}
		})
		if n != 0 || r.Stats().KinksCrossed == 0 {
			t.Errorf("%v: %g allocations a step with %d kinks", f, n, r.Stats().KinksCrossed)
		}
	}
}
