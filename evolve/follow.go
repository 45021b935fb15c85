package evolve

import "tidekiln/evolve/ode"

// pointsPerHistory bounds the points of the track in the resolved regime, whose
// steps are as short as a libration.
const pointsPerHistory = 4000

// follow records and tracks the step up to end.
func (r *run) follow(seg *ode.Segment, end float64) {
	r.rec.step(seg, end, r.h.Scenario.Run.Span, r.ledger.sums)
	r.observe(seg, end)
	if r.resolved {
		seg.Eval(end, r.track.y)
		r.track.shapes(r.p, r.track.y)
		if end < r.nextPoint {
			return
		}
		r.nextPoint = end + (r.h.Scenario.Run.Span-r.h.Begin)/pointsPerHistory
		seg.QuadraturesTo(end, r.track.q)
		for j, s := range r.ledger.sums {
			r.track.q[j] += s
		}
		r.point(end, r.track.y, r.track.q)
		return
	}
	for i := 1; i <= pointsPerStep; i++ {
		t := seg.T0 + (end-seg.T0)*float64(i)/pointsPerStep
		y, q := r.track.y, r.track.q
		seg.Eval(t, y)
		seg.QuadraturesTo(t, q)
		for j, s := range r.ledger.sums {
			q[j] += s
		}
		r.point(t, y, q)
	}
}

// point tracks a state.
func (r *run) point(t float64, y, sums []float64) {
	r.p.set(y)
	r.p.evaluate(y, r.p.heatRow, false)
	r.track.point(r.p, t, y, sums)
}

func (r *run) add(q []float64) {
	for i, v := range q {
		r.ledger.sums[i] += v
	}
}
