// Package ode integrates stiff systems dy/dt = f(t, y) whose fast part is to be
// stepped over rather than followed: Radau IIA collocation of 3 or 5 stages
// (order 5 or 9), L-stable, with dense output, quadratures along the path, located
// kinks of the right-hand side and located events.
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
// and, for output between steps, Segment.Eval. A System may also implement
// Quadratures (integrals along the path, which do not take part in the Newton
// iteration) and Piecewise (a right-hand side that is smooth only between kinks).
//
// # Undamped fast oscillations
//
// A system with eigenvalues ±iω, h|ω| ≫ 1, is integrable with long steps only if
// the state lies on the slow manifold, where the oscillation is absent, and only
// if the tolerance does not demand digits of the variables that are small there.
// Two options provide for this. Fast and ProjectionStep remove the oscillation
// from the block of fast variables at the start and after every kink, by
// repeating
//
//	y ← y + h R (f − R f),   R = (1 − hJ)⁻¹.
//
// Odd and OddTime loosen the tolerance of the variables that multiply the fast
// frequency (momenta of the oscillation), whose error is of an index-2 problem,
// by max(1, OddTime/h) (Hairer & Wanner, Solving Ordinary Differential Equations
// II, 2nd ed. 1996, VII.4).
//
// Nothing here interpolates or differences f at the ends of steps: there it is
// the Newton error multiplied by ω. Output between steps comes from the
// collocation polynomial alone.
//
// # Following an oscillation about a moving centre
//
// A [Split] system says which part of f oscillates; [Splitting] follows that part
// by its exact linear flow about the centre, so that steps of a third of the
// shortest period are accurate while the oscillation is narrow, and takes the slow
// part in kicks.
//
// # Tolerances
//
// RTol and ATol bound the estimated error of one step in the root mean square
// over the components. ATol is, per component, the size below which its value
// does not matter. The estimate is of order h^(s+1) while the step is of order
// h^(2s), so the error reached is usually well below the tolerance; at
// RTol > 1e-4 five stages take steps too long for the Newton iteration to be
// trusted, and are refused.
//
// The time unit is the caller's. A Radau is not safe for concurrent use;
// different ones are independent, and equal inputs give equal bits.
package ode
