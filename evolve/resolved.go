package evolve

import (
	"fmt"
	"math"

	"tidekiln/evolve/ode"
	"tidekiln/orbit"
	"tidekiln/scenarios"
)

// blockLength is the time for which a splitting holds interiors and libration
// centres: short beside the Myr on which they move, and its error goes with the
// square.
const blockLength = 500 * orbit.Year

// turnPerStep bounds the steps of DOP853: h times the fastest frequency of the
// chains at the start. Where nothing librates the error estimate sees no reason
// to resolve a libration, and an explicit method at the edge of its stability
// would feed or damp it.
const turnPerStep = 0.6

// method names the integrator of the resolved regime.
func (p *System) method() string {
	if m := p.scenario.Run.Method; m != "" {
		return m
	}
	if p.scenario.Run.Regime == scenarios.Auto {
		return scenarios.DOP853 // librations are followed from where they are wide
	}
	locked := false
	for i := range p.groups {
		if p.groups[i].free {
			return scenarios.DOP853
		}
		locked = locked || p.groups[i].chain != nil
	}
	if locked {
		return scenarios.Splitting
	}
	return scenarios.DOP853
}

// resolvedTolerances are relative ones throughout, above the size that matters:
// 1e-3 of Λ and of z, which moves an offset by about the tolerance of itself; a
// radian; the scale of an interior's variable.
func (p *System) resolvedTolerances() []float64 {
	atol := p.Tolerances().ATol
	for i := range p.groups {
		if g := &p.groups[i]; g.chain != nil {
			for j := g.at + 3*g.Members(); j < g.at+g.Dim(); j++ {
				atol[j] = p.scenario.Run.Tolerance
			}
		}
	}
	return atol
}

// resolving returns the integrator of the resolved regime, at a state, for at
// most so many steps.
func (p *System) resolving(y []float64, maxSteps int) (ode.Integrator, error) {
	run := p.scenario.Run
	if p.method() == scenarios.Splitting {
		s, err := newSplit(p.scenario)
		if err != nil {
			return nil, err
		}
		if len(s.blocks) == 0 {
			return nil, fmt.Errorf("run.method %q needs a chain; write method = %q", scenarios.Splitting, scenarios.DOP853)
		}
		return ode.NewSplitting(s, ode.SplittingOptions{
			RTol: run.Tolerance, ATol: p.resolvedTolerances(), Block: blockLength, MaxSteps: maxSteps,
		})
	}
	o := ode.Options{RTol: run.Tolerance, ATol: p.resolvedTolerances(), MaxSteps: maxSteps}
	for i := range p.groups {
		g := &p.groups[i]
		if g.chain == nil {
			continue
		}
		w, err := g.chain.Fastest(y[g.at : g.at+g.Dim()])
		if err != nil {
			return nil, err
		}
		if h := turnPerStep / w; o.MaxStep == 0 || h < o.MaxStep {
			o.MaxStep = h
		}
	}
	return ode.NewDOP853(p, o)
}

// still puts every locked chain of the state y on its slow manifold, where no
// angle librates.
func (p *System) still(t float64, y []float64) error {
	o := p.Tolerances()
	if o.Fast == nil {
		return nil
	}
	r, err := ode.NewRadau(p, o)
	if err != nil {
		return err
	}
	if err := r.Start(t, y); err != nil {
		return err
	}
	copy(y, r.State())
	return nil
}

// mostTurns is how far an angle of the state may run before whole turns are
// taken out of it, lest a relative tolerance loosen.
const mostTurns = 8 * 2 * math.Pi

// unwind takes whole turns out of the angles of y and reports whether there were
// any to take.
func (p *System) unwind(y []float64) bool {
	found := false
	for i := range p.groups {
		g := &p.groups[i]
		if g.chain == nil {
			continue
		}
		for j := g.at + 3*g.Members(); j < g.at+g.Dim(); j++ {
			if math.Abs(y[j]) > mostTurns {
				y[j] = math.Remainder(y[j], 2*math.Pi)
				found = true
			}
		}
	}
	return found
}
