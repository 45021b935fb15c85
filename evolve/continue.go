package evolve

import (
	"errors"
	"fmt"
	"math"

	"tidekiln/evolve/ode"
	"tidekiln/evolve/record"
	"tidekiln/scenarios"
)

// Continuation is the end of a stored history.
type Continuation struct {
	RunID    string
	Scenario string  // TOML, resolved
	Time     float64 // s

	regime                   string
	state, librations, still []float64
	observed                 []float64
	ledger                   *ledger
	changes                  []int
	passed                   []Event // at the end
}

// Load reads the end of the history in a dataset. It must come from the same
// physics number, or its state means something else.
func Load(dir string) (*Continuation, error) {
	s, f, err := stored(dir)
	if err != nil {
		return nil, err
	}
	if s.Physics != Physics {
		return nil, fmt.Errorf("%s was made with physics number %d, this program has %d: run its scenario again from the start (scenarios show %s)", dir, s.Physics, Physics, dir)
	}
	c := &Continuation{RunID: s.RunID, Scenario: s.Scenario, Time: s.End}
	var books, changes []float64
	errs := make([]error, 9)
	c.regime, errs[0] = first(f.Texts("end_regime"))
	c.state, errs[1] = first(f.Lists("end_state"))
	c.librations, errs[2] = first(f.Lists("end_librations"))
	c.observed, errs[3] = first(f.Lists("end_observed"))
	c.still, errs[8] = first(f.Lists("end_still"))
	changes, errs[4] = first(f.Lists("end_changes"))
	if books, errs[5] = first(f.Lists("end_ledger")); errs[5] == nil {
		c.ledger, errs[6] = unpackLedger(books)
	}
	for _, v := range changes {
		c.changes = append(c.changes, int(v))
	}
	c.passed, errs[7] = lastEvents(dir, s.End/Megayear)
	if err := errors.Join(errs...); err != nil {
		return nil, fmt.Errorf("%s cannot be continued: %w", dir, err)
	}
	return c, nil
}

// lastEvents reads the events of a dataset at its end, Myr.
func lastEvents(dir string, end float64) ([]Event, error) {
	d, err := record.Open(dir)
	if err != nil {
		return nil, err
	}
	f, err := d.Read(eventsTable.Name)
	if err != nil {
		return nil, err
	}
	times, _, err := f.Floats("time_Myr")
	if err != nil {
		return nil, err
	}
	texts := map[string][]string{}
	for _, name := range []string{"event", "body", "other_body", "direction"} {
		if texts[name], _, err = f.Texts(name); err != nil {
			return nil, err
		}
	}
	var list []Event
	for i, t := range times {
		if t == end {
			list = append(list, Event{Name: texts["event"][i], Body: texts["body"][i], Other: texts["other_body"][i], Direction: texts["direction"][i]})
		}
	}
	return list, nil
}

// resume takes up the end of another history: its rules as changed, its state,
// its books, its librations.
func (r *run) resume(c *Continuation) error {
	r.t = c.Time
	for _, i := range c.changes {
		if i < 0 || i >= len(r.h.Scenario.Changes) {
			return fmt.Errorf("the dataset has made change %d, which the scenario does not have: leave its changes as they are, add new ones behind", i+1)
		}
		if err := r.apply(r.h.Scenario.Changes[i].Set, false); err != nil {
			return err
		}
		r.made = append(r.made, i)
		r.pending = without(r.pending, i)
	}
	if len(c.state) != r.p.dim || len(c.ledger.sums) != r.p.NumQuadratures() {
		return fmt.Errorf("the dataset ends in a state of %d variables, the scenario has %d: its bodies or chains differ", len(c.state), r.p.dim)
	}
	for _, v := range c.state {
		if math.IsNaN(v) {
			return errors.New("the dataset ends in a state that is not a number")
		}
	}
	copy(r.y, c.state)
	books := *c.ledger
	books.sums = append([]float64(nil), c.ledger.sums...)
	r.ledger = &books
	r.p.Freeze(r.t, r.y)
	if err := r.meet(c.observed); err != nil {
		return err
	}
	return r.resumeLibrations(c)
}

// resumeLibrations takes up the librations carried: those of an adiabatic
// history go on so, or are given to the state where this one is to follow them.
func (r *run) resumeLibrations(c *Continuation) error {
	before := c.regime == scenarios.Resolved
	switch {
	case before && r.auto():
		return r.resumeFollowing(c)
	case before && !r.resolved:
		return errors.New("the dataset holds a history of the resolved regime, whose librations the adiabatic one would lose: continue it with run.regime = \"resolved\" or \"auto\"")
	case before:
		r.carried = noCarrier(r.p)
		return nil
	}
	var err error
	if r.carried, err = newCarrier(r.p, r.t, r.y, c.librations); err != nil {
		return err
	}
	if r.auto() {
		r.startWide = r.carried.tooWide()
	}
	if r.resolved || r.startWide != "" {
		o0, i0, l0 := r.p.stores(r.t, r.y)
		if r.auto() {
			r.follows(r.y)
		} else {
			r.carried.displace(r.y, r.h.Scenario.Run.Seed)
			r.carried = noCarrier(r.p)
		}
		o1, i1, l1 := r.p.stores(r.t, r.y)
		r.ledger.impose(o1-o0+i1-i0, l1-l0)
	}
	return nil
}

// resumeFollowing goes on following librations in an auto history; of those
// stored, if any, the carrier put aside keeps where the fold is judged from.
func (r *run) resumeFollowing(c *Continuation) error {
	stored := c.librations
	if len(stored) == 0 {
		stored = nil
	}
	still := append([]float64(nil), c.still...)
	if len(still) != len(r.y) {
		// Of a history that was resolved throughout: as near as a projection comes.
		still = append(still[:0], r.y...)
		if err := r.p.still(r.t, still); err != nil {
			return fmt.Errorf("the dataset ends far from any lock: %w; continue it with run.regime = %q", err, scenarios.Resolved)
		}
	}
	l, err := newCarrier(r.p, r.t, still, stored)
	if err != nil {
		return err
	}
	r.gauge, r.carried, r.resolved = newGauge(l, r.t, still), noCarrier(r.p), true
	return nil
}

// passedBefore keeps the events at the end of the continued history from
// occurring again, and refuses to go on beyond one that ended it for good.
func (r *run) passedBefore(c *Continuation) error {
	final := r.p.watchlist(nil, r.resolved && !r.auto())
	var passed []ode.Occurrence
	for _, e := range c.passed {
		for i := range final {
			w := &final[i]
			if w.Name != e.Name || w.body != e.Body || w.other != e.Other {
				continue
			}
			if w.ends {
				return fmt.Errorf("the history ended at %.9g Myr with %s: there is nothing to continue", c.Time/Megayear, reasonOf(e))
			}
			if w.Value != nil {
				passed = append(passed, ode.Occurrence{Event: i, Rising: e.Direction == "rising"})
			}
		}
	}
	r.events.Reset(r.t, r.y, passed...) // what ends no history comes first in either regime
	return nil
}
