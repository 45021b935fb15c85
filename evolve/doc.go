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
// centre. The librations that a resolved integration would follow are carried
// beside the state, each by its action: a history knows how wide every angle
// librates, and whether that grows, though it follows none of them.
package evolve
