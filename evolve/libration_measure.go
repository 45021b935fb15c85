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
// (see [orbit.Eigenmode]), the mean of I over several of them from time to time.
// y_still it follows from where they began to be followed, by the conserved sums
// alone, so that it may be however far from y. It keeps the carrier that was put
// aside then, to take them up again.
type gauge struct {
	aside *carrier
	still []float64   // where nothing librates
	next  float64     // s, of the next look
	until float64     // s, when the present mean ends; 0: there is none
	sums  [][]float64 // of I
	count float64     // of what has been summed
}

// newGauge puts a carrier aside at the time t and the state still, on the slow
// manifold.
func newGauge(l *carrier, t float64, still []float64) *gauge {
	g := &gauge{aside: l, still: append([]float64(nil), still...), next: t + measureEvery}
	for i := range l.chains {
		g.sums = append(g.sums, make([]float64, len(l.chains[i].toldWide)))
	}
	return g
}

const (
	// stage is the half-width, rad, of the libration that giving the sums a part of
	// their change may stand for: a fraction of a degree is what the next of
	// Newton's steps takes to 1e-3 of itself.
	stage = 0.02 * degree
	// lastStages are steps of Newton's at the last; each squares the error.
	lastStages = 4
)

// stages returns the number of parts in which to give the sums of y to still.
func (g *gauge) stages(p *System, t float64, y []float64) int {
	l := g.aside
	at := append([]float64(nil), g.still...)
	p.restore(at, y, 1)
	l.linearise(t, at)
	width := 0.0
	for i := range l.chains {
		c := &l.chains[i]
		group := &p.groups[c.group]
		k := c.end()
		for j := range k.modes.Modes {
			if c.lost == nil {
				width = math.Max(width, slices.Max(k.width[j])*k.modes.Modes[j].Off(l.dy[group.at:group.at+group.Dim()]))
			}
		}
	}
	return 1 + int(math.Min(width/stage, 1e4))
}

// place moves still to the point of the slow manifold about which y librates:
// where the rates have no part in any libration, w·f = 0, and the conserved sums
// are those of y. It leaves the modes there, numbered anew. (The projection of an
// implicit method, made for states beside the manifold, would shift the slow
// variables by the square of the libration and more.)
func (g *gauge) place(p *System, t float64, y []float64) error {
	l := g.aside
	l.p = p
	for i := range y {
		if !p.orbital(i) {
			g.still[i] = y[i]
		}
	}
	for left := g.stages(p, t, y); ; left-- {
		last := left == -lastStages
		l.linearise(t, g.still)
		for i := range l.chains {
			c := &l.chains[i]
			group := &p.groups[c.group]
			k := newKnot(group.chain)
			k.t = t
			if !last {
				if err := k.modes.FindBeside(l.block(c), p.dim); err != nil {
					return err
				}
				k.modes.Filter(l.dy[group.at:group.at+group.Dim()], g.still[group.at:group.at+group.Dim()])
				continue
			}
			if err := k.modes.Find(l.block(c), p.dim); err != nil {
				return err
			}
			l.widths(c, k, g.still)
			if math.IsInf(c.first, 1) {
				c.first = k.slowest() // it was not known at the start
			}
			c.knots, c.spare, c.passed, c.lost = []*knot{k}, nil, nil, nil
		}
		if last {
			return nil
		}
		p.restore(g.still, y, 1/math.Max(1, float64(left)))
	}
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

// begin begins a mean at t.
func (g *gauge) begin(t float64) {
	g.count = 0
	slowest := math.Inf(1)
	for i := range g.aside.chains {
		slowest = math.Min(slowest, g.aside.chains[i].end().slowest())
		clear(g.sums[i])
	}
	g.until = t + measurePeriods*2*math.Pi/math.Sqrt(slowest)
}

// take adds the state y to the mean action.
func (g *gauge) take(y []float64) {
	g.count++
	for i := range g.aside.chains {
		for k := range g.sums[i] {
			g.sums[i][k] += g.action(&g.aside.chains[i], k, y)
		}
	}
}

// settle makes the mean the size of every mode and reports whether all
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

// calm takes the state y that a step ends with at t and reports whether all
// librations have become narrow, and no fold is near: then the sizes of the
// carrier put aside are theirs.
func (g *gauge) calm(p *System, t float64, y []float64) bool {
	if g.until > 0 {
		if g.take(y); t < g.until {
			return false
		}
		g.until = 0
		return g.settle(narrowLibration)
	}
	if t >= g.next {
		g.next = t + measureEvery
		if g.place(p, t, y) == nil && !g.aside.nearFold(farFromFold) {
			g.begin(t)
		}
	}
	return false
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

// orbital reports whether component i of the state is one of a chain.
func (p *System) orbital(i int) bool {
	for k := range p.groups {
		if g := &p.groups[k]; g.chain != nil && i >= g.at && i < g.at+g.Dim() {
			return true
		}
	}
	return false
}

// restore brings the conserved sums of y nearer to those of another state.
func (p *System) restore(y, of []float64, part float64) {
	for i := range p.groups {
		if g := &p.groups[i]; g.chain != nil {
			g.chain.Restore(y[g.at:g.at+g.Dim()], of[g.at:g.at+g.Dim()], part)
		}
	}
}
