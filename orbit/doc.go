// Package orbit holds the orbital half of a tidally heated system: orbiters of
// one central body as a Hamiltonian system, the first-order mean-motion
// resonances that link neighbours into chains, and the tides that move them.
//
// Most callers want [Lock], which starts a resonant [Chain] on its forced
// equilibrium, or [NewLone] for an orbiter in no resonance. Both give the flow
// of the Hamiltonian, its Jacobian and its energy in deviation form: what
// changes by parts in 10⁹ is stored as that part, so that differences of mean
// motions keep their digits over gigayears. [SynchronousTide] and [ModeSum]
// turn a body's response K(ω) = −Im k₂(ω), the [Response] seam, into changes
// of the orbit; an interior satisfies Response without importing this package.
//
// Everything is in SI units, angles in radians. Orbits are coplanar. Terms of
// the disturbing function beyond first order in eccentricity, and the secular
// terms between orbiters, are left out.
package orbit
