package orbit

import (
	"math"
	"math/rand/v2"
	"testing"

	"gonum.org/v1/gonum/diff/fd"
	"gonum.org/v1/gonum/floats"
)

const degreePerDay = math.Pi / 180 / Day

// ombra is an invented planet with three moons in a 2:1–2:1 chain.
func ombra() LockedStart {
	return LockedStart{
		Primary: Primary{Mass: 1.6e27, Radius: 6.6e7, J2: 0.012},
		Masses:  []float64{9.1e22, 4.4e22, 1.3e23},
		Ratios:  []int{1, 1},
		Offset:  -0.70 * degreePerDay,
		Period:  1.9 * Day,
	}
}

func chains(t *testing.T) map[string]LockedStart {
	t.Helper()
	o := ombra()
	pair := LockedStart{Primary: o.Primary, Masses: o.Masses[:2], Ratios: []int{2}, Offset: -0.5 * degreePerDay, Period: 3 * Day}
	four := LockedStart{Primary: Primary{Mass: 2e29, Radius: 9e7, J2: 1e-6}, Masses: []float64{6e24, 4e24, 5e24, 7e24},
		Ratios: []int{2, 2, 3}, Offset: -0.3 * degreePerDay, Period: 2 * Day}
	five := four
	five.Masses = append(append([]float64(nil), four.Masses...), 3e24)
	five.Ratios = []int{2, 2, 3, 2}
	return map[string]LockedStart{"three": o, "pair": pair, "four": four, "five": five}
}

// The start that an independent implementation of the same equations found,
// to the digits it gave.
func TestLockedStartOfOmbra(t *testing.T) {
	c, y, err := Lock(ombra())
	if err != nil {
		t.Fatal(err)
	}
	w := c.NewRates()
	c.Flow(y, make([]float64, c.Dim()), w)
	for k, want := range []struct{ a, e float64 }{
		{417992.20395780, 0.00496338}, {664912.81477288, 0.01119017}, {1060601.69017937, 0.00078459},
	} {
		el := c.Elements(k, y, w)
		near(t, "a", el.SemimajorAxis/1e3, want.a, 1e-13)
		near(t, "e", el.Eccentricity, want.e, 0.6e-8/want.e)
	}
	if c.Centre(1) != math.Pi {
		t.Errorf("libration centre %g, want π", c.Centre(1))
	}
	el := c.Elements(0, y, w)
	near(t, "period", 2*math.Pi/el.MeanMotion, 1.9*Day, 1e-14)
}

// Every component of the flow against finite differences of H. H is evaluated
// less its large constant, yet cancels to about 1e-16 of Λn; a central
// difference of step d leaves that over d, and d² of the third derivative.
func TestFlowIsTheGradientOfH(t *testing.T) {
	for name, start := range chains(t) {
		t.Run(name, func(t *testing.T) {
			c, y, err := Lock(start)
			if err != nil {
				t.Fatal(err)
			}
			n, dim := c.Members(), c.Dim()
			rng := rand.New(rand.NewPCG(7, 1))
			for range 20 {
				s := displaced(c, y, rng, 0.3)
				dy := make([]float64, dim)
				w := c.NewRates()
				c.Flow(s, dy, w)
				grad := fd.Gradient(nil, c.Energy, s, &fd.Settings{Formula: fd.Central, Step: 1e-5})
				full := c.members[0].ref * c.members[0].n
				// dλ/dt − reference, from ∂H/∂Λ.
				for k := range c.members {
					got := w.Longitude[k] + c.members[k].n + c.rateRef[k]
					want := grad[k] / c.members[k].ref
					closeTo(t, "dλ/dt", got, want, 1e-16*full/1e-5/c.members[k].ref*10+1e-9*c.members[k].n)
				}
				// dΛ/dt = −∂H/∂λ: H depends on λ through φ_r (r ≥ 1) at fixed Y,
				// and through ψ_1 by the turn of the frame, which moves every Y.
				dHdPsi := make([]float64, n-1)
				for r := 1; r < n-1; r++ {
					dHdPsi[r] = grad[3*n+r-1]
				}
				// At fixed X, ψ_1 → ψ_1+δ turns Y by −δ and lowers each φ_r by δ.
				for k := range c.members {
					x, v := s[n+k], s[2*n+k]
					dHdPsi[0] += grad[n+k]*v - grad[2*n+k]*x
				}
				for r := 1; r < n-1; r++ {
					dHdPsi[0] -= dHdPsi[r]
				}
				for k := range c.members {
					want := 0.0
					if k < n-1 {
						want += c.pairs[k].j * dHdPsi[k]
					}
					if k > 0 {
						want -= (c.pairs[k-1].j + 1) * dHdPsi[k-1]
					}
					closeTo(t, "dΛ/dt", dy[k], want/c.members[k].ref, 1e-16*full/1e-5/c.members[k].ref*20+1e-9*math.Abs(dy[k]))
				}
				// dX/dt = (∂H/∂ Im X, −∂H/∂ Re X), then the frame turns by ψ̇_1.
				for k := range c.members {
					x, v := s[n+k], s[2*n+k]
					ref := c.members[k].ref
					tol := 1e-16*full/1e-5/ref*20 + 1e-8*math.Abs(w.Offset[0])*math.Hypot(x, v)
					closeTo(t, "dRe z/dt", dy[n+k], grad[2*n+k]/ref+w.Offset[0]*v, tol)
					closeTo(t, "dIm z/dt", dy[2*n+k], -grad[n+k]/ref-w.Offset[0]*x, tol)
				}
				for r := 1; r < n-1; r++ {
					closeTo(t, "dφ/dt", dy[3*n+r-1], w.Offset[r]-w.Offset[0], 0)
				}
			}
		})
	}
}

