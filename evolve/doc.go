// Package evolve steps orbits and interiors of tidally heated bodies together
// and keeps the books: a checked scenario goes in, a [History] with tables,
// events, a ledger and an outcome comes out.
//
// Most callers want [Run]. [NewSystem] gives the coupled right-hand side
// itself, with its analytic Jacobian, for spectra and for other integrators;
// [Survey] says what a scenario means before any integration; [Write] and
// [Load] turn a history into a dataset and back.
//
// The regime is adiabatic: an L-stable method steps far over the librations of
// a resonance and thereby keeps every chain on its slowly moving libration
// centre. It damps a libration that a resolved integration would keep, so a
// history says nothing of how wide an angle librates.
package evolve
