package thermal

import (
	"math"
	"testing"
)

// kinkAt returns the enthalpy of kink i of r, by bisection between a and b.
func kinkAt(r *rock, i int, a, b float64) float64 {
	for range 200 {
		mid := (a + b) / 2
		r.Freeze(0, []float64{mid})
		if r.Kink(i, 0, []float64{mid}) > 0 {
			b = mid
		} else {
			a = mid
		}
	}
	return b
}

// Across each kink the loss, K and the temperature are continuous: the two
// pieces agree to the rounding of h, 1e-16, times the ≈ 1e3 by which an
// enthalpy's relative change moves ln η or f near the kink; and something has a
// different slope, or it would be no kink.
func TestKinksAreContinuous(t *testing.T) {
	for name, r := range variants(t) {
		for i := range r.Kinks() {
			lo, hi := 1200*500.0, 1200*1590.0
			if i != conductionKink {
				lo, hi = 1200*1500.0, 4e6
			}
			h := kinkAt(r, i, lo, hi)
			if !(h > lo && h < hi*0.999) {
				t.Fatalf("%s: no %s between %g and %g J/kg", name, kinkName(i), lo, hi)
			}
			r.Freeze(0, []float64{h})
			var values [2][4]float64
			var slopes [2][2]float64
			for side, up := range []bool{false, true} {
				r.Cross(i, up)
				var dx, dh [1]float64
				_, _ = r.KDerivs(ioFrequency, dx[:])
				slopes[side][0] = dx[0]
				r.RatesDerivs(0, 0, dx[:], dh[:])
				slopes[side][1] = dx[0]
				values[side] = [4]float64{r.Balance(0).SurfaceLoss, r.K(ioFrequency), r.now.T, r.now.eta}
			}
			for j := range values[0] {
				near(t, name+" across the "+kinkName(i), values[1][j], values[0][j], 1e-12)
			}
			if slopes[0] == slopes[1] {
				t.Errorf("%s: nothing bends at the %s", name, kinkName(i))
			}
		}
	}
}

// Beyond its end a frozen piece continues: no melt in the solid however warm,
// and the derivative tested elsewhere stays that of the piece.
func TestFrozenPiecesContinue(t *testing.T) {
	r := rockOf(t, nil)
	r.Freeze(0, []float64{1.9e6})
	r.Set([]float64{2.0e6})
	if s := r.Snapshot(); s.MeltFraction.X != 0 || s.Temperature.X != 2.0e6/1200 {
		t.Errorf("solid at 2 MJ/kg: %+v", s)
	}
	r.Freeze(0, []float64{2.0e6})
	r.Set([]float64{1.9e6})
	if r.now.f >= 0 || r.Snapshot().MeltFraction.X != 0 || r.now.qm >= 0 {
		t.Errorf("partly molten at 1.9 MJ/kg: f = %g, q_m = %g", r.now.f, r.now.qm)
	}
	r.Freeze(0, []float64{3e6})
	r.Set([]float64{2.7e6})
	if s := r.Snapshot(); s.MeltFraction.X != 1 {
		t.Errorf("molten at 2.7 MJ/kg: %+v", s)
	}
}

// Looking at a kink leaves the present state alone, and a start exactly on one
// has the sign of the piece that was chosen, so that leaving it downward is
// seen as a crossing.
func TestStartOnAKink(t *testing.T) {
	r := rockOf(t, map[string]any{"temperature": 1600.0})
	h := r.States()[0].Start
	before := r.now
	for i, want := range []float64{1, -1, 1} {
		if v := r.Kink(i, 0, []float64{h}); !(v*want > 0) {
			t.Errorf("%s at the solidus is %g", kinkName(i), v)
		}
	}
	r.Kink(conductionKink, 0, []float64{1e6})
	if r.now != before {
		t.Error("Kink changed the present state")
	}
	if v := r.Kink(solidusKink, 0, []float64{h - 1}); !(v < 0) {
		t.Errorf("below the solidus its kink is %g", v)
	}
	r.Cross(solidusKink, false)
	if v := r.Kink(solidusKink, 0, []float64{h}); !(v < 0) || r.now.dT != 1.0/1200 {
		t.Errorf("after crossing down: kink %g, dT/dh %g", v, r.now.dT)
	}
}

// Events change sign where the phase does.
func TestMeltingEvents(t *testing.T) {
	r := rockOf(t, nil)
	for i, c := range []struct {
		name string
		T    float64
	}{{"solidus-crossed", 1600}, {"liquidus-crossed", 2000}} {
		e := r.Events()[i]
		if e.Name != c.name || !(e.Value([]float64{r.enthalpy.of(c.T - 1e-6)}) < 0) || !(e.Value([]float64{r.enthalpy.of(c.T + 1e-6)}) > 0) {
			t.Errorf("event %q does not change sign at %g K", e.Name, c.T)
		}
	}
	if math.Abs(r.Events()[0].Value([]float64{r.enthalpy.of(1601)})-2200/1.92e6) > 1e-12 { // 1 K is c_p + L/400 K
		t.Error("the solidus event is not the relative enthalpy above it")
	}
}

// kinkName words a kink for messages.
func kinkName(i int) string { return [...]string{"solidus", "liquidus", "onset of convection"}[i] }
