package evolve

import (
	"errors"
	"fmt"
	"math"

	"tidekiln/evolve/ode"
	"tidekiln/evolve/record"
	"tidekiln/scenarios"
)

// run is a history in the making.
type run struct {
	h         *History
	now       *scenarios.Scenario // the rules at present
	p         *System
	integ     ode.Integrator
	before    ode.Stats // of integrators given up
	watch     []watched
	resolved  bool       // librations are followed, not carried
	args      []argument // in the resolved regime
	nextPoint float64    // s, when the track takes the next point there
	events    *ode.Events
	ledger    *ledger
	rec       *recorder
	track     *tracker
	carried   *carrier
	gauge     *gauge // of librations that an auto history follows, or has followed
	pending   []int  // changes not made yet, by their place in the scenario
	made      []int
	seen      []observation
	t         float64
	step      float64
	y         []float64
	startWide string // why an auto history starts resolved
}

func begin(s *scenarios.Scenario, o Options) (*run, error) {
	r := &run{now: s, h: &History{Scenario: s, Misfit: math.NaN(), rows: map[string]*record.Rows{}}}
	if o.From != nil {
		r.h.Parent = o.From.RunID
	}
	r.h.RunID = RunID(s.ID(), r.h.Parent)
	var err error
	if r.p, r.y, err = NewSystem(s); err != nil {
		return nil, err
	}
	if r.seen, err = observations(s); err != nil {
		return nil, err
	}
	for i := range s.Changes {
		r.pending = append(r.pending, i)
	}
	r.resolved = s.Run.Regime == scenarios.Resolved
	if o.From != nil {
		err = r.resume(o.From)
	} else {
		err = r.settle()
	}
	if err != nil {
		return nil, err
	}
	if !(s.Run.Span > r.t) {
		return nil, &SpanError{Span: s.Run.Span, Begin: r.t}
	}
	r.h.Begin = r.t
	if err := r.start(nil); err != nil {
		return nil, err
	}
	if o.From != nil {
		if err := r.passedBefore(o.From); err != nil {
			return nil, err
		}
	} else {
		// The projection made the start; nothing was imposed.
		r.ledger = newLedger(r.p, 0, r.y)
	}
	r.track = newTracker(r.p)
	r.rec = newRecorder(r.p, r.carried, r.ledger, newGrid(s.Run.Record.EveryMyr, r.t/Megayear), s.Run.Record.Change, r.h.RunID)
	if o.times != nil {
		r.rec.grid, r.rec.change = &grid{list: o.times}, 0
	}
	if due := r.due(); len(due) > 0 {
		if err := r.change(due, nil); err != nil {
			return nil, err
		}
	}
	r.rec.state(r.t, r.rec.grid.myr(r.t), r.y, r.ledger.sums, math.NaN())
	r.point(r.t, r.y, r.ledger.sums)
	r.observe(r.t)
	if r.startWide != "" {
		r.h.Events = append(r.h.Events, r.toldRegime(scenarios.Resolved, r.startWide))
	}
	return r, nil
}

// settle makes the start of a new history: the librations of every locked chain
// as the scenario gives them, about its slow manifold, and the books.
func (r *run) settle() error {
	still := append([]float64(nil), r.y...)
	if err := r.p.still(0, still); err != nil {
		return err
	}
	var err error
	if r.carried, err = newCarrier(r.p, 0, still, nil); err != nil {
		return err
	}
	if r.auto() {
		if r.startWide = r.carried.tooWide(); r.startWide != "" {
			r.follows(still)
			copy(r.y, still)
		}
	} else if r.resolved {
		r.carried.displace(still, r.h.Scenario.Run.Seed)
		r.carried = noCarrier(r.p)
		copy(r.y, still)
	}
	r.ledger = newLedger(r.p, 0, r.y)
	return nil
}

// start gives the present system and state to a fresh integrator, which in the
// adiabatic regime puts the state on the slow manifold: that moves it by a part
// of the drift within a libration, which is booked as imposed. Events that have
// just occurred do not occur again.
func (r *run) start(passed []ode.Occurrence) error {
	var next ode.Integrator
	var err error
	left := int(r.h.Scenario.Run.MaxSteps)
	if r.integ != nil {
		used := sum(r.before, r.integ.Stats())
		left -= used.Steps + used.Rejected + used.NewtonFailures
	}
	if left <= 0 {
		return &ode.StopError{Reason: ode.StepBudget, T: r.t, Component: -1}
	}
	if r.resolved {
		next, err = r.p.resolving(r.y, left)
		r.args = r.p.arguments(r.y)
	} else {
		o := r.p.Tolerances()
		o.MaxSteps = left
		next, err = ode.New(r.p.adiabaticMethod(), r.p, o)
	}
	if err != nil {
		return err
	}
	if err := next.Start(r.t, r.y); err != nil {
		return err
	}
	if r.integ != nil {
		r.before = sum(r.before, r.integ.Stats())
	}
	r.integ = next
	o0, i0, l0 := r.p.stores(r.t, r.y)
	copy(r.y, next.State())
	o1, i1, l1 := r.p.stores(r.t, r.y)
	r.ledger.impose(o1-o0+i1-i0, l1-l0)
	r.watch = r.p.watchlist(r.h.Scenario.Run.Stop, r.resolved)
	var list []ode.Event
	for i := range r.watch {
		if r.watch[i].Value != nil {
			list = append(list, r.watch[i].Event)
		}
	}
	r.events = ode.NewEvents(list)
	if r.resolved {
		r.events.AtEnds()
	}
	r.events.Reset(r.t, r.y, passed...)
	return nil
}

