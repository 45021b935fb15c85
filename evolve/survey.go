package evolve

import (
	"fmt"
	"math"

	"tidekiln/evolve/ode"
	"tidekiln/orbit"
	"tidekiln/scenarios"
	"tidekiln/thermal"
)

// Estimates are what a scenario means at its start, before any integration.
// What does not apply is NaN.
type Estimates struct {
	Bodies []BodyEstimate
	Chains []ChainEstimate
}

// BodyEstimate is one orbiter at the start, SI.
type BodyEstimate struct {
	Name          string
	Mass, Radius  float64
	Density       float64
	Chain         string // "" for a lone orbiter; in a chain the eccentricity is forced
	Orbit         orbit.Elements
	Roche, Hill   float64 // m
	K             float64 // −Im k2 at the mean motion: the body's k2/Q
	ReK2          float64
	State         thermal.Snapshot
	TidalHeat     float64 // W
	Loss          float64 // W, through the surface
	Radiogenic    float64 // W
	Flux          float64 // tidal heat by area, W/m²
	Damping       float64 // 1/γ: e-folding time of the free eccentricity under its own tide, s
	Migration     float64 // a/ȧ under the central body's tide alone, s
	Cooling       float64 // T/|dT/dt| without tidal heat, s
	Maxwell       float64 // η/μ, s
	Stretch       orbit.Stretch
	ApsidalExcess float64 // (λ̇ − ϖ̇)/n − 1: the error of taking n for the forcing frequency
}

// ChainEstimate is one chain at the start, SI.
type ChainEstimate struct {
	Name       string
	Resonances []ResonanceEstimate
	Modes      []orbit.Mode // librations on the slow manifold, fastest first
	SteadyHeat float64      // W, what the chain dissipates once the resonance is steady
	Heat       float64      // W, what it dissipates now
}

// ResonanceEstimate is one resonance at the start.
type ResonanceEstimate struct {
	Inner, Outer string
	Ratio        string  // "2:1"
	Offset       float64 // rad/s
	Centre       float64 // libration centre of the angle to the chain's first pair, rad; NaN for that
}

func ratioName(j int) string { return fmt.Sprintf("%d:%d", j+1, j) }

// Survey estimates. A displacement, m, replaces that of a fluid surface in the
// stretch-work bound; 0 keeps it.
func Survey(s *scenarios.Scenario, displacement float64) (*Estimates, error) {
	p, y, err := NewSystem(s)
	if err != nil {
		return nil, err
	}
	integ, err := ode.NewRadau(p, p.Tolerances())
	if err != nil {
		return nil, err
	}
	if err := integ.Start(0, y); err != nil {
		return nil, err
	}
	y = append([]float64(nil), integ.State()...)
	dy, jac := make([]float64, p.dim), make([]float64, p.dim*p.dim)
	p.Jacobian(0, y, dy, jac)
	q := make([]float64, p.NumQuadratures())
	p.fluxes(0, y, q)
	e := &Estimates{}
	for i := range p.bodies {
		e.Bodies = append(e.Bodies, p.estimate(i, y, q, displacement))
	}
	for i := range p.groups {
		if p.groups[i].chain != nil {
			c, err := p.estimateChain(i, jac, e.Bodies)
			if err != nil {
				return nil, err
			}
			e.Chains = append(e.Chains, c)
		}
	}
	return e, nil
}

