package ode

import (
	"math"
	"math/cmplx"

	"gonum.org/v1/gonum/mat"
)

// oscillation advances one block of a [Split] by its f and a constant drift c: with
// J the Jacobian at a centre y_c and x = y − y_c,
//
//	dx/dt = J x + c + r(x),   r(x) = f(y_c + x) − J x = O(x²) about a centre with f = 0,
//
// the linear part by its exponential, exactly, so that a state which drifts along
// without oscillating goes on to do so, and the remainder by explicit
// midpoint steps, composed by the coefficients of ABA(8,6,4). The error of the
// midpoint is of order h² in three powers of r, that of the composition of lower
// powers only at higher order in h.
type oscillation struct {
	sys     Split
	index   int
	from, m int
	centre  []float64
	drift   []float64
	jac     []float64
	scale   []float64 // of the components, by balance
	radius  float64   // largest modulus of an eigenvalue of J
	evals   int       // of f

	whole, half propagator

	lu               *lu[float64]
	shifted          []float64
	f, x, y, k, jx   []float64 // scratch
	before           []float64
	inside, one, two []float64 // scratch of who advances
}

// propagator holds exp(a_i h J), row-major, and what c adds meanwhile.
type propagator struct {
	h   float64
	e   [len(abaA)][]float64
	add [len(abaA)][]float64
}

func newOscillation(sys Split, index int) *oscillation {
	r := sys.Oscillators()[index]
	m := r[1] - r[0]
	vector := func() []float64 { return make([]float64, m) }
	return &oscillation{
		sys: sys, index: index, from: r[0], m: m, centre: vector(), drift: vector(), scale: vector(), jac: make([]float64, m*m),
		lu: newRealLU(m), shifted: make([]float64, m*m),
		f: vector(), x: vector(), y: vector(), k: vector(), jx: vector(), before: vector(),
		inside: vector(), one: vector(), two: vector(),
	}
}

// settleTimes are the T of the search for a centre, over the fastest frequency.
// Off the centre the eigenvalues of the slow variables are not zero but of the
// order of the displacement: a long T would take them for an oscillation and
// wander off, a short one leaves some of the slowest oscillation.
var settleTimes = [...]float64{20, 50, 200, 1e3, 1e4, 1e4}

// settle looks for the centre about which the state y of the block oscillates:
// the point with f = 0 and the same slow variables, by
//
//	y ← y + T R (f − R f),   R = (1 − T J)⁻¹,   T J ≫ 1,
//
// as the projection onto a slow manifold does. Where that leads to no smaller f,
// weighed by inv, the state itself serves as the centre: the remainder then
// contains f(y), and the step is shorter for it.
func (o *oscillation) settle(y, inv []float64) error {
	copy(o.centre, y)
	if err := o.linearise(); err != nil {
		return err
	}
	if err := o.frequency(); err != nil {
		return err
	}
	first, _ := norm(o.f, inv)
	best := first
	for _, t := range settleTimes {
		t /= o.radius
		for i, v := range o.jac {
			o.shifted[i] = t * v
		}
		if !shiftReal(o.lu, 1, o.shifted) {
			break
		}
		copy(o.x, o.f)
		o.lu.solve(o.x)
		for i, v := range o.f {
			o.x[i] = v - o.x[i]
		}
		o.lu.solve(o.x)
		copy(o.before, o.centre)
		for i, v := range o.x {
			o.centre[i] += t * v
		}
		err := o.linearise()
		size, _ := norm(o.f, inv)
		if err != nil || !(size < best) {
			copy(o.centre, o.before)
			break
		}
		best = size
	}
	if !(best < 0.5*first) {
		copy(o.centre, y)
	}
	if err := o.linearise(); err != nil {
		return err
	}
	return o.frequency()
}

// linearise computes f and J at the centre.
func (o *oscillation) linearise() error {
	o.sys.OscillateJacobian(o.index, o.centre, o.f, o.jac)
	for _, v := range o.jac {
		if math.IsNaN(v) || math.IsInf(v, 0) {
			return &StopError{Reason: NotFinite, Component: o.from, Detail: "Jacobian at the centre of an oscillation"}
		}
	}
	return nil
}

