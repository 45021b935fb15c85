package orbit

import (
	"fmt"
	"math"
)

// FreeStart asks for a chain whose angles circulate or librate as its elements
// have it.
type FreeStart struct {
	Primary Primary
	Ratios  []int // j of each pair's (j+1):j, N − 1 of them, j ≥ 1
	Members []FreeMember
}

// FreeMember is one orbiter of a free chain. One of Period and SemimajorAxis is
// positive.
type FreeMember struct {
	Mass          float64 // kg
	Period        float64 // 2π/(dλ/dt) at the start, the resonant terms included, s
	SemimajorAxis float64 // m
	Eccentricity  float64 // 0 ≤ e < 1
	Pericentre    float64 // ϖ, rad
	MeanLongitude float64 // λ, rad
}

// Free returns the chain and its state at the given elements, innermost first.
// All centres are 0, so the state's angles are φ_r itself.
//
// A period is inverted through dλ/dt = ∂H/∂Λ by the fixed-point iteration of
// [Lock]: the oblate and resonant parts are small beside n.
func Free(s FreeStart) (*Chain, []float64, error) {
	n := len(s.Members)
	if n < 2 || len(s.Ratios) != n-1 {
		return nil, nil, fmt.Errorf("a chain of %d members needs %d ratios, got %d", n, n-1, len(s.Ratios))
	}
	c := newChain(s.Primary, n)
	y := make([]float64, c.Dim())
	psi := make([]float64, n-1)
	for r, j := range s.Ratios {
		p := &c.pairs[r]
		p.j, p.sign = float64(j), 1
		p.f1, p.f2 = Coefficients(j)
		psi[r] = (p.j+1)*s.Members[r+1].MeanLongitude - p.j*s.Members[r].MeanLongitude
		if r > 0 {
			y[3*n+r-1] = math.Remainder(psi[r]-psi[0], 2*math.Pi)
		}
	}
	for k, m := range s.Members {
		e := m.Eccentricity
		if !(e >= 0 && e < 1) {
			return nil, nil, fmt.Errorf("an eccentricity of %g of member %d is outside 0 … 1", e, k+1)
		}
		x := math.Sqrt(2 * e * e / (1 + math.Sqrt(1-e*e)))
		sin, cos := math.Sincos(m.Pericentre - psi[0])
		y[n+k], y[2*n+k] = x*cos, x*sin
	}
	axes, old, excess := make([]float64, n), make([]float64, n), make([]float64, n)
	w := c.NewRates()
	for range 100 {
		change := 0.0
		for k, m := range s.Members {
			axes[k] = m.SemimajorAxis
			if m.Period > 0 {
				rate := 2*math.Pi/m.Period - excess[k]
				if !(rate > 0) {
					return nil, nil, fmt.Errorf("a period of %.6g d leaves member %d of the chain no orbit", m.Period/Day, k+1)
				}
				axes[k] = math.Cbrt(G * (s.Primary.Mass + m.Mass) / (rate * rate))
			}
			c.members[k] = newMember(s.Primary, m.Mass, axes[k])
			change = math.Max(change, math.Abs(axes[k]/nonzero(old[k])-1))
			old[k] = axes[k]
		}
		for r := range c.pairs {
			c.pairs[r].energy = G * s.Members[r].Mass * s.Members[r+1].Mass / axes[r+1]
		}
		clear(c.rateRef)
		c.longitudes(y, w)
		copy(excess, w.Longitude)
		if change < 4e-16 {
			copy(c.rateRef, excess)
			for r := range c.pairs {
				j := c.pairs[r].j
				c.offset[r] = (j+1)*c.rate(r+1) - j*c.rate(r)
			}
			return c, y, nil
		}
	}
	return nil, nil, fmt.Errorf("no orbits found for the periods of the chain: the resonant terms shift them by more than themselves; give semi-major axes")
}

// rate returns dλ/dt of member k at the reference.
func (c *Chain) rate(k int) float64 { return c.members[k].n + c.rateRef[k] }
