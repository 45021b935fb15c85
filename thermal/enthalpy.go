package thermal

// phase is one of the three smooth pieces of T(h).
type phase int

const (
	solid phase = iota
	partlyMolten
	molten
)

// enthalpy is the caloric law of a material that melts over an interval,
//
//	h(T) = c_p T + L f(T), f = clip((T − T_s)/(T_l − T_s), 0, 1), J/kg,
//
// with c_p > 0, L ≥ 0, 0 < T_s < T_l. It is piecewise linear, so T(h) is exact.
type enthalpy struct {
	heatCapacity float64 // J/kg/K
	latentHeat   float64 // J/kg
	solidus      float64 // K
	liquidus     float64 // K
}

// melt returns f before clipping.
func (e enthalpy) melt(T float64) float64 { return (T - e.solidus) / (e.liquidus - e.solidus) }

// of returns h(T).
func (e enthalpy) of(T float64) float64 {
	return e.heatCapacity*T + e.latentHeat*min(max(e.melt(T), 0), 1)
}

// phaseOf returns the piece on which h lies; an end belongs to the piece above.
func (e enthalpy) phaseOf(h float64) phase {
	switch {
	case h >= e.of(e.liquidus):
		return molten
	case h >= e.of(e.solidus):
		return partlyMolten
	}
	return solid
}

// invert returns temperature and melt fraction at h, and their derivatives to
// h, on the straight line of the given phase.
func (e enthalpy) invert(h float64, p phase) (T, f, dT, df float64) {
	switch p {
	case partlyMolten:
		width := e.liquidus - e.solidus
		dT = 1 / (e.heatCapacity + e.latentHeat/width)
		T = e.solidus + (h-e.heatCapacity*e.solidus)*dT
		return T, e.melt(T), dT, dT / width
	case molten:
		return (h - e.latentHeat) / e.heatCapacity, 1, 1 / e.heatCapacity, 0
	}
	return h / e.heatCapacity, 0, 1 / e.heatCapacity, 0
}
