package thermal

// meltLoss is how fast melt rises through the surface of a partly molten body:
// the volume of melt per area and time, m/s, at a melt fraction f, and its
// derivative to f. The heat it carries away is
//
//	q_m = ρ [L + c_p (T − T_surface)] u(f), W/m².
//
// The argument leaves 0…1 by as much as an integrator's step overshoots, and
// there the law continues smoothly.
type meltLoss interface {
	velocity(f float64) (u, du float64)
}

var meltLosses = registry[meltLoss]{
	{heatPipeLaw, newHeatPipe},
}

// MeltLosses holds the one law of heat loss by rising melt; its table names no
// law.
var MeltLosses = meltLosses.family("melt loss", "")