// ending is why a step's work ends before the step does, or at its end.
type ending struct {
	at     float64
	y      []float64 // nil for the end of the step
	ends   bool      // the history
	wide   string    // why an auto history goes on resolved; "" if it does not
	fired  []int     // changes that were waited for
	passed []ode.Occurrence
}

// advance makes one accepted step and everything that hangs on it.
func (r *run) advance() {
	seg, err := r.integ.Step(r.nextChange(r.h.Scenario.Run.Span))
	if err != nil {
		r.fail(err)
		return
	}
	e := r.happened(seg)
	r.step = seg.T1 - seg.T0
	if e.at > seg.T0 {
		r.follow(seg, e.at)
	}
	r.t = e.at
	if e.y == nil {
		r.add(seg.Quadratures())
		copy(r.y, r.integ.State())
	} else {
		q := make([]float64, r.p.NumQuadratures())
		seg.QuadraturesTo(e.at, q)
		r.add(q)
		copy(r.y, e.y)
	}
	if e.ends {
		r.stop(StatusEnded, reasonOf(r.h.Events[len(r.h.Events)-1]))
		return
	}
	if which := append(e.fired, r.due()...); len(which) > 0 {
		if err := r.change(which, e.passed); err != nil {
			r.fail(err)
			return
		}
	} else if r.resolved && r.p.unwind(r.y) {
		if err := r.integ.Start(r.t, r.y); err != nil {
			r.fail(err)
			return
		}
	}
	if err := r.changeRegime(e.wide); err != nil {
		r.fail(err)
		return
	}
	if r.h.Status == "" && r.t >= r.h.Scenario.Run.Span {
		r.h.Events = append(r.h.Events, Event{runID: r.h.RunID, Time: r.t, Name: EventSpanEnded, Ends: true})
		r.stop(StatusComplete, "")
	}
}

// happened records the events of a step up to the first that ends the history
// or that a change waits for.
func (r *run) happened(seg *ode.Segment) ending {
	occurred := r.occurred(seg)
	for i := range occurred {
		o := &occurred[i]
		if o.wide != "" {
			return ending{at: o.T, y: o.Y, wide: o.wide}
		}
		e := r.event(o)
		r.h.Events = append(r.h.Events, e)
		fired := r.triggered(&e)
		wide := r.resolves(o)
		if !e.Ends && fired < 0 && !wide {
			continue
		}
		stop := ending{at: o.T, y: o.Y, ends: e.Ends}
		if o.passage {
			stop.y = nil // known at the end of the step only
		}
		if fired >= 0 {
			stop.fired = []int{fired}
		}
		if wide {
			stop.wide = e.Name + " in " + e.Detail
		}
		for _, p := range occurred {
			if p.T == o.T && p.news == nil && !p.passage {
				stop.passed = append(stop.passed, p.Occurrence)
			}
		}
		return stop
	}
	return ending{at: seg.T1}
}

// pointsPerHistory bounds the points of the track in the resolved regime, whose
// steps are as short as a libration.
const pointsPerHistory = 4000

// follow records and tracks the step up to end.
func (r *run) follow(seg *ode.Segment, end float64) {
	r.rec.step(seg, end, r.h.Scenario.Run.Span, r.ledger.sums)
	r.observeStep(seg, end)
	if r.resolved {
		seg.Eval(end, r.track.y)
		r.track.shapes(r.p, r.track.y)
		if end < r.nextPoint {
			return
		}
		r.nextPoint = end + (r.h.Scenario.Run.Span-r.h.Begin)/pointsPerHistory
		r.pointOn(seg, end)
		return
	}
	for i := 1; i <= pointsPerStep; i++ {
		r.pointOn(seg, seg.T0+(end-seg.T0)*float64(i)/pointsPerStep)
	}
}

// pointOn tracks the state at t within a step.
func (r *run) pointOn(seg *ode.Segment, t float64) {
	y, q := r.track.y, r.track.q
	seg.Eval(t, y)
	seg.QuadraturesTo(t, q)
	for j, s := range r.ledger.sums {
		q[j] += s
	}
	r.point(t, y, q)
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

// fail ends it because it cannot go on.
func (r *run) fail(err error) {
	var stop *ode.StopError
	if errors.As(err, &stop) {
		r.stop(StatusFailed, r.explain(stop))
		return
	}
	r.stop(StatusFailed, fmt.Sprintf("%v, at %.9g Myr", err, r.t/Megayear))
}
