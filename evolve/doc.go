// Package evolve steps orbits and interiors of tidally heated bodies together
// and keeps the books: a checked scenario goes in, a [History] with tables,
// events, a ledger and an outcome comes out.
//
// Most callers want [Run]. [NewSystem] gives the coupled right-hand side
// itself, with its analytic Jacobian, for spectra and for other integrators;
// [Survey] says what a scenario means before any integration; [Write] and
// [Load] turn a history into a dataset and back.
//
// Two regimes integrate the same equations. The adiabatic one steps far over the
// librations of a resonance with an L-stable method and thereby keeps every chain
// on its slowly moving libration centre. The librations that it steps over are
// carried beside the state, each by its action: a history knows how wide every
// angle librates, and whether that grows, though it follows none of them. The
// resolved one follows every libration, at some ten steps a year, of chains that
// start locked or free, from elements: by a splitting into librations about their
// centre and drift, or by DOP853 where angles circulate. It tells when resonances
// are entered and left, by the arguments of the strongest members. An auto history
// is adiabatic where librations are narrow and resolved where they are not, or where
// a fold is near.
package evolve
