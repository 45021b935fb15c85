package evolve

import (
	"fmt"

	"tidekiln/evolve/ode"
	"tidekiln/orbit"
	"tidekiln/scenarios"
	"tidekiln/thermal"
)

// System is a scenario as one set of differential equations. Its state is
//
//	the state of every chain, in the order of its innermost member,
//	(l, x) of every orbiter outside a chain,
//	the state variables of every interior that has some, outward,
//
// all in deviation form and SI (see [orbit.Chain], [orbit.Lone] and
// [thermal.Interior]); time is in seconds since the start of the history. It
// has its own workspace: one System serves one goroutine.
type System struct {
	scenario *scenarios.Scenario
	primary  orbit.Primary
	groups   []group
	bodies   []body
	dim      int
	kinks    []kink
	heatRow  []float64 // derivatives of one body's tidal heat to the state
	dxdx     []float64
	dxdheat  []float64
}

// group is a chain or a lone orbiter, and where its state sits.
type group struct {
	orbit.Group
	chain *orbit.Chain // nil for a lone orbiter
	free  bool         // a chain whose angles may circulate
	name  string       // of the chain
	at    int
	rates *orbit.Rates
	body  []int // index in bodies of each member
}

// body is one orbiter.
type body struct {
	name          string
	mass, radius  float64
	group, member int
	interior      thermal.Interior // nil without one
	at, states    int
	tide          *orbit.SynchronousTide // raised in it; nil without an interior
	tideKick      *orbit.Kick
	primary       *orbit.PrimaryTide // it raises in the central body; nil if silent
	primaryKick   *orbit.Kick
	heat          float64 // tidal heat, W, at the state last evaluated
	torque, work  float64 // of the central body, N m and W, at the state of the last fluxes
}

// kink is a place where an interior's right-hand side bends.
type kink struct{ body, index int }

var (
	_ ode.System      = (*System)(nil)
	_ ode.Quadratures = (*System)(nil)
	_ ode.Piecewise   = (*System)(nil)

	_ ode.TimeDerivative = (*System)(nil)
)

// NewSystem builds the equations of a scenario and their start state: chains
// on their forced equilibrium, orbiters and interiors as given.
func NewSystem(s *scenarios.Scenario) (*System, []float64, error) {
	p := &System{
		scenario: s,
		primary:  orbit.Primary{Mass: s.Central.Mass, Radius: s.Central.Radius, J2: s.Central.J2},
		bodies:   make([]body, len(s.Orbiters)),
	}
	var y []float64
	index := map[string]int{}
	for i, o := range s.Orbiters {
		p.bodies[i] = body{name: o.Name, mass: o.Mass, radius: o.Radius, group: -1}
		index[o.Name] = i
	}
	for _, c := range s.Chains {
		g := group{name: c.Name, at: len(y)}
		var members []scenarios.Orbiter
		for k, name := range c.Members {
			i := index[name]
			members = append(members, s.Orbiters[i])
			p.bodies[i].group, p.bodies[i].member = len(p.groups), k
			g.body = append(g.body, i)
		}
		chain, state, err := c.Start(p.primary, members)
		if err != nil {
			return nil, nil, fmt.Errorf("chain %s: %w", c.Name, err)
		}
		g.Group, g.chain, g.free, g.rates = chain, chain, c.Free, chain.NewRates()
		p.groups = append(p.groups, g)
		y = append(y, state...)
	}
	for i, o := range s.Orbiters {
		if p.bodies[i].group >= 0 {
			continue
		}
		lone, state, err := orbit.NewLone(p.primary, o.Mass, o.Period, o.SemimajorAxis, o.Eccentricity)
		if err != nil {
			return nil, nil, fmt.Errorf("orbiter %s: %w", o.Name, err)
		}
		p.bodies[i].group = len(p.groups)
		p.groups = append(p.groups, group{Group: lone, at: len(y), rates: lone.NewRates(), body: []int{i}})
		y = append(y, state...)
	}
	central := orbit.NewCentralTide(s.Central.Tide)
	for i, o := range s.Orbiters {
		b := &p.bodies[i]
		g := p.groups[b.group].Group
		if t := orbit.NewPrimaryTide(g, b.member, central); t != nil {
			b.primary, b.primaryKick = t, orbit.NewKick(0)
		}
		if o.Interior.Law == "" {
			continue
		}
		in, err := thermal.NewInterior(o.Interior, thermal.Body{Mass: o.Mass, Radius: o.Radius})
		if err != nil {
			return nil, nil, fmt.Errorf("orbiter %s: %w", o.Name, err)
		}
		b.interior, b.at = in, len(y)
		for _, v := range in.States() {
			y = append(y, v.Start)
			b.states++
		}
		b.tide = orbit.NewSynchronousTide(g, b.member, p.primary, o.Radius, b.states)
		b.tideKick = orbit.NewKick(b.states)
		for k := 0; k < in.Kinks(); k++ {
			p.kinks = append(p.kinks, kink{i, k})
		}
	}
	p.dim = len(y)
	p.heatRow = make([]float64, p.dim)
	for _, b := range p.bodies {
		if n := b.states; n > len(p.dxdheat) {
			p.dxdx, p.dxdheat = make([]float64, n*n), make([]float64, n)
		}
	}
	return p, y, nil
}

