package thermal

import (
	"fmt"

	"tidekiln/scenarios/key"
)

// Body is the size of the body an interior fills.
type Body struct {
	Mass   float64 // kg, > 0
	Radius float64 // m, > 0
}

// Interior is a body's thermal state and its tidal response. It holds a present
// state, so each history needs its own.
//
// Its formulas are smooth between kinks. Freeze chooses the smooth pieces a
// state lies on; from then on every formula is the continuation of those
// pieces, also beyond their ends, until Cross or Freeze chooses others. A state
// so far off that no continuation exists (T ≤ 0) gives NaN.
type Interior interface {
	// States lists the state variables; none for a fixed response.
	States() []StateVar
	// Set makes x the present state, which everything below refers to.
	Set(x []float64)

	// K returns −Im k₂ at the forcing frequency w, rad/s: odd, K(0) = 0.
	K(w float64) float64
	// Harmonics writes K at n, 2n, 3n, … into k, for n > 0.
	Harmonics(n float64, k []float64)
	// KDerivs also returns dK/dω, s, and writes the derivatives of K to the
	// state into dx.
	KDerivs(w float64, dx []float64) (k, dw float64)
	// Love returns k₂; its real part is NaN if the model knows only K.
	Love(w float64) complex128

	// Rates writes dx/dt at the time t, s, the body's age since the start,
	// under the tidal heat, W.
	Rates(t, heat float64, dx []float64)
	// RatesDerivs writes the derivatives of Rates to the state, row by row,
	// and to the heat.
	RatesDerivs(t, heat float64, dxdx, dxdheat []float64)
	// Balance returns the present fluxes. The change of Energy is the integral
	// of the tidal heat and RadiogenicHeat less SurfaceLoss, exactly.
	Balance(t float64) Balance

	// Freeze makes x the present state and chooses the smooth pieces it lies on.
	Freeze(t float64, x []float64)
	// Kinks counts the kinks. Kink i lies where Kink changes sign; Cross puts
	// the frozen pieces on its upper or lower side, whatever the state.
	Kinks() int
	Kink(i int, t float64, x []float64) float64
	Cross(i int, up bool)

	// Snapshot returns the present state for output.
	Snapshot() Snapshot
	// Events lists what may happen to the body.
	Events() []EventFunc
}

// StateVar describes one state variable.
type StateVar struct {
	Name  string
	Start float64 // SI
	Scale float64 // typical size, SI, for tolerances
}

// Balance are an interior's present fluxes, W, and its internal energy, J, from
// an arbitrary zero. All are 0 for a body that keeps no heat: what the tide
// leaves in it is lost at once.
type Balance struct {
	SurfaceLoss    float64 // all that leaves through the surface
	ConvectiveLoss float64 // of that, through the lid, by convection or conduction
	MeltLoss       float64 // of that, by rising melt
	RadiogenicHeat float64
	Energy         float64
}

// Value is a number that may not exist for a model; OK tells.
type Value struct {
	X  float64
	OK bool
}

// Snapshot is what an interior can tell of its state.
type Snapshot struct {
	Temperature  Value // K
	MeltFraction Value // 0 to 1
	Viscosity    Value // Pa s
	Rigidity     Value // Pa
}

// EventFunc is an event: it happens where Value changes sign.
type EventFunc struct {
	Name  string
	Value func(x []float64) float64
}

// Names of the events of interiors.
const (
	EventSolidus  = "solidus-crossed"  // the mantle begins to melt, or is frozen
	EventLiquidus = "liquidus-crossed" // the mantle is molten, or begins to freeze
)

// EventNames lists the events that some interior has.
func EventNames() []string { return []string{EventSolidus, EventLiquidus} }

var interiors = registry[func(Body) (Interior, error)]{
	{fixedLaw, newFixed},
	{rockLaw, newRock},
}

// Interiors are the interior models a scenario can name.
var Interiors = interiors.family("interior model", "model")

// NewInterior builds the interior the values chose, at its start state. The
// values are those of a checked scenario; mass and radius must be positive.
func NewInterior(v key.Values, b Body) (Interior, error) {
	if !(b.Mass > 0) || !(b.Radius > 0) {
		return nil, fmt.Errorf("interior %q: mass %g kg and radius %g m must both be positive", v.Law, b.Mass, b.Radius)
	}
	build, err := interiors.build("interior model", v)
	if err != nil {
		return nil, err
	}
	return build(b)
}
