package main

import (
	"fmt"
	"math"
	"math/rand/v2"
	"strings"

	"tidekiln/evolve/ode"
)

// agreement is what a port may differ by: of the largest term of the row. The
// formulas cancel three digits of a mean motion, and exponentials of ln η ≈ 40
// carry its rounding, which leaves 1e-13 to 1e-12.
const agreement = 1e-11

// probes returns states to compare at: along the path, where every term is as
// small as the tide makes it, and displaced from there by up to a tenth of each
// eccentricity, 0.1 rad and 1 % of everything else.
func (p *problem) probes() ([][]float64, error) {
	const each = 20
	r, err := ode.NewRadau(frozen{p.system}, p.at(1e-8))
	if err != nil {
		return nil, err
	}
	p.system.Freeze(0, p.start)
	if err := r.Start(0, p.start); err != nil {
		return nil, err
	}
	rng := rand.New(rand.NewPCG(11, 13))
	states := [][]float64{p.start}
	for i := 1; i <= each; i++ {
		end := p.span * float64(i) / each
		for r.T() < end {
			if _, err := r.Step(end); err != nil {
				return nil, err
			}
		}
		y := append([]float64(nil), r.State()...)
		states = append(states, y)
		z := append([]float64(nil), y...)
		for k := range members {
			z[k] += 0.01 * rng.NormFloat64()
			size := 0.1 * math.Abs(y[atRe+k])
			z[atRe+k] += size * rng.NormFloat64()
			z[atIm+k] += size * rng.NormFloat64()
		}
		for k := range members - 2 {
			z[atAngle+k] += 0.1 * rng.NormFloat64()
		}
		z[atEnthalpy] *= 1 + 0.01*(2*rng.Float64()-1)
		states = append(states, z)
	}
	return states, nil
}

// agree compares a port with the program and returns the worst differences of
// the right-hand side and of the Jacobian, as parts of the largest term of the
// row: max_j |J_ij y_j|.
func (p *port) agree(c *problem) (rhs, jac float64, states int, err error) {
	probes, err := c.probes()
	if err != nil {
		return 0, 0, 0, err
	}
	var input strings.Builder
	for _, y := range probes {
		for _, v := range y {
			fmt.Fprintf(&input, "%.17g ", v)
		}
		input.WriteByte('\n')
	}
	out, err := p.on(c, input.String(), "check")
	if err != nil {
		return 0, 0, 0, err
	}
	lines := strings.Split(strings.TrimSpace(out), "\n")
	if len(lines) != len(probes) {
		return 0, 0, 0, fmt.Errorf("%s: %d answers to %d states", p.name, len(lines), len(probes))
	}
	dy, j := make([]float64, dim), make([]float64, dim*dim)
	for n, y := range probes {
		theirs, err := floats(lines[n])
		if err != nil {
			return 0, 0, 0, err
		}
		if len(theirs) != dim+dim*dim {
			return 0, 0, 0, fmt.Errorf("%s: state %d has %d numbers", p.name, n, len(theirs))
		}
		c.system.Jacobian(0, y, dy, j)
		for i := range dim {
			largest := math.Abs(dy[i])
			for k := range dim {
				largest = max(largest, math.Abs(j[i*dim+k]*y[k]))
			}
			rhs = worse(rhs, math.Abs(theirs[i]-dy[i])/largest)
			for k := range dim {
				// Of a variable that is 0 on the path, its size when displaced.
				size := max(math.Abs(y[k]), 1e-3)
				jac = worse(jac, math.Abs(theirs[dim+i*dim+k]-j[i*dim+k])*size/max(largest, math.Abs(j[i*dim+k])*size))
			}
		}
	}
	return rhs, jac, len(probes), nil
}

// worse is the larger number, NaN before any.
func worse(a, b float64) float64 {
	if math.IsNaN(b) || b > a {
		return b
	}
	return a
}
