package evolve

import (
	"context"
	"fmt"
	"math"
	"strings"
	"testing"

	"tidekiln/evolve/record"
	"tidekiln/orbit"
	"tidekiln/scenarios"
	"tidekiln/scenarios/key"
)

// columnOf returns a column of floats of librations for one mode.
func columnOf(t testing.TB, d *record.Dataset, mode int64, name string) []float64 {
	t.Helper()
	f, err := d.Read("librations")
	if err != nil {
		t.Fatal(err)
	}
	modes, _, err := f.Ints("mode")
	if err != nil {
		t.Fatal(err)
	}
	values, valid, err := f.Floats(name)
	if err != nil {
		t.Fatal(err)
	}
	var out []float64
	for i := range values {
		if modes[i] != mode {
			continue
		}
		if !valid[i] {
			values[i] = math.NaN()
		}
		out = append(out, values[i])
	}
	return out
}

// The tables: a half-width of the start as asked for, growth null there and
// consistent with the widths and actions behind, a width of each resonance.
func TestLibrationTables(t *testing.T) {
	d := written(t, run1(t, shipped(t, "quiet-chain", set("run.span", "10 Myr"), set("run.record", "0.1 Myr"), set("chain.inner.libration", "0.5 deg"))))
	for mode := int64(1); mode <= 4; mode++ {
		time, width, action := columnOf(t, d, mode, "time_Myr"), columnOf(t, d, mode, "half_width_deg"), columnOf(t, d, mode, "action_J_s")
		widening, growth := columnOf(t, d, mode, "width_growth_per_Myr"), columnOf(t, d, mode, "action_growth_per_Myr")
		if len(time) != 101 {
			t.Fatalf("%d rows of mode %d, want 101", len(time), mode)
		}
		near(t, "width at the start", width[0], 0.5, 1e-14)
		if !math.IsNaN(growth[0]) || !math.IsNaN(widening[0]) {
			t.Errorf("mode %d: growth of %g and %g at the start, want null", mode, growth[0], widening[0])
		}
		for i := 2; i < len(time); i++ {
			h := time[i] - time[i-1]
			for _, c := range []struct {
				what      string
				got, mean float64
			}{
				{"width", math.Log(width[i]/width[i-1]) / h, 0.5 * (widening[i] + widening[i-1])},
				{"action", math.Log(action[i]/action[i-1]) / h, 0.5 * (growth[i] + growth[i-1])},
			} {
				// The drift's part is a mean over half a step, some 1 Myr here, in
				// which it changes by a few hundredths of the damping; widths go
				// straight between knots, where they change by a per cent.
				if math.Abs(c.got-c.mean) > 0.02*math.Abs(c.mean)+2e-3 {
					t.Errorf("mode %d at %g Myr: %s grows at %.5g /Myr, said to grow at %.5g", mode, time[i], c.what, c.got, c.mean)
				}
			}
		}
	}
	f, err := d.Read("resonances")
	if err != nil {
		t.Fatal(err)
	}
	widths, valid, err := f.Floats("half_width_deg")
	if err != nil {
		t.Fatal(err)
	}
	for i, w := range widths {
		// Four modes of at most 0.5 deg at the start, and damped since; the
		// pericentres' widths grow by a few per cent as eccentricities fall.
		if !valid[i] || !(w > 0) || w > 2.2 {
			t.Errorf("row %d: a half-width of %g deg", i, w)
		}
	}
	none := written(t, run1(t, shipped(t, "quiet-chain", set("run.span", "10 Myr"), set("chain.inner.libration", "0 deg"))))
	for _, w := range columnOf(t, none, 2, "half_width_deg") {
		if w != 0 {
			t.Fatalf("a libration that starts at 0 is %g deg wide", w)
		}
	}
}

// A libration that grows beyond 10 degrees is told once and ends nothing,
// unless it is asked to.
func TestOverstableLibrationIsTold(t *testing.T) {
	edits := []scenarios.Edit{
		set("chain.inner.offset", "-0.1 deg/day"), set("chain.inner.libration", "5 deg"), set("run.span", "2 Myr"), set("run.record", "0.01 Myr"),
		{Path: "orbiter.Cinder.interior", Unset: true}, set("orbiter.Brine.interior", `{ model = "fixed", k2_over_Q = 1.5 }`),
	}
	h := run1(t, shipped(t, "quiet-chain", edits...))
	var told []Event
	for _, e := range h.Events {
		if e.Name == scenarios.EventLibrationOverstable {
			told = append(told, e)
		}
	}
	if h.Status != StatusComplete || len(told) == 0 {
		t.Fatalf("%s %s, %d overstable librations, want a complete history with some", h.Status, h.Reason, len(told))
	}
	d := written(t, h)
	for _, e := range told {
		var mode int64
		if _, err := fmt.Sscanf(e.Detail, "chain inner: libration %d", &mode); err != nil || e.Ends {
			t.Fatalf("event %+v: %v", e, err)
		}
		time, width, growth := columnOf(t, d, mode, "time_Myr"), columnOf(t, d, mode, "half_width_deg"), columnOf(t, d, mode, "action_growth_per_Myr")
		for i := range time {
			now := e.Time / Megayear
			if i > 0 && time[i-1] > now && time[i-1] < now+0.01 && !(width[i] > 10 && growth[i] > 0) {
				t.Errorf("mode %d, told at %g Myr, is %g deg wide and grows at %g /Myr behind", mode, now, width[i], growth[i])
			}
			if i > 1 && time[i] < now && time[i] > now-0.01 && width[i-1] > 10 && growth[i-1] > 0 {
				t.Errorf("mode %d, told at %g Myr, is %g deg wide and grows at %g /Myr before", mode, now, width[i-1], growth[i-1])
			}
			if width[i] > 180 {
				t.Errorf("mode %d is %g deg wide", mode, width[i])
			}
		}
	}
	ended := run1(t, shipped(t, "quiet-chain", append(edits, set("run.stop", `[{ event = "libration-overstable" }]`))...))
	if ended.Status != StatusEnded || ended.End != told[0].Time {
		t.Errorf("%s %s at %.9g Myr, want it ended at %.9g", ended.Status, ended.Reason, ended.End/Megayear, told[0].Time/Megayear)
	}
}

