package orbit

import (
	"errors"
	"math"
	"math/cmplx"
	"sort"

	"gonum.org/v1/gonum/mat"
)

// Eigenmode is one libration of a chain at a state: a pair λ, λ̄ of eigenvalues
// of the Jacobian J with the right and left eigenvectors of λ,
//
//	J v = λ v,  w J = λ w,  w·v = 1 (the plain product, no conjugate),
//
// v scaled to an action of ±1 J s (see [Librations]). The oscillation of action
// I is δy = √I Re(v e^{iθ}), whatever the phase of v.
type Eigenmode struct {
	Mode
	Right, Left []complex128
}

// value returns λ, 1/s.
func (m *Eigenmode) value() complex128 { return complex(m.Growth, m.Frequency) }

// Librations are all 2N − 2 eigenmodes of a chain at one state. Each mode keeps
// its place in Modes when they are tracked to another state.
type Librations struct {
	Modes []Eigenmode
	chain *Chain
	lu    *shifted
	steep float64 // greatest |Re λ|/Im λ
}

// NewLibrations makes room for the modes of the chain.
func (c *Chain) NewLibrations() *Librations {
	dim := c.Dim()
	l := &Librations{chain: c, Modes: make([]Eigenmode, 2*len(c.members)-2), lu: newShifted(dim), steep: steepest}
	for i := range l.Modes {
		l.Modes[i].Right, l.Modes[i].Left = make([]complex128, dim), make([]complex128, dim)
	}
	return l
}

// steepest is the greatest |Re λ| of a libration, in units of Im λ. Tides act
// over thousands of periods and more; a real part beyond it means that two
// librations have collided, the centre is unstable, and their action is 0.
const steepest = 0.01

// Find computes the modes anew, fastest first, from the Jacobian of the chain,
// tides included: the leading Dim × Dim block of jac, whose rows are stride
// apart. The state must be on the slow manifold: off it by the drift of Im z and
// of the angles, 1e-6, weak damping rates are wrong by a factor of two. A fast
// pair of eigenvalues that does not oscillate is [ErrUnstable].
func (l *Librations) Find(jac []float64, stride int) error {
	n := l.chain.Dim()
	m := mat.NewDense(n, n, nil)
	for i := 0; i < n; i++ {
		m.SetRow(i, jac[i*stride:i*stride+n])
	}
	var eig mat.Eigen
	if !eig.Factorize(m, mat.EigenBoth) {
		return errors.New("the eigenvectors of the chain's Jacobian did not converge")
	}
	values := eig.Values(nil)
	var right, left mat.CDense
	eig.VectorsTo(&right)
	eig.LeftVectorsTo(&left)
	order := make([]int, n)
	for i := range order {
		order[i] = i
	}
	sort.SliceStable(order, func(a, b int) bool { return cmplx.Abs(values[order[a]]) > cmplx.Abs(values[order[b]]) })
	found := 0
	for _, j := range order[:2*len(l.Modes)] {
		if !(imag(values[j]) > 0) || found == len(l.Modes) {
			continue
		}
		mode := &l.Modes[found]
		found++
		for i := 0; i < n; i++ {
			// The library's left vectors u have u^H J = λ u^H.
			mode.Right[i], mode.Left[i] = right.At(i, j), cmplx.Conj(left.At(i, j))
		}
		// Its balancing costs the small real parts digits that this restores.
		if !l.refine(mode, jac, stride) {
			return ErrUnstable
		}
	}
	if found != len(l.Modes) {
		return ErrUnstable
	}
	sort.SliceStable(l.Modes, func(a, b int) bool { return l.Modes[a].Frequency > l.Modes[b].Frequency })
	return nil
}

// FindBeside is Find at a state that librates by degrees, where the real parts
// mean nothing and are let pass up to half the frequency: for [Librations.Filter].
func (l *Librations) FindBeside(jac []float64, stride int) error {
	l.steep = 0.5
	defer func() { l.steep = steepest }()
	return l.Find(jac, stride)
}

// Track computes the modes at another state from those of from, each in its
// place. Unless they have changed beyond recognition each is found by
// refinement, without allocation; else all are computed anew and each is given
// the place of the mode it resembles most.
func (l *Librations) Track(from *Librations, jac []float64, stride int) error {
	ok := true
	for i := range l.Modes {
		a, b := &from.Modes[i], &l.Modes[i]
		copy(b.Right, a.Right)
		copy(b.Left, a.Left)
		ok = ok && l.refine(b, jac, stride)
	}
	if ok && l.distinct() {
		return nil
	}
	if err := l.Find(jac, stride); err != nil {
		return err
	}
	for i := range l.Modes {
		best, most := i, -1.0
		for j := i; j < len(l.Modes); j++ {
			if _, o := Transport(&from.Modes[i], &l.Modes[j]); o > most {
				best, most = j, o
			}
		}
		l.Modes[i], l.Modes[best] = l.Modes[best], l.Modes[i]
	}
	return nil
}

// distinct reports whether no two modes are the same: vectors of different
// modes are orthogonal to rounding, those of one have a product of 1.
func (l *Librations) distinct() bool {
	for i := range l.Modes {
		for j := range l.Modes[:i] {
			if _, o := Transport(&l.Modes[i], &l.Modes[j]); o > 0.25 {
				return false
			}
		}
	}
	return true
}

// Transport compares a mode a at one state with the same mode b at another and
// returns what the drift of the centre between them does to its action, and how
// alike they are. The action I follows
//
//	d ln √I/dt = Re λ − Re(w·dv/dt)
//
// with v scaled to unit action. (With another scale of v the same law holds for
// another measure of the amplitude; the action's is the one that undisturbed
// migration keeps constant.) change is the second term, integrated from a to b:
// ½ ln|w_b·v_a| − ½ ln|w_a·v_b|, in which all scales drop out but that of the
// actions; its error is of third order in the change of the vectors. likeness is
// |w_a·v_b||w_b·v_a|: 1 for the same mode, cos² of the angle by which two modes
// have mixed, 0 for different modes.
func Transport(a, b *Eigenmode) (change, likeness float64) {
	p, q := abs(product(a.Left, b.Right)), abs(product(b.Left, a.Right))
	return 0.5 * (math.Log(q) - math.Log(p)), p * q
}

// product returns Σ a_i b_i.
func product(a, b []complex128) complex128 {
	sum := complex128(0)
	for i, x := range a {
		sum += x * b[i]
	}
	return sum
}

// abs returns |z| of numbers far from overflow.
func abs(z complex128) float64 { return math.Sqrt(real(z)*real(z) + imag(z)*imag(z)) }