// estimate fills in one body; the system has been evaluated at y.
func (p *System) estimate(i int, y, q []float64, displacement float64) BodyEstimate {
	nan := math.NaN()
	b := &p.bodies[i]
	g := &p.groups[b.group]
	gy := y[g.at : g.at+g.Dim()]
	e := BodyEstimate{
		Name: b.name, Mass: b.mass, Radius: b.radius, Density: b.mass / (4. / 3 * math.Pi * math.Pow(b.radius, 3)),
		Chain: g.name, Orbit: g.Elements(b.member, gy, g.rates),
		Roche: p.primary.RocheLimit(b.mass, b.radius),
		K:     nan, ReK2: nan, TidalHeat: nan, Loss: nan, Radiogenic: nan, Flux: nan,
		Damping: nan, Migration: nan, Cooling: nan, Maxwell: nan, ApsidalExcess: nan,
	}
	e.Hill = p.primary.HillRadius(b.mass, e.Orbit.SemimajorAxis, e.Orbit.Eccentricity)
	if b.primary != nil {
		e.Migration = 1 / (2 * b.primaryKick.Raise)
	}
	e.Stretch = p.primary.StretchWork(b.mass, b.radius, e.Orbit.SemimajorAxis, e.Orbit.Eccentricity, 2*math.Pi/e.Orbit.MeanMotion, displacement)
	if b.interior == nil {
		return e
	}
	k2 := b.interior.Love(e.Orbit.KeplerMotion)
	e.K, e.ReK2 = -imag(k2), real(k2)
	e.TidalHeat, e.Loss = q[perBody*i+heatOf], q[perBody*i+lossOf]
	e.Flux = e.TidalHeat / (4 * math.Pi * b.radius * b.radius)
	e.Damping = -1 / b.tideKick.Pump
	l, gamma := g.Actions(b.member, gy)
	e.ApsidalExcess = e.TidalHeat/b.tide.ModeHeat(l, gamma, b.tideKick) - 1
	if b.states == 0 {
		return e
	}
	e.Radiogenic = q[perBody*i+radiogenicOf]
	e.State = b.interior.Snapshot()
	e.Maxwell = optional(e.State.Viscosity) / optional(e.State.Rigidity)
	e.Cooling = p.coolingTime(b, y[b.at:b.at+b.states])
	return e
}

// coolingTime returns T/|dT/dt| of an interior left without tidal heat.
func (p *System) coolingTime(b *body, x []float64) float64 {
	before := optional(b.interior.Snapshot().Temperature)
	rate := make([]float64, len(x))
	b.interior.Rates(p.age(0), 0, rate)
	// A step that moves the fastest variable by a part in 10⁶ of its scale.
	dt := math.Inf(1)
	for i, v := range b.interior.States() {
		dt = math.Min(dt, 1e-6*v.Scale/math.Abs(rate[i]))
	}
	moved := make([]float64, len(x))
	for i := range x {
		moved[i] = x[i] + dt*rate[i]
	}
	b.interior.Set(moved)
	after := optional(b.interior.Snapshot().Temperature)
	b.interior.Set(x)
	return before * dt / math.Abs(after-before)
}

func (p *System) estimateChain(i int, jac []float64, bodies []BodyEstimate) (ChainEstimate, error) {
	g := &p.groups[i]
	c := ChainEstimate{Name: g.name}
	n := g.Dim()
	block := make([]float64, n*n)
	for r := 0; r < n; r++ {
		copy(block[r*n:(r+1)*n], jac[(g.at+r)*p.dim+g.at:])
	}
	var err error
	if g.free {
		// A circulating angle has no centre to librate about.
	} else if c.Modes, err = g.chain.Spectrum(block, n); err != nil {
		return c, fmt.Errorf("chain %s: %w", g.name, err)
	}
	var masses, axes, motions, torques []float64
	for k, j := range g.body {
		b := &p.bodies[j]
		masses = append(masses, b.mass)
		axes = append(axes, bodies[j].Orbit.SemimajorAxis)
		motions = append(motions, bodies[j].Orbit.MeanMotion)
		torques = append(torques, b.torque)
		c.Heat += b.heat
		if k == len(g.body)-1 {
			break
		}
		centre := math.NaN()
		if k > 0 && !g.free {
			centre = g.chain.Centre(k)
		}
		c.Resonances = append(c.Resonances, ResonanceEstimate{
			Inner: b.name, Outer: p.bodies[g.body[k+1]].name, Ratio: ratioName(g.chain.Commensurability(k)),
			Offset: g.rates.Offset[k], Centre: centre,
		})
	}
	c.SteadyHeat = orbit.SteadyHeat(p.primary.Mass, masses, axes, motions, torques)
	return c, nil
}
