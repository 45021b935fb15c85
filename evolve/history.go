package evolve

import (
	"context"
	"math"
	"time"

	"tidekiln/evolve/ode"
	"tidekiln/evolve/record"
	"tidekiln/scenarios"
)

// Status of a history.
const (
	StatusComplete    = "complete"    // the span was reached
	StatusEnded       = "ended"       // an event ended it, as a result
	StatusFailed      = "failed"      // the integration could not go on
	StatusInterrupted = "interrupted" // the caller's context was done
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
	Suspect      bool     // a closure is worse than the tolerance explains
	Cautions     []string // what limits the result, and rules that never acted
	Stats        ode.Stats
	Attempt      Attempt
	Recheck      *Recheck // the same history at a smaller tolerance, if it was asked for

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

	times []float64 // Myr, of the rows to write instead of those of the scenario
}

// Run integrates the history of a scenario. What a scenario alone can get
// wrong is an error; what happens during the integration is part of the
// history: an event that ends it, a step or a change of the rules that cannot be
// made, a context that is done. Everything up to there is kept.
func Run(ctx context.Context, s *scenarios.Scenario, o Options) (*History, error) {
	r, err := begin(s, o)
	if err != nil {
		return nil, err
	}
	for r.h.Status == "" {
		if err := ctx.Err(); err != nil {
			r.stop(StatusInterrupted, context.Cause(ctx).Error())
			break
		}
		r.advance()
		if o.Progress != nil {
			o.Progress(Progress{Time: r.t, Begin: r.h.Begin, Span: s.Run.Span, Steps: r.before.Steps + r.integ.Stats().Steps})
		}
	}
	r.finish()
	return r.h, nil
}

// tolerances of the closures, in units of the step tolerance: 30 for what
// 10³ to 10⁴ steps add up to, ten times that where librations are resolved, whose
// errors pass back and forth between orbits.
const (
	closureFactor         = 30
	resolvedClosureFactor = 300
)

// rounding is the least closure that double precision can be held to after
// some 10⁴ additions.
const rounding = 1e-10

// sampling is the same where librations are resolved, over spans in which the
// tides turn over little beside what a libration passes to and fro.
const sampling = 1e-6

// finish draws the conclusions.
func (r *run) finish() {
	h := r.h
	h.End = r.t
	h.Stats = sum(r.before, r.integ.Stats())
	if myr := r.rec.grid.myr(r.t); myr != r.rec.last {
		r.rec.state(r.t, myr, r.y, r.ledger.sums, r.step)
	}
	c := r.ledger.closure(r.p, r.t, r.y, r.ledger.sums)
	h.Closure.Energy, h.Closure.Momentum = c.energy, c.momentum
	bound := math.Max(closureFactor*h.Scenario.Run.Tolerance, rounding)
	if r.resolved || r.gauge != nil {
		bound = math.Max(resolvedClosureFactor*h.Scenario.Run.Tolerance, sampling)
	}
	h.Suspect = c.energy > bound || c.momentum > bound
	h.end = end{state: r.y, ledger: r.ledger, changes: r.made, regime: r.carried.regime(), librations: r.packLibrations(), still: r.stillness(), observed: r.met()}
	r.conclude()
	h.Cautions = r.cautions()
	h.rows["bodies"], h.rows["resonances"], h.rows["system"] = r.rec.bodies, r.rec.resonances, r.rec.system
	h.rows["librations"] = r.rec.librations
}

// sum adds the counts of two integrators.
func sum(a, b ode.Stats) ode.Stats {
	return ode.Stats{
		Steps: a.Steps + b.Steps, Rejected: a.Rejected + b.Rejected, NewtonFailures: a.NewtonFailures + b.NewtonFailures,
		Derivs: a.Derivs + b.Derivs, Jacobians: a.Jacobians + b.Jacobians, Decompositions: a.Decompositions + b.Decompositions,
		Projections: a.Projections + b.Projections, KinksCrossed: a.KinksCrossed + b.KinksCrossed,
	}
}
