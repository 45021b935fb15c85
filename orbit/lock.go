package orbit

import (
	"errors"
	"fmt"
	"math"
)

// LockedStart asks for a chain on its forced equilibrium.
type LockedStart struct {
	Primary Primary
	Masses  []float64 // kg, innermost first, N ≥ 2
	Ratios  []int     // j of each pair's (j+1):j, N − 1 of them, j ≥ 1
	Offset  float64   // dψ_r/dt = (j+1) n_o − j n_i, common to the chain, rad/s, not 0
	// One of these places the innermost member; the period is 2π/(dλ/dt).
	Period        float64 // s
	SemimajorAxis float64 // m
}

// ErrNoStableCentre reports a chain none of whose candidate libration centres
// is linearly stable.
var ErrNoStableCentre = errors.New("no libration centre of the chain is linearly stable")

// Lock returns the chain on the fast equilibrium of its tide-free flow and the
// state y there: dY_k/dt = 0 for every eccentricity and every dψ_r/dt equal to
// the offset. Forced eccentricities are the result. Of the 2^{N−2} symmetric
// centres φ_r ∈ {0, π} it takes the linearly stable one, judged by the
// spectrum of the Jacobian (the first in binary order if several are).
func Lock(s LockedStart) (*Chain, []float64, error) {
	n := len(s.Masses)
	if n < 2 || len(s.Ratios) != n-1 {
		return nil, nil, fmt.Errorf("a chain of %d members needs %d ratios, got %d", n, n-1, len(s.Ratios))
	}
	if !(math.Abs(s.Offset) > 0) || math.IsInf(s.Offset, 0) {
		return nil, nil, errors.New("the offset of a locked chain must be a finite number other than 0: at exact commensurability the forced eccentricities diverge")
	}
	var firstErr error
	for choice := 0; choice < 1<<(n-2); choice++ {
		c, y, err := lockAt(s, choice)
		if err != nil {
			firstErr = errors.Join(firstErr, err)
			continue
		}
		stable, err := c.stable(y)
		if err != nil {
			return nil, nil, err
		}
		if stable {
			return c, y, nil
		}
	}
	if firstErr != nil {
		return nil, nil, firstErr
	}
	return nil, nil, ErrNoStableCentre
}

// lockAt finds the equilibrium whose φ_r is π where bit r−1 of choice is set.
//
// dY_k/dt = 0 is linear in Y at fixed Λ, and dλ/dt differs from the Kepler
// value by the small oblate and resonant rates, so a fixed-point iteration on
// (Λ, Y) gains three to four digits a turn.
func lockAt(s LockedStart, choice int) (*Chain, []float64, error) {
	n := len(s.Masses)
	c := newChain(s.Primary, n)
	for r, j := range s.Ratios {
		p := &c.pairs[r]
		p.j, p.sign = float64(j), 1
		c.offset[r] = s.Offset
		p.f1, p.f2 = Coefficients(j)
		if r > 0 && choice>>(r-1)&1 == 1 {
			p.centre, p.sign = math.Pi, -1
		}
	}
	y := make([]float64, c.Dim())
	axes := make([]float64, n)
	rate := make([]float64, n)   // dλ_k/dt wanted
	excess := make([]float64, n) // its oblate and resonant part
	old := make([]float64, 2*n)
	w := c.NewRates()
	innermost := s.SemimajorAxis
	for turn := 0; turn < 100; turn++ {
		mu := func(k int) float64 { return G * (s.Primary.Mass + s.Masses[k]) }
		if s.Period > 0 {
			rate[0] = 2 * math.Pi / s.Period
		} else {
			rate[0] = math.Sqrt(mu(0)/innermost)/innermost + excess[0]
		}
		for k := range axes {
			if k > 0 {
				j := c.pairs[k-1].j
				rate[k] = (s.Offset + j*rate[k-1]) / (j + 1)
			}
			n := rate[k] - excess[k]
			if !(n > 0) {
				return nil, nil, fmt.Errorf("the offset %.4g deg/day leaves member %d of the chain no orbit", s.Offset*Day*180/math.Pi, k+1)
			}
			axes[k] = math.Cbrt(mu(k) / (n * n))
			c.members[k] = newMember(s.Primary, s.Masses[k], axes[k])
		}
		for r := range c.pairs {
			c.pairs[r].energy = G * s.Masses[r] * s.Masses[r+1] / axes[r+1]
		}
		// (∂H/∂Γ + ψ̇) z = Σ C e^{iφ}: real at a symmetric centre.
		for k := range c.members {
			m := &c.members[k]
			force := 0.0
			if k < n-1 {
				p := &c.pairs[k]
				force += p.energy * p.f1 * p.sign
			}
			if k > 0 {
				p := &c.pairs[k-1]
				force += p.energy * p.f2 * p.sign
			}
			x := y[n+k]
			_, slope := m.oblate(1, 0.5*x*x)
			y[n+k] = force / m.ref / (slope + s.Offset)
			if !(math.Abs(y[n+k]) < 1) {
				return nil, nil, fmt.Errorf("the offset %.4g deg/day is so near exact commensurability that member %d would be forced to an eccentricity of %.2g", s.Offset*Day*180/math.Pi, k+1, math.Abs(y[n+k]))
			}
		}
		for k := range c.rateRef {
			c.rateRef[k] = 0
		}
		c.longitudes(y, w)
		copy(excess, w.Longitude)
		change := 0.0
		for k := 0; k < n; k++ {
			change = math.Max(change, math.Abs(axes[k]/nonzero(old[k])-1))
			change = math.Max(change, math.Abs(y[n+k]/nonzero(old[n+k])-1))
			old[k], old[n+k] = axes[k], y[n+k]
		}
		if change < 4e-16 || turn > 30 && change < 1e-14 {
			copy(c.rateRef, excess)
			return c, y, nil
		}
	}
	return nil, nil, fmt.Errorf("no forced equilibrium found at an offset of %.4g deg/day: it is too near exact commensurability", s.Offset*Day*180/math.Pi)
}

func nonzero(x float64) float64 {
	if x == 0 {
		return 1e-300
	}
	return x
}

func newChain(p Primary, n int) *Chain {
	return &Chain{
		members: make([]member, n), pairs: make([]pair, n-1),
		offset: make([]float64, n-1), rateRef: make([]float64, n),
	}
}
