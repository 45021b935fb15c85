package evolve

import (
	"math"
	"math/cmplx"
	"math/rand/v2"
	"slices"

	"tidekiln/evolve/ode"
	"tidekiln/orbit"
)

// carrier carries the librations of every chain along an adiabatic history. The
// steps damp them numerically, so their actions are kept beside the state: the
// eigenmodes of the chain's block of the Jacobian, tides included, give
//
//	d ln √I/dt = Re λ − Re(w·dv/dt)
//
// with v scaled to unit action (see [orbit.Transport]). They are taken at each
// accepted step and in its middle, on the slow manifold; Simpson's rule sums
// Re λ. The block leaves out how an interior answers within one libration, which
// changes λ by a part of the order of the period over the thermal time.
//
// The law is linear. A half-width is not let beyond 180°, where it has long
// ceased to mean anything.
type carrier struct {
	p          *System
	chains     []libration
	followed   bool // librations are in the state; there are no chains here
	y, dy, jac []float64
}

// libration carries those of one chain.
type libration struct {
	group    int
	knots    []*knot // of the last step, its beginning first; one at a start
	spare    []*knot
	angles   []string  // their names
	first    float64   // least ω² at the start of the history, s⁻²
	passed   []passage // of modes in the last step
	halvings int       // in the last step
	lost     error     // why nothing is known any more: the centre is unstable
	// What has been told and is not to be told again while it lasts.
	toldWide           []bool
	toldFold, toldLost bool
}

// knot is where a chain's librations stand at one time.
type knot struct {
	t     float64
	modes *orbit.Librations
	size  []float64   // ln √I of each mode, I in J s
	drift []float64   // of that, what the drift of the centre did since the knot before
	width [][]float64 // half-width of every angle at unit action, rad
}

func newKnot(c *orbit.Chain) *knot {
	k := &knot{modes: c.NewLibrations()}
	n := len(k.modes.Modes)
	k.size, k.drift, k.width = make([]float64, n), make([]float64, n), make([][]float64, n)
	for i := range k.width {
		k.width[i] = make([]float64, c.Angles())
	}
	return k
}

// newCarrier starts from the chains' half-widths at (t, y), or takes up those of
// a continued history.
func newCarrier(p *System, t float64, y []float64, stored []float64) (*carrier, error) {
	l := &carrier{p: p, y: make([]float64, p.dim), dy: make([]float64, p.dim), jac: make([]float64, p.dim*p.dim)}
	for i := range p.groups {
		g := &p.groups[i]
		if g.chain == nil || g.free {
			continue
		}
		c := libration{group: i, knots: []*knot{newKnot(g.chain)}, first: math.Inf(1)}
		c.toldWide = make([]bool, len(c.end().size))
		for angle := range g.chain.Angles() {
			c.angles = append(c.angles, p.angleName(g, angle))
		}
		l.chains = append(l.chains, c)
	}
	l.linearise(t, y)
	for i := range l.chains {
		c := &l.chains[i]
		k := c.end()
		k.t = t
		if c.lost = k.modes.Find(l.block(c), p.dim); c.lost != nil {
			continue
		}
		l.widths(c, k, y)
		for j := range k.size {
			k.size[j] = math.Log(p.scenario.Chains[c.group].Libration / slices.Max(k.width[j]))
		}
		c.first = k.slowest()
	}
	if stored != nil {
		return l, l.unpack(stored)
	}
	return l, nil
}

// linearise computes the Jacobian at (t, y).
func (l *carrier) linearise(t float64, y []float64) {
	if len(l.chains) > 0 {
		l.p.Jacobian(t, y, l.dy, l.jac)
	}
}

// block is where the block of a chain begins in the Jacobian.
func (l *carrier) block(c *libration) []float64 {
	at := l.p.groups[c.group].at
	return l.jac[at*l.p.dim+at:]
}

func (l *carrier) widths(c *libration, k *knot, y []float64) {
	g := &l.p.groups[c.group]
	for i := range k.width {
		g.chain.Widths(y[g.at:g.at+g.Dim()], k.modes.Modes[i].Right, k.width[i])
	}
}

// advance carries every chain over an accepted step.
func (l *carrier) advance(seg *ode.Segment) {
	for i := range l.chains {
		c := &l.chains[i]
		last := len(c.knots) - 1
		c.knots[0], c.knots[last] = c.knots[last], c.knots[0]
		c.spare = append(c.spare, c.knots[1:]...)
		c.knots = c.knots[:1]
		c.passed, c.halvings = c.passed[:0], 0
		if c.lost == nil {
			c.lost = l.carry(c, seg, seg.T1)
		}
	}
}

// knot returns one that is not in use, at the time t.
func (l *carrier) knot(c *libration, t float64) *knot {
	var k *knot
	if n := len(c.spare); n > 0 {
		k, c.spare = c.spare[n-1], c.spare[:n-1]
	} else {
		k = newKnot(l.p.groups[c.group].chain)
	}
	k.t = t
	return k
}

