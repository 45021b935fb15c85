package orbit

import (
	"math"
	"testing"
)

// conserved returns Σ (Λ − Γ) less its reference and Σ a_k (Λ_k − Λ0_k), which
// the tide-free flow conserves because H holds the longitudes in the ψ_r alone
// (Noether's theorem).
func conserved(c *Chain, y []float64) (spun, turned float64) {
	a := 1.0
	for k := range c.members {
		turned += a * c.members[k].ref * y[k]
		if k < len(c.pairs) {
			a *= c.pairs[k].j / (c.pairs[k].j + 1)
		}
	}
	return c.AngularMomentum(y), turned
}

// The flow leaves both sums alone, to rounding of their largest terms, and a
// restored state has those of the other, and half the way is half of it.
func TestConservedSums(t *testing.T) {
	for _, ratios := range [][]int{{2}, {1, 1}, {2, 2, 3}} {
		masses := []float64{9e22, 4e22, 1.3e23, 6e22}[:len(ratios)+1]
		c, y, err := Lock(LockedStart{Primary: Primary{Mass: 1.6e27, Radius: 6.6e7, J2: 0.012}, Masses: masses, Ratios: ratios, Offset: -1.4e-7, Period: 1.9 * Day})
		if err != nil {
			t.Fatal(err)
		}
		of := append([]float64(nil), y...)
		for i := range y {
			y[i] += 1e-3 * math.Cos(float64(3*i+1))
		}
		dy, w := make([]float64, c.Dim()), c.NewRates()
		c.Flow(y, dy, w)
		const h = 1 // s: differences of both sums over ±h, of second order
		plus, minus := append([]float64(nil), y...), append([]float64(nil), y...)
		scale := 0.0
		for i, v := range dy {
			plus[i] += h * v
			minus[i] -= h * v
			scale = math.Max(scale, math.Abs(v))
		}
		a, b := conserved(c, plus)
		d, e := conserved(c, minus)
		total := c.TotalAngularMomentum(y)
		// Γ is a square: the central difference of it has no error; rounding is 1e-16 of
		// terms of 1e-3 of the total.
		if rate := math.Max(math.Abs(a-d), math.Abs(b-e)); rate > 1e-17*total {
			t.Errorf("ratios %v: the sums change by %.1e of the total where y changes by %.1e", ratios, rate/total, 2*h*scale)
		}
		s0, t0 := conserved(c, y)
		s1, t1 := conserved(c, of)
		half := append([]float64(nil), y...)
		c.Restore(half, of, 0.5)
		c.Restore(y, of, 1)
		for i, want := range [][2]float64{{0.5 * (s0 + s1), 0.5 * (t0 + t1)}, {s1, t1}} {
			s, u := conserved(c, [][]float64{half, y}[i])
			if math.Abs(s-want[0]) > 1e-17*total || math.Abs(u-want[1]) > 1e-17*total {
				t.Errorf("ratios %v: restored to %g and %g, want %g and %g", ratios, s, u, want[0], want[1])
			}
		}
	}
}

// One of Newton's steps takes a state displaced by ε from its centre to ε² of it.
func TestFilter(t *testing.T) {
	c, y, err := Lock(LockedStart{Primary: Primary{Mass: 1.6e27, Radius: 6.6e7, J2: 0.012}, Masses: []float64{9e22, 4e22, 1.3e23}, Ratios: []int{1, 1}, Offset: -1.4e-7, Period: 1.9 * Day})
	if err != nil {
		t.Fatal(err)
	}
	left := func(size float64) float64 {
		dim := c.Dim()
		w, dy, jac := c.NewRates(), make([]float64, dim), make([]float64, dim*dim)
		l := c.NewLibrations()
		c.Flow(y, dy, w)
		c.Jacobian(y, w, jac, dim)
		if err := l.Find(jac, dim); err != nil {
			t.Fatal(err)
		}
		z := append([]float64(nil), y...)
		widths := make([]float64, c.Angles())
		c.Widths(y, l.Modes[0].Right, widths)
		most := 0.0
		for _, x := range widths {
			most = math.Max(most, x)
		}
		for i, v := range l.Modes[0].Right {
			z[i] += size / most * real(v)
		}
		clear(jac)
		c.Flow(z, dy, w)
		c.Jacobian(z, w, jac, dim)
		if err := l.FindBeside(jac, dim); err != nil {
			t.Fatal(err)
		}
		l.Filter(dy, z)
		n := c.Members()
		return math.Hypot(z[2*n]/y[n], z[3*n])
	}
	// Twice the displacement leaves four times the error.
	if ratio := left(0.02) / left(0.01); !(ratio > 3) {
		t.Errorf("twice the displacement leaves %.2g times the error, want 4", ratio)
	}
}
