package evolve

import (
	"context"
	"errors"
	"math"
	"time"

	"tidekiln/evolve/ode"
	"tidekiln/evolve/record"
	"tidekiln/scenarios"
)

// Status of a history.
const (
	Complete    = "complete"    // the span was reached
	Ended       = "ended"       // an event ended it, as a result
	Stopped     = "failed"      // the integration could not go on
	Interrupted = "interrupted" // the caller's context was done
)

// History is what [Run] found.
type History struct {
	Scenario *scenarios.Scenario // as it was asked for
	RunID    string
	Parent   string // run id of the history it continues, or ""
	Status   string
	Reason   string // "" if complete

	Begin, End   float64 // s
	Events       []Event
	Bodies       []BodyOutcome
	Judged       string // body whose outcome is the history's, or ""
	Outcome      string
	OrbitOutcome string
	Misfit       float64 // NaN without observations
	Closure      struct{ Energy, Momentum float64 }
	Suspect      bool // a closure is worse than the tolerance explains
	Stats        ode.Stats
	Attempt      Attempt

	end  end
	rows map[string]*record.Rows
}

// Attempt is what may differ between two runs of the same case.
type Attempt struct {
	runID    string
	Started  string // RFC 3339, UTC; "": Wall before the history is written
	Wall     time.Duration
	Host, Go string
}

// Rows returns the number of rows of a table.
func (h *History) Rows(table string) int {
	if r := h.rows[table]; r != nil {
		return r.Len()
	}
	return 0
}

// Progress is where a running history stands.
type Progress struct {
	Time, Begin, Span float64 // s
	Steps             int
}

// Options of a run.
type Options struct {
	From     *Continuation  // state to continue from; nil starts anew
	Progress func(Progress) // called after every accepted step; may be nil
}

// Run integrates the history of a scenario. What a scenario alone can get
// wrong is an error; what happens during the integration is part of the
// history: an event that ends it, a step that cannot be made, a context that
// is done. Everything up to there is kept.
func Run(ctx context.Context, s *scenarios.Scenario, o Options) (*History, error) {
	r, err := begin(s, o)
	if err != nil {
		return nil, err
	}
	for r.h.Status == "" {
		if err := ctx.Err(); err != nil {
			r.stop(Interrupted, context.Cause(ctx).Error())
			break
		}
		if err := r.advance(); err != nil {
			return nil, err
		}
		if o.Progress != nil {
			o.Progress(Progress{Time: r.t, Begin: r.h.Begin, Span: s.Run.Span, Steps: r.h.Stats.Steps + r.integ.Stats().Steps})
		}
	}
	r.finish()
	return r.h, nil
}

// run is a history in the making.
type run struct {
	h       *History
	now     *scenarios.Scenario // the rules at present
	p       *System
	integ   *ode.Radau
	before  ode.Stats // of integrators given up at changes
	watch   []watched
	events  *ode.Events
	ledger  *ledger
	rec     *recorder
	track   *tracker
	pending []int // changes not made yet, by their place in the scenario
	made    []int
	seen    []observation
	t       float64
	step    float64
	y       []float64
}

func begin(s *scenarios.Scenario, o Options) (*run, error) {
	parent := ""
	if o.From != nil {
		parent = o.From.RunID
	}
	r := &run{now: s, h: &History{
		Scenario: s, Parent: parent, RunID: RunID(s.ID(), parent), Misfit: math.NaN(), rows: map[string]*record.Rows{},
	}}
	p, y, err := NewSystem(s)
	if err != nil {
		return nil, err
	}
	r.p, r.y = p, y
	r.seen, err = observations(s)
	if err != nil {
		return nil, err
	}
	for i := range s.Changes {
		r.pending = append(r.pending, i)
	}
	r.ledger = newLedger(p, 0, y)
	if o.From != nil {
		if err := r.resume(o.From); err != nil {
			return nil, err
		}
	}
	if !(s.Run.Span > r.t) {
		return nil, &SpanError{Span: s.Run.Span, Begin: r.t}
	}
	r.h.Begin = r.t
	if err := r.start(); err != nil {
		return nil, err
	}
	myr := r.t / Megayear
	r.rec = newRecorder(r.p, r.ledger, newGrid(s.Run.Record.EveryMyr, myr), s.Run.Record.Change, r.h.RunID)
	r.track = newTracker(r.p)
	if due := r.due(); len(due) > 0 {
		if err := r.change(due); err != nil {
			return nil, err
		}
	}
	r.rec.state(r.t, myr, r.y, r.ledger.sums, math.NaN())
	r.point(r.t, r.y, r.ledger.sums)
	return r, nil
}

// start gives the present system and state to a fresh integrator, which puts
// the state on the slow manifold.
func (r *run) start() error {
	if r.integ != nil {
		r.before = sum(r.before, r.integ.Stats())
	}
	var err error
	if r.integ, err = ode.NewRadau(r.p, r.p.Tolerances()); err != nil {
		return err
	}
	before := append([]float64(nil), r.y...)
	if err := r.integ.Start(r.t, r.y); err != nil {
		return err
	}
	copy(r.y, r.integ.State())
	r.settle(before)
	r.watch = r.p.watchlist(r.h.Scenario.Run.Stop)
	list := make([]ode.Event, len(r.watch))
	for i := range r.watch {
		list[i] = r.watch[i].Event
	}
	r.events = ode.NewEvents(list)
	r.events.Reset(r.t, r.y)
	return nil
}

