package figure

import (
	"math"
	"strings"
)

// quantity is one column of a Series and the panel it belongs to.
type quantity struct {
	name   string // as in Observation.Quantity
	panel  int    // index into sheets
	dashed bool
	column func(Series) []float64
}

var quantities = []quantity{
	{"eccentricity", 0, false, func(s Series) []float64 { return s.Eccentricity }},
	{"tidal_heat", heatSheet, false, func(s Series) []float64 { return s.TidalHeatW }},
	{"surface_loss", heatSheet, true, func(s Series) []float64 { return s.SurfaceLossW }},
	{"temperature", 2, false, func(s Series) []float64 { return s.TemperatureK }},
	{"melt_fraction", meltSheet, true, func(s Series) []float64 { return s.MeltFraction }},
	{"semimajor_axis", axisSheet, false, func(s Series) []float64 { return s.SemimajorAxisKm }},
}

func quantityNames() string {
	names := make([]string, len(quantities))
	for i, q := range quantities {
		names[i] = q.name
	}
	return strings.Join(names, ", ")
}

// sheet is how one panel is drawn.
type sheet struct {
	label, unit string
	height      float64 // share of a full panel
	logFrom     float64 // log axis if largest/smallest positive value exceeds this
	decades     float64 // a log axis shows this many below the largest value
	least       float64 // smallest range a linear axis takes for a change
	flat        float64 // its end if all values are zero
}

// The melt fraction has a thin panel of its own and no second axis beside the
// temperature: with two bodies nobody could say which curve reads which axis.
// Heat varies as e², so its axis reaches down twice as many decades.
// A linear axis never magnifies what nobody would call a change: 0.1 K, 0.001
// of melt, 1e-6 % of an orbit.
var sheets = []sheet{
	{"eccentricity", "", 1, 8, 6, 1e-12, 0.01},
	{"heat", "W", 1, 0, 12, 0, 0},
	{"mantle temperature", "K", 1, math.Inf(1), 0, 0.1, 1},
	{"melt fraction", "", 0.62, math.Inf(1), 0, 1e-3, 0.1},
	{"change of semi-major axis", "%", 1, math.Inf(1), 0, 1e-6, 1},
}

// alwaysLog says that the panel's values are powers, to be compared by ratio.
func (s sheet) alwaysLog() bool { return s.logFrom == 0 }

// Panels with something of their own.
const (
	heatSheet = 1 // holds two quantities
	meltSheet = 3
	axisSheet = 4 // its values are relative to each body's start
)

// percentFrom gives (a/start - 1)·100 for every a.
func percentFrom(start float64, a []float64) []float64 {
	out := make([]float64, len(a))
	for i, v := range a {
		out[i] = (v/start - 1) * 100
	}
	return out
}

// firstValue is the first finite positive value of v, NaN if there is none.
func firstValue(v []float64) float64 {
	for _, x := range v {
		if finite(x) && x > 0 {
			return x
		}
	}
	return math.NaN()
}
