package orbit

import (
	"math"
	"math/cmplx"
	"math/rand/v2"
	"testing"
)

// jacobianAt returns the tide-free Jacobian of the chain at y.
func jacobianAt(c *Chain, y []float64) []float64 {
	w := c.NewRates()
	jac := make([]float64, c.Dim()*c.Dim())
	c.Flow(y, make([]float64, c.Dim()), w)
	c.Jacobian(y, w, jac, c.Dim())
	return jac
}

// damp adds a tide that damps every eccentricity at the rate, and drags every
// orbit at a hundredth of it, to a Jacobian.
func damp(c *Chain, y, jac []float64, rate float64) {
	for k := range c.members {
		c.PushDerivs(k, &Kick{Raise: -0.01 * rate, RaiseU: 0.06 * rate, RaiseG: -2 * rate, Pump: -rate}, y, jac, c.Dim(), -1)
	}
}

// Chains of 2, 3, 4 and 5 have 2N − 2 librations. Their vectors are eigenvectors
// to rounding, w·v = 1 and the left vectors are orthogonal to the other right
// ones, as those of any matrix are.
func TestEigenmodesOfChains(t *testing.T) {
	for name, start := range chains(t) {
		c, y, err := Lock(start)
		if err != nil {
			t.Fatal(name, err)
		}
		n := c.Dim()
		jac := jacobianAt(c, y)
		damp(c, y, jac, 1e-6/Year)
		l := c.NewLibrations()
		if err := l.Find(jac, n); err != nil {
			t.Fatal(name, err)
		}
		if len(l.Modes) != 2*c.Members()-2 {
			t.Fatalf("%s: %d modes of %d members", name, len(l.Modes), c.Members())
		}
		for a := range l.Modes {
			m := &l.Modes[a]
			if a > 0 && m.Frequency >= l.Modes[a-1].Frequency {
				t.Errorf("%s: mode %d is faster than the one before", name, a)
			}
			for i := 0; i < n; i++ {
				sum, size := -m.value()*m.Right[i], cmplx.Abs(m.value()*m.Right[i])
				for j := 0; j < n; j++ {
					sum += complex(jac[i*n+j], 0) * m.Right[j]
					size += math.Abs(jac[i*n+j]) * cmplx.Abs(m.Right[j])
				}
				// n roundings of terms of that size, and the last solution's.
				if cmplx.Abs(sum) > 1e-13*size {
					t.Errorf("%s: mode %d, row %d: Jv − λv = %.2g of terms %.2g", name, a, i, cmplx.Abs(sum), size)
				}
			}
			for b := range l.Modes {
				want := complex(0, 0)
				if a == b {
					want = 1
				}
				// The products of components are of the size of 1.
				if d := cmplx.Abs(product(m.Left, l.Modes[b].Right) - want); d > 1e-11 {
					t.Errorf("%s: w_%d·v_%d is %.2g off", name, a, b, d)
				}
			}
		}
	}
}

// Librations of a Hamiltonian flow share no action: Ω of two different modes
// vanishes, so that the action of a sum of modes is the sum of their actions,
// whatever their phases, and with the conjugate of one the difference (Arnold
// 1989, Mathematical Methods of Classical Mechanics, app. 6). It holds for no
// other form than the symplectic one of the flow.
func TestActionsOfModesAdd(t *testing.T) {
	for name, start := range chains(t) {
		c, y, err := Lock(start)
		if err != nil {
			t.Fatal(name, err)
		}
		l := c.NewLibrations()
		if err := l.Find(jacobianAt(c, y), c.Dim()); err != nil {
			t.Fatal(name, err)
		}
		for a := range l.Modes {
			va := l.Modes[a].Right
			// The scale is one action, to the rounding of its sum.
			if s := c.action(va); math.Abs(math.Abs(s)-1) > 1e-12 {
				t.Errorf("%s: mode %d has an action of %.15g, want ±1", name, a, s)
			}
			for b := range l.Modes[:a] {
				vb := l.Modes[b].Right
				for _, phase := range []complex128{1, 1i} {
					same, opposite := make([]complex128, c.Dim()), make([]complex128, c.Dim())
					for i := range va {
						same[i] = va[i] + phase*vb[i]
						opposite[i] = va[i] + phase*cmplx.Conj(vb[i])
					}
					// Rounding of J of 1e-16 turns vectors by that over the
					// relative distance of the frequencies, 1e-3 at least here.
					if d := c.action(same) - c.action(va) - c.action(vb); math.Abs(d) > 1e-11 {
						t.Errorf("%s: modes %d and %d: actions miss their sum by %.2g", name, a, b, d)
					}
					if d := c.action(opposite) - c.action(va) + c.action(vb); math.Abs(d) > 1e-11 {
						t.Errorf("%s: modes %d and %d: actions miss their difference by %.2g", name, a, b, d)
					}
				}
			}
		}
	}
}

