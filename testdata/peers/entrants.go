package main

import (
	"math"
	"strconv"
)

// entrant is one integrator in one setting.
type entrant struct {
	name  string
	rungs []float64 // relative tolerances
	coefs []float64 // NonlinConvCoef to try at each; 0 is the integrator's own
	run   func(c *problem, rtol, coef float64) (measurement, error)
	again bool // worth more than one visit
	// quit is the number of rungs that fail one after another after which
	// tighter ones are not tried.
	quit int
}

// ladder returns relative tolerances from 1e-3 to 10^−last, that many a decade.
func ladder(last float64, perDecade int) []float64 {
	var l []float64
	for i := 0; ; i++ {
		e := 3 + float64(i)/float64(perDecade)
		if e > last+1e-9 {
			return l
		}
		l = append(l, math.Pow(10, -e))
	}
}

// Limits of one run, CPU seconds: ten times what CVODE and twice what SciPy
// needs where it gets through.
const (
	cvodeLimit = 1.0
	scipyLimit = 10.0
)

// Names of the entrants that ratios are made of.
const (
	ours        = "this program"
	oursWhole   = "this program, with ledger and kinks"
	cvodeTuned  = "CVODE, every help, best coefficient"
	cvodeHelped = "CVODE, every help, default coefficient"
	cvodeStart  = "CVODE, as called but projected start"
	cvodeCalled = "CVODE, as called"
	cvodeSecond = "CVODE, order 2, every help, best coefficient"
	scipyRadau  = "SciPy Radau, helped"
	scipyCalled = "SciPy Radau, as called"
)

func entrants(cvode, scipy *port) []entrant {
	// The reference is a run at 1e-12; there CVODE has its last chance.
	fine, finest, coarse := ladder(11.5, 2), ladder(12, 2), ladder(8, 1)
	second := ladder(10, 2)
	tuning, alone := []float64{0.1, 0.01, 0.001}, []float64{0}
	all := []entrant{
		{ours, fine, alone, own(0, false), true, 2},
		{"this program, 3 stages", fine, alone, own(3, false), true, 2},
		{"this program, 5 stages", fine[2:], alone, own(5, false), true, 2},
		{oursWhole, fine, alone, own(0, true), true, 2},
		{cvodeTuned, finest, tuning, throughCVODE(cvode, 5, 2), true, 2},
		{cvodeHelped, finest, alone, throughCVODE(cvode, 5, 2), true, 2},
		{cvodeStart, finest, alone, throughCVODE(cvode, 5, 1), true, 2},
		{cvodeCalled, finest, alone, throughCVODE(cvode, 5, 0), true, 2},
		{cvodeSecond, second, tuning, throughCVODE(cvode, 2, 2), true, 1},
	}
	for _, m := range []struct {
		method string
		quit   int
	}{{"Radau", 1}, {"BDF", 1}, {"LSODA", 2}} { // LSODA gets lost at single tolerances
		all = append(all,
			entrant{"SciPy " + m.method + ", helped", coarse, alone, throughSciPy(scipy, m.method, "1"), false, m.quit},
			entrant{"SciPy " + m.method + ", as called", coarse, alone, throughSciPy(scipy, m.method, "0"), false, m.quit})
	}
	return all
}

// own is the program's integrator with evolve's options; whole with what a
// history needs beside the path, from the state before projection.
func own(stages int, whole bool) func(*problem, float64, float64) (measurement, error) {
	return func(c *problem, rtol, _ float64) (measurement, error) {
		o := c.at(rtol)
		o.Stages = stages
		if whole {
			return c.visit(c.system, o, c.given)
		}
		return c.visit(frozen{c.system}, o, c.start)
	}
}

func throughCVODE(p *port, order, help int) func(*problem, float64, float64) (measurement, error) {
	return func(c *problem, rtol, coef float64) (measurement, error) {
		return p.run(c, format(rtol), strconv.Itoa(order), format(coef), strconv.Itoa(help),
			format(cvodeLimit), strconv.Itoa(visitSamples))
	}
}

func throughSciPy(p *port, method, help string) func(*problem, float64, float64) (measurement, error) {
	return func(c *problem, rtol, _ float64) (measurement, error) {
		return p.run(c, format(rtol), method, help, format(scipyLimit))
	}
}

func format(x float64) string { return strconv.FormatFloat(x, 'g', 17, 64) }
