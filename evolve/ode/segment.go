package ode

// Segment is one accepted step, valid until the next call of Step, Start or
// Restart. After a step of DOP853 its methods may call Derivs.
type Segment struct {
	T0, T1 float64

	form *form
	n    int
	h    float64
	y0   []float64
	y1   []float64 // the state at T1, after projection if the step ends on a kink
	z    []float64 // terms of the polynomial, one after another
	w    []float64 // scratch: their weights
	q    []float64 // integrands at the nodes, node by node
	dq   []float64 // their integrals over the step
	kink int

	pending bool // finish is to be called before z is used
	finish  func(*Segment)
}

func newSegment(n, terms, nodes, numQuadratures int) *Segment {
	return &Segment{
		n:  n,
		y0: make([]float64, n), y1: make([]float64, n), z: make([]float64, terms*n), w: make([]float64, terms),
		q: make([]float64, nodes*numQuadratures), dq: make([]float64, numQuadratures),
		kink: -1,
	}
}

// begin makes it a step of length h from (t, y).
func (s *Segment) begin(f *form, t, h float64, y []float64) {
	s.form, s.T0, s.h, s.kink = f, t, h, -1
	copy(s.y0, y)
}

// complete sees to it that z holds the polynomial.
func (s *Segment) complete() {
	if s.pending {
		s.pending = false
		s.finish(s)
	}
}

// Eval writes to y the polynomial at t in [T0, T1]; its error is of order h^(s+1)
// for Radau, h⁵ for Rosenbrock and h⁸ for DOP853. At T0 and T1 it is exactly the
// state. If the step ends on a kink the state at T1 is that after projection.
func (s *Segment) Eval(t float64, y []float64) {
	switch t {
	case s.T0:
		copy(y, s.y0)
	case s.T1:
		copy(y, s.y1)
	default:
		s.at((t-s.T0)/s.h, y)
	}
}

// at evaluates the polynomial at t₀ + θh.
func (s *Segment) at(theta float64, y []float64) {
	s.complete()
	s.form.weight(theta, s.w)
	s.sum(s.w, y)
}

func (s *Segment) sum(w, y []float64) {
	copy(y, s.y0)
	for j := range s.form.terms {
		if w := w[j]; w != 0 {
			for i, z := range s.term(j) {
				y[i] += w * z
			}
		}
	}
}

func (s *Segment) term(j int) []float64 { return s.z[j*s.n : (j+1)*s.n] }

// atNode writes the state at node j, or the starting state for j = −1, to y and
// returns its θ.
func (s *Segment) atNode(j int, y []float64) float64 {
	switch j {
	case -1:
		copy(y, s.y0)
		return 0
	case s.form.s - 1:
		copy(y, s.y1)
		return 1
	}
	s.complete()
	s.sum(s.form.atNode[j], y)
	return s.form.c[j]
}

// sample integrates g over the step.
func (s *Segment) sample(g Quadratures, scratch []float64) {
	m := len(s.dq)
	for j := range s.form.s {
		theta := s.atNode(j, scratch)
		g.Integrands(s.T0+theta*s.h, scratch, s.q[j*m:(j+1)*m])
	}
	s.integrate(s.form.total, s.dq)
}

// Quadratures returns the integrals over [T0, T1], of order 2s − 1 for Radau, 5
// for Rosenbrock and 8 for DOP853; the slice is not to be modified.
func (s *Segment) Quadratures() []float64 { return s.dq }

// QuadraturesTo writes to q the integrals over [T0, t], t in [T0, T1], of the
// polynomial through the integrands at the nodes. Inside the step its error is of
// the order of that of Eval, and at T1 it is that of Quadratures.
func (s *Segment) QuadraturesTo(t float64, q []float64) {
	switch t {
	case s.T0:
		clear(q[:len(s.dq)])
		return
	case s.T1:
		copy(q, s.dq)
		return
	}
	var w [maxNodes]float64
	s.form.integrals((t-s.T0)/s.h, w[:s.form.s])
	s.integrate(w[:s.form.s], q)
}

func (s *Segment) integrate(w, q []float64) {
	m := len(s.dq)
	clear(q[:m])
	for j, wj := range w {
		for i, g := range s.q[j*m : (j+1)*m] {
			q[i] += s.h * wj * g
		}
	}
}

// KinkCrossed returns the index of the kink on which the step ends, or −1.
func (s *Segment) KinkCrossed() int { return s.kink }
