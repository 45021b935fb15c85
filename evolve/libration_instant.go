package evolve

import (
	"fmt"
	"math"
	"sort"

	"tidekiln/orbit"
)

// begin and end are the knots at either end of the last step.
func (c *libration) begin() *knot { return c.knots[0] }
func (c *libration) end() *knot   { return c.knots[len(c.knots)-1] }

// instant is a time within the last step of a chain, between two knots.
type instant struct {
	from, to *knot // the same at a start
	span     float64
	theta    float64
}

// at returns the instant t, s, of the last step, or the last that is known.
func (c *libration) at(t float64) instant {
	k := sort.Search(len(c.knots)-1, func(k int) bool { return c.knots[k].t >= t })
	i := instant{from: c.knots[max(0, k-1)], to: c.knots[k], theta: 1}
	if k == 0 && len(c.knots) > 1 {
		i.to = c.knots[1]
	}
	if i.span = i.to.t - i.from.t; i.span > 0 {
		i.theta = math.Min(1, (t-i.from.t)/i.span)
	}
	return i
}

// mix goes linearly from a to b.
func (i instant) mix(a, b float64) float64 {
	switch i.theta {
	case 0:
		return a
	case 1:
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
// part between the knots. NaN at a start, where no drift is known.
func (i instant) growth(k int) float64 { return i.real(k) + ratio(i.to.drift[k], i.span) }

// size returns ln √I of a mode: the integral of a linear growth.
func (i instant) size(k int) float64 {
	a, b := i.from.size[k], i.to.size[k]
	if math.IsInf(b, -1) {
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
func (i instant) slowest() float64 { return i.mix(i.from.slowest(), i.to.slowest()) }

func (k *knot) slowest() float64 {
	least := math.Inf(1)
	for i := range k.modes.Modes {
		least = math.Min(least, k.modes.Modes[i].Frequency)
	}
	return least * least
}

// angleName names an angle a chain librates in.
func (p *System) angleName(g *group, angle int) string {
	name := func(k int) string { return p.bodies[g.body[k]].name }
	if n := g.Members(); angle >= n {
		return fmt.Sprintf("resonance of %s and %s", name(angle-n+1), name(angle-n+2))
	}
	return "pericentre of " + name(angle)
}

// The values that a continued history takes up: of each chain the first least
// ω², whether a fold has been told, whether it is lost, and of each mode ω,
// ln √I and whether it has been told to be overstable.
const (
	perLibratingChain = 3
	perLibration      = 3
)

// pack lists them at t, s.
func (l *carrier) pack(t float64) []float64 {
	list := []float64{}
	for i := range l.chains {
		c := &l.chains[i]
		list = append(list, c.first, number(c.toldFold), number(c.lost != nil))
		for k := range c.toldWide {
			if c.lost != nil {
				list = append(list, 0, 0, 0)
				continue
			}
			now := c.at(t)
			list = append(list, now.frequency(k), now.size(k), number(c.toldWide[k]))
		}
	}
	return list
}

func number(b bool) float64 {
	if b {
		return 1
	}
	return 0
}

// unpack takes them up: each place the mode of the nearest frequency, so that
// modes that have crossed keep their numbers.
func (l *carrier) unpack(list []float64) error {
	want := 0
	for i := range l.chains {
		want += perLibratingChain + perLibration*len(l.chains[i].toldWide)
	}
	if len(list) != want {
		return fmt.Errorf("the dataset ends with %d values of librations, the scenario has %d: its chains differ", len(list), want)
	}
	for i := range l.chains {
		c := &l.chains[i]
		k := c.end()
		modes := k.modes.Modes
		rows := list[perLibratingChain : perLibratingChain+perLibration*len(modes)]
		c.first, c.toldFold, c.toldLost = list[0], list[1] != 0, list[2] != 0
		if c.toldLost {
			c.lost = orbit.ErrUnstable
		}
		list = list[perLibratingChain+len(rows):]
		for j := range modes {
			row := rows[perLibration*j:]
			if c.lost != nil {
				break
			}
			near := j
			for q := j; q < len(modes); q++ {
				if math.Abs(modes[q].Frequency-row[0]) < math.Abs(modes[near].Frequency-row[0]) {
					near = q
				}
			}
			modes[j], modes[near] = modes[near], modes[j]
			k.width[j], k.width[near] = k.width[near], k.width[j]
			k.size[j], c.toldWide[j] = row[1], row[2] != 0
		}
	}
	return nil
}
