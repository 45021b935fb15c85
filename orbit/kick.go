package orbit

import "math"

// Kick is what a tide does to one orbiter of a [Group]. With Λ0 the reference
// action, u = Λ/Λ0 and g = Γ/Λ0,
//
//	Λ̇ = Λ0·Raise,   Ż = Pump·z (so Γ̇ = 2Γ·Pump, the phase of X untouched),
//
// both in 1/s. The rest are partial derivatives to u, g and, in RaiseX and
// PumpX, to the states of the interior that answers.
type Kick struct {
	Raise, RaiseU, RaiseG float64
	Pump, PumpU, PumpG    float64
	RaiseX, PumpX         []float64
}

// NewKick makes a kick with room for an interior of that many states.
func NewKick(states int) *Kick {
	return &Kick{RaiseX: make([]float64, states), PumpX: make([]float64, states)}
}

// Group is a set of orbiters that share a Hamiltonian: a [Chain], or a [Lone]
// orbiter. Its state y begins with l_k = Λ_k/Λ0_k − 1 for each member. Rates
// are valid at the y last given to Flow.
type Group interface {
	Members() int
	Dim() int
	NewRates() *Rates
	// Flow writes the tide-free dy/dt, s⁻¹, and fills the rates.
	Flow(y, dy []float64, w *Rates)
	// Jacobian writes d(Flow)/dy into the leading Dim × Dim block of jac, whose
	// rows are stride apart.
	Jacobian(y []float64, w *Rates, jac []float64, stride int)
	// Actions returns l = Λ/Λ0 − 1 and g = Γ/Λ0 of member k.
	Actions(k int, y []float64) (l, g float64)
	// Push adds the kick of member k to dy.
	Push(k int, t *Kick, y, dy []float64)
	// PushDerivs adds d(Push)/dy to the leading block of jac, and d(Push)/dx to
	// its columns from col on. A negative col leaves those out.
	PushDerivs(k int, t *Kick, y, jac []float64, stride, col int)
	// Power returns the rate ∇H·(kick) at which the kick of member k feeds the
	// group's energy, W, and Torque that of its angular momentum, N m.
	Power(k int, t *Kick, y []float64, w *Rates) float64
	Torque(k int, t *Kick, y []float64) float64
	// PowerDerivs adds scale·dPower/dy to the first Dim places of row and
	// scale·dPower/dx to those from col on. A negative col leaves those out.
	PowerDerivs(k int, t *Kick, y []float64, w *Rates, scale float64, row []float64, col int)
	Elements(k int, y []float64, w *Rates) Elements
	// Energy is H less its Kepler part at the reference, J; TotalEnergy is H.
	Energy(y []float64) float64
	TotalEnergy(y []float64) float64
	// AngularMomentum is Σ(Λ − Γ) less Σ Λ0, kg m² s⁻¹; TotalAngularMomentum is
	// the sum itself.
	AngularMomentum(y []float64) float64
	TotalAngularMomentum(y []float64) float64

	member(k int) *member
}

var (
	_ Group = (*Chain)(nil)
	_ Group = (*Lone)(nil)
)

// Actions returns l and g of member k.
func (c *Chain) Actions(k int, y []float64) (l, g float64) {
	n := len(c.members)
	x, v := y[n+k], y[2*n+k]
	return y[k], 0.5 * (x*x + v*v)
}

func (c *Chain) member(k int) *member { return &c.members[k] }

// Push adds the kick of member k to dy.
func (c *Chain) Push(k int, t *Kick, y, dy []float64) {
	n := len(c.members)
	dy[k] += t.Raise
	dy[n+k] += t.Pump * y[n+k]
	dy[2*n+k] += t.Pump * y[2*n+k]
}

// PushDerivs adds the derivatives of Push.
func (c *Chain) PushDerivs(k int, t *Kick, y, jac []float64, stride, col int) {
	n := len(c.members)
	ix, iv := n+k, 2*n+k
	x, v := y[ix], y[iv]
	for _, r := range [3]struct {
		row        int
		u, g, self float64
		factor     float64
		xs         []float64
	}{
		{k, t.RaiseU, t.RaiseG, 0, 1, t.RaiseX},
		{ix, t.PumpU * x, t.PumpG * x, t.Pump, x, t.PumpX},
		{iv, t.PumpU * v, t.PumpG * v, t.Pump, v, t.PumpX},
	} {
		row := jac[r.row*stride:]
		row[k] += r.u
		row[ix] += r.g * x
		row[iv] += r.g * v
		row[r.row] += r.self
		if col >= 0 {
			for i, d := range r.xs {
				row[col+i] += d * r.factor
			}
		}
	}
}

