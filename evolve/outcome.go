package evolve

import (
	"math"
	"sort"

	"tidekiln/scenarios"
)

// Outcomes of a body's thermal history, judged over the last half of it.
const (
	Steady      = "steady"
	Oscillating = "oscillating"
	Cooling     = "cooling"
	Runaway     = "runaway"
	Drifting    = "drifting"
	Disrupted   = "disrupted"
	Failed      = "failed"
)

// Outcomes of the orbits.
const (
	OrbitLocked    = "locked"
	OrbitFree      = "free"
	OrbitLeft      = scenarios.EventResonanceLeft
	OrbitDisrupted = Disrupted
)

// The thresholds of an outcome.
const (
	steadyImbalance = 0.01 // of heat made and lost
	steadyDrift     = 1.0  // K
	swingThreshold  = 5.0  // K
	fewestMaxima    = 3
	coolingShare    = 0.5  // of heat made by heat lost
	monotonic       = 1e-6 // K, the rise that still counts as none
)

const outcomeMeaning = "over the last half of the history: " +
	"disrupted: lost at the Roche limit or by crossing orbits; " +
	"runaway: passed the liquidus; " +
	"steady: heat made and lost differ by less than 1 % and the temperature moved less than 1 K; " +
	"oscillating: at least three maxima of the temperature with a swing over 5 K; " +
	"cooling: the temperature falls monotonically and heat made is under half of heat lost; " +
	"failed: the integration stopped; otherwise drifting"

// BodyOutcome is what became of one body.
type BodyOutcome struct {
	runID                  string
	Body                   string
	Outcome                string  // "" without a thermal state, unless lost
	Period, Swing          float64 // s and K; NaN if not oscillating
	Temperature, TidalHeat Extremes
	Eccentricity           Extremes
	MeanHeat, MeanLoss     float64 // W, over the last half; NaN without an interior
	Misfit                 float64
}

// judge returns the outcome of a body from its track between begin and end, s.
// radiogenic is its mean radiogenic heat over the last half, W.
func (t *track) judge(begin, end, radiogenic float64) BodyOutcome {
	o := BodyOutcome{
		Period: math.NaN(), Swing: math.NaN(), MeanHeat: math.NaN(), MeanLoss: math.NaN(), Misfit: math.NaN(),
		Temperature: t.kelvin, TidalHeat: t.power, Eccentricity: t.e,
	}
	if len(t.time) < 2 {
		return o
	}
	half := t.last(begin + (end-begin)/2)
	n := len(half.time) - 1
	if d := half.time[n] - half.time[0]; d > 0 {
		o.MeanHeat = (half.heat[n] - half.heat[0]) / d
		o.MeanLoss = (half.loss[n] - half.loss[0]) / d
	}
	if math.IsNaN(half.temperature[0]) {
		return o
	}
	var maxima []extremum
	var swings []float64
	turns := half.turns(swingThreshold)
	for i, e := range turns {
		if !e.maximum {
			continue
		}
		maxima = append(maxima, e)
		if i+1 < len(turns) {
			swings = append(swings, e.value-turns[i+1].value)
		}
	}
	molten, falling := false, true
	moved := noExtremes()
	for i, v := range half.temperature {
		moved.add(v)
		molten = molten || half.molten[i]
		falling = falling && (i == 0 || v <= half.temperature[i-1]+monotonic)
	}
	made := o.MeanHeat + radiogenic
	switch {
	case molten:
		o.Outcome = Runaway
	case math.Abs(made-o.MeanLoss) < steadyImbalance*math.Max(made, o.MeanLoss) && moved.Max-moved.Min < steadyDrift:
		o.Outcome = Steady
	case len(maxima) >= fewestMaxima:
		o.Outcome = Oscillating
		var gaps []float64
		for i := 1; i < len(maxima); i++ {
			gaps = append(gaps, maxima[i].time-maxima[i-1].time)
		}
		o.Period, o.Swing = median(gaps), median(swings)
	case falling && made < coolingShare*o.MeanLoss:
		o.Outcome = Cooling
	default:
		o.Outcome = Drifting
	}
	return o
}

// median returns the middle value, the mean of the two middle ones for an even
// number, NaN for none.
func median(v []float64) float64 {
	if len(v) == 0 {
		return math.NaN()
	}
	s := append([]float64(nil), v...)
	sort.Float64s(s)
	m := len(s) / 2
	if len(s)%2 == 1 {
		return s[m]
	}
	return (s[m-1] + s[m]) / 2
}
