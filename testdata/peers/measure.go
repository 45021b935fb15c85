package main

import (
	"errors"
	"math"
	"slices"
	"time"

	"golang.org/x/sys/unix"

	"tidekiln/evolve/ode"
)

// measurement is one rung of one integrator's ladder.
type measurement struct {
	rtol, coef      float64
	outcome         string // "done", or what happened instead
	reached         float64
	cpu             float64 // s, median of the samples
	samples         int
	steps, rejected int
	rhs, jacs       int
	end             []float64
	err             float64 // largest relative error at the end
}

func (m *measurement) done() bool { return m.outcome == "done" }

// Samples of a run are taken until there are enough or they took long enough to
// be timed well.
const (
	samples    = 15
	sampleTime = 0.6 // s
)

// cpu is the processor time of the whole process, s.
func cpu() float64 {
	var t unix.Timespec
	if err := unix.ClockGettime(unix.CLOCK_PROCESS_CPUTIME_ID, &t); err != nil {
		panic(err) // the clock exists on every Linux
	}
	return time.Duration(t.Nano()).Seconds()
}

func median(v []float64) float64 {
	v = slices.Clone(v)
	slices.Sort(v)
	n := len(v)
	if n == 0 {
		return math.NaN()
	}
	return (v[(n-1)/2] + v[n/2]) / 2
}

// follow integrates sys to the end of the case once.
func (p *problem) follow(sys ode.System, o ode.Options, y []float64) (measurement, error) {
	m := measurement{rtol: o.RTol}
	begin := cpu()
	r, err := ode.NewRadau(sys, o)
	if err != nil {
		return m, err
	}
	if f, ok := sys.(frozen); ok {
		f.p.Freeze(0, y)
	}
	err = r.Start(0, y)
	for err == nil && r.T() < p.span {
		_, err = r.Step(p.span)
	}
	m.cpu = cpu() - begin
	s := r.Stats()
	m.steps, m.rejected, m.rhs, m.jacs = s.Steps, s.Rejected+s.NewtonFailures, s.Derivs, s.Jacobians
	m.end, m.reached, m.outcome = slices.Clone(r.State()), r.T(), "done"
	var stop *ode.StopError
	if errors.As(err, &stop) {
		m.outcome, err = stop.Error(), nil
	}
	return m, err
}

// timed is follow, repeated for the time.
func (p *problem) timed(sys ode.System, o ode.Options, y []float64) (measurement, error) {
	var m measurement
	var times []float64
	spent := 0.0
	for len(times) < samples && (len(times) == 0 || spent < sampleTime) {
		var err error
		if m, err = p.follow(sys, o, y); err != nil {
			return m, err
		}
		times = append(times, m.cpu)
		spent += m.cpu
	}
	m.cpu, m.samples = median(times), len(times)
	return m, nil
}

// seconds returns the least time of a right-hand side and of one with the
// Jacobian.
func (p *problem) seconds() (rhs, jac float64) {
	const times, batches = 50000, 9
	y := slices.Clone(p.start)
	dy, j := make([]float64, dim), make([]float64, dim*dim)
	p.system.Freeze(0, y)
	rhs, jac = math.Inf(1), math.Inf(1)
	for range batches {
		t0 := cpu()
		for i := range times {
			y[atEnthalpy] = p.start[atEnthalpy] + float64(i%7) // nothing may be kept between calls
			p.system.Derivs(0, y, dy)
		}
		t1 := cpu()
		for i := range times {
			y[atEnthalpy] = p.start[atEnthalpy] + float64(i%7)
			p.system.Jacobian(0, y, dy, j)
		}
		rhs, jac = min(rhs, (t1-t0)/times), min(jac, (cpu()-t1)/times)
	}
	return rhs, jac
}
