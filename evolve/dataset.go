package evolve

import (
	"errors"
	"fmt"
	"os"
	"runtime"
	"strconv"
	"time"

	"tidekiln/evolve/ode"
	"tidekiln/evolve/record"
	"tidekiln/orbit"
	"tidekiln/scenarios"
)

// runRow is the row of a history in runs/.
type runRow struct {
	RunID, ScenarioID, ParentRunID string
	scenario                       *scenarios.Scenario
	Status, Reason                 string
	Judged, Outcome, OrbitOutcome  string
	Begin, End                     float64
	Closure                        closure
	Suspect                        bool
	cautions                       []string
	recheck                        *Recheck
	Misfit                         float64
	Stats                          ode.Stats
	endState, endLedger            []float64
	endLibrations, endObserved     []float64
	endChanges                     []float64
	endRegime                      string
	endStill                       []float64
}

// end is what a continued history takes up.
type end struct {
	state      []float64
	regime     string // Adiabatic or Resolved
	ledger     *ledger
	librations []float64
	still      []float64 // about which an auto history librates that follows it
	observed   []float64
	changes    []int
}

// pack lists the books: the stores at the start, what was imposed, the sums.
func (l *ledger) pack() []float64 {
	return append([]float64{l.orbital0, l.internal0, l.momentum0, l.imposed, l.spun}, l.sums...)
}

func unpackLedger(v []float64) (*ledger, error) {
	if len(v) < 5 {
		return nil, fmt.Errorf("end_ledger holds %d values", len(v))
	}
	return &ledger{orbital0: v[0], internal0: v[1], momentum0: v[2], imposed: v[3], spun: v[4], sums: v[5:]}, nil
}

// Keys of the footers.
const (
	metaScenario = "tidekiln.scenario"
	metaVersion  = "tidekiln.version"
	metaPhysics  = "tidekiln.physics"
	metaPlatform = "tidekiln.platform"
	metaSeed     = "tidekiln.seed"
	metaG        = "tidekiln.G_m3_per_kg_s2"
	metaRunID    = "tidekiln.run_id"
	metaStatus   = "tidekiln.status"
)

// meta is what every footer carries.
func (h *History) meta() map[string]string {
	return map[string]string{
		metaScenario: h.Scenario.TOML(),
		metaVersion:  Version(),
		metaPhysics:  strconv.Itoa(Physics),
		metaPlatform: Platform(),
		metaSeed:     strconv.FormatInt(h.Scenario.Run.Seed, 10),
		metaG:        strconv.FormatFloat(orbit.G, 'g', -1, 64),
		metaRunID:    h.RunID,
		metaStatus:   h.Status,
	}
}

// Write writes the history as the dataset w and commits it.
func (h *History) Write(w *record.Writer) error { return h.write(w, h.meta()) }

// write does, with the footers' pairs.
func (h *History) write(w *record.Writer, meta map[string]string) error {
	h.Attempt.runID = h.RunID
	h.Attempt.Go = runtime.Version()
	h.Attempt.Host, _ = os.Hostname()
	if h.Attempt.Started == "" {
		h.Attempt.Started = time.Now().Add(-h.Attempt.Wall).UTC().Format(time.RFC3339Nano)
	}
	events := record.NewRows(&eventsTable.Table)
	for i := range h.Events {
		eventsTable.add(events, &h.Events[i])
	}
	outcomes := record.NewRows(&outcomesTable.Table)
	for i := range h.Bodies {
		outcomesTable.add(outcomes, &h.Bodies[i])
	}
	rechecks := record.NewRows(&rechecksTable.Table)
	if h.Recheck != nil {
		for i := range h.Recheck.Differences {
			rechecksTable.add(rechecks, &h.Recheck.Differences[i])
		}
	}
	attempts := record.NewRows(&attemptsTable.Table)
	attemptsTable.add(attempts, &h.Attempt)
	runs := record.NewRows(&runsTable.Table)
	row := h.row()
	runsTable.add(runs, &row)
	for _, rows := range []*record.Rows{h.rows["bodies"], h.rows["resonances"], h.rows["librations"], h.rows["system"], events, outcomes, rechecks, attempts, runs} {
		if err := w.Write(rows, meta); err != nil {
			return err
		}
	}
	return w.Commit()
}

func (h *History) row() runRow {
	row := runRow{
		RunID: h.RunID, ScenarioID: h.Scenario.ID(), ParentRunID: h.Parent, scenario: h.Scenario,
		Status: h.Status, Reason: h.Reason, Judged: h.Judged, Outcome: h.Outcome, OrbitOutcome: h.OrbitOutcome,
		Begin: h.Begin, End: h.End, Closure: closure{h.Closure.Energy, h.Closure.Momentum}, Suspect: h.Suspect, cautions: h.Cautions, recheck: h.Recheck, Misfit: h.Misfit,
		Stats: h.Stats, endState: h.end.state, endRegime: h.end.regime, endStill: h.end.still, endLedger: h.end.ledger.pack(), endLibrations: h.end.librations, endObserved: h.end.observed, endChanges: []float64{},
	}
	for _, i := range h.end.changes {
		row.endChanges = append(row.endChanges, float64(i))
	}
	return row
}

// Stored is what a dataset says of the history it holds.
type Stored struct {
	RunID, ScenarioID, Status, Version, Platform string
	Physics                                      int
	End                                          float64 // s
	Scenario                                     string  // TOML, resolved
	Rechecked                                    bool    // it holds a recheck
}

// Describe reads what a dataset says of its history.
func Describe(dir string) (*Stored, error) {
	s, _, err := stored(dir)
	return s, err
}

// stored reads runs/ of a dataset of one history.
func stored(dir string) (*Stored, *record.Frame, error) {
	d, err := record.Open(dir)
	if err != nil {
		return nil, nil, err
	}
	f, err := d.Read(runsTable.Name)
	if err != nil {
		return nil, nil, err
	}
	if f.Len() != 1 {
		return nil, nil, fmt.Errorf("%s holds %d histories, not one", dir, f.Len())
	}
	s := &Stored{Scenario: f.Meta[metaScenario], Version: f.Meta[metaVersion], Platform: f.Meta[metaPlatform], Status: f.Meta[metaStatus]}
	var errs [4]error
	s.Physics, errs[0] = strconv.Atoi(f.Meta[metaPhysics])
	s.RunID, errs[1] = first(f.Texts("run_id"))
	s.ScenarioID, errs[2] = first(f.Texts("scenario_id"))
	s.End, errs[3] = first(f.Floats("end_Myr"))
	s.End *= Megayear
	if _, rechecked, err := f.Floats("recheck_tolerance"); err == nil {
		s.Rechecked = len(rechecked) > 0 && rechecked[0]
	}
	if err := errors.Join(errs[:]...); err != nil {
		return nil, nil, fmt.Errorf("%s is no dataset of one history: %w", dir, err)
	}
	return s, f, nil
}

// first returns the value of a column's first row.
func first[T any](values []T, valid []bool, err error) (T, error) {
	var none T
	switch {
	case err != nil:
		return none, err
	case len(valid) == 0 || !valid[0]:
		return none, errors.New("a value of runs is missing")
	}
	return values[0], nil
}
