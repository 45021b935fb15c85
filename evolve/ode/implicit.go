package ode

import (
	"fmt"
	"math"
)

// implicit is an engine with a Jacobian.
type implicit struct {
	engine
	sys     System
	jac     []float64 // maybe of an earlier step
	haveJac bool
	jacHere bool       // jac is of this (t, y)
	luStep  float64    // step of the matrices decomposed, 0: none with this jac
	filter  *projector // nil without a fast block
}

func newImplicit(m Method, sys System, opt Options, terms, nodes int) (implicit, error) {
	e, err := newEngine(m, sys, opt, terms, nodes)
	if err != nil {
		return implicit{}, err
	}
	return implicit{engine: e, sys: sys, jac: make([]float64, e.n*e.n), filter: newProjector(opt.Fast)}, nil
}

// linearise makes f and a Jacobian available at the state.
func (im *implicit) linearise() error {
	switch {
	case !im.haveJac:
		im.stats.Jacobians++
		im.sys.Jacobian(im.t, im.y, im.f, im.jac)
		im.haveJac, im.jacHere, im.luStep = true, true, 0
		for k, v := range im.jac {
			if math.IsNaN(v) || math.IsInf(v, 0) {
				im.haveJac = false
				return &StopError{Reason: NotFinite, T: im.t, H: im.control.h, Component: k / im.n,
					Detail: fmt.Sprintf("derivative with respect to component %d", k%im.n)}
			}
		}
	case !im.haveF:
		im.derivs(im.t, im.y, im.f)
	default:
		return nil
	}
	return im.checkDerivs()
}

// velocity leaves the fast part out of f, which is rounding noise times the fast
// frequency.
func (im *implicit) velocity() []float64 {
	if im.filter != nil {
		return im.filter.slow
	}
	return im.f
}
