package ode

// RightHandSide is dy/dt = f(t, y).
type RightHandSide interface {
	// Dim returns the number of components, > 0 and constant.
	Dim() int
	// Derivs writes f(t, y) to dy. It may write NaN to refuse a state outside
	// the domain; the step is then shortened.
	Derivs(t float64, y, dy []float64)
}

// System is a right-hand side with its derivatives, as implicit methods need.
type System interface {
	RightHandSide
	// Jacobian writes f(t, y) to dy and ∂f_i/∂y_j to jac[i·Dim+j].
	Jacobian(t float64, y, dy, jac []float64)
}

// TimeDerivative is a System that knows ∂f/∂t at constant y, which Rosenbrock
// needs; without it two more values of f a step serve for a difference. A system
// that does not depend on t saves them by clearing dfdt.
type TimeDerivative interface {
	TimeDerivative(t float64, y, dfdt []float64)
}

// Quadratures is a right-hand side with integrals along its path, dq/dt = g(t, y):
// they are summed with the weights of the method and do not enter its error test.
type Quadratures interface {
	NumQuadratures() int
	// Integrands writes g(t, y) to q.
	Integrands(t float64, y, q []float64)
}

// Piecewise is a right-hand side that is smooth between kinks. While its
// branches are frozen, f is the smooth continuation of the chosen ones, also for
// states a little beyond a kink.
type Piecewise interface {
	// Freeze chooses the branches the state lies on. It is called by Start and
	// Restart.
	Freeze(t float64, y []float64)
	// Kinks returns the number of kinks, constant.
	Kinks() int
	// Kink returns a function that changes sign where kink i lies.
	Kink(i int, t float64, y []float64) float64
	// Cross chooses the branch valid where Kink(i) > 0 (up) or < 0, whatever
	// the sign at the present state and whichever was chosen before.
	Cross(i int, up bool)
}
