package evolve

import (
	"fmt"
	"math"

	"tidekiln/evolve/ode"
	"tidekiln/orbit"
	"tidekiln/scenarios"
)

// Names of the events that no trigger waits for.
const (
	EventChange    = "change"
	EventSpanEnded = "span-ended"
)

// Event is something that happened during a history.
type Event struct {
	runID       string
	Time        float64 // s
	Name        string
	Body, Other string // "" where none
	Direction   string // "rising", "falling" or ""
	Ends        bool
	Detail      string
}

// watched is an event the integrator looks for, or, without a Value, one of the
// librations or a change of regime, which come last.
type watched struct {
	ode.Event
	body, other string
	ends        bool
	detail      string
}

// nearlyParabolic is the eccentricity at which a history ends: the tidal sums
// are tabulated to a little beyond it.
const nearlyParabolic = 0.94

// watchlist returns every event of a system in a regime. Stop triggers make
// theirs terminal.
func (p *System) watchlist(stop []scenarios.Trigger, resolved bool) []watched {
	var list []watched
	for i := range p.bodies {
		b := &p.bodies[i]
		if b.states > 0 {
			at, n := b.at, b.states
			for _, e := range b.interior.Events() {
				list = append(list, watched{body: b.name, Event: ode.Event{Name: e.Name,
					Value: func(_ float64, y []float64) float64 { return e.Value(y[at : at+n]) }}})
			}
		}
		limit := p.primary.RocheLimit(b.mass, b.radius)
		list = append(list, watched{
			body: b.name, ends: true, detail: fmt.Sprintf("pericentre below %.6g km", limit/1e3),
			Event: ode.Event{Name: scenarios.EventRocheLimit, Direction: -1, Value: func(_ float64, y []float64) float64 {
				a, e := p.shape(i, y)
				return a*(1-e)/limit - 1
			}}}, watched{
			body: b.name, ends: true, detail: fmt.Sprintf("eccentricity above %g", nearlyParabolic),
			Event: ode.Event{Name: scenarios.EventEccentricityLimit, Direction: 1, Value: func(_ float64, y []float64) float64 {
				_, e := p.shape(i, y)
				return e - nearlyParabolic
			}}})
		if i > 0 {
			list = append(list, watched{
				body: p.bodies[i-1].name, other: b.name, ends: true,
				Event: ode.Event{Name: scenarios.EventOrbitsCross, Direction: -1, Value: func(_ float64, y []float64) float64 {
					in, ein := p.shape(i-1, y)
					out, eout := p.shape(i, y)
					return out*(1-eout)/(in*(1+ein)) - 1
				}}})
		}
	}
	if !resolved {
		for i := range p.groups {
			list = append(list, p.groups[i].leaving(p)...)
		}
	}
	for i := range p.groups {
		list = append(list, p.groups[i].librating()...)
	}
	if p.scenario.Run.Regime == scenarios.Auto {
		list = append(list, watched{Event: ode.Event{Name: scenarios.EventRegimeChanged}})
	}
	for i := range list {
		for _, s := range stop {
			if s.Event == list[i].Name && matches(s.Body, list[i].body) && matches(s.Other, list[i].other) {
				list[i].ends = true
			}
		}
	}
	return list
}

func matches(wanted, have string) bool { return wanted == "" || wanted == have }

// leaving returns the ways a chain can lose its resonances in the adiabatic
// regime. A locked angle stays within 90° of its centre, and a forced eccentricity
// keeps its sign: it is a constant force over the distance from resonance. (In the
// resolved regime the arguments themselves tell, see argument.)
func (g *group) leaving(p *System) []watched {
	if g.chain == nil {
		return nil
	}
	n := g.chain.Members()
	name := func(k int) string { return p.bodies[g.body[k]].name }
	var list []watched
	for r := 1; r < n-1; r++ {
		i := g.at + 3*n + r - 1
		list = append(list, watched{
			body: name(r), other: name(r + 1), ends: true, detail: "the resonance angle is 90 deg from its centre",
			Event: ode.Event{Name: scenarios.EventResonanceLeft, Direction: -1,
				Value: func(_ float64, y []float64) float64 { return math.Pi/2 - math.Abs(y[i]) }}})
	}
	for k := 0; k < n; k++ {
		i := g.at + n + k
		other := k + 1
		if other == n {
			other = k - 1
		}
		list = append(list, watched{
			body: name(k), other: name(other), ends: true, detail: "the forced eccentricity changed sign",
			Event: ode.Event{Name: scenarios.EventResonanceLeft, Value: func(_ float64, y []float64) float64 { return y[i] }}})
	}
	return list
}

// shape returns semi-major axis, m, and eccentricity of body i.
func (p *System) shape(i int, y []float64) (a, e float64) {
	b := &p.bodies[i]
	g := &p.groups[b.group]
	return orbit.Shape(g.Group, b.member, y[g.at:g.at+g.Dim()])
}

// event turns an occurrence into an event.
func (w *watched) event(runID string, o ode.Occurrence) Event {
	e := Event{runID: runID, Time: o.T, Name: w.Name, Body: w.body, Other: w.other, Ends: w.ends, Detail: w.detail, Direction: "falling"}
	if o.Rising {
		e.Direction = "rising"
	}
	return e
}