// frequency computes the spectral radius of J.
func (o *oscillation) frequency() error {
	var eig mat.Eigen
	if !eig.Factorize(mat.NewDense(o.m, o.m, o.jac), mat.EigenNone) {
		return &StopError{Reason: NotFinite, Component: o.from, Detail: "eigenvalues at the centre of an oscillation"}
	}
	balance(o.jac, o.scale)
	o.radius = 0
	for _, v := range eig.Values(nil) {
		o.radius = math.Max(o.radius, cmplx.Abs(v))
	}
	return nil
}

// prepare computes the exponentials of p for steps h.
func (o *oscillation) prepare(p *propagator, h float64) {
	p.h = h
	m := o.m
	// The last column of the exponential of (J c; 0 0) is what c adds.
	scaled := mat.NewDense(m+1, m+1, nil)
	var exp mat.Dense
	for i, a := range abaA {
		for r := range m {
			for k := range m {
				scaled.Set(r, k, a*h*o.jac[r*m+k]*o.scale[k]/o.scale[r])
			}
			scaled.Set(r, m, a*h*o.drift[r]/o.scale[r])
		}
		exp.Exp(scaled)
		p.e[i], p.add[i] = p.e[i][:0], p.add[i][:0]
		for r := range m {
			row := exp.RawRowView(r)
			for k, v := range row[:m] {
				p.e[i] = append(p.e[i], v*o.scale[r]/o.scale[k])
			}
			p.add[i] = append(p.add[i], row[m]*o.scale[r])
		}
	}
}

// advance takes the block's state y over a step of p.
func (o *oscillation) advance(p *propagator, y []float64) {
	for i, c := range o.centre {
		o.x[i] = y[i] - c
	}
	for s := range abaStages {
		i := abaMirror(s, abaStages+1)
		multiply(p.e[i], o.x, o.y)
		for k, v := range p.add[i] {
			o.y[k] += v
		}
		o.x, o.y = o.y, o.x
		o.kick(abaB[abaMirror(s, abaStages)] * p.h)
	}
	multiply(p.e[0], o.x, o.y)
	for i, c := range o.centre {
		y[i] = c + (o.y[i] + p.add[0][i])
	}
}

// advanceBy is advance over any length, its exponentials by their series: for
// places within a step.
func (o *oscillation) advanceBy(h float64, y []float64) {
	for i, c := range o.centre {
		o.x[i] = y[i] - c
	}
	for s := range abaStages {
		o.exponential(abaA[abaMirror(s, abaStages+1)] * h)
		o.kick(abaB[abaMirror(s, abaStages)] * h)
	}
	o.exponential(abaA[0] * h)
	for i, c := range o.centre {
		y[i] = c + o.x[i]
	}
}

// kick moves x by the remainder over τ.
func (o *oscillation) kick(tau float64) {
	o.remainder(o.x)
	for i, v := range o.k {
		o.y[i] = o.x[i] + 0.5*tau*v
	}
	o.remainder(o.y)
	for i, v := range o.k {
		o.x[i] += tau * v
	}
}

// remainder computes r(x) in k.
func (o *oscillation) remainder(x []float64) {
	o.evals++
	multiply(o.jac, x, o.jx)
	for i, c := range o.centre {
		o.f[i] = c + x[i]
	}
	o.sys.Oscillate(o.index, o.f, o.k)
	for i, v := range o.jx {
		o.k[i] -= v
	}
}

// exponential takes x along dx/dt = J x + c over τ by the series, whose terms fall
// once their number exceeds τ times the spectral radius, of the order of 1.
func (o *oscillation) exponential(tau float64) {
	copy(o.y, o.x)
	for n := 1.0; n < 200; n++ {
		multiply(o.jac, o.y, o.jx)
		small := true
		for i, v := range o.jx {
			if n == 1 {
				v += o.drift[i]
			}
			v *= tau / n
			o.y[i] = v
			o.x[i] += v
			small = small && math.Abs(v) <= 0x1p-60*math.Abs(o.x[i])
		}
		if small {
			return
		}
	}
}

// multiply writes a·x to y, a row-major and square.
func multiply(a, x, y []float64) {
	n := len(x)
	for i := range y {
		row := a[i*n:][:n]
		var s0, s1 float64
		j := 0
		for ; j+1 < n; j += 2 {
			s0 += row[j] * x[j]
			s1 += row[j+1] * x[j+1]
		}
		if j < n {
			s0 += row[j] * x[j]
		}
		y[i] = s0 + s1
	}
}