// Divergent migration, by a torque against the motion, pushes a chain over a
// fold: the slowest libration's ω² falls to 0 as the resonance angle turns to
// 90 degrees from its centre. That the fold is near is told before.
func TestFoldIsTold(t *testing.T) {
	r, err := begin(shipped(t, "quiet-chain", scenarios.Edit{Path: "orbiter.Cinder.interior", Unset: true}), Options{})
	if err != nil {
		t.Fatal(err)
	}
	r.p.bodies[0].primary = orbit.NewPrimaryTide(r.p.groups[0].Group, 0, orbit.NewCentralTide(key.Values{Law: "constant-q", Map: map[string]any{"k2_over_Q": -1e-2}}))
	if err := r.start(nil); err != nil {
		t.Fatal(err)
	}
	for r.h.Status == "" {
		r.advance()
	}
	var names []string
	for _, e := range r.h.Events {
		names = append(names, e.Name)
	}
	if got := strings.Join(names, " "); got != scenarios.EventFoldNear+" "+scenarios.EventResonanceLeft {
		t.Errorf("events %s, want %s and %s", got, scenarios.EventFoldNear, scenarios.EventResonanceLeft)
	}
}

// A continued history carries the librations on: those of an uninterrupted one
// to what two sequences of steps leave.
func TestContinuingLibrations(t *testing.T) {
	name := "red-dwarf-planets"
	whole := run1(t, shipped(t, name, set("run.span", "400 Myr")))
	half := run1(t, shipped(t, name, set("run.span", "200 Myr")))
	from := continuation(t, half)
	rest, err := Run(context.Background(), shipped(t, name, set("run.span", "400 Myr")), Options{From: from})
	if err != nil {
		t.Fatal(err)
	}
	a, b := written(t, half), written(t, rest)
	for mode := int64(1); mode <= 4; mode++ {
		for _, c := range []string{"half_width_deg", "action_J_s", "period_yr"} {
			last, first := columnOf(t, a, mode, c), columnOf(t, b, mode, c)
			// The projection at the new start moves the state by parts in 10¹³, and
			// frequencies, differences of mean motions, by parts in 10⁹.
			near(t, fmt.Sprintf("%s of mode %d where the history is continued", c, mode), first[0], last[len(last)-1], 1e-8)
		}
		x, y := columnOf(t, written(t, whole), mode, "half_width_deg"), columnOf(t, b, mode, "half_width_deg")
		near(t, fmt.Sprintf("width of mode %d at the end", mode), y[len(y)-1], x[len(x)-1], 3e-3)
	}
	if _, err := Run(context.Background(), shipped(t, name, set("run.span", "400 Myr")), Options{From: &Continuation{
		RunID: from.RunID, Time: from.Time, state: from.state, ledger: from.ledger, changes: from.changes, librations: from.librations[1:],
	}}); err == nil {
		t.Error("a list of librations that is too short is taken")
	}
}

// A change of the rules keeps the actions; only their growth is another.
func TestChangeKeepsActions(t *testing.T) {
	change := scenarios.Edit{Path: "change", Value: `[{ at = "5 Myr", set = { orbiter.Cinder.interior.k2_over_Q = 0.12 } }]`}
	d := written(t, run1(t, shipped(t, "quiet-chain", set("run.span", "10 Myr"), set("run.record", "0.001 Myr"), change)))
	time, action, growth := columnOf(t, d, 4, "time_Myr"), columnOf(t, d, 4, "action_J_s"), columnOf(t, d, 4, "action_growth_per_Myr")
	for i := range time {
		if time[i] != 5 {
			continue
		}
		// The next row is just after the change, where no drift is known yet.
		near(t, "action over the change", action[i+1], action[i], 1e-12)
		near(t, "growth over the change", growth[i+2], 10*growth[i], 0.1)
		return
	}
	t.Error("no row at the change")
}
