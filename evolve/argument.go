package evolve

import (
	"math"

	"tidekiln/evolve/ode"
	"tidekiln/scenarios"
)

// argument follows the resonance argument ψ_r − ϖ of the strongest member of one
// resonance, from step to step.
//
// It has gone through a libration when it has passed its centre three times, each
// time the other way than before, without passing the opposite point between. It
// librates once it has gone through sure librations in a row, and circulates once
// it has passed the opposite point sure times without a libration between: near a
// separatrix, and where two librations beat, it does now this, now that. (A free
// eccentricity below the forced one makes an argument librate without a separatrix
// around it: that counts.)
type argument struct {
	group        *group
	pair, member int
	angle        int     // place in the state of a resonance angle followed instead; 0: none
	centre       float64 // sign of cos at the centre
	inner, outer string

	known, librates bool
	re, im          float64   // at the end of the last step
	way             int8      // of the last passage of the centre, 0 after one of the opposite point
	inside          []float64 // scratch
	swings          int       // passages in a row of the centre, each the other way
	turns           int       // passages of the opposite point since the last libration
}

// sure is the number of librations, or turns, that count as more than chance.
const sure = 10

// arguments lists those of all chains, and in an auto history, whose chains start
// locked, their resonance angles; a locked start librates.
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
			a.re, a.im = a.at(y)
			list = append(list, a)
		}
		if p.scenario.Run.Regime != scenarios.Auto {
			continue
		}
		// Beyond a fold the arguments may librate while their difference circulates.
		for r := 1; r+1 < len(g.body); r++ {
			a := argument{
				group: g, pair: r, angle: g.at + 3*g.Members() + r - 1, centre: 1, known: true, librates: true,
				inner: p.bodies[g.body[r]].name, outer: p.bodies[g.body[r+1]].name,
			}
			a.re, a.im = a.at(y)
			list = append(list, a)
		}
	}
	return list
}

// at returns Re and Im of e e^{iθ} at the state y, or cos and sin of an angle less
// its centre.
func (a *argument) at(y []float64) (re, im float64) {
	if a.angle > 0 {
		return math.Cos(y[a.angle]), math.Sin(y[a.angle])
	}
	return a.group.chain.Argument(a.pair, a.member, y[a.group.at:a.group.at+a.group.Dim()])
}

// step takes the state y at the end of a step and returns the name of what
// happened, or "".
func (a *argument) step(seg *ode.Segment, y []float64) string {
	re, im := a.re, a.im
	a.re, a.im = a.at(y)
	if a.im > 0 == (im > 0) {
		return ""
	}
	if a.meets(seg, re, im, y)*a.centre < 0 {
		a.way, a.swings = 0, 0
		a.turns++
		return a.becomes(false, a.turns >= sure, scenarios.EventResonanceLeft)
	}
	way := int8(-1)
	if a.im > 0 {
		way = 1
	}
	if a.way == -way {
		a.swings++
	} else {
		a.swings = 0
	}
	a.way = way
	if a.swings >= 2 {
		a.turns = 0
	}
	return a.becomes(true, a.swings >= 2*sure, scenarios.EventResonanceEntered)
}

// arc is the height of an arc over its chord, for the longest step of 2.5 rad:
// ½ tan(2.5/4), and a margin.
const arc = 0.4

// meets returns where, on a step from (re, im), e e^{iθ} meets the real axis: on
// the chord if the axis is met farther from 0 than an arc may stand from its chord,
// else by the inside of the step.
func (a *argument) meets(seg *ode.Segment, re, im float64, end []float64) float64 {
	chord := (re*a.im - a.re*im) / (a.im - im)
	if math.Abs(chord) > arc*math.Hypot(a.re-re, a.im-im) {
		return chord
	}
	if len(a.inside) != len(end) {
		a.inside = make([]float64, len(end))
	}
	low, high := seg.T0, seg.T1
	at := chord
	for range 20 { // to a millionth of the step
		mid := low + (high-low)/2
		seg.Eval(mid, a.inside)
		r, i := a.at(a.inside)
		if at = r; i > 0 == (im > 0) {
			low = mid
		} else {
			high = mid
		}
	}
	return at
}

// becomes notes what the argument is found to do, and returns the event unless it
// did so before, or is seen to do anything for the first time.
func (a *argument) becomes(librates, found bool, event string) string {
	if !found || a.known && a.librates == librates {
		return ""
	}
	first := !a.known
	a.known, a.librates = true, librates
	if first {
		return ""
	}
	return event
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

// passed turns what an argument did on a step that ended at t into an event,
// terminal if the scenario stops at it.
func (a *argument) passed(runID, name string, t float64, stop []scenarios.Trigger) Event {
	e := Event{runID: runID, Time: t, Name: name, Body: a.inner, Other: a.outer}
	for _, s := range stop {
		e.Ends = e.Ends || s.Event == name && matches(s.Body, a.inner) && matches(s.Other, a.outer)
	}
	return e
}
