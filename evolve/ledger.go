package evolve

import "math"

// The quadratures of a history, in this order: for each body the tidal heat,
// the surface loss and the radiogenic heat, J; then the work and the torque of
// the central body, J and N m s, and the turnover of energy and of angular
// momentum, ∫(Σ|tidal heat| + |central work|)dt and ∫Σ|torque|dt, by which
// closures are judged.
const (
	heatOf = iota
	lossOf
	radiogenicOf
	perBody
)

const (
	centralWork = iota
	centralTorque
	energyTurnover
	momentumTurnover
	perSystem
)

// NumQuadratures returns their number.
func (p *System) NumQuadratures() int { return perBody*len(p.bodies) + perSystem }

// Integrands writes the rates of the quadratures at (t, y).
func (p *System) Integrands(t float64, y, q []float64) {
	p.set(y)
	p.evaluate(y, p.heatRow, false)
	p.fluxes(t, y, q)
}

// fluxes writes the same at the state y last evaluated.
func (p *System) fluxes(t float64, y, q []float64) {
	p.centralWork(y)
	total := q[perBody*len(p.bodies):]
	clear(total)
	for i := range p.bodies {
		b := &p.bodies[i]
		own := q[perBody*i : perBody*(i+1)]
		own[heatOf], own[lossOf], own[radiogenicOf] = b.heat, 0, 0
		switch {
		case b.states > 0:
			f := b.interior.Balance(p.age(t))
			own[lossOf], own[radiogenicOf] = f.SurfaceLoss, f.RadiogenicHeat
		case b.interior != nil:
			// An interior without a thermal state radiates its heat at once.
			own[lossOf] = b.heat
		}
		total[centralWork] += b.work
		total[centralTorque] += b.torque
		total[energyTurnover] += math.Abs(b.heat) + math.Abs(b.work)
		total[momentumTurnover] += math.Abs(b.torque)
	}
}

// centralWork leaves in every body what the central body does to its orbit, at
// the state y last evaluated. Only the books ask for it.
func (p *System) centralWork(y []float64) {
	for i := range p.bodies {
		b := &p.bodies[i]
		b.work, b.torque = 0, 0
		if b.primary != nil {
			g := &p.groups[b.group]
			gy := y[g.at : g.at+g.Dim()]
			b.work = g.Power(b.member, b.primaryKick, gy, g.rates)
			b.torque = g.Torque(b.member, b.primaryKick, gy)
		}
	}
}

// stores returns the energy of all orbits less its value at the reference, the
// internal energy of all interiors, J, and the angular momentum of all orbits
// less its reference, kg m² s⁻¹.
func (p *System) stores(t float64, y []float64) (orbital, internal, momentum float64) {
	p.set(y)
	for i := range p.groups {
		g := &p.groups[i]
		gy := y[g.at : g.at+g.Dim()]
		orbital += g.Energy(gy)
		momentum += g.AngularMomentum(gy)
	}
	for i := range p.bodies {
		if b := &p.bodies[i]; b.states > 0 {
			internal += b.interior.Balance(p.age(t)).Energy
		}
	}
	return orbital, internal, momentum
}

// ledger holds the accounts of a history up to some time.
type ledger struct {
	orbital0, internal0, momentum0 float64   // stores at the start
	imposed, spun                  float64   // energy, J, and angular momentum, kg m²/s, brought by changes of the rules and projections
	sums                           []float64 // quadratures
}

// newLedger opens the books at (t, y).
func newLedger(p *System, t float64, y []float64) *ledger {
	l := &ledger{sums: make([]float64, p.NumQuadratures())}
	l.orbital0, l.internal0, l.momentum0 = p.stores(t, y)
	return l
}

// impose books what a change brought: the differences of the stores of energy
// and of angular momentum under the new and the old rules at one instant.
func (l *ledger) impose(energy, momentum float64) {
	l.imposed += energy
	l.spun += momentum
}

// closure is how far the books are from closing, NaN where nothing turned over:
//
//	energy    |ΔH + ΔE_int + ∫loss − ∫radiogenic − ∫central work − imposed| / ∫(Σ|tidal heat| + |central work|)
//	momentum  |ΔΣ(Λ−Γ) − ∫ΣT − imposed| / ∫Σ|T|
type closure struct{ energy, momentum float64 }

func (l *ledger) closure(p *System, t float64, y, sums []float64) closure {
	orbital, internal, momentum := p.stores(t, y)
	n := len(p.bodies)
	total := sums[perBody*n:]
	residual := (orbital - l.orbital0) + (internal - l.internal0) - total[centralWork] - l.imposed
	for i := 0; i < n; i++ {
		residual += sums[perBody*i+lossOf] - sums[perBody*i+radiogenicOf]
	}
	return closure{
		energy:   ratio(math.Abs(residual), total[energyTurnover]),
		momentum: ratio(math.Abs(momentum-l.momentum0-total[centralTorque]-l.spun), total[momentumTurnover]),
	}
}

// ratio is NaN for a denominator of zero.
func ratio(a, b float64) float64 {
	if b == 0 {
		return math.NaN()
	}
	return a / b
}
