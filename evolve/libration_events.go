package evolve

import (
	"cmp"
	"fmt"
	"math"
	"slices"

	"tidekiln/evolve/ode"
	"tidekiln/orbit"
	"tidekiln/scenarios"
)

// librationEvents are their names in the order in which a chain is asked.
var librationEvents = [...]string{scenarios.EventLibrationOverstable, scenarios.EventFoldNear, scenarios.EventLibrationsCross, scenarios.EventCentreUnstable}

const (
	// wideLibration is the half-width, rad, from which a growing libration is
	// overstable, not merely growing: the linear law still holds to a few per
	// cent there.
	wideLibration = 10 * degree
	// nearFold is the part of its first value to which the least ω² falls when a
	// fold is near, where the locked state ceases to exist.
	nearFold = 0.01
)

// librating returns the events of a chain's librations. They hang on what is
// carried from step to step, so no function of the state can show them: they
// come from [carrier.occurred].
func (g *group) librating() []watched {
	if g.chain == nil {
		return nil
	}
	var list []watched
	for _, name := range librationEvents {
		list = append(list, watched{Event: ode.Event{Name: name}})
	}
	return list
}

// news is a libration event within the last step.
type news struct {
	chain     int // place among the carrier's
	mode      int // −1 for none
	event     int // place in librationEvents
	t         float64
	direction string
	detail    string
}

// occurred returns the events of the last step, which ended at t1.
func (l *carrier) occurred(t1 float64) []news {
	var list []news
	for i := range l.chains {
		c := &l.chains[i]
		name := l.p.groups[c.group].name
		tell := func(event, mode int, t float64, direction, detail string) {
			list = append(list, news{i, mode, event, t, direction, "chain " + name + ": " + detail})
		}
		if c.lost != nil {
			if !c.toldLost {
				tell(3, -1, t1, "", "librations are not known from here on: "+c.lost.Error())
			}
			continue
		}
		end := c.at(c.end().t)
		for k := range c.toldWide {
			switch {
			case !end.overstable(k):
				c.toldWide[k] = false
			case !c.toldWide[k]:
				t := c.when(func(i instant) bool { return i.overstable(k) })
				now := c.at(t)
				_, angle := now.widest(k)
				tell(0, k, t, "rising", fmt.Sprintf("libration %d of %.3g yr, %.3g deg in the %s, its action growing at %.3g /Myr", k+1,
					2*math.Pi/now.frequency(k)/orbit.Year, now.width(k, angle)/degree, c.angles[angle], 2*end.growth(k)*Megayear))
			}
		}
		near := func(i instant) bool { return i.slowest() < nearFold*c.first }
		switch {
		case !near(end):
			c.toldFold = false
		case !c.toldFold:
			tell(1, -1, c.when(near), "falling", fmt.Sprintf("least squared frequency of a libration below %g of its first value", nearFold))
		}
		for _, p := range c.passed {
			tell(2, -1, p.t, "", fmt.Sprintf("librations %d and %d come so near in frequency that they exchange %.3g of their actions", p.i+1, p.j+1, math.Min(p.crossing, 1-p.crossing)))
		}
	}
	return list
}

// occurrence is an event of the integrator, of the librations carried, or of an
// argument followed.
type occurrence struct {
	ode.Occurrence
	news    *news  // of the librations
	wide    string // why they are to be followed, without an event of its own
	passage bool   // of an argument
	told    Event  // by that
}

// occurred carries the librations over an accepted step and returns all that
// happened in it, in order of time.
func (r *run) occurred(seg *ode.Segment) []occurrence {
	r.carried.advance(seg)
	var list []occurrence
	for _, o := range r.events.Locate(seg) {
		list = append(list, occurrence{Occurrence: o})
	}
	for _, n := range r.carried.occurred(seg.T1) {
		if r.auto() && librationEvents[n.event] == scenarios.EventCentreUnstable {
			n.t = r.carried.chains[n.chain].end().t // up to which it is known
		}
		// Those of the first chain are the first without a value.
		at := slices.IndexFunc(r.watch, func(w watched) bool { return w.Value == nil })
		y := make([]float64, r.p.dim)
		seg.Eval(n.t, y)
		list = append(list, occurrence{Occurrence: ode.Occurrence{Event: at + n.chain*len(librationEvents) + n.event, T: n.t, Y: y}, news: &n})
	}
	if r.auto() {
		list = append(list, r.widened(seg)...)
	}
	for i := range r.args {
		a := &r.args[i]
		if name := a.step(seg, r.integ.State()); name != "" {
			list = append(list, occurrence{Occurrence: ode.Occurrence{T: seg.T1}, passage: true, told: a.passed(r.h.RunID, name, seg.T1, r.h.Scenario.Run.Stop)})
			r.lostResonance(&list[len(list)-1].told)
		}
	}
	slices.SortStableFunc(list, func(a, b occurrence) int { return cmp.Compare(a.T, b.T) })
	return list
}

// event words an occurrence.
func (r *run) event(o *occurrence) Event {
	if o.passage {
		return o.told
	}
	e := r.watch[o.Event].event(r.h.RunID, o.Occurrence)
	if o.news != nil {
		e.Direction, e.Detail = o.news.direction, o.news.detail
		r.carried.told(o.news)
	}
	return e
}

// told notes that an event has been recorded.
func (l *carrier) told(n *news) {
	c := &l.chains[n.chain]
	switch n.event {
	case 0:
		c.toldWide[n.mode] = true
	case 1:
		c.toldFold = true
	case 3:
		c.toldLost = true
	}
}

// overstable reports whether a mode is wide and its action grows.
func (i instant) overstable(k int) bool {
	w, _ := i.widest(k)
	return w > wideLibration && i.growth(k) > 0
}

// when returns the time within the last step at which a condition that holds at
// its end came to hold.
func (c *libration) when(holds func(instant) bool) float64 {
	low, high := c.begin().t, c.end().t
	if holds(c.at(low)) {
		return low // the drift's part jumps between steps
	}
	for {
		t := 0.5 * (low + high)
		if !(t > low && t < high) {
			return high
		}
		if holds(c.at(t)) {
			high = t
		} else {
			low = t
		}
	}
}
