package ode

// Segment is one accepted step, valid until the next call of Step, Start or
// Restart.
type Segment struct {
	T0, T1 float64

	tab  *tableau
	n    int
	h    float64
	y0   []float64
	y1   []float64 // the state at T1, after projection if the step ends on a kink
	z    []float64 // increments y − y0 at the stages, stage by stage
	q    []float64 // integrands at the stages, stage by stage
	dq   []float64 // their integrals over the step
	kink int
}

func newSegment(n, numQuadratures int) *Segment {
	return &Segment{
		n:  n,
		y0: make([]float64, n), y1: make([]float64, n), z: make([]float64, maxStages*n),
		q: make([]float64, maxStages*numQuadratures), dq: make([]float64, numQuadratures),
		kink: -1,
	}
}

// Eval writes to y the collocation polynomial at t in [T0, T1]; its error is of
// order h^(s+1). At T0 and T1 it is exactly the state. If the step ends on a kink
// the state at T1 is that after projection.
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
	var w [maxStages]float64
	s.tab.basis(theta, w[:])
	copy(y, s.y0)
	for j := range s.tab.s {
		for i, z := range s.stage(j) {
			y[i] += w[j] * z
		}
	}
}

func (s *Segment) stage(j int) []float64 { return s.z[j*s.n : (j+1)*s.n] }

// atStage writes the state at stage j, or the starting state for j = −1, to y and
// returns its θ.
func (s *Segment) atStage(j int, y []float64) float64 {
	if j < 0 {
		copy(y, s.y0)
		return 0
	}
	for i, z := range s.stage(j) {
		y[i] = s.y0[i] + z
	}
	return s.tab.c[j]
}

// Quadratures returns the integrals over [T0, T1], of order 2s − 1; the slice is
// not to be modified.
func (s *Segment) Quadratures() []float64 { return s.dq }

// QuadraturesTo writes to q the integrals over [T0, t], t in [T0, T1], of the
// polynomial through the integrands at the stages. Its error is of order h^(s+1)
// inside the step and that of Quadratures at T1.
func (s *Segment) QuadraturesTo(t float64, q []float64) {
	switch t {
	case s.T0:
		clear(q[:len(s.dq)])
		return
	case s.T1:
		copy(q, s.dq)
		return
	}
	var w [maxStages]float64
	s.tab.integrals((t-s.T0)/s.h, w[:s.tab.s])
	s.integrate(w[:s.tab.s], q)
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
