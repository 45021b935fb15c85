package evolve

import (
	"math"
	"slices"

	"tidekiln/orbit"
)

const (
	// measureEvery is the time between two looks at librations that are followed:
	// many of them, and short beside the time on which they grow or decay.
	measureEvery = 1000 * orbit.Year
	// measurePeriods is the time over which they are averaged, in periods of the
	// slowest: the beats of other modes and the odd overtones average out of its
	// action, to the square of its width.
	measurePeriods = 8
)

// gauge measures the librations of the chains that an auto history follows,
// about the slow manifold with the same conserved sums:
//
//	√I = 2 |w·(y − y_still)|   for   y − y_still = Re Σ √I v e^{iθ}
//
// (see [orbit.Eigenmode]). From time to time it takes one value, and where that
// is small the mean of I over several librations. It keeps the carrier that was
// put aside when they began to be followed, to take them up again.
type gauge struct {
	aside *carrier
	still []float64 // where nothing librates
	next  float64   // s, of the next look
	until float64   // s, when the present mean ends; 0: there is none
	sums  [][]float64
	count float64
	delta []complex128
}

// newGauge puts a carrier aside at the time t.
func newGauge(l *carrier, t float64) *gauge {
	g := &gauge{aside: l, still: make([]float64, l.p.dim), next: t + measureEvery}
	for i := range l.chains {
		g.sums = append(g.sums, make([]float64, len(l.chains[i].toldWide)))
	}
	return g
}

// nearManifold bounds the search for the point of the slow manifold with the
// conserved sums of a state: each round leaves the square of the error before.
const nearManifold = 3

// place finds the point of the slow manifold about which y librates, and the
// modes there, numbered anew.
func (g *gauge) place(p *System, t float64, y []float64) error {
	g.aside.p = p
	wrapped := append([]float64(nil), y...)
	p.principal(wrapped)
	copy(g.still, wrapped)
	for range nearManifold {
		if err := p.still(t, g.still); err != nil {
			return err
		}
		p.restore(g.still, wrapped)
	}
	g.aside.linearise(t, g.still)
	for i := range g.aside.chains {
		c := &g.aside.chains[i]
		k := newKnot(p.groups[c.group].chain)
		k.t = t
		if err := k.modes.Find(g.aside.block(c), p.dim); err != nil {
			return err
		}
		g.aside.widths(c, k, g.still)
		if math.IsInf(c.first, 1) {
			c.first = k.slowest() // it was not known at the start
		}
		c.knots, c.spare, c.passed, c.lost = []*knot{k}, nil, nil, nil
	}
	return nil
}

// action returns the action of a mode of a chain at the state y, J s.
func (g *gauge) action(c *libration, mode int, y []float64) float64 {
	group := &g.aside.p.groups[c.group]
	n := group.Members()
	product := complex128(0)
	for i, w := range c.end().modes.Modes[mode].Left {
		d := y[group.at+i] - g.still[group.at+i]
		if i >= 3*n {
			d = math.Remainder(d, 2*math.Pi)
		}
		product += w * complex(d, 0)
	}
	re, im := real(product), imag(product)
	return 4 * (re*re + im*im)
}

// take adds the state y to the mean.
func (g *gauge) take(y []float64) {
	g.count++
	for i := range g.aside.chains {
		for k := range g.sums[i] {
			g.sums[i][k] += g.action(&g.aside.chains[i], k, y)
		}
	}
}

// settle makes the mean so far the size of every mode and reports whether all
// half-widths are below a limit.
func (g *gauge) settle(below float64) bool {
	calm := true
	for i := range g.aside.chains {
		c := &g.aside.chains[i]
		k := c.end()
		for j, sum := range g.sums[i] {
			k.size[j] = k.bounded(j, 0.5*math.Log(sum/g.count))
			calm = calm && math.Exp(k.size[j])*slices.Max(k.width[j]) < below
		}
	}
	return calm
}

// begin clears the mean.
func (g *gauge) begin() {
	g.count, g.until = 0, 0
	for i := range g.sums {
		clear(g.sums[i])
	}
}

// calm takes the state y that a step ends with at t and reports whether all
// librations have become narrow, and no fold is near: then the sizes of the
// carrier put aside are theirs.
func (g *gauge) calm(p *System, t float64, y []float64) bool {
	if g.until == 0 {
		if t < g.next {
			return false
		}
		g.next = t + measureEvery
		if g.place(p, t, y) != nil || g.aside.nearFold(farFromFold) {
			return false
		}
		g.begin()
		g.take(y)
		if !g.settle(2 * narrowLibration) { // one value is off by what beats
			return false
		}
		slowest := math.Inf(1)
		for i := range g.aside.chains {
			slowest = math.Min(slowest, math.Sqrt(g.aside.chains[i].end().slowest()))
		}
		g.until = t + measurePeriods*2*math.Pi/slowest
		return false
	}
	g.take(y)
	if t < g.until {
		return false
	}
	calm := g.settle(narrowLibration)
	g.begin()
	return calm
}

// nearFold reports whether the least ω² of a chain is below a part of its first.
func (l *carrier) nearFold(part float64) bool {
	for i := range l.chains {
		c := &l.chains[i]
		if c.lost == nil && c.end().slowest() < part*c.first {
			return true
		}
	}
	return false
}

// principal takes whole turns out of the angles of y.
func (p *System) principal(y []float64) {
	for i := range p.groups {
		if g := &p.groups[i]; g.chain != nil {
			for j := g.at + 3*g.Members(); j < g.at+g.Dim(); j++ {
				y[j] = math.Remainder(y[j], 2*math.Pi)
			}
		}
	}
}

// restore gives y the conserved sums of another state.
func (p *System) restore(y, of []float64) {
	for i := range p.groups {
		if g := &p.groups[i]; g.chain != nil {
			g.chain.Restore(y[g.at:g.at+g.Dim()], of[g.at:g.at+g.Dim()])
		}
	}
}
