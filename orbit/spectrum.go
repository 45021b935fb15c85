package orbit

import (
	"errors"
	"math"
	"math/cmplx"
	"sort"

	"gonum.org/v1/gonum/mat"
)

// Mode is one libration of a chain: a complex pair of eigenvalues of the
// Jacobian of its flow.
type Mode struct {
	Frequency float64 // rad/s, the imaginary part
	Growth    float64 // 1/s, the real part; negative is damped
}

// Period returns 2π/Frequency, s.
func (m Mode) Period() float64 { return 2 * math.Pi / m.Frequency }

// Spectrum returns the 2N − 2 libration modes of a row-major dim × dim
// Jacobian whose chain block leads, fastest first. The remaining eigenvalues
// are slow: two for the invariants the fast flow conserves, more for whatever
// else the matrix holds (an interior). An unstable centre has fewer
// oscillating pairs than 2N − 2 and is an error naming the largest real rate.
func (c *Chain) Spectrum(jac []float64, dim int) ([]Mode, error) {
	values, err := eigenvalues(jac, dim)
	if err != nil {
		return nil, err
	}
	modes := 2*len(c.members) - 2
	fast := values[:2*modes]
	var found []Mode
	for _, v := range fast {
		if imag(v) > 0 {
			found = append(found, Mode{Frequency: imag(v), Growth: real(v)})
		}
	}
	if len(found) != modes {
		return nil, ErrUnstable
	}
	sort.Slice(found, func(i, j int) bool { return found[i].Frequency > found[j].Frequency })
	return found, nil
}

// ErrUnstable reports a chain whose fast eigenvalues do not all oscillate.
var ErrUnstable = errors.New("the chain sits on a centre that is not a libration centre: a fast eigenvalue is real")

// eigenvalues returns them by falling modulus.
func eigenvalues(jac []float64, dim int) ([]complex128, error) {
	var eig mat.Eigen
	if !eig.Factorize(mat.NewDense(dim, dim, append([]float64(nil), jac...)), mat.EigenNone) {
		return nil, errors.New("the eigenvalues of the chain's Jacobian did not converge")
	}
	v := eig.Values(nil)
	sort.SliceStable(v, func(i, j int) bool { return cmplx.Abs(v[i]) > cmplx.Abs(v[j]) })
	return v, nil
}

// stable reports whether every fast eigenvalue of the tide-free flow at y is
// imaginary. A Hamiltonian spectrum is symmetric, so an unstable one has a
// real part of the size of a libration frequency, while that of a stable one
// is the eigenvalue routine's rounding, 1e-15 of the fastest; 1e-6 of the mode
// itself separates them by orders of magnitude either way.
func (c *Chain) stable(y []float64) (bool, error) {
	dim := c.Dim()
	dy, jac := make([]float64, dim), make([]float64, dim*dim)
	w := c.NewRates()
	c.Flow(y, dy, w)
	c.Jacobian(y, w, jac, dim)
	values, err := eigenvalues(jac, dim)
	if err != nil {
		return false, err
	}
	for _, v := range values[:4*len(c.members)-4] {
		if math.Abs(real(v)) > 1e-6*math.Abs(imag(v)) {
			return false, nil
		}
	}
	return true, nil
}

// Fastest returns the largest modulus, rad/s, of an eigenvalue of the tide-free
// flow at y: the frequency of the fastest libration, or of an angle that
// circulates faster.
func (c *Chain) Fastest(y []float64) (float64, error) {
	dim := c.Dim()
	jac, w := make([]float64, dim*dim), c.NewRates()
	c.Flow(y, make([]float64, dim), w)
	c.Jacobian(y, w, jac, dim)
	values, err := eigenvalues(jac, dim)
	if err != nil {
		return 0, err
	}
	fastest := cmplx.Abs(values[0])
	for _, offset := range w.Offset {
		fastest = math.Max(fastest, math.Abs(offset))
	}
	return fastest, nil
}
