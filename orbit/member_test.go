package orbit

import (
	"math"
	"testing"
)

// 2.44 R_c (ρ_c/ρ)^{1/3} written in densities, at hand-made ratios, to the
// rounding of a cube root; and the Moon's about the Earth, 18 381 km (from memory,
// of rounded radii and densities: 0.5 %).
func TestRocheLimit(t *testing.T) {
	const radius = 6.371e6
	p := Primary{Mass: 5.972e24, Radius: radius}
	for _, c := range []struct{ size, density, want float64 }{ // of those of the primary
		{1, 1, 2.44}, {0.1, 1, 2.44}, {0.1, 8, 1.22}, {0.02, 0.125, 4.88},
	} {
		near(t, "limit/R_c", p.RocheLimit(p.Mass*c.density*c.size*c.size*c.size, c.size*radius)/radius, c.want, 1e-15)
	}
	near(t, "of the Moon", p.RocheLimit(7.342e22, 1.7374e6), 1.8381e7, 5e-3)
}

// a(1−e)(m/3M)^{1/3} at hand-made ratios, to the rounding of a cube root; and the
// Earth's about the Sun, 1.5e9 m (common practice, two digits: 4 %, with 1.7 % of
// it the eccentricity, which the two digits leave out).
func TestHillRadius(t *testing.T) {
	p := Primary{Mass: 1.98841e30}
	for _, c := range []struct{ mass, a, e, want float64 }{ // mass over that of the primary
		{3e-6, 1e9, 0, 1e7}, {3e-6, 1e9, 0.25, 0.75e7}, {3e-9, 2e9, 0, 2e6},
	} {
		near(t, "radius", p.HillRadius(c.mass*p.Mass, c.a, c.e), c.want, 1e-15)
	}
	near(t, "of the Earth", p.HillRadius(5.972e24, 1.495979e11, 0.0167), 1.5e9, 0.04)
	if r := p.HillRadius(1e24, 1e11, 1); math.Abs(r) > 0 {
		t.Errorf("at pericentre 0: %g", r)
	}
}
