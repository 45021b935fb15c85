// Package ode integrates dy/dt = f(t, y) forward in time with error control, by one
// explicit and two implicit methods, with dense output, quadratures along the path,
// located kinks of the right-hand side and located events. It knows nothing of what
// the equations describe.
//
// Most callers need
//
//	r, err := ode.NewRadau(sys, ode.Options{RTol: 1e-8, ATol: atol})
//	err = r.Start(t0, y0)
//	for r.T() < t1 {
//		seg, err := r.Step(t1)
//		…
//	}
//
// and, for output between steps, Segment.Eval. A right-hand side may also implement
// Quadratures (integrals along the path, which do not take part in the error test)
// and Piecewise (smooth only between kinks), and a System TimeDerivative.
//
// # Which method
//
// All are Integrators, made by New where the choice is data.
//
//   - NewRadau: the one to begin with. Radau IIA collocation of 3 or 5 stages, order
//     5 or 9, L-stable: for stiff systems, whose fast part is to be stepped over
//     rather than followed, at any tolerance, and the cheapest below about 1e-5. It
//     iterates, and mends failures of the iteration by shorter steps.
//   - NewRosenbrock: Rodas5P, linearly implicit, order 5, L-stable: for stiff systems
//     at 1e-3…1e-6, where many runs of moderate accuracy are wanted. It never iterates
//     and so cannot fail to converge, but needs an exact Jacobian, at every step.
//   - NewDOP853: explicit, order 8: for systems that are not stiff and oscillations
//     that are to be followed, 1e-5…1e-13. It needs no Jacobian. With an eigenvalue
//     of size λ in the left half-plane its steps cannot exceed about 6/λ, however
//     smooth the path.
//
// If in doubt whether a system is stiff, run Radau and DOP853 and compare
// Stats.Derivs.
//
// # Tolerances
//
// RTol and ATol bound the estimated error of one step in the root mean square
// over the components. ATol is, per component, the size below which its value
// does not matter: it is what keeps a component that passes through 0, or is
// nothing but rounding, from deciding the step. Ask for 10 to 100 times less than
// the error wanted at the end: errors of steps add up, and grow where neighbouring
// paths part. Rerun with a tenth of the tolerance; what changes is the error. Never
// mend a state inside f, as by a value cut at 0: a state outside the domain is
// refused by writing NaN, and the step shortened.
//
// The estimate of Radau is of order h^(s+1) where the step is of order h^(2s), so
// that the error reached is usually well below the tolerance; that of Rosenbrock is
// of order h⁵ with a step of h⁶, that of DOP853 of order h⁸ with a step of h⁹, and
// the error is some tolerances. At RTol > 1e-4 five stages of Radau take steps too
// long for the Newton iteration to be trusted, and are refused.
//
// Between the ends of steps the polynomial is as good as these where the system is
// not stiff. The stiff components, which the end of a step of an implicit method
// finds to 1/λ of the rest, have there the error of the polynomial alone, and a
// quadrature that multiplies them by λ, as f itself does, is not to be trusted.
//
// # Undamped fast oscillations
//
// A system with eigenvalues ±iω, h|ω| ≫ 1, is integrable with long steps only if
// the state lies on the slow manifold, where the oscillation is absent, and only
// if the tolerance does not demand digits of the variables that are small there.
// Two options of the implicit methods provide for this. Fast and ProjectionStep
// remove the oscillation from the block of fast variables at the start and after
// every kink, by repeating
//
//	y ← y + h R (f − R f),   R = (1 − hJ)⁻¹.
//
// Odd and OddTime loosen the tolerance of the variables that multiply the fast
// frequency (momenta of the oscillation), whose error is of an index-2 problem,
// by max(1, OddTime/h) (Hairer & Wanner, Solving Ordinary Differential Equations
// II, 2nd ed. 1996, VII.4).
//
// Nothing here interpolates or differences f at the ends of steps of an implicit
// method: there it is the error of the step multiplied by ω. Output between steps
// comes from the stages alone.
//
// # Following an oscillation about a moving centre
//
// A [Split] system says which part of f oscillates; [Splitting] follows that part
// by its exact linear flow about the centre, so that steps of a third of the
// shortest period are accurate while the oscillation is narrow, and takes the slow
// part in kicks.
//
// # What it will not do
//
// It does not go backward, use more than one thread, exploit sparsity (matrices
// are dense, for up to some hundred components), solve differential-algebraic or
// delay equations, conserve energy or phase-space volume exactly, or tell whether
// the slow manifold it steps along is stable: an L-stable method damps what the
// system itself would let grow.
//
// The time unit is the caller's. An integrator is not safe for concurrent use;
// different ones are independent, and equal inputs give equal bits.
package ode
