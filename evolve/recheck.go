package evolve

import (
	"context"
	"fmt"
	"math"

	"tidekiln/evolve/record"
	"tidekiln/scenarios"
)

// Recheck is the same history at a smaller tolerance beside the first.
type Recheck struct {
	Tolerance   float64
	Status      string
	Outcome     string
	Events      int // how many
	Differences []Difference
}

// Difference is the greatest one between two histories in one column of one
// subject.
type Difference struct {
	runID                  string
	Table, Subject, Column string
	Relative               float64 // to the value, or to a thousandth of the greatest there is
	Time                   float64 // Myr
	Value, Rechecked       float64 // in the column's unit
}

// recheckFactor is how much smaller the tolerance of the second history is,
// leastTolerance the smallest it can be, and moreSteps how many times as many
// steps it may take.
const (
	recheckFactor  = 0.01
	leastTolerance = 1e-12
	moreSteps      = 100
)

// CanRepeat says whether a history of the scenario can be held against one at a
// smaller tolerance.
func CanRepeat(s *scenarios.Scenario) error {
	if s.Run.Tolerance <= leastTolerance {
		return fmt.Errorf("run.tolerance is %g, as small as it can be: there is nothing to recheck it against", s.Run.Tolerance)
	}
	return nil
}

// withoutJumps leaves out the two rows at each change of the rules: the second
// history writes its own there, and if the change waited for an event, a hair's
// breadth aside.
func withoutJumps(times []float64) []float64 {
	out := []float64{}
	for i := 0; i < len(times); i++ {
		if i+1 < len(times) && times[i+1] == math.Nextafter(times[i], math.Inf(1)) {
			i++
			continue
		}
		out = append(out, times[i])
	}
	return out
}

// Repeat runs a history again at a hundredth of its tolerance, with rows at the
// same times, and notes the differences in it: what a referee asks first. A
// second history that is interrupted leaves the first as it was.
func (h *History) Repeat(ctx context.Context, o Options) error {
	if err := CanRepeat(h.Scenario); err != nil {
		return err
	}
	s := *h.Scenario
	s.Run.Tolerance = math.Max(leastTolerance, recheckFactor*s.Run.Tolerance)
	s.Run.MaxSteps *= moreSteps
	times, _, err := h.rows["system"].Frame().Floats("time_Myr")
	if err != nil {
		return err
	}
	o.times = withoutJumps(times)
	again, err := Run(ctx, &s, o)
	if err != nil {
		return err
	}
	if again.Status == StatusInterrupted {
		return context.Cause(ctx)
	}
	c := &Recheck{Tolerance: s.Run.Tolerance, Status: again.Status, Outcome: again.Outcome, Events: len(again.Events)}
	for _, table := range []struct {
		name    string
		rows    [2]*record.Rows
		rough   map[string]bool
		subject []string
	}{
		{"bodies", [2]*record.Rows{h.rows["bodies"], again.rows["bodies"]}, roughOf(bodiesTable), []string{"body"}},
		{"resonances", [2]*record.Rows{h.rows["resonances"], again.rows["resonances"]}, roughOf(resonancesTable), []string{"inner_body", "outer_body"}},
		{"system", [2]*record.Rows{h.rows["system"], again.rows["system"]}, roughOf(systemTable), nil},
	} {
		found, err := differences(table.name, table.rows[0].Frame(), table.rows[1].Frame(), table.subject, table.rough)
		if err != nil {
			return err
		}
		c.Differences = append(c.Differences, found...)
	}
	c.Differences = append(c.Differences, eventDifferences(h.Events, again.Events)...)
	for i := range c.Differences {
		c.Differences[i].runID = h.RunID
	}
	h.Recheck = c
	return nil
}

// roughOf lists the columns of a table that are diagnostics.
func roughOf[S any](t *table[S]) map[string]bool {
	out := map[string]bool{}
	for i := range t.columns {
		out[t.columns[i].Name] = t.columns[i].rough
	}
	return out
}

// differences compares the rows of two tables that agree in subject and time.
func differences(name string, a, b *record.Frame, subject []string, rough map[string]bool) ([]Difference, error) {
	type place struct {
		time    float64
		subject string
	}
	places := func(f *record.Frame) ([]place, error) {
		times, _, err := f.Floats("time_Myr")
		if err != nil {
			return nil, err
		}
		out := make([]place, f.Len())
		for i, t := range times {
			out[i].time = t
		}
		for k, column := range subject {
			texts, _, err := f.Texts(column)
			if err != nil {
				return nil, err
			}
			for i, v := range texts {
				if k > 0 {
					v = "-" + v
				}
				out[i].subject += v
			}
		}
		return out, nil
	}
	here, err := places(a)
	if err != nil {
		return nil, err
	}
	there, err := places(b)
	if err != nil {
		return nil, err
	}
	row := map[place]int{}
	for i, p := range there {
		row[p] = i
	}
	var found []Difference
	for _, c := range a.Table().Columns {
		if c.Kind != record.Float || rough[c.Name] {
			continue
		}
		x, xValid, err := a.Floats(c.Name)
		if err != nil {
			return nil, err
		}
		y, yValid, err := b.Floats(c.Name)
		if err != nil {
			return nil, err
		}
		peak := map[string]float64{}
		for i, p := range here {
			peak[p.subject] = math.Max(peak[p.subject], math.Abs(x[i]))
		}
		at := map[string]int{}
		for i, p := range here {
			j, both := row[p]
			if !both || !xValid[i] || !yValid[j] {
				continue
			}
			d := math.Abs(x[i] - y[j])
			if d > 0 {
				d /= math.Max(math.Abs(x[i]), floorShare*peak[p.subject])
			}
			k, known := at[p.subject]
			if !known {
				k = len(found)
				at[p.subject] = k
				found = append(found, Difference{Table: name, Subject: p.subject, Column: c.Name, Relative: -1})
			}
			if f := &found[k]; d > f.Relative {
				f.Relative, f.Time, f.Value, f.Rechecked = d, p.time, x[i], y[j]
			}
		}
	}
	return found, nil
}

// eventDifferences compares the times of events of the same kind, in order.
func eventDifferences(a, b []Event) []Difference {
	key := func(e Event) string {
		s := e.Name
		for _, body := range []string{e.Body, e.Other} {
			if body != "" {
				s += " " + body
			}
		}
		return s
	}
	times := map[string][]float64{}
	for _, e := range b {
		times[key(e)] = append(times[key(e)], e.Time/Megayear)
	}
	worst := map[string]int{}
	var found []Difference
	for _, e := range a {
		k := key(e)
		if e.Name == EventSpanEnded || len(times[k]) == 0 {
			continue
		}
		t, again := e.Time/Megayear, times[k][0]
		times[k] = times[k][1:]
		i, known := worst[k]
		if !known {
			i = len(found)
			worst[k] = i
			found = append(found, Difference{Table: "events", Subject: k, Column: "time_Myr", Relative: -1})
		}
		if d := ratio(math.Abs(t-again), t); d > found[i].Relative {
			found[i].Relative, found[i].Time, found[i].Value, found[i].Rechecked = d, t, t, again
		}
	}
	return found
}

// Worst returns the greatest difference in a column over all subjects, and
// whether there is one.
func (c *Recheck) Worst(column string) (worst Difference, found bool) {
	for _, d := range c.Differences {
		if d.Column == column && (!found || d.Relative > worst.Relative) {
			worst, found = d, true
		}
	}
	return worst, found
}
