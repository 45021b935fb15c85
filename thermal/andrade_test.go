package thermal

import (
	"math/cmplx"
	"testing"

	"tidekiln/scenarios/key"
)

// The harmonics computed together are those computed one by one, to the rounding
// of an exponential.
func TestHarmonicsTogether(t *testing.T) {
	a := newAndrade(key.Values{Law: "andrade", Map: map[string]any{"alpha": 0.27, "zeta": 0.8}})
	j := make([]complex128, sharedHarmonics+4)
	a.(harmonicRheology).Harmonics(3e-5, 5e10, 2e16, j)
	for i := range j {
		want, _, _, _ := a.Compliance(float64(i+1)*3e-5, 5e10, 2e16)
		if d := cmplx.Abs(j[i]-want) / cmplx.Abs(want); d > 1e-14 {
			t.Errorf("harmonic %d: J* = %v, want %v", i+1, j[i], want)
		}
	}
}