// The flow conserves H and Σ(Λ−Γ): their derivatives along it vanish. That of
// Σ(Λ−Γ) is written out and holds to the rounding of its terms. That of H, ∇H·ẏ,
// is a central difference of fourth order over steps δ along ẏ/max|ẏ|:
//   - the terms of H are 5e-4 Λn of each member at most (l ≤ 3e-4 here, J₂ and the
//     pairs less), some ten roundings each: 1e-15 · 5e-4 Λn · 18/(12δ) of slope;
//   - δ⁴/30 of the fifth derivative, of Kepler's u⁻²/2 at most 360 Λn.
//
// Either is 1e-10 and less of the terms of ∇H·ẏ, which reach 1e-4 Λn.
func TestFlowConservesEnergyAndAngularMomentum(t *testing.T) {
	const d = 1e-4
	for name, start := range chains(t) {
		c, y, err := Lock(start)
		if err != nil {
			t.Fatal(name, err)
		}
		n := c.Members()
		rng := rand.New(rand.NewPCG(3, 1))
		s := displaced(c, y, rng, 0.3)
		dy := make([]float64, c.Dim())
		c.Flow(s, dy, c.NewRates())
		rate, size, kepler := 0.0, 0.0, 0.0
		for k, m := range c.members {
			l := m.ref * dy[k]
			g := m.ref * (s[n+k]*dy[n+k] + s[2*n+k]*dy[2*n+k])
			rate += l - g
			size += math.Abs(l) + math.Abs(g)
			kepler += m.ref * m.n
		}
		if math.Abs(rate) > 1e-13*size {
			t.Errorf("%s: dΣ(Λ−Γ)/dt = %g of terms %g", name, rate, size)
		}
		along := append([]float64(nil), dy...)
		floats.Scale(1/floats.Norm(dy, math.Inf(1)), along)
		at := make([]float64, len(s))
		energy := func(by float64) float64 { return c.Energy(floats.AddScaledTo(at, s, by, along)) }
		slope := (8*(energy(d)-energy(-d)) - (energy(2*d) - energy(-2*d))) / (12 * d)
		closeTo(t, name+": ∇H·ẏ/|ẏ|", slope, 0, (1e-15*5e-4*18/(12*d)+d*d*d*d/30*360)*kepler)
	}
}

func TestJacobianAgainstDifferences(t *testing.T) {
	for name, start := range chains(t) {
		c, y, err := Lock(start)
		if err != nil {
			t.Fatal(name, err)
		}
		dim := c.Dim()
		rng := rand.New(rand.NewPCG(5, 1))
		for range 10 {
			s := displaced(c, y, rng, 0.3)
			w := c.NewRates()
			jac := make([]float64, dim*dim)
			c.Flow(s, make([]float64, dim), w)
			c.Jacobian(s, w, jac, dim)
			// Columns by central differences; a row's size is judged by its largest entry.
			const d = 1e-6
			num := make([]float64, dim*dim)
			up, down := make([]float64, dim), make([]float64, dim)
			for j := range s {
				keep := s[j]
				s[j] = keep + d
				c.Flow(s, up, w)
				s[j] = keep - d
				c.Flow(s, down, w)
				s[j] = keep
				for i := range up {
					num[i*dim+j] = (up[i] - down[i]) / (2 * d)
				}
			}
			for i := 0; i < dim; i++ {
				row := 0.0
				for j := 0; j < dim; j++ {
					row = math.Max(row, math.Abs(jac[i*dim+j]))
				}
				for j := 0; j < dim; j++ {
					// d² f‴/f ≈ 50 d² for u⁻³-like terms, and rounding 1e-16·n₀/d.
					tol := 1e-9*row + 1e-15*c.members[0].n/d
					if math.Abs(num[i*dim+j]-jac[i*dim+j]) > tol {
						t.Errorf("%s: J[%d][%d] = %g, difference quotient %g", name, i, j, jac[i*dim+j], num[i*dim+j])
					}
				}
			}
		}
	}
}

