package evolve

import (
	"fmt"
	"math"

	"tidekiln/evolve/ode"
	"tidekiln/scenarios"
)

// An auto history carries its librations as an adiabatic one does, and follows
// them as a resolved one where the linear law by which they are carried fails.
const (
	// narrowLibration is the half-width, rad, within which all librations must
	// be to be carried again: the law then holds to the square of it.
	narrowLibration = 3 * degree
	// farFromFold is the part of its first value above which the least ω² must
	// be for that: beyond nearFold, lest the next step change the regime again.
	farFromFold = 2 * nearFold
)

// auto reports whether the history changes its regime by itself.
func (r *run) auto() bool { return r.h.Scenario.Run.Regime == scenarios.Auto }

// regime names what a carrier is for.
func (l *carrier) regime() string {
	if l.followed {
		return scenarios.Resolved
	}
	return scenarios.Adiabatic
}

// tooWide says which libration is too wide to start with, or that a fold is
// near; "" if the law holds.
func (l *carrier) tooWide() string {
	for i := range l.chains {
		c := &l.chains[i]
		if c.lost != nil {
			continue
		}
		if why := l.tooWideAt(i, c.end().t); why != "" {
			return why
		}
	}
	if l.nearFold(nearFold) {
		return "a fold is near"
	}
	return ""
}

// packLibrations lists the librations at the end: those carried, or the last that
// were before they were followed.
func (r *run) packLibrations() []float64 {
	if r.followed() {
		return r.gauge.aside.pack(r.t)
	}
	return r.carried.pack(r.t)
}

// followed reports whether an auto history follows librations at present.
func (r *run) followed() bool { return r.resolved && r.gauge != nil }

// stillness is the state about which they librate, as last placed; none if they
// are not followed.
func (r *run) stillness() []float64 {
	if r.followed() {
		return r.gauge.still
	}
	return []float64{}
}

// widened returns where in the last step librations became too wide, growing or
// not: as a chain drifts apart, widths grow at falling actions.
func (r *run) widened(seg *ode.Segment) []occurrence {
	var list []occurrence
	for i := range r.carried.chains {
		c := &r.carried.chains[i]
		if c.lost != nil {
			continue
		}
		for k := range c.toldWide {
			wide := func(i instant) bool {
				w, _ := i.widest(k)
				return w > wideLibration
			}
			if end := c.at(c.end().t); wide(end) {
				t, y := c.when(wide), make([]float64, r.p.dim)
				seg.Eval(t, y)
				list = append(list, occurrence{Occurrence: ode.Occurrence{T: t, Y: y}, wide: r.carried.tooWideAt(i, t)})
			}
		}
	}
	return list
}

// resolves reports whether a libration event ends the adiabatic stretch of an
// auto history.
func (r *run) resolves(o *occurrence) bool {
	return r.auto() && !r.resolved && o.news != nil && librationEvents[o.news.event] != scenarios.EventLibrationsCross
}

// tooWideAt says which libration of a chain is too wide at a time within the last
// step.
func (l *carrier) tooWideAt(chain int, t float64) string {
	c := &l.chains[chain]
	now := c.at(t)
	for k := range c.toldWide {
		if w, angle := now.widest(k); w > wideLibration {
			return fmt.Sprintf("chain %s: libration %d is %.3g deg wide in the %s", l.p.groups[c.group].name, k+1, w/degree, c.angles[angle])
		}
	}
	return ""
}

// follows makes y, on the slow manifold, a state that librates as is carried, and
// puts the carrier aside.
func (r *run) follows(y []float64) {
	before := append([]float64(nil), y...)
	r.carried.displace(y, r.h.Scenario.Run.Seed)
	r.gauge = newGauge(r.carried, r.t, before)
	r.carried = noCarrier(r.p)
	r.resolved = true
}

