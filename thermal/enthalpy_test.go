package thermal

import (
	"math"
	"testing"
)

var melting = enthalpy{heatCapacity: 1200, latentHeat: 4e5, solidus: 1600, liquidus: 2000}

// Closed forms of the three pieces, common practice: 1600 K is 1.92 MJ/kg, 2000
// K is 2.8 MJ/kg, and half-molten lies half-way.
func TestEnthalpyRoundTrip(t *testing.T) {
	near(t, "h_s", melting.of(1600), 1.92e6, 1e-15)
	near(t, "h_l", melting.of(2000), 2.8e6, 1e-15)
	near(t, "h half-way", melting.of(1800), 2.36e6, 1e-15)
	for T := 1.0; T < 4000; T += 7 {
		h := melting.of(T)
		got, f, dT, df := melting.invert(h, melting.phaseOf(h))
		near(t, "T", got, T, 8*0x1p-53) // eight roundings
		if want := min(max((T-1600)/400, 0), 1); math.Abs(f-want) > 1e-14 {
			t.Errorf("f(%g K) = %g, want %g", T, f, want)
		}
		near(t, "h advanced", melting.heatCapacity*dT+melting.latentHeat*df, 1, 1e-15)
	}
}

func TestPhasesMeet(t *testing.T) {
	for _, c := range []struct {
		T           float64
		below, over phase
	}{{1600, solid, partlyMolten}, {2000, partlyMolten, molten}} {
		h := melting.of(c.T)
		if got := melting.phaseOf(h); got != c.over {
			t.Errorf("phase at %g K is %v, want %v", c.T, got, c.over)
		}
		if got := melting.phaseOf(math.Nextafter(h, 0)); got != c.below {
			t.Errorf("phase under %g K is %v, want %v", c.T, got, c.below)
		}
		T1, f1, _, _ := melting.invert(h, c.below)
		T2, f2, _, _ := melting.invert(h, c.over)
		near(t, "T across", T1, T2, 4e-16)
		if math.Abs(f1-f2) > 4e-16 {
			t.Errorf("f jumps from %g to %g at %g K", f1, f2, c.T)
		}
	}
}
