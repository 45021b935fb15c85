package evolve

import (
	"errors"
	"fmt"
	"math"
	"slices"

	"tidekiln/evolve/ode"
	"tidekiln/orbit"
)

// carrier carries the librations of every chain along an adiabatic history.
// The steps damp them numerically, so their actions are kept beside the state:
// at each accepted step, which lies on the slow manifold, the eigenmodes of the
// chain's block of the Jacobian, tides included, give
//
//	d ln √I/dt = Re λ − Re(w·dv/dt)
//
// with v scaled to unit action (see [orbit.Transport]); Re λ is summed by the
// trapezium rule. The block leaves out how an interior answers within one
// libration, which is second order in the tides' time scales over the period.
//
// The law is linear. A half-width is not let beyond 180°, where it has long
// ceased to mean anything.
type carrier struct {
	p          *System
	chains     []libration
	y, dy, jac []float64
}

// libration carries those of one chain.
type libration struct {
	group    int
	from, to *knot   // the last step; the same time at a start
	first    float64 // least ω² at the start of the history, s⁻²
	// What has been told and is not to be told again while it lasts.
	saidWide []bool
	saidFold bool
	saidLost bool
	lost     bool     // the centre is unstable: nothing is known any more
	angles   []string // their names
}

// knot is where a chain's librations stand at one time.
type knot struct {
	t     float64
	modes *orbit.Librations
	size  []float64   // ln √I of each mode, I in J s
	drift []float64   // of that, what the drift of the centre did since the last step
	width [][]float64 // half-width of every angle at unit action, rad
	cross string      // the modes that crossed since the last step, or ""
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

// newCarrier starts from the chains' half-widths at (t, y), or takes up
// those of a continued history.
func newCarrier(p *System, t float64, y []float64, stored []float64) (*carrier, error) {
	l := &carrier{p: p, y: make([]float64, p.dim), dy: make([]float64, p.dim), jac: make([]float64, p.dim*p.dim)}
	for i := range p.groups {
		if c := p.groups[i].chain; c != nil {
			l.chains = append(l.chains, libration{group: i, from: newKnot(c), to: newKnot(c)})
		}
	}
	l.linearise(t, y)
	for i := range l.chains {
		c := &l.chains[i]
		g := &p.groups[c.group]
		c.from.t, c.to.t = t, t
		c.saidWide = make([]bool, len(c.to.modes.Modes))
		for angle := range g.chain.Angles() {
			c.angles = append(c.angles, l.angleName(c, angle))
		}
		if err := c.to.modes.Find(l.block(c), p.dim); err != nil {
			if !errors.Is(err, orbit.ErrUnstable) {
				return nil, fmt.Errorf("chain %s: %w", g.name, err)
			}
			c.lost = true
			continue
		}
		l.widths(c, c.to, y)
		c.first = math.Inf(1)
		for k := range c.to.size {
			c.to.size[k] = math.Log(p.scenario.Chains[i].Libration / slices.Max(c.to.width[k]))
			c.first = math.Min(c.first, squared(c.to.modes.Modes[k].Frequency))
		}
	}
	if stored != nil {
		return l, l.unpack(stored)
	}
	return l, nil
}

func squared(x float64) float64 { return x * x }

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
func (l *carrier) advance(seg *ode.Segment) error {
	for i := range l.chains {
		c := &l.chains[i]
		c.from, c.to = c.to, c.from
		c.to.t = seg.T1
		clear(c.from.drift)
		c.from.cross, c.to.cross = "", ""
		if c.lost {
			continue
		}
		err := l.carry(c, seg, c.from, c.to)
		switch {
		case errors.Is(err, orbit.ErrUnstable):
			c.lost = true
		case err != nil:
			return fmt.Errorf("chain %s at %.9g Myr: %w", l.p.groups[c.group].name, seg.T1/Megayear, err)
		}
	}
	return nil
}

// alike is how much a mode must resemble itself over a stretch: there a mixing
// of two modes by 0.3 rad still leaves the transport, of third order in it,
// within a few per cent.
const alike = 0.9

// carry follows the modes from the knot a to the time of b.
//
// Two librations whose frequencies would cross repel each other instead, and
// over the slow drift of a chain each keeps its place in the order of
// frequencies and its action, while their vectors change places. Steps may be
// longer than that takes, so a stretch over which modes change places or
// character is halved, on the polynomial of the step, until they do so smoothly.
// A stretch much shorter than 1/√|dΔω/dt| needs no halving: a gap that is not
// seen there is jumped (Landau 1932, Phys. Z. Sowjetunion 2, 46; Zener 1932, Proc. R. Soc.
// A 137, 696), and the modes keep their character and cross.
func (l *carrier) carry(c *libration, seg *ode.Segment, a, b *knot) error {
	seg.Eval(b.t, l.y)
	l.linearise(b.t, l.y)
	if err := b.modes.Track(a.modes, l.block(c), l.p.dim); err != nil {
		return err
	}
	l.widths(c, b, l.y)
	span := b.t - a.t
	smooth, first, second := compare(a, b)
	if !smooth {
		turn := math.Abs((b.gap(first, second) - a.gap(first, second)) / span)
		if span > sharp/math.Sqrt(turn) && a.t+0.5*span > a.t && a.t+0.5*span < b.t {
			middle := newKnot(l.p.groups[c.group].chain)
			middle.t = a.t + 0.5*span
			if err := l.carry(c, seg, a, middle); err != nil {
				return err
			}
			return l.carry(c, seg, middle, b)
		}
		b.cross = fmt.Sprintf("%d and %d", first+1, second+1)
	} else {
		b.cross = a.cross
	}
	for k := range b.size {
		change, _ := orbit.Transport(&a.modes.Modes[k], &b.modes.Modes[k])
		b.drift[k] = a.drift[k] + change
		b.size[k] = a.size[k] + change + 0.5*span*(a.modes.Modes[k].Growth+b.modes.Modes[k].Growth)
		b.size[k] = math.Min(b.size[k], math.Log(math.Pi/slices.Max(b.width[k])))
	}
	return nil
}

// sharp, in units of 1/√|dΔω/dt|, is the stretch within which a gap that is not
// seen is jumped: such a gap 2a is passed within the stretch, so that
// a < sharp/2 · √|dΔω/dt|, and the modes keep their character with a probability
// exp(−2πa²/|dΔω/dt|) > 0.9.
const sharp = 0.25

// gap is the difference of two modes' frequencies.
func (k *knot) gap(i, j int) float64 { return k.modes.Modes[i].Frequency - k.modes.Modes[j].Frequency }

// compare reports whether all modes keep their order and character from a to b,
// and if not which two do not: those that change places, or else the one that
// has changed most and its nearest in frequency.
func compare(a, b *knot) (smooth bool, first, second int) {
	n := len(a.modes.Modes)
	for i := range n {
		for j := i + 1; j < n; j++ {
			if a.gap(i, j) > 0 != (b.gap(i, j) > 0) {
				return false, i, j
			}
		}
	}
	smooth = true
	worst := alike
	for i := range n {
		_, likeness := orbit.Transport(&a.modes.Modes[i], &b.modes.Modes[i])
		if likeness = math.Min(likeness, 1/likeness); !(likeness >= worst) {
			smooth, worst, first = false, likeness, i
		}
	}
	near := math.Inf(1)
	for j := range n {
		if d := math.Abs(b.gap(first, j)); j != first && d < near {
			near, second = d, j
		}
	}
	return smooth, first, second
}

// restart goes on under a system whose rules have changed, at (t, y) within the
// last step or at its end: the actions stay.
func (l *carrier) restart(p *System, t float64, y []float64) error {
	l.p = p
	l.linearise(t, y)
	for i := range l.chains {
		c := &l.chains[i]
		if c.lost {
			continue
		}
		g := &p.groups[c.group]
		size := make([]float64, len(c.to.size))
		for k := range size {
			size[k] = c.at(t).size(k)
		}
		next := newKnot(g.chain)
		next.t = t
		switch err := next.modes.Track(c.to.modes, l.block(c), p.dim); {
		case errors.Is(err, orbit.ErrUnstable):
			c.lost = true
		case err != nil:
			return fmt.Errorf("chain %s at %.9g Myr: %w", g.name, t/Megayear, err)
		}
		copy(next.size, size)
		l.widths(c, next, y)
		c.to = next
		c.from = newKnot(g.chain)
		c.from.t = t
	}
	return nil
}

// instant is a time within the last step of a chain.
type instant struct {
	*libration
	span  float64 // s; 0 at a start
	theta float64
}

func (c *libration) at(t float64) instant {
	i := instant{c, c.to.t - c.from.t, 1}
	if i.span > 0 {
		i.theta = (t - c.from.t) / i.span
	}
	return i
}

// mix goes linearly from a to b.
func (i instant) mix(a, b float64) float64 {
	if i.theta == 1 {
		return b
	}
	return a + i.theta*(b-a)
}

func (i instant) frequency(k int) float64 {
	return i.mix(i.from.modes.Modes[k].Frequency, i.to.modes.Modes[k].Frequency)
}

// real returns Re λ of a mode, 1/s.
func (i instant) real(k int) float64 {
	return i.mix(i.from.modes.Modes[k].Growth, i.to.modes.Modes[k].Growth)
}

// growth returns d ln √I/dt of a mode, 1/s: Re λ and the mean of the drift's
// part over the step. NaN at a start, where no drift is known.
func (i instant) growth(k int) float64 { return i.real(k) + ratio(i.to.drift[k], i.span) }

// size returns ln √I of a mode: the integral of a linear growth.
func (i instant) size(k int) float64 {
	a, b := i.from.size[k], i.to.size[k]
	if i.theta == 1 || math.IsInf(b, -1) {
		return b
	}
	bend := i.from.modes.Modes[k].Growth - i.to.modes.Modes[k].Growth
	return i.mix(a, b) + 0.5*i.span*bend*i.theta*(1-i.theta)
}

// width returns the half-width of an angle in a mode, rad.
func (i instant) width(k, angle int) float64 {
	return math.Min(math.Pi, math.Exp(i.size(k))*i.mix(i.from.width[k][angle], i.to.width[k][angle]))
}

// widest returns a mode's greatest half-width and the angle it belongs to.
func (i instant) widest(k int) (width float64, angle int) {
	unit := -1.0
	for j := range i.to.width[k] {
		if w := i.mix(i.from.width[k][j], i.to.width[k][j]); w > unit {
			unit, angle = w, j
		}
	}
	return i.width(k, angle), angle
}

// widening returns the growth rate of an angle's half-width in a mode, 1/s; NaN
// at a start.
func (i instant) widening(k, angle int) float64 {
	return i.growth(k) + ratio(math.Log(i.to.width[k][angle]/i.from.width[k][angle]), i.span)
}

// total returns the half-width of an angle in all modes together, rad.
func (i instant) total(angle int) float64 {
	sum := 0.0
	for k := range i.to.size {
		sum += i.width(k, angle)
	}
	return math.Min(math.Pi, sum)
}

// slowest returns the least ω², s⁻², which near a fold falls linearly to 0.
func (i instant) slowest() float64 {
	return i.mix(i.from.slowest(), i.to.slowest())
}

func (k *knot) slowest() float64 {
	least := math.Inf(1)
	for i := range k.modes.Modes {
		least = math.Min(least, squared(k.modes.Modes[i].Frequency))
	}
	return least
}