// changeRegime changes it after a step, where that is due.
func (r *run) changeRegime(wide string) error {
	switch {
	case wide != "":
		return r.resolve(wide)
	case r.auto() && r.resolved && r.gauge.calm(r.p, r.t, r.y):
		return r.relax()
	}
	return nil
}

// resolve goes on resolved. What the librations hold of energy is booked as
// imposed.
func (r *run) resolve(why string) error {
	r.rowBefore()
	orbital, internal, momentum := r.p.stores(r.t, r.y)
	for i := range r.carried.chains {
		r.carried.chains[i].toldLost = false // known up to here
	}
	r.carried.restart(r.p, r.t, r.y)
	r.follows(r.y)
	o, i, l := r.p.stores(r.t, r.y)
	r.ledger.impose(o-orbital+i-internal, l-momentum)
	if err := r.start(nil); err != nil {
		return err
	}
	return r.regimeChanged(scenarios.Resolved, why)
}

// relax goes on adiabatically from the slow manifold, carrying the librations
// that were measured. What they held of energy is booked as imposed.
func (r *run) relax() error {
	r.rowBefore()
	var sizes [][]float64
	for i := range r.gauge.aside.chains {
		sizes = append(sizes, r.gauge.aside.chains[i].end().size)
	}
	if err := r.gauge.place(r.p, r.t, r.y); err != nil {
		return err
	}
	orbital, internal, momentum := r.p.stores(r.t, r.y)
	copy(r.y, r.gauge.still)
	o, i, l := r.p.stores(r.t, r.y)
	r.ledger.impose(o-orbital+i-internal, l-momentum)
	r.carried = r.gauge.aside
	for i := range r.carried.chains {
		c := &r.carried.chains[i]
		copy(c.end().size, sizes[i])
		clear(c.toldWide)
		c.toldFold, c.toldLost = false, false
	}
	r.resolved, r.args = false, nil
	if err := r.start(nil); err != nil {
		return err
	}
	return r.regimeChanged(scenarios.Adiabatic, fmt.Sprintf("all librations are within %g deg", narrowLibration/degree))
}

// regimeChanged records what has been done, and does what waits for it.
func (r *run) regimeChanged(to, why string) error {
	r.rec.follow(r.p, r.carried, r.h.RunID)
	r.rowAfter()
	e := r.toldRegime(to, why)
	for _, s := range r.h.Scenario.Run.Stop {
		e.Ends = e.Ends || s.Event == e.Name && s.Body == "" && s.Other == ""
	}
	r.h.Events = append(r.h.Events, e)
	if e.Ends {
		r.stop(StatusEnded, reasonOf(e))
	} else if i := r.triggered(&e); i >= 0 {
		return r.change([]int{i}, nil)
	}
	return nil
}

// toldRegime words a change of regime.
func (r *run) toldRegime(to, why string) Event {
	return Event{runID: r.h.RunID, Time: r.t, Name: scenarios.EventRegimeChanged, Detail: to + " from here on: " + why}
}

// lostResonance makes the loss of a resonance the end of an auto history.
func (r *run) lostResonance(e *Event) {
	if r.auto() && e.Name == scenarios.EventResonanceLeft {
		e.Ends = true
		e.Detail = fmt.Sprintf("its argument circulates, which the adiabatic regime cannot follow; continue with run.regime = %q", scenarios.Resolved)
	}
}

// rowBefore writes a row of the present state before rules or regime change.
func (r *run) rowBefore() {
	if myr := r.rec.grid.myr(r.t); r.t > r.h.Begin && !(myr <= r.rec.last) {
		r.rec.state(r.t, myr, r.y, r.ledger.sums, r.step)
	}
}

// rowAfter writes one after, a moment later.
func (r *run) rowAfter() {
	if r.t > r.h.Begin {
		myr := math.Max(r.rec.grid.myr(r.t), r.rec.last)
		r.rec.state(r.t, math.Nextafter(myr, math.Inf(1)), r.y, r.ledger.sums, r.step)
	}
}
