// Package scenarios reads and checks the description of one case: a TOML file
// whose every dimensional value is a string with its unit, "1790 km".
//
// Most callers want [Open], which takes a path or the name of a shipped
// scenario, and get a [Scenario] in SI units or [Errors], all that is wrong
// with the file at once, each problem with its line, its key and a hint.
// [Scenario.TOML] writes a scenario back with every default filled in,
// [Scenario.ID] is its fingerprint, [Keys] is the reference of every key the
// reader accepts.
//
// The keys of a law (a rheology, a heat-loss law, a tidal response) are not
// written here: the packages orbit and thermal declare them in the vocabulary
// of scenarios/key, and the reader follows those declarations.
package scenarios
