package ode

import (
	"math"

	"gonum.org/v1/gonum/integrate/quad"
)

const maxNodes = 7

// nodes are the s zeros of P_{s−1} − P_s on [0, 1], the last of them 1: the places
// of the Radau quadrature of order 2s − 1 and of interpolation.
type nodes struct {
	s    int
	c    [maxNodes]float64
	bary [maxNodes]float64 // 1/Π_{m≠j}(c_j − c_m)
}

// newNodes finds the zeros in x = 2c − 1 by Newton's method from those of the
// Chebyshev polynomial of the same kind.
func newNodes(s int) nodes {
	nd := nodes{s: s}
	nd.c[s-1] = 1
	for k := 1; k < s; k++ {
		x := math.Cos(2 * math.Pi * float64(k) / float64(2*s-1))
		for range 20 {
			p0, p1, d0, d1 := 1.0, x, 0.0, 1.0
			for m := 1; m < s; m++ {
				fm := float64(m)
				p0, p1 = p1, ((2*fm+1)*x*p1-fm*p0)/(fm+1)
				d0, d1 = d1, d0+(2*fm+1)*p0
			}
			x -= (p0 - p1) / (d0 - d1)
		}
		nd.c[s-1-k] = (1 + x) / 2
	}
	for j, cj := range nd.c[:s] {
		nd.bary[j] = 1
		for m, cm := range nd.c[:s] {
			if m != j {
				nd.bary[j] /= cj - cm
			}
		}
	}
	return nd
}

// integrals writes ∫₀^θ ℓ_j to w, with ℓ_j the Lagrange polynomials of the nodes,
// by a Gauss rule that is exact for their degree.
func (nd *nodes) integrals(theta float64, w []float64) {
	clear(w)
	var x, g [(maxNodes + 1) / 2]float64
	m := (nd.s + 1) / 2
	quad.Legendre{}.FixedLocations(x[:m], g[:m], 0, theta)
	for q := range m {
		for j := range nd.s {
			l := nd.bary[j] * g[q]
			for k, ck := range nd.c[:nd.s] {
				if k != j {
					l *= x[q] - ck
				}
			}
			w[j] += l
		}
	}
}

// basis writes to w the values at θ of the Lagrange polynomials that are 1 at
// c_j and 0 at the other nodes and at 0: the collocation polynomial is
// y₀ + Σ w_j z_j.
func (nd *nodes) basis(theta float64, w []float64) {
	for j, cj := range nd.c[:nd.s] {
		l := nd.bary[j] * theta / cj
		for k, ck := range nd.c[:nd.s] {
			if k != j {
				l *= theta - ck
			}
		}
		w[j] = l
	}
}
