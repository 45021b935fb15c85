// Package thermal holds the interior half of a tidally heated system: how a
// body answers a tide, given its present state, and how that state moves under
// the heat the tide leaves in it.
//
// Most callers want [NewInterior], which builds an [Interior] from the checked
// values of a scenario: the response K(ω) = −Im k₂(ω), the balance of heat and
// the Jacobians of both. The laws an interior is made of ([Rheologies],
// [Viscosities], [Convections], [MeltLosses]) declare their own keys, each in
// its own file; a new law is one file and one line in its registry.
//
// Everything is in SI units and the time factor is e^{+iωt}, so a passive body
// has Im J* ≤ 0 and K ≥ 0 for ω > 0. State variables are energies, whose
// balances are linear in the fluxes: an integrator that sums fluxes conserves
// them exactly. The package does not know orbits; it meets them in K and in
// the heat it is given.
package thermal
