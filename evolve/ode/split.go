package ode

// Split is a system
//
//	dy/dt = f(y) + g(t, y)
//
// of oscillators, blocks of components that f couples among themselves and
// moves fast about a centre where f = 0, and of a slow g. Components in no
// block have f = 0.
type Split interface {
	Dim() int
	// Oscillators lists the blocks as index ranges [from, to), apart from one
	// another and constant.
	Oscillators() [][2]int
	// Oscillate writes f of block i to dy; both slices are of the block alone.
	Oscillate(i int, y, dy []float64)
	// OscillateJacobian also writes ∂f/∂y, row-major, of the block.
	OscillateJacobian(i int, y, dy, jac []float64)
	// Hold takes (t, y), the middle of the steps that follow, as the place where
	// Drift may hold what is costly and changes only slowly: the state of
	// components outside the blocks, say.
	Hold(t float64, y []float64)
	// Drift writes g at y, with what is held, to dy and the integrands of
	// Quadratures, if the system has some, to q.
	Drift(y, dy, q []float64)
	// NumQuadratures returns the number of integrands, 0 for none.
	NumQuadratures() int
}
