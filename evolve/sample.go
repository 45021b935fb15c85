package evolve

import (
	"math"

	"tidekiln/orbit"
	"tidekiln/thermal"
)

// Megayear is the unit of time of the tables, s.
const Megayear = 1e6 * orbit.Year

const (
	degree       = math.Pi / 180
	degreePerDay = degree / orbit.Day
)

// moment is what every row of one time shares.
type moment struct {
	runID string
	t     float64 // Myr
	grid  bool
}

// bodySample is one body at one time, SI.
type bodySample struct {
	moment
	name       string
	orbit      orbit.Elements
	interior   bool // a tide is raised in it
	state      thermal.Snapshot
	love       complex128 // at the mean motion; NaN parts where unknown
	heat       float64    // tidal, W
	loss       float64    // W
	convective float64    // W, NaN without a thermal state
	melt       float64
	radiogenic float64
	area       float64
}

// resonanceSample is one resonance at one time, SI.
type resonanceSample struct {
	moment
	chain, inner, outer string
	j                   int
	offset              float64
	angle               float64 // NaN for a chain's first pair
	width               float64 // half-width of its libration, rad; NaN if unknown
	argument            float64 // rad
	strongest           int     // member whose argument it is
}

// systemSample is the ledger at one time, SI.
type systemSample struct {
	moment
	regime                 string
	orbital, internal      float64
	heat, loss, radiogenic float64
	work, impulse, imposed float64
	momentum               float64
	closure                closure
	step                   float64 // s; NaN at the start
	hasTorque, hasInterior bool
	hasThermalState        bool
}

// sampler turns states into samples.
type sampler struct {
	p          *System
	carried    *carrier
	dy, q      []float64
	bodies     []bodySample
	resonances []resonanceSample
	librations []librationSample
	system     systemSample
}

func newSampler(p *System, carried *carrier, runID string) *sampler {
	s := &sampler{p: p, carried: carried, librations: carried.samples(runID), dy: make([]float64, p.dim), q: make([]float64, p.NumQuadratures()), bodies: make([]bodySample, len(p.bodies))}
	for i := range s.bodies {
		s.bodies[i].runID = runID
		s.bodies[i].name = p.bodies[i].name
		r := p.bodies[i].radius
		s.bodies[i].area = 4 * math.Pi * r * r
	}
	for i := range p.groups {
		g := &p.groups[i]
		for r := 0; r+1 < len(g.body); r++ {
			strongest, _ := g.chain.Strongest(r)
			s.resonances = append(s.resonances, resonanceSample{
				strongest: strongest,
				moment:    moment{runID: runID}, chain: g.name, j: g.chain.Commensurability(r),
				inner: p.bodies[g.body[r]].name, outer: p.bodies[g.body[r+1]].name,
			})
		}
	}
	s.system.runID = runID
	s.system.regime = carried.regime()
	return s
}

// books is the state of the ledger that samples share: what was imposed, and
// how the accounts close at the end of the step that holds them. Between the
// ends of steps the states are interpolated, which is not the books' error.
type books struct {
	imposed float64
	closure closure
	step    float64 // s
}

// take fills the samples at (t, y); sums are the quadratures up to t.
func (s *sampler) take(t float64, y []float64, b books, sums []float64, myr float64, grid bool) {
	p := s.p
	p.set(y)
	p.evaluate(y, s.dy, false)
	p.fluxes(t, y, s.q)
	at := func(m *moment) { m.t, m.grid = myr, grid }
	for i := range p.bodies {
		body, o := &p.bodies[i], &s.bodies[i]
		g := &p.groups[body.group]
		at(&o.moment)
		o.orbit = g.Elements(body.member, y[g.at:g.at+g.Dim()], g.rates)
		o.interior = body.interior != nil
		o.heat, o.loss, o.radiogenic = s.q[perBody*i+heatOf], s.q[perBody*i+lossOf], s.q[perBody*i+radiogenicOf]
		o.convective, o.melt = math.NaN(), math.NaN()
		if body.interior == nil {
			continue
		}
		o.love = body.interior.Love(o.orbit.KeplerMotion)
		o.state = body.interior.Snapshot()
		if body.states > 0 {
			f := body.interior.Balance(p.age(t))
			o.convective, o.melt = f.ConvectiveLoss, f.MeltLoss
		}
	}
	i := 0
	for k := range p.groups {
		g := &p.groups[k]
		for r := 0; r+1 < len(g.body); r++ {
			o := &s.resonances[i]
			i++
			at(&o.moment)
			o.offset, o.angle, o.width = g.rates.Offset[r], math.NaN(), math.NaN()
			re, im := g.chain.Argument(r, o.strongest, y[g.at:g.at+g.Dim()])
			o.argument = math.Atan2(im, re)
			if r > 0 {
				o.angle = g.chain.Angle(r, y[g.at:g.at+g.Dim()])
			}
		}
	}
	s.carried.sample(t, myr, grid, s.librations, s.resonances)
	o := &s.system
	at(&o.moment)
	o.orbital, o.internal, _ = p.stores(t, y)
	o.momentum = 0
	for k := range p.groups {
		g := &p.groups[k]
		gy := y[g.at : g.at+g.Dim()]
		o.momentum += g.TotalAngularMomentum(gy)
		o.orbital += g.TotalEnergy(gy) - g.Energy(gy)
	}
	o.heat, o.loss, o.radiogenic = 0, 0, 0
	o.hasInterior, o.hasThermalState, o.hasTorque = false, false, false
	for i := range p.bodies {
		o.heat += sums[perBody*i+heatOf]
		o.loss += sums[perBody*i+lossOf]
		o.radiogenic += sums[perBody*i+radiogenicOf]
		o.hasInterior = o.hasInterior || p.bodies[i].interior != nil
		o.hasThermalState = o.hasThermalState || p.bodies[i].states > 0
		o.hasTorque = o.hasTorque || p.bodies[i].primary != nil
	}
	total := sums[perBody*len(p.bodies):]
	o.work, o.impulse, o.imposed = total[centralWork], total[centralTorque], b.imposed
	o.closure, o.step = b.closure, b.step
}