// find computes the modes of the knot b within a step from those of a.
func (l *carrier) find(c *libration, seg *ode.Segment, a, b *knot) error {
	seg.Eval(b.t, l.y)
	l.linearise(b.t, l.y)
	if err := b.modes.Track(a.modes, l.block(c), l.p.dim); err != nil {
		return err
	}
	l.widths(c, b, l.y)
	return nil
}

// mostHalvings bounds the work of a step: a passage takes some ten, and modes
// that resemble themselves in no stretch are not worth more.
const mostHalvings = 64

// carry follows the modes from the last knot to the time t within a step. A
// stretch in which modes change places or character is halved, on the polynomial
// of the step, until they do so smoothly or it is short (see [passage]).
func (l *carrier) carry(c *libration, seg *ode.Segment, t float64) error {
	a := c.end()
	span := t - a.t
	m, b := l.knot(c, a.t+0.5*span), l.knot(c, t)
	if err := l.find(c, seg, a, m); err != nil {
		return err
	}
	if err := l.find(c, seg, m, b); err != nil {
		return err
	}
	smooth, i, j := compare(a, m)
	if smooth {
		smooth, i, j = compare(m, b)
	}
	if !smooth {
		pass := meet(a, m, b, i, j)
		if !pass.short(span) && c.halvings < mostHalvings {
			c.halvings++
			c.spare = append(c.spare, m, b)
			if err := l.carry(c, seg, m.t); err != nil {
				return err
			}
			return l.carry(c, seg, t)
		}
		c.spare = append(c.spare, m)
		pass.carryOver(a, b)
		c.knots = append(c.knots, b)
	} else {
		for i := range a.size {
			// The parabola through three values, over either half.
			f, g, h := a.modes.Modes[i].Growth, m.modes.Modes[i].Growth, b.modes.Modes[i].Growth
			m.drift[i], _ = orbit.Transport(&a.modes.Modes[i], &m.modes.Modes[i])
			b.drift[i], _ = orbit.Transport(&m.modes.Modes[i], &b.modes.Modes[i])
			// Over the whole it would be wrong by four times as much.
			whole, _ := orbit.Transport(&a.modes.Modes[i], &b.modes.Modes[i])
			better := (m.drift[i] + b.drift[i] - whole) / 6
			m.drift[i] += better
			b.drift[i] += better
			m.size[i] = m.bounded(i, a.size[i]+m.drift[i]+span/24*(5*f+8*g-h))
			b.size[i] = b.bounded(i, m.size[i]+b.drift[i]+span/24*(5*h+8*g-f))
		}
		c.knots = append(c.knots, m, b)
	}
	for i := range a.size {
		for j := range i {
			if pass := meet(a, m, b, j, i); pass.counts() {
				pass.exchange(b)
				c.passed = append(c.passed, pass)
			}
		}
	}
	return nil
}

// bounded is a size of mode i, or the one that makes it 180° wide.
func (k *knot) bounded(i int, size float64) float64 {
	return math.Min(size, math.Log(math.Pi/slices.Max(k.width[i])))
}

// restart goes on under a system whose rules have changed, at (t, y) within the
// last step or at its end: the actions stay.
func (l *carrier) restart(p *System, t float64, y []float64) {
	l.p = p
	l.linearise(t, y)
	for i := range l.chains {
		c := &l.chains[i]
		if c.toldLost {
			continue
		}
		k := newKnot(p.groups[c.group].chain)
		k.t = t
		for j := range k.size {
			k.size[j] = c.at(t).size(j)
		}
		// What was lost later in a step that a change cuts short is not.
		if c.lost = k.modes.Track(c.end().modes, l.block(c), p.dim); c.lost == nil {
			l.widths(c, k, y)
			c.knots, c.spare = []*knot{k}, nil // the others are the old system's
		}
	}
}

// noCarrier carries nothing: librations are followed.
func noCarrier(p *System) *carrier { return &carrier{p: p, followed: true} }

// displace gives the librations carried to a state on the slow manifold, for
// them to be followed from there: δy = Re Σ √I v e^{iθ}, phases θ from the seed.
func (l *carrier) displace(y []float64, seed int64) {
	phases := rand.New(rand.NewPCG(uint64(seed), 0))
	for i := range l.chains {
		c := &l.chains[i]
		if c.lost != nil {
			continue
		}
		at := l.p.groups[c.group].at
		k := c.end()
		for j := range k.modes.Modes {
			s := cmplx.Rect(math.Exp(k.size[j]), 2*math.Pi*phases.Float64())
			for q, v := range k.modes.Modes[j].Right {
				y[at+q] += real(s * v)
			}
		}
	}
}
