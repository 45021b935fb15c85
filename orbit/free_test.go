package orbit

import (
	"math"
	"testing"
)

// elementsOf turns a locked start into the elements of a free one, λ of the
// innermost and ψ_1 chosen at will.
func elementsOf(s LockedStart, c *Chain, y []float64) FreeStart {
	n := c.Members()
	w := c.NewRates()
	c.Flow(y, make([]float64, c.Dim()), w)
	f := FreeStart{Primary: s.Primary, Ratios: s.Ratios, Members: make([]FreeMember, n)}
	const first = 1.1
	lambda := 0.3
	for k := range f.Members {
		el := c.Elements(k, y, w)
		f.Members[k] = FreeMember{
			Mass: s.Masses[k], Period: 2 * math.Pi / el.MeanMotion, Eccentricity: el.Eccentricity,
			Pericentre: math.Atan2(y[2*n+k], y[n+k]) + first, MeanLongitude: lambda,
		}
		if k < n-1 {
			psi := first
			if k > 0 {
				psi += c.Angle(k, y)
			}
			j := float64(s.Ratios[k])
			lambda = (psi + j*lambda) / (j + 1)
		}
	}
	return f
}

// A locked start given by its elements is the same chain: the same axes, z and
// offsets, at rest. Offsets are differences of mean motions hundreds of times
// their size, so the rounding of these, a few 2⁻⁵³ of n, is what is left.
func TestFreeStartOfALockedChain(t *testing.T) {
	for name, s := range chains(t) {
		c, y, err := Lock(s)
		if err != nil {
			t.Fatal(name, err)
		}
		f, z, err := Free(elementsOf(s, c, y))
		if err != nil {
			t.Fatal(name, err)
		}
		n := c.Members()
		w, dz := f.NewRates(), make([]float64, f.Dim())
		f.Flow(z, dz, w)
		for k := range c.members {
			near(t, name+": a", f.members[k].a, c.members[k].a, 4e-15)
			near(t, name+": Re z", z[n+k], y[n+k], 4e-14)
			// e = √(1 − (1 − g)²) and back lose the digits g = e²/2 has below 1.
			closeTo(t, name+": Im z", z[2*n+k], y[2*n+k], 1e-14)
			closeTo(t, name+": dλ/dt − reference", w.Longitude[k], 0, 1e-15*c.members[k].n)
		}
		for r := range w.Offset {
			closeTo(t, name+": offset", w.Offset[r], s.Offset, 1e-14*c.members[0].n)
			if r > 0 {
				closeTo(t, name+": φ", math.Remainder(f.Angle(r, z)-c.Angle(r, y), 2*math.Pi), 0, 1e-13)
			}
		}
		for k := n; k < 3*n; k++ {
			closeTo(t, name+": dz/dt", dz[k], 0, 1e-13*c.members[0].n)
		}
	}
}

func TestFreeStartRefusesWhatIsNoOrbit(t *testing.T) {
	good := FreeStart{Primary: ombra().Primary, Ratios: []int{1}, Members: []FreeMember{
		{Mass: 9.1e22, Period: 1.9 * Day, Eccentricity: 0.01}, {Mass: 4.4e22, SemimajorAxis: 7e8, Eccentricity: 0.02},
	}}
	c, y, err := Free(good)
	if err != nil {
		t.Fatal(err)
	}
	w := c.NewRates()
	c.Flow(y, make([]float64, c.Dim()), w)
	near(t, "period", 2*math.Pi/c.Elements(0, y, w).MeanMotion, 1.9*Day, 1e-15)
	near(t, "a", c.Elements(1, y, w).SemimajorAxis, 7e8, 1e-15)
	near(t, "e", c.Elements(1, y, w).Eccentricity, 0.02, 1e-14)
	for name, edit := range map[string]func(*FreeStart){
		"hyperbolic":     func(s *FreeStart) { s.Members[0].Eccentricity = 1 },
		"too few ratios": func(s *FreeStart) { s.Ratios = nil },
		"not a number":   func(s *FreeStart) { s.Members[1].Eccentricity = math.NaN() },
	} {
		bad := good
		bad.Members = append([]FreeMember(nil), good.Members...)
		edit(&bad)
		if _, _, err := Free(bad); err == nil {
			t.Errorf("%s: no error", name)
		}
	}
}

// θ of the strongest member of each pair of a locked chain that its own
// resonance drives most is at the centre Strongest names: 0 for f < 0.
func TestArgumentsOfALockedPair(t *testing.T) {
	for name, s := range chains(t) {
		c, y, err := Lock(s)
		if err != nil {
			t.Fatal(name, err)
		}
		if c.Members() > 2 {
			continue // a middle member answers to two resonances
		}
		k, sign := c.Strongest(0)
		re, im := c.Argument(0, k, y)
		if im != 0 || re*sign <= 0 {
			t.Errorf("%s: θ of member %d at (%g, %g), centre's sign %g", name, k, re, im, sign)
		}
	}
	c, y, err := Lock(ombra())
	if err != nil {
		t.Fatal(err)
	}
	// Re and Im against the angles themselves, ψ_1 taken as 0.
	y[3+1], y[6+1], y[9] = 0.01, 0.02, 0.7
	re, im := c.Argument(1, 1, y)
	theta := math.Pi + 0.7 - math.Atan2(0.02, 0.01)
	closeTo(t, "Re", re, math.Hypot(0.01, 0.02)*math.Cos(theta), 1e-16)
	closeTo(t, "Im", im, math.Hypot(0.01, 0.02)*math.Sin(theta), 1e-16)
}
