package evolve

import "tidekiln/scenarios"

// argument follows the resonance argument ψ_r − ϖ of the strongest member of one
// resonance, from step to step.
//
// It has gone through a libration when it has passed its centre three times, each
// time the other way than before, without passing the opposite point between;
// from then on it librates until it passes the opposite point, and circulates
// from there. (A free eccentricity below the forced one makes an argument librate
// without a separatrix around it: that counts.)
type argument struct {
	group        *group
	pair, member int
	centre       float64 // sign of cos at the centre
	inner, outer string

	known, librates bool
	side            bool // sin > 0 at the last step
	way             int8 // of the last passage of the centre, 0 after one of the opposite point
	swings          int
}

// arguments lists those of all chains; a locked start librates.
func (p *System) arguments(y []float64) []argument {
	var list []argument
	for i := range p.groups {
		g := &p.groups[i]
		for r := 0; r+1 < len(g.body); r++ {
			k, sign := g.chain.Strongest(r)
			a := argument{
				group: g, pair: r, member: k, centre: sign, known: !g.free, librates: !g.free,
				inner: p.bodies[g.body[r]].name, outer: p.bodies[g.body[r+1]].name,
			}
			_, im := a.at(y)
			a.side = im > 0
			list = append(list, a)
		}
	}
	return list
}

// at returns Re and Im of e e^{iθ} at the state y.
func (a *argument) at(y []float64) (re, im float64) {
	return a.group.chain.Argument(a.pair, a.member, y[a.group.at:a.group.at+a.group.Dim()])
}

// step takes the state at the end of a step and returns the name of what
// happened, or "".
func (a *argument) step(y []float64) string {
	re, im := a.at(y)
	if im > 0 == a.side {
		return ""
	}
	a.side = im > 0
	if re*a.centre < 0 {
		left := a.known && a.librates
		a.known, a.librates = true, false
		a.way, a.swings = 0, 0
		if left {
			return scenarios.EventResonanceLeft
		}
		return ""
	}
	way := int8(-1)
	if a.side {
		way = 1
	}
	if a.way == -way {
		a.swings++
	} else {
		a.swings = 0
	}
	a.way = way
	if a.swings < 2 || a.librates {
		return ""
	}
	entered := a.known
	a.known, a.librates = true, true
	if entered {
		return scenarios.EventResonanceEntered
	}
	return ""
}

// librating reports whether every argument librates; false without any.
func librating(list []argument) bool {
	for i := range list {
		if !list[i].librates {
			return false
		}
	}
	return len(list) > 0
}
