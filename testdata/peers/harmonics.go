package main

import (
	"fmt"
	"math"

	"gonum.org/v1/gonum/mat"

	"tidekiln/orbit"
)

// nearCircular is the e² up to which the ports know the eccentricity functions:
// just inside the first of the program's panels, whose polynomial has degree 5.
const (
	nearCircular = 0.999e-3
	degree       = 5
)

// exportHarmonics writes the functions S_j(e)/e² of the synchronous tide as
// polynomials in s = e²/nearCircular, with the e² from which each counts. The
// program's own are polynomials there, so sampling them loses nothing.
func (p *problem) exportHarmonics() error {
	h := orbit.NewHarmonics()
	order := func(x float64) int { h.SynchronousAt(x); return h.Order }
	most := order(nearCircular)
	from := make([]float64, most)
	var coefficients []float64
	for j := 1; j <= most; j++ {
		low, high := 0.0, nearCircular
		if order(0) >= j {
			high = 0
		}
		for range 200 {
			if mid := (low + high) / 2; order(mid) >= j {
				high = mid
			} else {
				low = mid
			}
		}
		from[j-1] = high
		c, err := polynomial(h, j, high)
		if err != nil {
			return err
		}
		coefficients = append(coefficients, c...)
	}
	p.put("harmonic_top", nearCircular)
	p.put("harmonic_from", from...)
	p.put("harmonic_coefficients", coefficients...)
	return nil
}

// polynomial interpolates S_j/e² at Chebyshev nodes of [from, nearCircular].
func polynomial(h *orbit.Harmonics, j int, from float64) ([]float64, error) {
	const nodes = degree + 1
	m, f := mat.NewDense(nodes, nodes, nil), mat.NewVecDense(nodes, nil)
	for i := range nodes {
		x := from + (nearCircular-from)*0.5*(1-math.Cos(math.Pi*(float64(i)+0.5)/nodes))
		if !h.SynchronousAt(x) || h.Order < j {
			return nil, fmt.Errorf("harmonic %d is missing at e² = %g", j, x)
		}
		v, _ := h.Synchronous(j)
		f.SetVec(i, v)
		for k := range nodes {
			m.Set(i, k, math.Pow(x/nearCircular, float64(k)))
		}
	}
	var c mat.VecDense
	if err := c.SolveVec(m, f); err != nil {
		return nil, fmt.Errorf("harmonic %d: %w", j, err)
	}
	return c.RawVector().Data, nil
}
