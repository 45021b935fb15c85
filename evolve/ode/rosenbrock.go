package ode

import "math"

// Rosenbrock integrates a System with a linearly implicit method of order 5,
// Rodas5P (Steinebach 2023, BIT Numer. Math. 63, 27): one Jacobian, one real
// decomposition and eight values of f a step, and no iteration that could fail.
type Rosenbrock struct {
	implicit
	tab      *rosenbrock
	lu       *lu[float64]
	u        [][]float64
	stage    []float64      // right-hand side of a stage
	byTime   TimeDerivative // nil: by a difference
	dfdt     []float64
	haveDfdt bool
}

// NewRosenbrock prepares an integration; Start must follow. The integrals and
// kinks of a sys that implements Quadratures or Piecewise are taken care of, and
// ∂f/∂t of one that implements TimeDerivative. An error says which option does
// not make sense.
func NewRosenbrock(sys System, opt Options) (*Rosenbrock, error) {
	tab := rodas5P()
	im, err := newImplicit(MethodRosenbrock, sys, opt, tab.form.terms, tab.form.s)
	if err != nil {
		return nil, err
	}
	r := &Rosenbrock{implicit: im, tab: tab}
	r.scheme = r
	r.lu = newRealLU(r.n)
	r.u = make([][]float64, rosenbrockStages)
	for i := range r.u {
		r.u[i] = make([]float64, r.n)
	}
	r.stage, r.dfdt = make([]float64, r.n), make([]float64, r.n)
	r.byTime, _ = sys.(TimeDerivative)
	return r, nil
}

func (r *Rosenbrock) begin() { r.control.order = r.tab.order }

func (r *Rosenbrock) forget() { r.haveJac, r.jacHere, r.haveDfdt = false, false, false }

func (r *Rosenbrock) prepare() error { return r.linearise() }

// differentiate makes ∂f/∂t available. A difference is taken forward, within the
// step h, from f(t) and two more values, to second order: with δ = h ∛ε, and ε the
// rounding of f or that of t over h, the error and the rounding are both about
// ε^(2/3) f/h.
func (r *Rosenbrock) differentiate(h float64) {
	if r.haveDfdt {
		return
	}
	r.haveDfdt = true
	if r.byTime != nil {
		r.byTime.TimeDerivative(r.t, r.y, r.dfdt)
		return
	}
	delta := h * min(0.5, math.Cbrt(0x1p-52*max(1, math.Abs(r.t)/h)))
	t1, t2 := r.t+delta, r.t+2*delta // as t can hold them
	d1, d2 := t1-r.t, t2-r.t
	r.derivs(t1, r.y, r.stage)
	r.derivs(t2, r.y, r.point)
	w1, w2 := d2/(d1*(d2-d1)), -d1/(d2*(d2-d1))
	for i, f := range r.f {
		r.dfdt[i] = w1*(r.stage[i]-f) + w2*(r.point[i]-f)
	}
}

func (r *Rosenbrock) attempt(h float64) (bool, error) {
	tab := r.tab
	if r.luStep != h {
		r.luStep = 0
		r.stats.Decompositions++
		if !shiftReal(r.lu, 1/(h*tab.gamma), r.jac) {
			return false, r.noStages(h, 0.5, StopError{Reason: Singular, Component: -1})
		}
		r.luStep = h
	}
	r.differentiate(h)
	s := r.next
	s.begin(tab.form, r.t, h, r.y)
	y1 := s.y1
	for i, u := range r.u {
		f := r.f
		if i > 0 {
			f = r.stage
			if a := tab.a[i]; a != nil {
				copy(y1, r.y)
				combine(y1, 1, a, r.u)
			} else {
				for k, v := range r.u[i-1] {
					y1[k] += v
				}
			}
			r.derivs(r.t+tab.alpha[i]*h, y1, f)
		}
		g := h * tab.gammas[i]
		for k, v := range f {
			u[k] = v + g*r.dfdt[k]
		}
		if k := notFinite(u); k >= 0 {
			r.haveDfdt = false
			return false, r.refused(h, k)
		}
		combine(u, 1/h, tab.c[i], r.u)
		r.lu.solve(u)
	}
	for k, v := range r.u[rosenbrockStages-1] {
		y1[k] += v
		r.err[k] = v
	}
	if k := notFinite(y1); k >= 0 {
		return false, r.refused(h, k)
	}
	// The terms of the polynomial.
	delta := s.term(0)
	for k, v := range s.y0 {
		delta[k] = y1[k] - v
	}
	for l, row := range tab.dense {
		z := s.term(1 + l)
		clear(z)
		combine(z, 1, row, r.u)
	}
	return true, nil
}

func (r *Rosenbrock) estimate(float64) (size float64, worst int) { return norm(r.err, r.inv) }

func (r *Rosenbrock) reject(h, size float64, worst int) error {
	return r.errorTooLarge(h, size, safety, worst)
}

func (r *Rosenbrock) accept(h, size float64, cut bool) {
	r.lengthen(h, size, safety, cut, false)
	r.haveF, r.haveJac, r.jacHere, r.haveDfdt = false, false, false, false
}
