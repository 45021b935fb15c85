package thermal

import "math"

// The kinks of rock, in the order of their numbers.
const (
	solidusKink = iota
	liquidusKink
	conductionKink
	rockKinks
)

// Freeze implements [Interior].
func (r *rock) Freeze(_ float64, x []float64) {
	r.phase = r.phaseOf(x[0])
	r.convecting = r.onset(x[0]) > 0
	r.Set(x)
}

// Kinks implements [Interior].
func (r *rock) Kinks() int { return rockKinks }

// Kink implements [Interior]: the enthalpy above the solidus or the liquidus
// over that of the solidus, or the difference of convective and conductive flux
// over their sum, on the frozen phase. Exactly on a kink it has the sign of the
// frozen side, so that a start there is not mistaken for the far side.
func (r *rock) Kink(i int, _ float64, x []float64) float64 {
	switch i {
	case solidusKink:
		return sided(r.above(x[0], r.solidus), r.phase != solid)
	case liquidusKink:
		return sided(r.above(x[0], r.liquidus), r.phase == molten)
	}
	return sided(r.onset(x[0]), r.convecting)
}

// coincident is the difference, K, below which a body is as warm as its
// surface: it keeps the ratio of two vanishing fluxes finite.
const coincident = 1e-9

// onset compares the convective flux q at h with the conductive one c on the
// frozen phase, as (q − c)/(q + c).
func (r *rock) onset(h float64) float64 {
	var s rockState
	r.evaluate(h, r.phase, true, &s)
	c := r.conductance * max(math.Abs(s.T-r.surface), coincident)
	return (s.q - c) / (s.q + c)
}

// above is h over the enthalpy of temperature T, relative to the solidus.
func (r *rock) above(h, T float64) float64 {
	return (h - r.enthalpy.of(T)) / r.enthalpy.of(r.solidus)
}

func sided(value float64, up bool) float64 {
	const touch = 1e-300
	switch {
	case value != 0:
		return value
	case up:
		return touch
	}
	return -touch
}

// Cross implements [Interior].
func (r *rock) Cross(i int, up bool) {
	switch {
	case i == conductionKink:
		r.convecting = up
	case i == solidusKink && !up:
		r.phase = solid
	case i == liquidusKink && up:
		r.phase = molten
	default:
		r.phase = partlyMolten
	}
	r.evaluate(r.now.h, r.phase, r.convecting, &r.now)
}

// Events implements [Interior].
func (r *rock) Events() []EventFunc {
	crossing := func(T float64) func([]float64) float64 {
		return func(x []float64) float64 { return r.above(x[0], T) }
	}
	return []EventFunc{
		{EventSolidus, crossing(r.solidus)},
		{EventLiquidus, crossing(r.liquidus)},
	}
}
