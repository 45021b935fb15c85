package thermal

import (
	"math"
	"testing"
)

// Homogeneous elastic Io, R = 1821.6 km, ρ = 3527.5 kg/m³, μ = 50 GPa: values
// re-derived by a propagator that agrees with the closed form to 1e-15; g = 4πGρR/3.
func TestHomogeneousLove(t *testing.T) {
	const radius, density = 1.8216e6, 3527.5
	gravity := 4 * math.Pi / 3 * gravitation * density * radius
	for _, c := range []struct {
		degree  int
		k, h, l float64 // 0: not given
	}{
		{2, 0.0355880400416971, 0.0593134000694951, 0.0177940200208485},
		{3, 0.015417442432426, 0, 0},
		{4, 0.008892639105195, 0, 0},
	} {
		k, h, l := HomogeneousLove(c.degree, 5e10, density, gravity, radius)
		for _, v := range []struct {
			name      string
			got, want float64
		}{{"k", real(k), c.k}, {"h", real(h), c.h}, {"l", real(l), c.l}} {
			if v.want != 0 && math.Abs(v.got/v.want-1) > 1e-10 {
				t.Errorf("%s%d = %.15g, want %.15g", v.name, c.degree, v.got, v.want)
			}
		}
		// The one the interiors use.
		if c.degree == 2 {
			s := newSphere(density, gravity, radius)
			if d := real(s.love(1/5e10))/real(k) - 1; math.Abs(d) > 1e-14 {
				t.Errorf("k2 of the interiors differs by %g", d)
			}
		}
	}
}
