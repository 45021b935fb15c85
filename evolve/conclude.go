package evolve

import "tidekiln/scenarios"

// conclude judges every body and the orbits, and fills the tables that wait
// for the end.
func (r *run) conclude() {
	h := r.h
	lost := map[string]bool{}
	for _, e := range h.Events {
		if e.Ends && (e.Name == scenarios.EventRocheLimit || e.Name == scenarios.EventOrbitsCross) {
			lost[e.Body] = true
			if e.Other != "" {
				lost[e.Other] = true
			}
		}
	}
	misfit, misfits := r.misfits()
	h.Misfit = misfit
	for i := range r.p.bodies {
		b := &r.p.bodies[i]
		o := r.track.bodies[i].judge(h.Begin, h.End, r.radiogenic(i))
		o.runID, o.Body, o.Misfit = h.RunID, b.name, misfits[i]
		switch {
		case lost[b.name]:
			o.Outcome = Disrupted
		case h.Status == StatusFailed && b.states > 0:
			o.Outcome = Failed
		}
		h.Bodies = append(h.Bodies, o)
	}
	h.Judged = h.Scenario.Run.Judge
	for i := range r.p.bodies {
		if h.Judged == "" && r.p.bodies[i].states > 0 {
			h.Judged = r.p.bodies[i].name
		}
	}
	for i := range h.Bodies {
		if o := &h.Bodies[i]; o.Body == h.Judged || h.Outcome == "" && o.Outcome == Disrupted {
			h.Outcome = o.Outcome
		}
	}
	if h.Status == StatusFailed {
		h.Outcome = Failed
	}
	h.OrbitOutcome = r.orbits(len(lost) > 0)
}

// radiogenic returns a body's present radiogenic heat, W.
func (r *run) radiogenic(i int) float64 {
	b := &r.p.bodies[i]
	if b.states == 0 {
		return 0
	}
	r.p.set(r.y)
	return b.interior.Balance(r.p.age(r.t)).RadiogenicHeat
}

// orbits returns the outcome of the orbits.
func (r *run) orbits(lost bool) string {
	if lost {
		return OrbitDisrupted
	}
	if librating(r.args) {
		return OrbitLocked
	}
	for _, e := range r.h.Events {
		if e.Name == scenarios.EventResonanceLeft {
			return OrbitLeft
		}
	}
	for i := range r.p.groups {
		if r.p.groups[i].chain != nil && !r.resolved {
			return OrbitLocked
		}
	}
	return OrbitFree
}

// reasonOf words the event that ended a history.
func reasonOf(e Event) string {
	s := e.Name
	if e.Body != "" {
		s += ": " + e.Body
	}
	if e.Other != "" {
		s += " and " + e.Other
	}
	if e.Detail != "" {
		s += ", " + e.Detail
	}
	return s
}
