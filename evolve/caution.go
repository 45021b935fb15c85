package evolve

import (
	"fmt"
	"math"

	"tidekiln/scenarios"
)

// Limits beyond which a result is doubtful, with what it is that is left out.
const (
	// Terms of second order in e are of relative size e times coefficients of
	// some 5, so beyond this the first-order resonant terms are off by half.
	firstOrderE = 0.1
	// The resonant terms are taken at exact commensurability. An offset of this
	// part of the outer mean motion moves α by 3 % at 2:1 and their coefficients
	// by some 10 %, and the terms that are averaged out are no longer much faster.
	nearResonance = 0.1
	// Densities of solid bodies, kg/m³, generously.
	leastDensity, mostDensity = 100, 30000
)

// Check builds the equations of a scenario and looks up everything it names:
// what [Run] would refuse, and in cautions what a practitioner would want to
// know before it is run.
func Check(s *scenarios.Scenario) (cautions []string, err error) {
	p, y, err := NewSystem(s)
	if err != nil {
		return nil, err
	}
	if _, err := observations(s); err != nil {
		return nil, err
	}
	for i := range p.bodies {
		b := &p.bodies[i]
		density := b.mass / (4. / 3 * math.Pi * math.Pow(b.radius, 3))
		if density < leastDensity || density > mostDensity {
			cautions = append(cautions, fmt.Sprintf("%s has a density of %.3g kg/m3: see its mass and radius", b.name, density))
		}
	}
	watch := p.watchlist(nil, s.Run.Regime == scenarios.Resolved)
	for i, c := range s.Changes {
		switch {
		case c.When == nil && c.At >= s.Run.Span:
			cautions = append(cautions, fmt.Sprintf("change %d is due at %.6g Myr, after the end of the span", i+1, c.At/Megayear))
		case c.When != nil && !watches(watch, *c.When):
			cautions = append(cautions, fmt.Sprintf("change %d waits for %s, which cannot happen to the bodies it names", i+1, c.When.Event))
		}
	}
	for _, t := range s.Run.Stop {
		if !watches(watch, t) {
			cautions = append(cautions, fmt.Sprintf("run.stop waits for %s, which cannot happen to the bodies it names", t.Event))
		}
	}
	for _, o := range s.Observed {
		if o.At > s.Run.Span {
			cautions = append(cautions, fmt.Sprintf("%s of %s is observed at %.6g Myr, after the end of the span", o.Column, o.Body, o.At/Megayear))
		}
	}
	return append(cautions, p.beyond(0, y)...), nil
}

// watches reports whether an event a trigger waits for is looked for at all.
func watches(list []watched, t scenarios.Trigger) bool {
	for i := range list {
		if w := &list[i]; w.Name == t.Event && matches(t.Body, w.body) && matches(t.Other, w.other) {
			return true
		}
	}
	return false
}

// beyond says where the state y lies outside what the resonant terms are good
// for.
func (p *System) beyond(t float64, y []float64) []string {
	p.set(y)
	p.evaluate(y, p.heatRow, false)
	var out []string
	for i := range p.groups {
		g := &p.groups[i]
		if g.chain == nil {
			continue
		}
		gy := y[g.at : g.at+g.Dim()]
		for r := 0; r+1 < len(g.body); r++ {
			n := g.Elements(r+1, gy, g.rates).MeanMotion
			if share := math.Abs(g.rates.Offset[r]) / n; share > nearResonance {
				out = append(out, fmt.Sprintf("%s and %s are %.2g %% from their %s resonance at %.6g Myr: its terms no longer stand out among those left out",
					p.bodies[g.body[r]].name, p.bodies[g.body[r+1]].name, 100*share, ratioName(g.chain.Commensurability(r)), t/Megayear))
			}
		}
	}
	return out
}

// cautions says what to know of a history that has ended.
func (r *run) cautions() []string {
	out := r.p.beyond(r.t, r.y)
	for i := range r.p.bodies {
		b := &r.p.bodies[i]
		if e := r.track.bodies[i].e.Max; r.p.groups[b.group].chain != nil && e > firstOrderE {
			out = append(out, fmt.Sprintf("%s reached an eccentricity of %.2g: the resonant terms are of first order in it", b.name, e))
		}
	}
	for _, i := range r.pending {
		out = append(out, fmt.Sprintf("change %d never happened", i+1))
	}
	for i := range r.seen {
		if o := &r.seen[i]; math.IsNaN(o.model) {
			out = append(out, fmt.Sprintf("%s of %s has no value to compare with the observed one", o.Column, o.Body))
		}
	}
	return out
}
