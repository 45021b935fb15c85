package scenarios

import (
	"math/big"

	"tidekiln/scenarios/key"
)

// Scenario is one checked case, in SI throughout, orbiters ordered outward.
type Scenario struct {
	Title    string
	Run      Run
	Central  Central
	Orbiters []Orbiter // by orbital period, innermost first
	Chains   []Chain
	Changes  []Change
	Observed []Observed
}

// Run says how long, how exactly and how often.
type Run struct {
	Span      float64 // s
	Start     float64 // age at t = 0, s
	Regime    string  // Adiabatic, Resolved or Auto
	Method    string  // Splitting or DOP853, "" for the choice by the chains; "" in the adiabatic regime
	Tolerance float64 // relative, per step
	Record    Record
	Seed      int64
	Judge     string // the body whose outcome is the run's; "" for the innermost with a thermal state
	MaxSteps  int64
	Stop      []Trigger // events that end the run
}

// Record is the output cadence: every EveryMyr (nil: no grid), and, if Change
// is positive, additional rows such that straight lines between rows reproduce
// every column to that relative bound.
type Record struct {
	EveryMyr *big.Rat // Myr, exact
	Change   float64
}

// Central is the planet or star.
type Central struct {
	Name   string
	Mass   float64 // kg
	Radius float64 // m, equatorial
	J2     float64
	Tide   key.Values // of orbit.CentralLaws; Law "" if it raises no tide
}

// Orbiter is a moon or planet. Exactly one of Period and SemimajorAxis is set
// for an orbiter outside a chain, for members of a free chain and for a locked
// chain's innermost member; both are zero for a locked chain's other members.
type Orbiter struct {
	Name          string
	Mass          float64    // kg
	Radius        float64    // m
	Period        float64    // s, mean orbital period 2π/(dλ/dt)
	SemimajorAxis float64    // m
	Eccentricity  float64    // start value; members of a locked chain: forced, so 0 here
	Pericentre    float64    // ϖ at the start, rad; members of a free chain only
	MeanLongitude float64    // λ at the start, rad; members of a free chain only
	Interior      key.Values // of thermal.Interiors; Law "" without one
}

// Chain is a set of neighbours, ordered outward, linked by first-order
// resonances: Ratios[r] = j for (j+1):j between Members[r] and Members[r+1].
type Chain struct {
	Name      string
	Members   []string
	Ratios    []int
	Free      bool    // starts from the elements of its members instead of the forced equilibrium
	Offset    float64 // (j+1) n_outer − j n_inner, common to a locked chain, rad/s
	Libration float64 // half-width of each libration at the start, in its largest angle, rad
}

// Change sets keys during the history, at a time or when an event happens.
type Change struct {
	At   float64  // s; used where When is nil
	When *Trigger // nil for a timed change
	Set  []Setting
}

// Trigger names an event, and the bodies it must concern ("" for any).
type Trigger struct {
	Event, Body, Other string
}

// Setting is one key path with its new value as TOML text.
type Setting struct {
	Path, Value string
}

// Observed is a measured value that pictures draw and outcomes compare with.
type Observed struct {
	Body, Column string
	Value, Error float64 // in the column's own unit
	At           float64 // s; negative: the end of the run
}
