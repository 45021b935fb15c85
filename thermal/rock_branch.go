package thermal

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
	r.Set(x)
	r.convecting = r.now.onset > 0
	r.Set(x)
}

// Kinks implements [Interior].
func (r *rock) Kinks() int { return rockKinks }

// KinkName implements [Interior].
func (r *rock) KinkName(i int) string {
	return [rockKinks]string{"solidus", "liquidus", "conduction"}[i]
}

// Kink implements [Interior]: the enthalpy above the solidus or the liquidus
// over that of the solidus, or the logarithm of the convective flux over the
// conductive one, on the frozen phase. Exactly on a kink it has the sign of the
// frozen side, so that a start there is not mistaken for the far side.
func (r *rock) Kink(i int, _ float64, x []float64) float64 {
	switch i {
	case solidusKink:
		return sided(r.above(x[0], r.solidus), r.phase != solid)
	case liquidusKink:
		return sided(r.above(x[0], r.liquidus), r.phase == molten)
	}
	var s rockState
	r.evaluate(x[0], r.phase, r.convecting, &s)
	return sided(s.onset, r.convecting)
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
		{"solidus-crossed", crossing(r.solidus)},
		{"liquidus-crossed", crossing(r.liquidus)},
	}
}