// Power returns Λ0·Raise·λ̇ + Pump·(2Γ ∂H/∂Γ + X·∇H_res): the kick's part in
// dH/dt.
func (c *Chain) Power(k int, t *Kick, y []float64, w *Rates) float64 {
	m := &c.members[k]
	_, g := c.Actions(k, y)
	longitude := m.n + c.rateRef[k] + w.Longitude[k]
	return m.ref*t.Raise*longitude + t.Pump*(2*g*m.ref*w.Slope[k]-w.Radial[k])
}

// Torque returns d(Λ − Γ)/dt = Λ0 (Raise − 2g Pump).
func (c *Chain) Torque(k int, t *Kick, y []float64) float64 {
	_, g := c.Actions(k, y)
	return c.members[k].ref * (t.Raise - 2*g*t.Pump)
}

// PowerDerivs adds the derivatives of Power.
func (c *Chain) PowerDerivs(k int, t *Kick, y []float64, w *Rates, scale float64, row []float64, col int) {
	n := len(c.members)
	m := &c.members[k]
	ix, iv := n+k, 2*n+k
	u, x, v := 1+y[k], y[ix], y[iv]
	g := 0.5 * (x*x + v*v)
	longitude := m.n + c.rateRef[k] + w.Longitude[k]
	radial := 2*g*m.ref*w.Slope[k] - w.Radial[k]

	raiseWeight, pumpWeight := scale*m.ref*longitude, scale*radial
	gradG := raiseWeight*t.RaiseG + pumpWeight*t.PumpG
	row[k] += raiseWeight*t.RaiseU + pumpWeight*t.PumpU
	if col >= 0 {
		for i := range t.RaiseX {
			row[col+i] += raiseWeight*t.RaiseX[i] + pumpWeight*t.PumpX[i]
		}
	}

	// λ̇ = n₀u⁻³ + oblate + resonant, and the radial term, by pairs.
	p := 1 / u
	rateU, rateG, slopeU, slopeG := m.oblateDerivs(u, g)
	a, b := scale*m.ref*t.Raise, scale*t.Pump
	row[k] += a*(-3*m.n*p*p*p*p+rateU) + b*2*g*m.ref*slopeU
	gradG += a*rateG + b*2*m.ref*(w.Slope[k]+g*slopeG)
	row[ix] += gradG * x
	row[iv] += gradG * v
	if k < len(c.pairs) {
		// as the inner body: λ̇ gains ½ Re P/(uΛ0), the radial term Re P.
		pr := &w.pair[k]
		h := a * 0.5 / (m.ref * u)
		row[k] -= h * pr.reP / u
		pr.addP(row, k, n, h-b)
	}
	if k > 0 {
		// as the outer body: (2 Re P + 2.5 Re Q)/(uΛ0) and Re Q.
		pr := &w.pair[k-1]
		h := a / (m.ref * u)
		row[k] -= h * (2*pr.reP + 2.5*pr.reQ) / u
		pr.addP(row, k-1, n, 2*h)
		pr.addQ(row, k-1, n, 2.5*h-b)
	}
}

// addP adds f·∇Re P of pair r to row.
func (t *terms) addP(row []float64, r, n int, f float64) {
	row[r] -= f * 0.5 * t.reP / t.ui
	row[r+1] -= f * 2 * t.reP / t.uo
	row[n+r] += f * t.p * t.cos
	row[2*n+r] += f * t.p * t.sin
	if t.angleIndex >= 0 {
		row[t.angleIndex] -= f * t.imP
	}
}

// addQ adds f·∇Re Q of pair r to row.
func (t *terms) addQ(row []float64, r, n int, f float64) {
	row[r+1] -= f * 2.5 * t.reQ / t.uo
	row[n+r+1] += f * t.q * t.cos
	row[2*n+r+1] += f * t.q * t.sin
	if t.angleIndex >= 0 {
		row[t.angleIndex] -= f * t.imQ
	}
}

// Shape returns the semi-major axis, m, and the eccentricity of member k,
// without the rates that [Group.Elements] wants.
func Shape(g Group, k int, y []float64) (a, e float64) {
	l, gamma := g.Actions(k, y)
	u := 1 + l
	return g.member(k).a * u * u, math.Sqrt(eccentricitySquared(u, gamma))
}
