package ode

import (
	"errors"
	"fmt"
	"math"
	"strings"
	"testing"
)

// wall is y' = 1, refused for y > 1.
type wall struct{}

func (wall) Dim() int { return 2 }
func (wall) Derivs(t float64, y, dy []float64) {
	if dy[0], dy[1] = 0, 1; y[1] > 1 {
		dy[1] = math.NaN()
	}
}
func (p wall) Jacobian(t float64, y, dy, j []float64) { p.Derivs(t, y, dy); clear(j) }

// blowup is y₂' = y₂² from 1: infinite at t = 1.
type blowup struct{}

func (blowup) Dim() int                          { return 2 }
func (blowup) Derivs(t float64, y, dy []float64) { dy[0], dy[1] = 0, y[1]*y[1] }
func (p blowup) Jacobian(t float64, y, dy, j []float64) {
	p.Derivs(t, y, dy)
	j[0], j[1], j[2], j[3] = 0, 0, 0, 2*y[1]
}

// blank has a Jacobian that is not a number.
type blank struct{ wall }

func (blank) Jacobian(t float64, y, dy, j []float64) { dy[0], dy[1], j[3] = 0, 1, math.NaN() }

func TestStops(t *testing.T) {
	base := Options{RTol: 1e-8, ATol: same(2, 1e-8)}
	budget, minStep, fixed := base, base, base
	budget.MaxSteps = 7
	minStep.MinStep = 1e-6
	fixed.FixedStep = 0.3
	for _, c := range []struct {
		name      string
		sys       System
		start     float64 // of y₂
		opt       Options
		reason    StopReason
		component int
		atLeast   float64 // time reached
	}{
		{"budget", spin{}, 1, budget, StepBudget, -1, 0},
		{"minimum step", blowup{}, 1, minStep, StepTooSmall, 1, 0.99},
		{"domain", wall{}, 0, base, NotFinite, 1, 1 - 1e-12},
		{"domain, minimum step", wall{}, 0, minStep, NotFinite, 1, 1 - 5e-6},
		{"domain, fixed step", wall{}, 0, fixed, NotFinite, 1, 0.9 - 1e-15},
		{"Jacobian", blank{}, 0, base, NotFinite, 1, 0},
	} {
		for _, f := range formulas {
			if _, ok := c.sys.(blank); ok && f == dop {
				continue // has no use for a Jacobian
			}
			name := fmt.Sprintf("%s, %v", c.name, f)
			r := f.start(t, c.sys, c.opt, 0, []float64{0, c.start})
			var err error
			for err == nil && r.T() < 5 {
				_, err = r.Step(5)
			}
			var stop *StopError
			if !errors.As(err, &stop) {
				t.Errorf("%s: error %v, want a *StopError", name, err)
				continue
			}
			if stop.Reason != c.reason || stop.Component != c.component {
				t.Errorf("%s: %v, component %d; want %v, %d", name, stop.Reason, stop.Component, c.reason, c.component)
			}
			if stop.T != r.T() || r.T() < c.atLeast || math.IsNaN(r.State()[1]) {
				t.Errorf("%s: stopped at %g (says %g), want at least %g; state %v", name, r.T(), stop.T, c.atLeast, r.State())
			}
			if c.reason == StepBudget {
				st := r.Stats()
				if n := st.Steps + st.Rejected + st.NewtonFailures; n != c.opt.MaxSteps {
					t.Errorf("%s: %d attempts, want %d", name, n, c.opt.MaxSteps)
				}
			}
			for _, part := range []string{"t = ", "h = ", "; "} {
				if !strings.Contains(err.Error(), part) {
					t.Errorf("%s: message %q lacks %q", name, err, part)
				}
			}
		}
	}
}

// y' = −k (y − cos t) makes the matrices of a step h = 1 vanish: 1 − hJ for k = −1,
// γ/h − J for k = −γ and 1/(hγ) − J for k = −1/γ.
func TestSingularMatrices(t *testing.T) {
	var stop *StopError
	for f, k := range map[formula]float64{radauThree: -radau3().gamma, rodas: -1 / rodas5P().gamma} {
		opt := Options{RTol: 1e-4, ATol: same(1, 1e-4)}
		projected := opt
		projected.Fast, projected.ProjectionStep = []bool{true}, 1
		r, err := New(f.method, relax{-1}, projected)
		if err != nil {
			t.Fatal(err)
		}
		if err := r.Start(0, []float64{1}); !errors.As(err, &stop) || stop.Reason != Singular {
			t.Errorf("%v, projection: error %v, want %v", f, err, Singular)
		}
		fixed, first := opt, opt
		fixed.FixedStep, first.FirstStep = 1, 1
		if _, err := f.start(t, relax{k}, fixed, 0, []float64{1}).Step(100); !errors.As(err, &stop) || stop.Reason != Singular {
			t.Errorf("%v, fixed step: error %v, want %v", f, err, Singular)
		}
		if _, err := f.start(t, relax{k}, first, 0, []float64{1}).Step(100); err != nil {
			t.Errorf("%v: a shorter step should do: %v", f, err)
		}
	}
}

// At t = 1e18 s a step of 0.1 s is none.
func TestResolutionOfTime(t *testing.T) {
	for _, f := range formulas {
		t.Run(f.String(), func(t *testing.T) {
			for _, opt := range []Options{{FixedStep: 0.1}, {FirstStep: 0.1}, {}} {
				opt.RTol, opt.ATol = 1e-8, same(2, 1e-8)
				r := f.start(t, spin{}, opt, 1e18, []float64{1, 0})
				_, err := r.Step(2e18)
				var stop *StopError
				if !errors.As(err, &stop) || stop.Reason != StepTooSmall {
					t.Errorf("%+v: error %v, want %v", opt, err, StepTooSmall)
				}
			}
		})
	}
}

