package evolve

import (
	"context"
	"errors"
	"math"
	"strings"
	"testing"

	"tidekiln/scenarios"
)

func TestInterruption(t *testing.T) {
	ctx, cancel := context.WithCancelCause(context.Background())
	reason := errors.New("enough")
	h, err := Run(ctx, shipped(t, "volcanic-cycle"), Options{Progress: func(p Progress) {
		if p.Time > 100*Megayear {
			cancel(reason)
		}
	}})
	if err != nil {
		t.Fatal(err)
	}
	if h.Status != StatusInterrupted || h.Reason != "enough" || !(h.End > 100*Megayear && h.End < 300*Megayear) {
		t.Errorf("%s (%s) at %g Myr", h.Status, h.Reason, h.End/Megayear)
	}
	f := bodiesOf(t, h)
	if f.Len() < 300 {
		t.Errorf("%d rows of 100 Myr kept", f.Len())
	}
}

func bare(t *testing.T, a, e, k string, more ...scenarios.Edit) *scenarios.Scenario {
	return shipped(t, "lone-moon", append([]scenarios.Edit{
		set("run.span", "10 Gyr"), set("run.record", "100 Myr"),
		{Path: "orbiter.Ember.interior", Unset: true}, {Path: "orbiter.Ember.period", Unset: true},
		set("orbiter.Ember.semimajor_axis", a), set("orbiter.Ember.eccentricity", e), set("central.tide.k2_over_Q", k),
	}, more...)...)
}

func TestEnds(t *testing.T) {
	last := func(h *History) Event { return h.Events[len(h.Events)-1] }

	// The tide of the central body pumps e of an orbit without a tide of its own.
	h := run1(t, bare(t, "4e5 km", "0.6", "1e-4"))
	if h.Status != StatusEnded || last(h).Name != scenarios.EventEccentricityLimit || math.Abs(h.Bodies[0].Eccentricity.Max-nearlyParabolic) > 1e-7 {
		t.Errorf("%s (%s) at e = %g, want the end at e = %g", h.Status, h.Reason, h.Bodies[0].Eccentricity.Max, nearlyParabolic)
	}

	// The heavier inner one is pushed out faster and meets the outer one.
	h = run1(t, bare(t, "3e5 km", "0", "1e-3", set("orbiter.Pebble", `{ mass = "1e17 kg", radius = "40 km", semimajor_axis = "3.2e5 km" }`)))
	b := bodiesOf(t, h)
	end := h.End / Megayear
	if h.Status != StatusEnded || last(h).Name != scenarios.EventOrbitsCross || h.Outcome != Disrupted || h.OrbitOutcome != OrbitDisrupted {
		t.Errorf("%s (%s), %s/%s, want crossing orbits", h.Status, h.Reason, h.Outcome, h.OrbitOutcome)
	}
	near(t, "semi-major axis at the crossing", value(t, b, "Ember", end, "semimajor_axis_km"), value(t, b, "Pebble", end, "semimajor_axis_km"), 1e-7)

	s := shipped(t, "lone-moon", scenarios.Edit{Path: "run.stop", Value: `[{ event = "solidus-crossed", body = "Ember" }]`})
	h = run1(t, s)
	if e := last(h); h.Status != StatusEnded || e.Name != "solidus-crossed" || !e.Ends || h.End != e.Time || !strings.Contains(h.Reason, "solidus-crossed: Ember") {
		t.Errorf("%s (%s) at %g Myr with %+v, want the stop asked for", h.Status, h.Reason, h.End/Megayear, e)
	}

	h = run1(t, shipped(t, "volcanic-cycle", set("run.max_steps", "100")))
	if h.Status != StatusFailed || h.Outcome != Failed || !strings.Contains(h.Reason, "run.max_steps") {
		t.Errorf("%s %s (%s), want a failure that names the budget", h.Status, h.Outcome, h.Reason)
	}
	if f := bodiesOf(t, h); f.Len() < 10 {
		t.Errorf("a failed history keeps %d rows", f.Len())
	}
}

func TestLimits(t *testing.T) {
	p, y, err := NewSystem(shipped(t, "volcanic-cycle"))
	if err != nil {
		t.Fatal(err)
	}
	find := func(name, body string, beyond []float64) {
		t.Helper()
		found := 0
		for _, w := range p.watchlist(nil, false) {
			if w.Name != name || w.body != body || !w.ends {
				continue
			}
			before, after := w.Value(0, y), w.Value(0, beyond)
			if before*after < 0 && (w.Direction == 0 || float64(w.Direction)*after > 0) {
				found++
			}
		}
		if found != 1 {
			t.Errorf("%d events %s of %s between the two states, want 1", found, name, body)
		}
	}
	moved := func(i int, v float64) []float64 {
		z := append([]float64(nil), y...)
		z[i] = v
		return z
	}
	// Cinder's Roche limit: 2.44 R_c (ρ_c/ρ)^{1/3} = 2.44 · 66000 km · (1.6e27/9.1e22)^{1/3} · 1790/66000.
	limit := 2.44 * 1790e3 * math.Cbrt(1.6e27/9.1e22)
	a, e := p.shape(0, y)
	find(scenarios.EventRocheLimit, "Cinder", moved(0, math.Sqrt(0.999*limit/(a*(1-e)))-1))
	find(scenarios.EventEccentricityLimit, "Cinder", moved(3, 1.18))
	find(scenarios.EventOrbitsCross, "Cinder", moved(0, 0.27))
	find(scenarios.EventResonanceLeft, "Brine", moved(9, -1.6))
	find(scenarios.EventResonanceLeft, "Cairn", moved(5, -y[5]))
	if lax := p.watchlist([]scenarios.Trigger{{Event: "solidus-crossed", Body: "Cinder"}}, false); !lax[0].ends {
		t.Error("a stop that was asked for does not end the history")
	}
}
