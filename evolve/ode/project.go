package ode

import "math"

const projections = 5 // iterations; each gains the ratio of projection step to slow time, and then rounding stops it

// projector removes the fast oscillation from a block of components.
type projector struct {
	index []int // of the block
	lu    *lu[float64]
	jac   []float64 // of the block
	slow  []float64 // all of f, filtered in the block: the velocity of the manifold
	shift []float64
}

func newProjector(fast []bool) *projector {
	var index []int
	for i, is := range fast {
		if is {
			index = append(index, i)
		}
	}
	m := len(index)
	if m == 0 {
		return nil
	}
	return &projector{index: index, lu: newRealLU(m), jac: make([]float64, m*m),
		slow: make([]float64, len(fast)), shift: make([]float64, m)}
}

// project moves the fast block of the state onto the slow manifold by
//
//	y ← y + h R (f − R f),   R = (1 − hJ)⁻¹,
//
// J of the block: R f is f without its oscillating part and −hR approaches J⁻¹ for
// frequencies ≫ 1/h. It stops when a correction no longer gains on the one before.
// The error left in the slow variables is of second order in the displacement.
func (im *implicit) project() error {
	p := im.filter
	if p == nil {
		return nil
	}
	im.stats.Projections++
	h, m := im.opt.ProjectionStep, len(p.index)
	last := math.Inf(1)
	for range projections {
		im.haveJac = false
		if err := im.linearise(); err != nil {
			return err
		}
		for a, i := range p.index {
			for b, j := range p.index {
				p.jac[a*m+b] = h * im.jac[i*im.n+j]
			}
		}
		if !shiftReal(p.lu, 1, p.jac) {
			return &StopError{Reason: Singular, T: im.t, H: h, Component: -1, Detail: "projection onto the slow manifold"}
		}
		copy(p.slow, im.f)
		for a, i := range p.index {
			p.shift[a] = im.f[i]
		}
		p.lu.solve(p.shift)
		for a, i := range p.index {
			p.slow[i] = p.shift[a]
			p.shift[a] = im.f[i] - p.shift[a]
		}
		p.lu.solve(p.shift)
		size := 0.0
		for a, i := range p.index {
			v := h * p.shift[a] / (im.opt.RTol*math.Abs(im.y[i]) + im.opt.ATol[i])
			size += v * v
		}
		if !(size < last) {
			break
		}
		for a, i := range p.index {
			im.y[i] += h * p.shift[a]
		}
		im.haveF, im.haveJac, im.jacHere = false, false, false
		if size > 0.01*last { // sums of squares: it gained less than a factor of ten
			break
		}
		last = size
	}
	return nil
}
