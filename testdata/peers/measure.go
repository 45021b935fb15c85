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
	outcome         string    // "done", or what happened instead
	reached         float64   // s
	times           []float64 // CPU, s, of every sample
	steps, rejected int
	rhs, jacs       int
	end             []float64
	err             float64 // largest relative error at the end
}

func (m *measurement) done() bool { return m.outcome == "done" }

// least is the shortest of the samples, s.
func (m *measurement) least() float64 {
	if len(m.times) == 0 {
		return math.NaN()
	}
	return slices.Min(m.times)
}

// cpu is the median of the samples, s.
func (m *measurement) cpu() float64 {
	v := slices.Clone(m.times)
	slices.Sort(v)
	n := len(v)
	if n == 0 {
		return math.NaN()
	}
	return (v[(n-1)/2] + v[n/2]) / 2
}

// A visit to a run takes samples until there are enough or they took long
// enough. The visits to all runs take turns, so that a machine that is slower
// for a while is so for every integrator.
const (
	visits       = 11
	visitSamples = 15
	visitTime    = 0.01 // s
	longest      = 0.15 // s; what takes longer is visited once
)

// clock is the processor time of the whole process, s.
func clock() float64 {
	var t unix.Timespec
	if err := unix.ClockGettime(unix.CLOCK_PROCESS_CPUTIME_ID, &t); err != nil {
		panic(err) // the clock exists on every Linux
	}
	return time.Duration(t.Nano()).Seconds()
}

// follow integrates sys to the end of the case once.
func (p *problem) follow(sys ode.System, o ode.Options, y []float64) (measurement, error) {
	m := measurement{rtol: o.RTol}
	begin := clock()
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
	m.times = []float64{clock() - begin}
	s := r.Stats()
	m.steps, m.rejected, m.rhs, m.jacs = s.Steps, s.Rejected+s.NewtonFailures, s.Derivs, s.Jacobians
	m.end, m.reached, m.outcome = slices.Clone(r.State()), r.T(), "done"
	var stop *ode.StopError
	if errors.As(err, &stop) {
		m.outcome, err = stop.Error(), nil
	}
	return m, err
}

// visit is follow with the samples of one visit.
func (p *problem) visit(sys ode.System, o ode.Options, y []float64) (measurement, error) {
	var m measurement
	var times []float64
	spent := 0.0
	for len(times) < visitSamples && (len(times) == 0 || spent < visitTime) {
		var err error
		if m, err = p.follow(sys, o, y); err != nil {
			return m, err
		}
		times = append(times, m.times[0])
		spent += m.times[0]
	}
	m.times = times
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
		t0 := clock()
		for i := range times {
			y[atEnthalpy] = p.start[atEnthalpy] + float64(i%7) // nothing may be kept between calls
			p.system.Derivs(0, y, dy)
		}
		t1 := clock()
		for i := range times {
			y[atEnthalpy] = p.start[atEnthalpy] + float64(i%7)
			p.system.Jacobian(0, y, dy, j)
		}
		rhs, jac = min(rhs, (t1-t0)/times), min(jac, (clock()-t1)/times)
	}
	return rhs, jac
}