// Periods of the librations at the tide-free start, re-derived by two
// independent programs; a conservative spectrum has no growth.
func TestLibrationPeriodsOfOmbra(t *testing.T) {
	c, y, err := Lock(ombra())
	if err != nil {
		t.Fatal(err)
	}
	modes := conservativeModes(t, c, y)
	for i, want := range []float64{1.2065, 1.3617, 1.4008, 4.3304} {
		closeTo(t, "period", modes[i].Period()/Year, want, 0.6e-4)
		if g := math.Abs(modes[i].Growth); g > 1e-14*modes[0].Frequency {
			t.Errorf("mode %d grows at %g of the fastest frequency without tides", i, g/modes[0].Frequency)
		}
	}
}

// A chain of four has candidate centres (φ₂, φ₃) ∈ {0, π}²; for 2:1, 2:1, 3:2
// only (π, 0) is stable (re-derived by eigenvalues).
func TestOnlyOneCentreOfFourIsStable(t *testing.T) {
	s := ombra()
	s.Masses = append(s.Masses, 6e22)
	s.Ratios = []int{1, 1, 2}
	for choice, want := range []bool{false, true, false, false} {
		c, y, err := lockAt(s, choice)
		if err != nil {
			t.Fatal(err)
		}
		stable, err := c.stable(y)
		if err != nil {
			t.Fatal(err)
		}
		if stable != want {
			t.Errorf("centre (%g, %g): stable %v, want %v", c.Centre(1), c.Centre(2), stable, want)
		}
	}
	c, _, err := Lock(s)
	if err != nil || c.Centre(1) != math.Pi || c.Centre(2) != 0 {
		t.Errorf("Lock chose (%v), error %v", c, err)
	}
}

func TestLockRefusesWhatHasNoEquilibrium(t *testing.T) {
	for name, edit := range map[string]func(*LockedStart){
		"exact commensurability": func(s *LockedStart) { s.Offset = 0 },
		"no orbit left":          func(s *LockedStart) { s.Offset = -400 * degreePerDay },
		"too few ratios":         func(s *LockedStart) { s.Ratios = s.Ratios[:1] },
		"forced beyond one":      func(s *LockedStart) { s.Primary.J2 = 0; s.Offset = -1e-5 * degreePerDay },
	} {
		s := ombra()
		edit(&s)
		if _, _, err := Lock(s); err == nil {
			t.Errorf("%s: no error", name)
		}
	}
}

func TestFlowAndJacobianDoNotAllocate(t *testing.T) {
	c, y, err := Lock(ombra())
	if err != nil {
		t.Fatal(err)
	}
	dim := c.Dim()
	dy, jac, w := make([]float64, dim), make([]float64, dim*dim), c.NewRates()
	if n := testing.AllocsPerRun(100, func() { c.Flow(y, dy, w); c.Jacobian(y, w, jac, dim) }); n != 0 {
		t.Errorf("%g allocations", n)
	}
}

func conservativeModes(t *testing.T, c *Chain, y []float64) []Mode {
	t.Helper()
	dim := c.Dim()
	jac, w := make([]float64, dim*dim), c.NewRates()
	c.Flow(y, make([]float64, dim), w)
	c.Jacobian(y, w, jac, dim)
	modes, err := c.Spectrum(jac, dim)
	if err != nil {
		t.Fatal(err)
	}
	return modes
}

// displaced moves every component at random by up to the fraction of its own
// size (l: of 1e-3; angles: of 1 rad).
func displaced(c *Chain, y []float64, rng *rand.Rand, by float64) []float64 {
	n := c.Members()
	s := append([]float64(nil), y...)
	for i := range s {
		r := by * (2*rng.Float64() - 1)
		switch {
		case i < n:
			s[i] += 1e-3 * r
		case i < 2*n:
			s[i] *= 1 + r
		case i < 3*n:
			s[i] += r * y[i-n]
		default:
			s[i] += r
		}
	}
	return s
}

func closeTo(t *testing.T, name string, got, want, tol float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tol) {
		t.Errorf("%s = %.15g, want %.15g (difference %.2e, tolerance %.1e)", name, got, want, got-want, tol)
	}
}

func BenchmarkFlow(b *testing.B) {
	c, y, _ := Lock(ombra())
	dy, w := make([]float64, c.Dim()), c.NewRates()
	for b.Loop() {
		c.Flow(y, dy, w)
	}
}

func BenchmarkJacobian(b *testing.B) {
	c, y, _ := Lock(ombra())
	dim := c.Dim()
	dy, jac, w := make([]float64, dim), make([]float64, dim*dim), c.NewRates()
	c.Flow(y, dy, w)
	for b.Loop() {
		c.Jacobian(y, w, jac, dim)
	}
}
