package main

import (
	"cmp"
	"fmt"
	"math"
	"os"
	"slices"
	"time"
)

// result holds what one case gave.
type result struct {
	c         *problem
	order     []string // of entrants
	runs      map[string][]measurement
	self      float64 // difference of the reference at two tolerances
	confirmed measurement
}

// contest runs every entrant on a case.
func contest(c *problem, all []entrant) (*result, error) {
	r := &result{c: c, runs: map[string][]measurement{}}
	want, err := c.reference(1e-12)
	if err != nil {
		return nil, err
	}
	tighter, err := c.reference(1e-13)
	if err != nil {
		return nil, err
	}
	r.self = distance(tighter, want)
	for i := range all {
		e := &all[i]
		begin := time.Now()
		if err := r.climb(e, want); err != nil {
			return nil, err
		}
		r.order = append(r.order, e.name)
		fmt.Fprintf(os.Stderr, "peers: %s, %s: %d runs in %.1f s\n", c.name, e.name, len(r.runs[e.name]), time.Since(begin).Seconds())
	}
	for range visits - 1 {
		if err := r.visitAgain(all); err != nil {
			return nil, err
		}
	}
	for _, m := range r.runs[cvodeTuned] {
		if m.done() && (!r.confirmed.done() || m.err < r.confirmed.err) {
			r.confirmed = m
		}
	}
	return r, nil
}

// reference returns the end state of 5 stages at a tolerance.
func (p *problem) reference(rtol float64) ([]float64, error) {
	o := p.at(rtol)
	o.Stages = 5
	m, err := p.follow(frozen{p.system}, o, p.start)
	if err == nil && !m.done() {
		err = fmt.Errorf("reference of case %s: %s", p.name, m.outcome)
	}
	return m.end, err
}

// climb runs an entrant down its ladder.
func (r *result) climb(e *entrant, reference []float64) error {
	failures := 0
	for _, rtol := range e.rungs {
		failures++
		for _, coef := range e.coefs {
			m, err := e.run(r.c, rtol, coef)
			if err != nil {
				return fmt.Errorf("case %s, %s at rtol %.1g: %w", r.c.name, e.name, rtol, err)
			}
			m.rtol, m.coef, m.err = rtol, coef, math.Inf(1)
			if m.done() {
				m.err = distance(m.end, reference)
				failures = 0
			}
			r.runs[e.name] = append(r.runs[e.name], m)
		}
		if failures >= e.quit {
			break
		}
	}
	return nil
}

// visitAgain takes more samples of every run that is short enough.
func (r *result) visitAgain(all []entrant) error {
	for _, e := range all {
		runs := r.runs[e.name]
		for i := range runs {
			m := &runs[i]
			if !e.again || !m.done() || m.cpu() > longest {
				continue
			}
			again, err := e.run(r.c, m.rtol, m.coef)
			if err != nil {
				return err
			}
			m.times = append(m.times, again.times...)
		}
	}
	return nil
}

// cost is what a run takes, s.
type cost func(*measurement) float64

// front returns the runs that no cheaper run beats in accuracy, cheapest first.
func front(all []measurement, of cost) []measurement {
	sorted := slices.Clone(all)
	slices.SortStableFunc(sorted, func(a, b measurement) int { return cmp.Compare(of(&a), of(&b)) })
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

// costAt is the cost of an error, on straight lines between the logarithms of
// the runs of the front; that of the cheapest run if it is better already, NaN
// if none is as good.
func costAt(all []measurement, target float64, of cost) float64 {
	f := front(all, of)
	for i, m := range f {
		if m.err > target {
			continue
		}
		if i == 0 {
			return of(&m)
		}
		a := f[i-1]
		// Rounding may leave an error of 0.
		x := math.Log(a.err/target) / math.Log(a.err/max(m.err, 1e-17))
		return of(&a) * math.Pow(of(&m)/of(&a), x)
	}
	return math.NaN()
}
