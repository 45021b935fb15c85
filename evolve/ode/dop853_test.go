package ode

import (
	"math"
	"testing"
)

// A step costs twelve values of f, and three more once its inside is asked for.
func TestDOP853Work(t *testing.T) {
	r := dop.start(t, circle{}, Options{RTol: 1e-8, ATol: same(2, 1e-8), FixedStep: 0.1}, 0, []float64{1, 0})
	var y [2]float64
	want := 1
	for k := range 10 {
		seg, err := r.Step(10)
		if err != nil {
			t.Fatal(err)
		}
		want += 12
		if seg.Eval(seg.T1, y[:]); r.Stats().Derivs != want {
			t.Fatalf("step %d: %d values of f, want %d", k, r.Stats().Derivs, want)
		}
		want += 3
		for theta := 0.1; theta < 1; theta += 0.2 {
			seg.Eval(seg.T0+theta*(seg.T1-seg.T0), y[:])
		}
		if r.Stats().Derivs != want {
			t.Fatalf("step %d with its inside: %d values of f, want %d", k, r.Stats().Derivs, want)
		}
	}
}

// Where a damping time of 1e-4 limits the step, it is to about 6 of them (the
// interval of stability, Hairer & Wanner II, IV.2): the run is right, and long.
func TestDOP853StabilityLimit(t *testing.T) {
	const tol = 1e-6
	var exact [2]float64
	stiffKPR.exact(0, exact[:])
	r := dop.start(t, stiffKPR, Options{RTol: tol, ATol: same(2, tol)}, 0, exact[:])
	run(t, r, 1, nil)
	// At the limit the estimate of each step is near 1 tolerance, and damped at once.
	if stiffKPR.exact(1, exact[:]); maxDiff(r.State(), exact[:]) > 10*tol {
		t.Errorf("off by %g", maxDiff(r.State(), exact[:]))
	}
	if n := float64(r.Stats().Steps); n < 1e4/7 || n > 1e4/5 {
		t.Errorf("%g steps, want 1e4/6 or so", n)
	}
}

// arenstorf is the restricted three-body problem of Earth and Moon in the rotating
// frame (Hairer, Nørsett & Wanner I, II.0).
type arenstorf struct{}

func (arenstorf) Dim() int { return 4 }
func (arenstorf) Derivs(_ float64, y, dy []float64) {
	const moon = 0.012277471
	const earth = 1 - moon
	d1, d2 := math.Hypot(y[0]+moon, y[1]), math.Hypot(y[0]-earth, y[1])
	d1, d2 = d1*d1*d1, d2*d2*d2
	dy[0], dy[1] = y[2], y[3]
	dy[2] = y[0] + 2*y[3] - earth*(y[0]+moon)/d1 - moon*(y[0]-earth)/d2
	dy[3] = y[1] - 2*y[2] - earth*y[1]/d1 - moon*y[1]/d2
}

// The orbit is periodic, so it ends where it began (start and period from memory of
// Hairer, Nørsett & Wanner I, II.0; a wrong digit would not close). An error grows
// over it by the factor that a displacement of the start does, which passes near the
// Moon; ten steps' tolerances of the first part count fully.
func TestArenstorfOrbit(t *testing.T) {
	const period = 17.0652165601579625588917206249
	start := []float64{0.994, 0, 0, -2.00158510637908252240537862224}
	orbit := func(tol, displaced float64) float64 {
		d, err := NewDOP853(arenstorf{}, Options{RTol: tol, ATol: same(4, tol)})
		if err != nil {
			t.Fatal(err)
		}
		y := append([]float64(nil), start...)
		y[0] += displaced
		if err := d.Start(0, y); err != nil {
			t.Fatal(err)
		}
		run(t, d, period, nil)
		t.Logf("tolerance %.0e: %+v", tol, d.Stats())
		return math.Hypot(d.State()[0]-start[0], d.State()[1]-start[1])
	}
	growth := orbit(1e-13, 1e-9) / 1e-9
	for _, tol := range []float64{1e-8, 1e-10, 1e-12} {
		if e := orbit(tol, 0); e > 10*growth*tol {
			t.Errorf("tolerance %g: ends %g from the start; errors grow by %.0f", tol, e, growth)
		} else {
			t.Logf("tolerance %.0e: ends %.1e from the start; errors grow by %.0f", tol, e, growth)
		}
	}
}
