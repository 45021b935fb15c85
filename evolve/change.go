package evolve

import (
	"fmt"
	"strings"

	"tidekiln/evolve/ode"
	"tidekiln/scenarios"
)

// SpanError reports a span that ends where the history begins, or before.
type SpanError struct{ Span, Begin float64 }

func (e *SpanError) Error() string {
	return fmt.Sprintf("the span ends at %.9g Myr, but the history already stands at %.9g Myr: ask for a longer one, e.g. --span %q",
		e.Span/Megayear, e.Begin/Megayear, fmt.Sprintf("%g Myr", 2*e.Begin/Megayear))
}

// nextChange returns the time of the next timed change before limit, or limit.
func (r *run) nextChange(limit float64) float64 {
	for _, i := range r.pending {
		c := &r.h.Scenario.Changes[i]
		if c.When == nil && c.At > r.t && c.At < limit {
			limit = c.At
		}
	}
	return limit
}

// due returns the timed changes whose time has come.
func (r *run) due() []int {
	var due []int
	for _, i := range r.pending {
		c := &r.h.Scenario.Changes[i]
		if c.When == nil && c.At <= r.t && r.t < r.h.Scenario.Run.Span {
			due = append(due, i)
		}
	}
	return due
}

// triggered returns the first pending change that waits for this event, or −1.
func (r *run) triggered(e *Event) int {
	for _, i := range r.pending {
		c := r.h.Scenario.Changes[i].When
		if c != nil && c.Event == e.Name && matches(c.Body, e.Body) && matches(c.Other, e.Other) {
			return i
		}
	}
	return -1
}

// change applies changes at the present time and goes on under the new rules.
// An interior whose keys change keeps its temperature, or takes the one that
// is set; what that does to its energy is booked as imposed. There is a row just
// before and one just after. Passed are the events that have just occurred.
func (r *run) change(which []int, passed []ode.Occurrence) error {
	r.rowBefore()
	for _, i := range which {
		set := r.h.Scenario.Changes[i].Set
		var words []string
		for _, s := range set {
			words = append(words, s.Path+" = "+s.Value)
		}
		detail := strings.Join(words, ", ")
		if err := r.apply(set, true); err != nil {
			return fmt.Errorf("change %d (%s) cannot be made: %w", i+1, detail, err)
		}
		r.made = append(r.made, i)
		r.pending = without(r.pending, i)
		r.h.Events = append(r.h.Events, Event{runID: r.h.RunID, Time: r.t, Name: EventChange, Detail: detail})
	}
	if err := r.start(passed); err != nil {
		return err
	}
	r.carried.restart(r.p, r.t, r.y)
	r.rec.follow(r.p, r.carried, r.h.RunID)
	r.rowAfter()
	return nil
}

// apply sets keys of the rules in force. With book, the energy it brings is
// booked; a resumed history has it in its books.
func (r *run) apply(set []scenarios.Setting, book bool) error {
	old := r.p
	next, err := r.now.With(r.keepTemperatures(set))
	if err != nil {
		return err
	}
	p, start, err := NewSystem(next)
	if err != nil {
		return err
	}
	if p.dim != old.dim {
		return fmt.Errorf("a change may not alter how many state variables the history has")
	}
	_, internal, _ := old.stores(r.t, r.y)
	touched := touchedInteriors(set)
	for i := range p.bodies {
		if b := &p.bodies[i]; touched[b.name] {
			copy(r.y[b.at:b.at+b.states], start[b.at:b.at+b.states])
		}
	}
	p.Freeze(r.t, r.y)
	_, now, _ := p.stores(r.t, r.y)
	if book {
		r.ledger.impose(now-internal, 0)
	}
	r.p, r.now = p, next
	return nil
}

// touchedInteriors returns the orbiters whose interior a setting alters.
func touchedInteriors(set []scenarios.Setting) map[string]bool {
	touched := map[string]bool{}
	for _, s := range set {
		if parts := strings.SplitN(s.Path, ".", 4); len(parts) >= 3 && parts[0] == "orbiter" && parts[2] == "interior" {
			touched[parts[1]] = true
		}
	}
	return touched
}

// keepTemperatures adds to set the present temperature of every interior it
// alters, where it does not set that itself.
func (r *run) keepTemperatures(set []scenarios.Setting) []scenarios.Setting {
	r.p.set(r.y)
	out := append([]scenarios.Setting(nil), set...)
	touched := touchedInteriors(set)
	for i := range r.p.bodies {
		b := &r.p.bodies[i]
		if !touched[b.name] || b.states == 0 {
			continue
		}
		path := "orbiter." + b.name + ".interior.temperature"
		given := false
		for _, s := range set {
			given = given || s.Path == path
		}
		if t := b.interior.Snapshot().Temperature; t.OK && !given {
			out = append(out, scenarios.Setting{Path: path, Value: fmt.Sprintf("%q", fmt.Sprintf("%v K", t.X))})
		}
	}
	return out
}

func without(list []int, x int) []int {
	var out []int
	for _, v := range list {
		if v != x {
			out = append(out, v)
		}
	}
	return out
}