// A step to tEnd or onto a kink may be shorter than MinStep.
func TestMinStepSparesLanding(t *testing.T) {
	for _, f := range formulas {
		t.Run(f.String(), func(t *testing.T) {
			r := f.start(t, spin{}, Options{RTol: 1e-8, ATol: same(2, 1e-8), MinStep: 0.01}, 0, []float64{1, 0})
			run(t, r, 1e-4, nil)
			if r.T() != 1e-4 {
				t.Errorf("ended at %g", r.T())
			}
		})
	}
}

func TestStepLimits(t *testing.T) {
	for _, f := range formulas {
		t.Run(f.String(), func(t *testing.T) {
			opt := Options{RTol: 1e-8, ATol: same(2, 1e-8), MaxStep: 0.05, FirstStep: 1e-3}
			r := f.start(t, spin{}, opt, 0, []float64{1, 0})
			first := true
			run(t, r, 1, func(seg *Segment) {
				h := seg.T1 - seg.T0
				if first && math.Abs(h-1e-3) > 1e-15 {
					t.Errorf("first step %g, want 1e-3", h)
				}
				// T1 − T0 carries the rounding of t.
				if h > 0.05+1e-15 {
					t.Errorf("step %g exceeds MaxStep", h)
				}
				first = false
			})
			r = f.start(t, spin{}, Options{RTol: 1e-8, ATol: same(2, 1e-8), FixedStep: 0.1}, 0, []float64{1, 0})
			run(t, r, 0.95, nil)
			if n := r.Stats().Steps; n != 10 || r.T() != 0.95 {
				t.Errorf("%d fixed steps to %g, want 10 to 0.95", n, r.T())
			}
		})
	}
}

func TestOptionMistakes(t *testing.T) {
	good := Options{RTol: 1e-6, ATol: same(2, 1e-6)}
	for want, spoil := range map[string]func(o *Options){
		"RTol":           func(o *Options) { o.RTol = 0 },
		"ATol has 1":     func(o *Options) { o.ATol = same(1, 1) },
		"ATol of":        func(o *Options) { o.ATol = []float64{1, 0} },
		"Odd has 1":      func(o *Options) { o.Odd = []bool{true} },
		"OddTime":        func(o *Options) { o.Odd = []bool{true, false} },
		"Fast has 3":     func(o *Options) { o.Fast = []bool{true, false, false} },
		"ProjectionStep": func(o *Options) { o.Fast = []bool{false, true} },
		"Stages":         func(o *Options) { o.Stages = 4 },
		"5 stages":       func(o *Options) { o.Stages, o.RTol = 5, 1e-3 },
		"MaxSteps":       func(o *Options) { o.MaxSteps = -1 },
		"FirstStep":      func(o *Options) { o.FirstStep = -1 },
		"MaxStep is":     func(o *Options) { o.MaxStep = math.NaN() },
		"MinStep":        func(o *Options) { o.MinStep, o.MaxStep = 2, 1 },
		"FixedStep":      func(o *Options) { o.FixedStep = math.Inf(1) },
	} {
		o := good
		spoil(&o)
		if _, err := NewRadau(spin{}, o); err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("%s: error is %v", want, err)
		}
	}
	for want, r := range map[string]func() (Integrator, error){
		"leave it 0 with Rosenbrock": func() (Integrator, error) {
			return New(MethodRosenbrock, spin{}, Options{RTol: 1e-6, ATol: same(2, 1e-6), Stages: 3})
		},
		"which DOP853 follows": func() (Integrator, error) {
			return New(MethodDOP853, spin{}, Options{RTol: 1e-6, ATol: same(2, 1e-6), Fast: []bool{true, true}, ProjectionStep: 1})
		},
		"Method(3)":       func() (Integrator, error) { return New(3, spin{}, good) },
		"0 components":    func() (Integrator, error) { return New(MethodDOP853, empty{}, good) },
		"has 2 values":    func() (Integrator, error) { return New(MethodRosenbrock, relax{}, good) },
		"RTol is 0, must": func() (Integrator, error) { return New(MethodRadau, spin{}, Options{}) },
	} {
		if in, err := r(); err == nil || in != nil || !strings.Contains(err.Error(), want) {
			t.Errorf("%s: %v, error is %v", want, in, err)
		}
	}
}

// empty has no components.
type empty struct{ spin }

func (empty) Dim() int { return 0 }

func TestWrongCalls(t *testing.T) {
	for _, f := range formulas {
		r, err := New(f.method, spin{}, Options{RTol: 1e-6, ATol: same(2, 1e-6)})
		if err != nil {
			t.Fatal(err)
		}
		if _, err := r.Step(1); err == nil {
			t.Errorf("%v: Step before Start passed", f)
		}
		for _, y := range [][]float64{{1}, {1, math.NaN()}} {
			if err := r.Start(0, y); err == nil {
				t.Errorf("%v: start from %v passed", f, y)
			}
		}
		if err := r.Start(math.Inf(1), []float64{1, 0}); err == nil {
			t.Errorf("%v: start at an infinite time passed", f)
		}
		if err := r.Start(0, []float64{1, 0}); err != nil {
			t.Fatal(err)
		}
		for _, end := range []float64{0, -1, math.Inf(1), math.NaN()} {
			if _, err := r.Step(end); err == nil {
				t.Errorf("%v: step to %g passed", f, end)
			}
		}
	}
}
