package figure

import "math"

// scale maps the values from lo to hi on 0 to 1, linearly or by logarithm.
type scale struct {
	log    bool
	lo, hi float64
}

// at is the place of v, beyond 0 to 1 for values off the axis, and NaN for one
// the axis cannot hold.
func (s scale) at(v float64) float64 {
	if !finite(v) {
		return math.NaN()
	}
	if !s.log {
		return (v - s.lo) / (s.hi - s.lo)
	}
	if v <= 0 {
		return math.NaN()
	}
	return math.Log(v/s.lo) / math.Log(s.hi/s.lo)
}

// padding is the share of an axis left free at each end, so that no curve lies
// on the frame.
const padding = 0.06

// scaleFor gives the axis of a panel that shows these values; false if there
// is none that it could show.
func (s sheet) scaleFor(values []float64) (scale, bool) {
	lo, hi, least := math.Inf(1), math.Inf(-1), math.Inf(1)
	for _, v := range values {
		if !finite(v) {
			continue
		}
		lo, hi = math.Min(lo, v), math.Max(hi, v)
		if v >= smallest {
			least = math.Min(least, v)
		}
	}
	if lo > hi {
		return scale{}, false
	}
	if s.alwaysLog() && hi < smallest {
		return scale{}, false
	}
	if s.alwaysLog() || hi > s.logFrom*least {
		least = math.Max(least, hi*math.Pow(10, -s.decades))
		ratio := math.Pow(hi/least, padding)
		ratio = math.Max(ratio, 1.03)
		return scale{log: true, lo: least / ratio, hi: hi * ratio}, true
	}
	size := math.Max(math.Abs(lo), math.Abs(hi))
	if span := hi - lo; span < math.Max(s.least, 1e-4*size) {
		// Constant but for rounding: drawn as a flat line, not as noise.
		if size < s.least {
			return scale{lo: -padding * s.flat, hi: s.flat}, true
		}
		half := 0.05 * size
		return scale{lo: lo - half, hi: hi + half}, true
	}
	pad := padding * (hi - lo)
	return scale{lo: lo - pad, hi: hi + pad}, true
}

// narrow is the ratio of a logarithmic axis's ends below which its ticks stand
// at equal steps: there would be too few decades and multiples to label.
const narrow = 5

// ticks gives about count labelled ticks and the power of ten taken out of
// their labels.
func (s scale) ticks(count int) ([]tick, int) {
	if s.log && s.hi > narrow*s.lo {
		return logTicks(s.lo, s.hi, count, powerLabel), 0
	}
	factor := factorFor(s.lo, s.hi)
	return linearTicks(s.lo, s.hi, count, factor), factor
}