// Tracking to another state finds the eigenvalues a new decomposition finds.
func TestTrackAgainstFind(t *testing.T) {
	for name, start := range chains(t) {
		c, y, err := Lock(start)
		if err != nil {
			t.Fatal(name, err)
		}
		start.Offset *= 1.05
		d, z, err := Lock(start)
		if err != nil {
			t.Fatal(name, err)
		}
		n := c.Dim()
		from, tracked, found := c.NewLibrations(), d.NewLibrations(), d.NewLibrations()
		if err := from.Find(jacobianAt(c, y), n); err != nil {
			t.Fatal(name, err)
		}
		jac := jacobianAt(d, z)
		damp(d, z, jac, 1e-6/Year)
		if err := tracked.Track(from, jac, n); err != nil {
			t.Fatal(name, err)
		}
		if err := found.Find(jac, n); err != nil {
			t.Fatal(name, err)
		}
		for a := range found.Modes {
			p, q := &tracked.Modes[a], &found.Modes[a]
			// Rounding: 1e-16 of products of components up to some 10³ ω.
			if math.Abs(p.Frequency-q.Frequency) > 1e-12*q.Frequency || math.Abs(p.Growth-q.Growth) > 1e-12*q.Frequency {
				t.Errorf("%s: mode %d tracked to %.14g %+.6g i, found at %.14g %+.6g i", name, a, p.Frequency, p.Growth, q.Frequency, q.Growth)
			}
		}
	}
}

// The half-widths of the angles against the angles of the displaced state.
func TestWidthsAgainstAngles(t *testing.T) {
	for name, start := range chains(t) {
		c, y, err := Lock(start)
		if err != nil {
			t.Fatal(name, err)
		}
		n := c.Members()
		rng := rand.New(rand.NewPCG(11, 1))
		s := displaced(c, y, rng, 0.1)
		l := c.NewLibrations()
		if err := l.Find(jacobianAt(c, y), c.Dim()); err != nil {
			t.Fatal(name, err)
		}
		widths, seen := make([]float64, c.Angles()), make([]float64, c.Angles())
		for a := range l.Modes {
			v := l.Modes[a].Right
			c.Widths(s, v, widths)
			greatest := 0.0
			for _, w := range widths {
				greatest = math.Max(greatest, w)
			}
			const wide = 1e-6 // rad
			clear(seen)
			moved := make([]float64, c.Dim())
			for phase := 0.0; phase < 2*math.Pi; phase += math.Pi / 500 {
				p := cmplx.Exp(complex(0, phase)) * complex(wide/greatest, 0)
				for i := range moved {
					moved[i] = s[i] + real(p*v[i])
				}
				for k := range c.members {
					d := math.Atan2(moved[2*n+k], moved[n+k]) - math.Atan2(s[2*n+k], s[n+k])
					seen[k] = math.Max(seen[k], math.Abs(math.Remainder(d, 2*math.Pi)))
				}
				for r := 1; r < n-1; r++ {
					seen[n+r-1] = math.Max(seen[n+r-1], math.Abs(c.Angle(r, moved)-c.Angle(r, s)))
				}
			}
			for i := range widths {
				// Phases miss the extreme by (π/500)²/2, and the second order is
				// the width itself times the eccentricity's relative swing.
				if want := widths[i] * wide / greatest; math.Abs(seen[i]-want) > 1e-4*want+1e-11 {
					t.Errorf("%s: mode %d, angle %d swings by %.8g, want %.8g", name, a, i, seen[i], want)
				}
			}
		}
	}
}

// Tracking allocates nothing.
func TestTrackAllocatesNothing(t *testing.T) {
	c, y, err := Lock(ombra())
	if err != nil {
		t.Fatal(err)
	}
	from, to := c.NewLibrations(), c.NewLibrations()
	jac := jacobianAt(c, y)
	if err := from.Find(jac, c.Dim()); err != nil {
		t.Fatal(err)
	}
	damp(c, y, jac, 1e-6/Year)
	if n := testing.AllocsPerRun(100, func() {
		if err := to.Track(from, jac, c.Dim()); err != nil {
			t.Fatal(err)
		}
		Transport(&from.Modes[0], &to.Modes[0])
	}); n != 0 {
		t.Errorf("%g allocations", n)
	}
}

func BenchmarkTrack(b *testing.B) {
	c, y, err := Lock(ombra())
	if err != nil {
		b.Fatal(err)
	}
	start := ombra()
	start.Offset *= 1.02
	d, z, err := Lock(start)
	if err != nil {
		b.Fatal(err)
	}
	from, to := c.NewLibrations(), d.NewLibrations()
	if err := from.Find(jacobianAt(c, y), c.Dim()); err != nil {
		b.Fatal(err)
	}
	jac := jacobianAt(d, z)
	for b.Loop() {
		if err := to.Track(from, jac, c.Dim()); err != nil {
			b.Fatal(err)
		}
	}
}

func BenchmarkFind(b *testing.B) {
	c, y, err := Lock(ombra())
	if err != nil {
		b.Fatal(err)
	}
	l := c.NewLibrations()
	jac := jacobianAt(c, y)
	for b.Loop() {
		if err := l.Find(jac, c.Dim()); err != nil {
			b.Fatal(err)
		}
	}
}
