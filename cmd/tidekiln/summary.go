package main

import (
	"fmt"
	"io"
	"math"
	"text/tabwriter"

	"tidekiln/evolve"
)

// summarise says in ten seconds' reading what a history did.
func summarise(w io.Writer, h *evolve.History, out, picture string) {
	if h.Scenario.Title != "" {
		fmt.Fprintln(w, h.Scenario.Title)
	}
	t := tabwriter.NewWriter(w, 0, 0, 2, ' ', 0)
	line := func(what, format string, a ...any) {
		fmt.Fprintf(t, "  %s\t%s\n", what, fmt.Sprintf(format, a...))
	}
	line("history", "%s, %.6g to %.6g Myr in %d steps, %.2g s", h.Status, h.Begin/evolve.Megayear, h.End/evolve.Megayear, h.Stats.Steps, h.Attempt.Wall.Seconds())
	if h.Reason != "" {
		line("reason", "%s", h.Reason)
	}
	line("orbits", "%s", h.OrbitOutcome)
	for i := range h.Bodies {
		b := &h.Bodies[i]
		name := b.Body
		if b.Outcome != "" {
			line(name, "%s", outcomeLine(b))
			name = ""
		}
		line(name, "%s", bodyLine(b))
	}
	for i, e := range h.Events {
		const most = 8
		if i == most && len(h.Events) > most+1 {
			line("", "%d more in %s/events", len(h.Events)-most, out)
			break
		}
		if e.Name != evolve.EventSpanEnded {
			line("event", "%s", eventLine(&e))
		}
	}
	line("ledger", "%s", ledgerLine(h))
	for _, c := range h.Cautions {
		line("caution", "%s", c)
	}
	if !math.IsNaN(h.Misfit) {
		line("misfit", "%.3g standard errors", h.Misfit)
	}
	if h.Recheck != nil {
		recheckLines(line, h)
	}
	line("tables", "%s", out)
	if picture != "" {
		line("picture", "%s", picture)
	}
	t.Flush()
}

// outcomeLine says what became of a body.
func outcomeLine(b *evolve.BodyOutcome) string {
	if math.IsNaN(b.Period) {
		return b.Outcome
	}
	return fmt.Sprintf("%s, period %.3g Myr, swing %.3g K", b.Outcome, b.Period/evolve.Megayear, b.Swing)
}

// bodyLine gives a body's ranges.
func bodyLine(b *evolve.BodyOutcome) string {
	s := ""
	if !math.IsNaN(b.Temperature.Min) {
		s += fmt.Sprintf("%.0f to %.0f K, ", b.Temperature.Min, b.Temperature.Max)
	}
	if !math.IsNaN(b.MeanHeat) {
		s += fmt.Sprintf("heat %.2g to %.2g W, ", b.TidalHeat.Min, b.TidalHeat.Max)
	}
	return s + fmt.Sprintf("e %.2g to %.2g", b.Eccentricity.Min, b.Eccentricity.Max)
}

func eventLine(e *evolve.Event) string {
	s := fmt.Sprintf("%.6g Myr  %s", e.Time/evolve.Megayear, e.Name)
	if e.Body != "" {
		s += ", " + e.Body
	}
	if e.Other != "" {
		s += " and " + e.Other
	}
	if e.Name == evolve.EventChange {
		return s + ": " + e.Detail
	}
	if e.Direction != "" {
		s += " (" + e.Direction + ")"
	}
	return s
}

func ledgerLine(h *evolve.History) string {
	s := "nothing turned over"
	if !math.IsNaN(h.Closure.Energy) {
		s = fmt.Sprintf("energy closes to %.1g", h.Closure.Energy)
	}
	if !math.IsNaN(h.Closure.Momentum) {
		s += fmt.Sprintf(", angular momentum to %.1g", h.Closure.Momentum)
	}
	if h.Suspect {
		s += "; SUSPECT: worse than the tolerance explains, try a smaller run.tolerance"
	}
	return s
}

// recheckLines says what a smaller tolerance changes.
func recheckLines(line func(what, format string, a ...any), h *evolve.History) {
	same := "the same outcome"
	switch c := h.Recheck; {
	case c.Status != h.Status || c.Outcome != h.Outcome:
		same = fmt.Sprintf("ANOTHER OUTCOME: %s, %s", c.Status, c.Outcome)
	case c.Events != len(h.Events):
		same = fmt.Sprintf("the same outcome, but %d events instead of %d", c.Events, len(h.Events))
	}
	line("recheck", "at tolerance %.3g: %s; greatest relative differences", h.Recheck.Tolerance, same)
	for _, q := range []struct{ name, column string }{
		{"eccentricity", "eccentricity"}, {"semi-major axis", "semimajor_axis_km"}, {"temperature", "temperature_K"},
		{"tidal heat", "tidal_heat_W"}, {"event times", "time_Myr"},
	} {
		if d, ok := h.Recheck.Worst(q.column); ok {
			line("", "%-16s %.1e  %s at %.6g Myr", q.name, d.Relative, d.Subject, d.Time)
		}
	}
}
