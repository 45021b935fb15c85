package evolve

import (
	"math"
	"testing"

	"tidekiln/scenarios"
)

func TestChanges(t *testing.T) {
	list := `[
  { at = "30 Myr", set = { central.tide.k2_over_Q = 0 } },
  { at = "60 Myr", set = { orbiter.Cinder.interior.temperature = "1700 K" } },
  { when = { event = "solidus-crossed", body = "Cinder" }, set = { orbiter.Cinder.interior.radiogenic = "0 W/kg" } },
]`
	s := shipped(t, "volcanic-cycle", set("run.span", "600 Myr"), scenarios.Edit{Path: "change", Value: list})
	h := run1(t, s)
	b := bodiesOf(t, h)
	if h.Status != StatusComplete {
		t.Fatalf("%s: %s", h.Status, h.Reason)
	}
	var changes []Event
	var solidus float64
	for _, e := range h.Events {
		switch e.Name {
		case EventChange:
			changes = append(changes, e)
		case "solidus-crossed":
			solidus = e.Time
		}
	}
	if len(changes) != 3 || changes[0].Time != 30*Megayear || changes[1].Time != 60*Megayear || changes[2].Time != solidus || solidus == 0 {
		t.Fatalf("changes %+v, solidus crossed at %g Myr", changes, solidus/Megayear)
	}
	if v := value(t, b, "Cinder", math.Ceil(solidus/Megayear), "radiogenic_heat_W"); v != 0 {
		t.Errorf("radiogenic heat is %g W after the change that ends it", v)
	}
	before := value(t, b, "Cinder", 59, "temperature_K")
	if after := value(t, b, "Cinder", 61, "temperature_K"); !(before < 1660 && after > 1690) {
		t.Errorf("temperature goes from %g to %g K over a change to 1700 K", before, after)
	}
	f, err := written(t, h).Read("system")
	if err != nil {
		t.Fatal(err)
	}
	imposed, _, err := f.Floats("imposed_energy_J")
	if err != nil {
		t.Fatal(err)
	}
	// m c_p ΔT and the latent heat of ΔT/400 K of melt, from the temperature
	// just before: within the Myr between rows.
	want := 9.1e22 * (1200 + 4e5/400) * (1700 - before)
	if got := imposed[len(imposed)-1]; math.Abs(got/want-1) > 0.05 {
		t.Errorf("imposed energy %g J, want about %g", got, want)
	}
	if !(h.Closure.Energy < 1e-6) || !(h.Closure.Momentum < 1e-6) {
		t.Errorf("ledger closes to %g and %g over changes", h.Closure.Energy, h.Closure.Momentum)
	}
}
