package main

import (
	"fmt"
	"math"
	"slices"
	"strconv"
	"time"

	"tidekiln/evolve/ode"
)

// entrant is one integrator in one setting.
type entrant struct {
	name  string
	rungs []float64
	run   func(c *problem, rtol float64) ([]measurement, error)
	// quit is the number of failures running after which tighter rungs are not
	// tried.
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

const (
	cvodeLimit = 3 * time.Second
	scipyLimit = 25 * time.Second
)

// Names of the entrants that ratios are made of.
const (
	ours        = "this program"
	oursWhole   = "this program, with ledger and kinks"
	cvodeTuned  = "CVODE, every help, best coefficient"
	cvodeHelped = "CVODE, every help, default coefficient"
	cvodeCalled = "CVODE, as called"
	cvodeSecond = "CVODE, order 2, every help, best coefficient"
	scipyRadau  = "SciPy Radau, helped"
	scipyCalled = "SciPy Radau, as called"
)

func entrants(cvode, scipy *port) []entrant {
	fine, coarse := ladder(12, 2), ladder(9, 1)
	all := []entrant{
		own(ours, fine, 0, false),
		own("this program, 3 stages", fine, 3, false),
		own("this program, 5 stages", fine[2:], 5, false),
		own(oursWhole, fine, 0, true),
		{cvodeTuned, fine, throughCVODE(cvode, 5, true, 0.1, 0.01, 0.001), 2},
		{cvodeHelped, fine, throughCVODE(cvode, 5, true, 0), 2},
		{cvodeCalled, fine, throughCVODE(cvode, 5, false, 0), 2},
		{cvodeSecond, fine, throughCVODE(cvode, 2, true, 0.1, 0.01, 0.001), 1},
	}
	for _, method := range []string{"Radau", "BDF", "LSODA"} {
		all = append(all,
			entrant{"SciPy " + method + ", helped", coarse, throughSciPy(scipy, method, true), 1},
			entrant{"SciPy " + method + ", as called", coarse, throughSciPy(scipy, method, false), 1})
	}
	return all
}

// own is the program's integrator with evolve's options; whole with what a
// history needs beside the path, from the state before projection.
func own(name string, rungs []float64, stages int, whole bool) entrant {
	return entrant{name, rungs, func(c *problem, rtol float64) ([]measurement, error) {
		o := c.at(rtol)
		o.Stages = stages
		var sys ode.System = frozen{c.system}
		y := c.start
		if whole {
			sys, y = c.system, c.given
		}
		m, err := c.timed(sys, o, y)
		return []measurement{m}, err
	}, 2}
}

func throughCVODE(p *port, order int, help bool, coefs ...float64) func(*problem, float64) ([]measurement, error) {
	return func(c *problem, rtol float64) ([]measurement, error) {
		var all []measurement
		for _, coef := range coefs {
			m, err := p.run(c, 5*cvodeLimit, format(rtol), strconv.Itoa(order), format(coef), flag01(help),
				format(cvodeLimit.Seconds()), strconv.Itoa(samples))
			if err != nil {
				return nil, err
			}
			m.coef = coef
			all = append(all, m)
		}
		return all, nil
	}
}

func throughSciPy(p *port, method string, help bool) func(*problem, float64) ([]measurement, error) {
	return func(c *problem, rtol float64) ([]measurement, error) {
		m, err := p.run(c, scipyLimit, format(rtol), method, flag01(help))
		return []measurement{m}, err
	}
}

func format(x float64) string { return strconv.FormatFloat(x, 'g', 17, 64) }

func flag01(b bool) string {
	if b {
		return "1"
	}
	return "0"
}

// climb runs an entrant down its ladder.
func (e *entrant) climb(c *problem, reference []float64) ([]measurement, error) {
	var all []measurement
	failures := 0
	for _, rtol := range e.rungs {
		ms, err := e.run(c, rtol)
		if err != nil {
			return nil, fmt.Errorf("case %s, %s at rtol %.1g: %w", c.name, e.name, rtol, err)
		}
		any := false
		for _, m := range ms {
			m.rtol = rtol
			if m.err = math.Inf(1); m.done() {
				m.err = distance(m.end, reference)
				any = true
			}
			all = append(all, m)
		}
		if failures++; any {
			failures = 0
		}
		if failures >= e.quit {
			break
		}
	}
	return all, nil
}

// front returns the runs that no cheaper run beats in accuracy, cheapest first.
func front(all []measurement) []measurement {
	sorted := slices.Clone(all)
	slices.SortStableFunc(sorted, func(a, b measurement) int {
		switch {
		case a.cpu < b.cpu:
			return -1
		case a.cpu > b.cpu:
			return 1
		}
		return 0
	})
	var f []measurement
	best := math.Inf(1)
	for _, m := range sorted {
		if m.done() && m.err < best {
			best = m.err
			f = append(f, m)
		}
	}
	return f
}

// timeAt is the time to an error, on straight lines between the logarithms of
// the runs of the front; that of the cheapest run if it is better already, NaN
// if none is as good.
func timeAt(all []measurement, target float64) float64 {
	f := front(all)
	for i, m := range f {
		if m.err > target {
			continue
		}
		if i == 0 {
			return m.cpu
		}
		a := f[i-1]
		// Rounding may leave an error of 0.
		x := math.Log(a.err/target) / math.Log(a.err/max(m.err, 1e-17))
		return a.cpu * math.Pow(m.cpu/a.cpu, x)
	}
	return math.NaN()
}