// settle keeps the projection onto the slow manifold, which moves the state by
// a few parts in 10¹³, out of the books.
func (r *run) settle(before []float64) {
	o0, i0, l0 := r.p.stores(r.t, before)
	o1, i1, l1 := r.p.stores(r.t, r.y)
	r.ledger.orbital0 += o1 - o0
	r.ledger.internal0 += i1 - i0
	r.ledger.momentum0 += l1 - l0
}

// advance makes one accepted step and everything that hangs on it.
func (r *run) advance() error {
	span := r.h.Scenario.Run.Span
	target := r.nextChange(span)
	seg, err := r.integ.Step(target)
	if err != nil {
		var stop *ode.StopError
		if !errors.As(err, &stop) {
			return err
		}
		r.stop(Stopped, r.explain(stop))
		return nil
	}
	end := seg.T1
	var trigger *ode.Occurrence
	fired := -1
	occurred := r.events.Locate(seg)
	for i := range occurred {
		o := &occurred[i]
		w := &r.watch[o.Event]
		e := w.event(r.h.RunID, *o)
		r.h.Events = append(r.h.Events, e)
		if w.ends {
			trigger, end = o, o.T
			break
		}
		if fired = r.triggered(w); fired >= 0 {
			trigger, end = o, o.T
			break
		}
	}
	r.step = seg.T1 - seg.T0
	r.follow(seg, end)
	r.t = end
	switch {
	case trigger == nil:
		r.add(seg.Quadratures())
		copy(r.y, r.integ.State())
	default:
		q := make([]float64, r.p.NumQuadratures())
		seg.QuadraturesTo(end, q)
		r.add(q)
		copy(r.y, trigger.Y)
		if fired < 0 {
			w := &r.watch[trigger.Event]
			r.stop(Ended, reasonOf(w))
			return nil
		}
		return r.change([]int{fired})
	}
	if due := r.due(); len(due) > 0 {
		return r.change(due)
	}
	if r.t >= span {
		r.h.Events = append(r.h.Events, Event{runID: r.h.RunID, Time: r.t, Name: EventSpanEnded, Ends: true})
		r.stop(Complete, "")
	}
	return nil
}

// follow records and tracks the step up to end.
func (r *run) follow(seg *ode.Segment, end float64) {
	r.rec.step(seg, end, r.h.Scenario.Run.Span, r.ledger.sums)
	r.observe(seg, end)
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

// stop ends the history at the present state.
func (r *run) stop(status, reason string) {
	r.h.Status, r.h.Reason = status, reason
}

// tolerances of the closures, in units of the step tolerance: 30 for what
// 10³ to 10⁴ steps add up to.
const closureFactor = 30

// rounding is the least closure that double precision can be held to after
// some 10⁴ additions.
const rounding = 1e-10

// finish draws the conclusions.
func (r *run) finish() {
	h := r.h
	h.End = r.t
	h.Stats = sum(r.before, r.integ.Stats())
	myr := r.t / Megayear
	if last := h.Scenario.Run.Span; r.t == last {
		myr = r.spanMyr()
	}
	if r.t > h.Begin {
		r.rec.state(r.t, myr, r.y, r.ledger.sums, r.step)
	}
	c := r.ledger.closure(r.p, r.t, r.y, r.ledger.sums)
	h.Closure.Energy, h.Closure.Momentum = c.energy, c.momentum
	bound := math.Max(closureFactor*h.Scenario.Run.Tolerance, rounding)
	h.Suspect = c.energy > bound || c.momentum > bound
	h.end = end{state: r.y, ledger: r.ledger, changes: r.made}
	r.conclude()
	h.rows["bodies"], h.rows["resonances"], h.rows["system"] = r.rec.bodies, r.rec.resonances, r.rec.system
}

// spanMyr is the end of the span as it is written: the multiple of the cadence
// if it is one.
func (r *run) spanMyr() float64 {
	myr := r.t / Megayear
	g := r.rec.grid
	if g.every == nil {
		return myr
	}
	if t := g.time(); math.Abs(t-myr) <= 4e-16*myr {
		return t
	}
	return myr
}

// sum adds the counts of two integrators.
func sum(a, b ode.Stats) ode.Stats {
	return ode.Stats{
		Steps: a.Steps + b.Steps, Rejected: a.Rejected + b.Rejected, NewtonFailures: a.NewtonFailures + b.NewtonFailures,
		Derivs: a.Derivs + b.Derivs, Jacobians: a.Jacobians + b.Jacobians, Decompositions: a.Decompositions + b.Decompositions,
		Projections: a.Projections + b.Projections, KinksCrossed: a.KinksCrossed + b.KinksCrossed,
	}
}
