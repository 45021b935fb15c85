package evolve

import (
	"fmt"
	"math"
	"testing"

	"tidekiln/evolve/record"
	"tidekiln/scenarios"
)

// What a row says of an interior fits the row's own temperature, on either side
// of a kink: f = (T − T_s)/(T_l − T_s) between solidus and liquidus, and the
// surface loss is the sum of its parts.
func TestRowsAreOfOneState(t *testing.T) {
	for _, s := range scenarios.Shipped() {
		if s.Name == "resolved-chain" || s.Name == "resonance-capture" || s.Name == "overstable-pair" {
			continue // without a thermal state
		}
		f := bodiesOf(t, run1(t, shipped(t, s.Name)))
		columns := map[string][]float64{}
		var valid []bool
		for _, name := range []string{"time_Myr", "temperature_K", "melt_fraction", "surface_loss_W", "convective_loss_W", "melt_loss_W"} {
			var err error
			if columns[name], valid, err = f.Floats(name); err != nil {
				t.Fatal(err)
			}
		}
		for i, T := range columns["temperature_K"] {
			if !valid[i] {
				continue
			}
			want := math.Min(1, math.Max(0, (T-1600)/400))
			if math.Abs(columns["melt_fraction"][i]-want) > 1e-9 {
				t.Errorf("%s at %g Myr: melt fraction %g at %g K, want %g", s.Name, columns["time_Myr"][i], columns["melt_fraction"][i], T, want)
			}
			if sum := columns["convective_loss_W"][i] + columns["melt_loss_W"][i]; math.Abs(sum/columns["surface_loss_W"][i]-1) > 1e-14 {
				t.Errorf("%s at %g Myr: losses %g add up to %g", s.Name, columns["time_Myr"][i], columns["surface_loss_W"][i], sum)
			}
		}
	}
}

// Rows are told apart by their keys, also where a change falls on the cadence,
// and where the history ends right there.
func TestKeysAreUnique(t *testing.T) {
	change := `[{ at = "20 Myr", set = { orbiter.Cinder.interior.temperature = "1700 K" } }, { at = "30.5 Myr", set = { central.tide.k2_over_Q = 2e-5 } }]`
	for name, edits := range map[string][]scenarios.Edit{
		"changes":               {set("run.span", "40 Myr"), set("change", change)},
		"a failure right there": {set("run.span", "40 Myr"), set("change", change), set("run.max_steps", "25")},
		"by change":             {set("run.span", "40 Myr"), set("change", change), set("run.record", "{ change = 1e-3 }")},
	} {
		d := written(t, run1(t, shipped(t, "volcanic-cycle", edits...)))
		for _, table := range d.Tables() {
			f, err := d.Read(table.Name)
			if err != nil {
				t.Fatal(err)
			}
			seen := map[string]bool{}
			for i := range f.Len() {
				key := ""
				for _, c := range f.Table().Key {
					key += " " + cell(t, f, c, i)
				}
				if seen[key] {
					t.Errorf("%s: %s has two rows of%s", name, table.Name, key)
				}
				seen[key] = true
			}
		}
	}
}

// cell writes a value of a key column.
func cell(t *testing.T, f *record.Frame, column string, i int) string {
	t.Helper()
	if v, _, err := f.Texts(column); err == nil {
		return v[i]
	}
	if v, _, err := f.Ints(column); err == nil {
		return fmt.Sprint(v[i])
	}
	v, _, err := f.Floats(column)
	if err != nil {
		t.Fatal(err)
	}
	return fmt.Sprint(v[i])
}

// A change that jumps the state stands between two rows: recorded by change, the
// line before it and the line after it are both right.
func TestRecordingAroundAJump(t *testing.T) {
	edits := []scenarios.Edit{set("run.span", "40 Myr"), set("change", `[{ at = "20.5 Myr", set = { orbiter.Cinder.interior.temperature = "1640 K" } }]`)}
	dense := bodiesOf(t, run1(t, shipped(t, "volcanic-cycle", append(edits, set("run.record", "0.1 Myr"))...)))
	sparse := bodiesOf(t, run1(t, shipped(t, "volcanic-cycle", append(edits, set("run.record", "{ change = 1e-3 }"))...)))
	compareByLines(t, "bodies", "temperature_K", dense, sparse, 1e-3)
	compareByLines(t, "bodies", "eccentricity", dense, sparse, 1e-3)
}

// The step budget is that of the whole history, changes or not.
func TestBudgetOverChanges(t *testing.T) {
	change := `[{ at = "5 Myr", set = { central.tide.k2_over_Q = 2e-5 } }, { at = "10 Myr", set = { central.tide.k2_over_Q = 1e-5 } }]`
	h := run1(t, shipped(t, "volcanic-cycle", set("change", change), set("run.max_steps", "60")))
	if n := h.Stats.Steps + h.Stats.Rejected + h.Stats.NewtonFailures; h.Status != StatusFailed || n != 60 {
		t.Errorf("%s (%s) after %d steps, want a failure at 60", h.Status, h.Reason, n)
	}
}

// A change that cannot be made fails the history and keeps what there is.
func TestChangeThatCannotBeMade(t *testing.T) {
	h := run1(t, shipped(t, "lone-moon", set("change", `[{ at = "900 Myr", set = { orbiter.Ember.interior.surface_temperature = "1500 K" } }]`)))
	if h.Status != StatusFailed || math.Abs(h.End/Megayear-900) > 1e-6 {
		t.Errorf("%s (%s) at %g Myr", h.Status, h.Reason, h.End/Megayear)
	}
	if f := bodiesOf(t, h); f.Len() < 900 {
		t.Errorf("%d rows kept", f.Len())
	}
}

// Two changes that wait for one event are made at its first two occurrences, or
// the second never; not twice at the first.
func TestTwoChangesForOneEvent(t *testing.T) {
	change := `[
  { when = { event = "solidus-crossed" }, set = { central.tide.k2_over_Q = 6e-6 } },
  { when = { event = "solidus-crossed" }, set = { central.tide.k2_over_Q = 7e-6 } },
]`
	for _, e := range []string{"0.05", "0.08", "0.10", "0.11", "0.12", "0.13"} {
		h := run1(t, shipped(t, "lone-moon", set("change", change), set("orbiter.Ember.eccentricity", e), set("run.record", "100 Myr")))
		crossed, changed := 0, 0
		last := math.Inf(-1)
		for _, v := range h.Events {
			switch v.Name {
			case "solidus-crossed":
				if crossed++; v.Time-last < Megayear {
					t.Errorf("e = %s: crossed again after %g Myr", e, (v.Time-last)/Megayear)
				}
				last = v.Time
			case EventChange:
				changed++
			}
		}
		if crossed == 0 || changed != crossed {
			t.Errorf("e = %s: %d changes at %d crossings", e, changed, crossed)
		}
	}
}
