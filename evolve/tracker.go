package evolve

import (
	"math"
	"slices"
)

// Extremes are the least and greatest value of a history, NaN if it never had
// one.
type Extremes struct{ Min, Max float64 }

func (x *Extremes) add(v float64) {
	if math.IsNaN(v) {
		return
	}
	if !(x.Min <= v) {
		x.Min = v
	}
	if !(x.Max >= v) {
		x.Max = v
	}
}

func noExtremes() Extremes { return Extremes{math.NaN(), math.NaN()} }

// track is what a history's outcome is judged from: one body at the points
// between and at the accepted steps.
type track struct {
	time        []float64 // s
	temperature []float64 // K; NaN without a thermal state
	heat, loss  []float64 // since the start, J
	molten      []bool    // entirely
	e, power    Extremes
	kelvin      Extremes
}

// tracker follows every body.
type tracker struct {
	bodies []track
	y, q   []float64
}

func newTracker(p *System) *tracker {
	t := &tracker{bodies: make([]track, len(p.bodies)), y: make([]float64, p.dim), q: make([]float64, p.NumQuadratures())}
	for i := range t.bodies {
		t.bodies[i].e, t.bodies[i].power, t.bodies[i].kelvin = noExtremes(), noExtremes(), noExtremes()
	}
	return t
}

// pointsPerStep is how often a step is looked at: a step's polynomial has at
// most a few turning points.
const pointsPerStep = 4

// point adds the state y at time t with the quadratures up to there; y must be
// the state of the System's last evaluation.
func (t *tracker) point(p *System, time float64, y, sums []float64) {
	for i := range p.bodies {
		b, o := &p.bodies[i], &t.bodies[i]
		_, e := p.shape(i, y)
		o.e.add(e)
		if b.interior == nil {
			continue
		}
		o.power.add(b.heat)
		s := b.interior.Snapshot()
		kelvin := optional(s.Temperature)
		o.kelvin.add(kelvin)
		o.time = append(o.time, time)
		o.temperature = append(o.temperature, kelvin)
		o.heat = append(o.heat, sums[perBody*i+heatOf])
		o.loss = append(o.loss, sums[perBody*i+lossOf])
		o.molten = append(o.molten, s.MeltFraction.OK && s.MeltFraction.X >= 1)
	}
}

// shapes adds the eccentricities at the state y.
func (t *tracker) shapes(p *System, y []float64) {
	for i := range t.bodies {
		_, e := p.shape(i, y)
		t.bodies[i].e.add(e)
	}
}

// last returns the part of the track over [from, ∞), at least two points of it.
func (t *track) last(from float64) track {
	i, _ := slices.BinarySearch(t.time, from)
	i = max(0, min(i, len(t.time)-2))
	return track{
		time: t.time[i:], temperature: t.temperature[i:], heat: t.heat[i:], loss: t.loss[i:], molten: t.molten[i:],
	}
}

// extremum is a turning point of the temperature.
type extremum struct {
	time, value float64
	maximum     bool
}

// turns returns the alternating turning points between which the temperature
// swings by at least the threshold, K, each refined by a parabola through its
// neighbours. The ends of the track are none.
func (t *track) turns(threshold float64) []extremum {
	var found []extremum
	if len(t.time) < 3 {
		return nil
	}
	low, high := 0, 0 // candidates since the last turning point
	direction := 0
	for i, v := range t.temperature {
		if v > t.temperature[high] {
			high = i
		}
		if v < t.temperature[low] {
			low = i
		}
		switch {
		case direction >= 0 && t.temperature[high]-v >= threshold:
			if high > 0 {
				found = append(found, t.refine(high, true))
			}
			direction, low, high = -1, i, i
		case direction <= 0 && v-t.temperature[low] >= threshold:
			if low > 0 {
				found = append(found, t.refine(low, false))
			}
			direction, low, high = 1, i, i
		}
	}
	return found
}

func (t *track) refine(i int, maximum bool) extremum {
	e := extremum{t.time[i], t.temperature[i], maximum}
	if i == 0 || i == len(t.time)-1 {
		return e
	}
	t0, t1, t2 := t.time[i-1], t.time[i], t.time[i+1]
	d1 := (t.temperature[i] - t.temperature[i-1]) / (t1 - t0)
	d2 := (t.temperature[i+1] - t.temperature[i]) / (t2 - t1)
	curve := (d2 - d1) / (t2 - t0)
	if curve == 0 || math.IsNaN(curve) || math.IsInf(curve, 0) {
		return e
	}
	slope := d1 + curve*(t1-t0) // at t1
	shift := -slope / (2 * curve)
	if shift < t0-t1 || shift > t2-t1 {
		return e
	}
	e.time += shift
	e.value += slope*shift + curve*shift*shift
	return e
}
