package ode

import "math"

// DOP853 integrates a right-hand side that is not stiff, or an oscillation that is
// to be followed, with the explicit method of order 8 of Hairer, Nørsett & Wanner,
// Solving Ordinary Differential Equations I, 2nd ed. 1993, II.10: twelve values of
// f a step, three more when its inside is asked for.
type DOP853 struct {
	engine
	tab *explicitPair
	k   [][]float64 // f at the stages
}

// NewDOP853 prepares an integration; Start must follow. The integrals and kinks
// of an rhs that implements Quadratures or Piecewise are taken care of. An error
// says which option does not make sense.
func NewDOP853(rhs RightHandSide, opt Options) (*DOP853, error) {
	tab := dop853()
	e, err := newEngine(MethodDOP853, rhs, opt, tab.form.terms, tab.form.s)
	if err != nil {
		return nil, err
	}
	d := &DOP853{engine: e, tab: tab, k: make([][]float64, dop853Extended)}
	d.scheme = d
	d.seg.finish, d.next.finish = d.interpolate, d.interpolate
	for i := range d.k {
		d.k[i] = make([]float64, d.n)
	}
	return d, nil
}

func (d *DOP853) begin() { d.control.order = 8 }

func (d *DOP853) forget() {}

func (d *DOP853) project() error { return nil }

func (d *DOP853) velocity() []float64 { return d.f }

func (d *DOP853) prepare() error {
	if d.haveF {
		return nil
	}
	d.derivs(d.t, d.y, d.f)
	return d.checkDerivs()
}

// stage computes k_i of the step s, and reports the component that is not finite
// or −1.
func (d *DOP853) stage(s *Segment, i int, y []float64) int {
	copy(y, s.y0)
	combine(y, s.h, d.tab.a[i], d.k)
	d.derivs(s.T0+d.tab.c[i]*s.h, y, d.k[i])
	return notFinite(d.k[i])
}

func (d *DOP853) attempt(h float64) (bool, error) {
	s := d.next
	s.begin(d.tab.form, d.t, h, d.y)
	copy(d.k[0], d.f)
	for i := 1; i < dop853Stages; i++ {
		if bad := d.stage(s, i, d.point); bad >= 0 {
			return false, d.refused(h, bad)
		}
	}
	if bad := d.stage(s, dop853Stages, s.y1); bad >= 0 {
		return false, d.refused(h, bad)
	}
	s.pending = true
	return true, nil
}

// estimate is e₅²/√(e₅² + e₃²/100), where e₅ and e₃ are the differences to the
// formulas of order 5 and 3: of order h⁸, where the error of the step is of order
// h⁹ (Hairer, Nørsett & Wanner I, II.10).
func (d *DOP853) estimate(h float64) (size float64, worst int) {
	clear(d.err)
	combine(d.err, h, d.tab.e3, d.k)
	e3, _ := norm(d.err, d.inv)
	clear(d.err)
	combine(d.err, h, d.tab.e5, d.k)
	e5, worst := norm(d.err, d.inv)
	if e5 == 0 {
		return 0, worst
	}
	return e5 * e5 / math.Sqrt(e5*e5+0.01*e3*e3), worst
}

func (d *DOP853) reject(h, size float64, worst int) error {
	return d.errorTooLarge(h, size, safety, worst)
}

func (d *DOP853) accept(h, size float64, cut bool) {
	d.lengthen(h, size, safety, cut, false)
	copy(d.f, d.k[dop853Stages]) // f at the end, unless a kink changes it
}

// interpolate makes the polynomial of the step whose stages are at hand, which is
// seg or next.
func (d *DOP853) interpolate(s *Segment) {
	for i := dop853Stages + 1; i < dop853Extended; i++ {
		d.stage(s, i, d.point)
	}
	first, last := d.k[0], d.k[dop853Stages]
	z0, z1, z2 := s.term(0), s.term(1), s.term(2)
	for i, y0 := range s.y0 {
		delta := s.y1[i] - y0
		z0[i] = delta
		z1[i] = s.h*first[i] - delta
		z2[i] = 2*delta - s.h*(first[i]+last[i])
	}
	for l, row := range d.tab.dense {
		z := s.term(3 + l)
		clear(z)
		combine(z, s.h, row, d.k)
	}
}
