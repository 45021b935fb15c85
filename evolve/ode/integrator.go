package ode

import "fmt"

// Integrator takes a system forward in time, one accepted step after another.
type Integrator interface {
	// Start sets the state, chooses the branches of a Piecewise system there
	// and, if Options.Fast is given, projects the state onto the slow manifold.
	// The y given is not kept.
	Start(t float64, y []float64) error
	// Restart continues from another state, after an event or an edit: the same
	// as Start, and Stats go on counting.
	Restart(t float64, y []float64) error
	// Step takes one step forward that ends at tEnd at the latest, on it exactly
	// if the step reaches so far, or on the first kink met. The error is a
	// *StopError if the integration cannot go on; the state then stays as it was.
	Step(tEnd float64) (*Segment, error)
	// T returns the time reached.
	T() float64
	// State returns the state at T; it is not to be modified.
	State() []float64
	// Stats returns the work done so far.
	Stats() Stats
}

var (
	_ Integrator = (*Radau)(nil)
	_ Integrator = (*Rosenbrock)(nil)
	_ Integrator = (*DOP853)(nil)
)

// Method names an integrator where the choice is data.
type Method int

const (
	MethodRadau      Method = iota // NewRadau
	MethodRosenbrock               // NewRosenbrock
	MethodDOP853                   // NewDOP853
)

var methodNames = [...]string{MethodRadau: "Radau", MethodRosenbrock: "Rosenbrock", MethodDOP853: "DOP853"}

func (m Method) String() string {
	if m < 0 || int(m) >= len(methodNames) {
		return fmt.Sprintf("Method(%d)", int(m))
	}
	return methodNames[m]
}

// New prepares an integration by method m; Start must follow.
func New(m Method, sys System, opt Options) (Integrator, error) {
	var in Integrator
	var err error
	// A nil pointer must not hide in the interface.
	switch m {
	case MethodRadau:
		in, err = NewRadau(sys, opt)
	case MethodRosenbrock:
		in, err = NewRosenbrock(sys, opt)
	case MethodDOP853:
		in, err = NewDOP853(sys, opt)
	default:
		err = fmt.Errorf("ode: no %v; choose MethodRadau, MethodRosenbrock or MethodDOP853", m)
	}
	if err != nil {
		return nil, err
	}
	return in, nil
}

// Stats counts the work since the integrator was made.
type Stats struct {
	Steps          int // accepted
	Rejected       int // by the error test
	NewtonFailures int // attempts without stages: Newton's iteration did not converge, f refused a state, or the matrix had no inverse
	Derivs         int
	Jacobians      int
	Decompositions int // Radau: of one real and (s − 1)/2 complex matrices; Rosenbrock: of one real matrix
	Projections    int
	KinksCrossed   int
}