// Dim returns the number of state variables.
func (p *System) Dim() int { return p.dim }

// age is the time of decaying isotopes, s.
func (p *System) age(t float64) float64 { return t + p.scenario.Run.Start }

// set makes y the present state of every interior.
func (p *System) set(y []float64) {
	for i := range p.bodies {
		if b := &p.bodies[i]; b.interior != nil {
			b.interior.Set(y[b.at : b.at+b.states])
		}
	}
}

// Derivs writes dy/dt: the flow of every group, the tides of both bodies on
// the orbits, and in each interior the heat its orbit loses.
func (p *System) Derivs(t float64, y, dy []float64) {
	p.set(y)
	p.evaluate(y, dy, false)
	for i := range p.bodies {
		if b := &p.bodies[i]; b.states > 0 {
			b.interior.Rates(p.age(t), b.heat, dy[b.at:b.at+b.states])
		}
	}
}

// evaluate writes the orbital part of dy and leaves the kicks, heats and
// torques of every body at y; interiors must be set.
func (p *System) evaluate(y, dy []float64, derivs bool) {
	for i := range p.groups {
		g := &p.groups[i]
		gy, gdy := y[g.at:g.at+g.Dim()], dy[g.at:g.at+g.Dim()]
		g.Flow(gy, gdy, g.rates)
		p.tides(g, gy, gdy, derivs)
	}
}

// tides adds the tides of a group at the state of its last Flow to gdy.
func (p *System) tides(g *group, gy, gdy []float64, derivs bool) {
	for k, j := range g.body {
		b := &p.bodies[j]
		l, gamma := g.Actions(k, gy)
		b.heat = 0
		if b.tide != nil {
			b.tide.Kick(l, gamma, b.interior, b.tideKick, derivs)
			g.Push(k, b.tideKick, gy, gdy)
			b.heat = -g.Power(k, b.tideKick, gy, g.rates)
		}
		if b.primary != nil {
			b.primary.Kick(l, gamma, b.primaryKick)
			g.Push(k, b.primaryKick, gy, gdy)
		}
	}
}

// Jacobian writes dy/dt and its analytic derivative to y, row-major Dim × Dim.
func (p *System) Jacobian(t float64, y, dy, jac []float64) {
	p.set(y)
	clear(jac)
	p.evaluate(y, dy, true)
	for i := range p.groups {
		g := &p.groups[i]
		gy := y[g.at : g.at+g.Dim()]
		block := jac[g.at*p.dim+g.at:]
		g.Jacobian(gy, g.rates, block, p.dim)
		for k, j := range g.body {
			b := &p.bodies[j]
			if b.primary != nil {
				g.PushDerivs(k, b.primaryKick, gy, block, p.dim, -1)
			}
			if b.tide == nil {
				continue
			}
			g.PushDerivs(k, b.tideKick, gy, block, p.dim, b.at-g.at)
			if b.states == 0 {
				continue
			}
			clear(p.heatRow)
			g.PowerDerivs(k, b.tideKick, gy, g.rates, -1, p.heatRow[g.at:], b.at-g.at)
			p.interiorRows(t, b, dy, jac)
		}
	}
}

// interiorRows writes the rows of one interior; heatRow holds dheat/dy.
func (p *System) interiorRows(t float64, b *body, dy, jac []float64) {
	n := b.states
	b.interior.Rates(p.age(t), b.heat, dy[b.at:b.at+n])
	b.interior.RatesDerivs(p.age(t), b.heat, p.dxdx[:n*n], p.dxdheat[:n])
	for r := 0; r < n; r++ {
		row := jac[(b.at+r)*p.dim : (b.at+r+1)*p.dim]
		for j, d := range p.heatRow {
			row[j] = p.dxdheat[r] * d
		}
		for j := 0; j < n; j++ {
			row[b.at+j] += p.dxdx[r*n+j]
		}
	}
}

// Freeze, Kinks, Kink and Cross hand the branches of the interiors to the
// integrator.
func (p *System) Freeze(t float64, y []float64) {
	for i := range p.bodies {
		if b := &p.bodies[i]; b.states > 0 {
			b.interior.Freeze(p.age(t), y[b.at:b.at+b.states])
		}
	}
}

// Kinks returns their number.
func (p *System) Kinks() int { return len(p.kinks) }

// Kink is positive on one side of kink i and negative on the other.
func (p *System) Kink(i int, t float64, y []float64) float64 {
	k := p.kinks[i]
	b := &p.bodies[k.body]
	return b.interior.Kink(k.index, p.age(t), y[b.at:b.at+b.states])
}

// Cross chooses the branch on the far side of kink i.
func (p *System) Cross(i int, up bool) {
	k := p.kinks[i]
	p.bodies[k.body].interior.Cross(k.index, up)
}
