package evolve

import (
	"tidekiln/evolve/ode"
	"tidekiln/scenarios"
)

// split is a System in two parts: the tide-free flow of every chain, which
// librates, and all the rest, tides, lone orbiters and interiors, which only
// drifts. It has a System of its own, whose interiors are held.
type split struct {
	p      *System
	blocks [][2]int
	chains []int // groups of the blocks
	held   []*held
	flow   []float64
}

var _ ode.Split = (*split)(nil)

// newSplit builds the parts of a scenario's equations; the state is that of
// [NewSystem].
func newSplit(s *scenarios.Scenario) (*split, error) {
	p, _, err := NewSystem(s)
	if err != nil {
		return nil, err
	}
	o := &split{p: p, held: make([]*held, len(p.bodies)), flow: make([]float64, p.dim)}
	for i := range p.groups {
		if g := &p.groups[i]; g.chain != nil {
			o.blocks = append(o.blocks, [2]int{g.at, g.at + g.Dim()})
			o.chains = append(o.chains, i)
		}
	}
	for i := range p.bodies {
		if b := &p.bodies[i]; b.interior != nil {
			o.held[i] = newHeld(b.interior)
			b.interior = o.held[i]
		}
	}
	return o, nil
}

// Dim returns the number of state variables.
func (o *split) Dim() int { return o.p.dim }

// Oscillators lists the chains.
func (o *split) Oscillators() [][2]int { return o.blocks }

// Oscillate writes the tide-free flow of a chain.
func (o *split) Oscillate(i int, y, dy []float64) {
	g := &o.p.groups[o.chains[i]]
	g.Flow(y, dy, g.rates)
}

// OscillateJacobian also writes its derivative.
func (o *split) OscillateJacobian(i int, y, dy, jac []float64) {
	g := &o.p.groups[o.chains[i]]
	g.Flow(y, dy, g.rates)
	g.Jacobian(y, g.rates, jac, g.Dim())
}

// Hold keeps the interiors as they are at (t, y).
func (o *split) Hold(t float64, y []float64) {
	p := o.p
	for i := range p.groups {
		g := &p.groups[i]
		gy := y[g.at : g.at+g.Dim()]
		g.Flow(gy, o.flow[g.at:g.at+g.Dim()], g.rates)
		for k, j := range g.body {
			if b := &p.bodies[j]; b.interior != nil {
				o.held[j].hold(p.age(t), y[b.at:b.at+b.states], g.Elements(k, gy, g.rates).KeplerMotion)
			}
		}
		p.tides(g, gy, o.flow[g.at:g.at+g.Dim()], false)
		for _, j := range g.body {
			if b := &p.bodies[j]; b.interior != nil {
				o.held[j].heated(p.age(t), b.heat)
			}
		}
	}
}

// Drift writes the tides' part of dy/dt and the rates of the interiors, and the
// integrands of the ledger.
func (o *split) Drift(y, dy, q []float64) {
	p := o.p
	for i := range p.groups {
		g := &p.groups[i]
		gy, gdy := y[g.at:g.at+g.Dim()], dy[g.at:g.at+g.Dim()]
		g.Flow(gy, gdy, g.rates)
		clear(gdy)
		p.tides(g, gy, gdy, false)
	}
	for i := range p.bodies {
		if b := &p.bodies[i]; b.states > 0 {
			b.interior.Rates(0, b.heat, dy[b.at:b.at+b.states])
		}
	}
	p.fluxes(0, y, q)
}

// NumQuadratures returns the number of integrands.
func (o *split) NumQuadratures() int { return o.p.NumQuadratures() }
