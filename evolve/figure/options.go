package figure

import (
	"fmt"
	"math"
	"slices"
)

// Options say how a history is drawn; the zero value is a good default.
type Options struct {
	WidthCM        float64  // width of the picture, cm, 6 to 60; 0 for 16 (both columns), 8.5 for one
	DPI            int      // pixels an inch of a PNG, 50 to 1200; 0 for 300
	Bodies         []string // names of those to draw, at most 8; none for all
	FromMyr, ToMyr float64  // window of time, Myr; 0 for the first and the last time recorded
	LogTime        bool     // logarithmic time axis, from the first positive time
}

// withDefaults fills in what is zero and says what cannot be.
func (o Options) withDefaults() (Options, error) {
	if o.WidthCM == 0 {
		o.WidthCM = 16
	}
	if o.DPI == 0 {
		o.DPI = 300
	}
	switch {
	case !(o.WidthCM >= 6 && o.WidthCM <= 60):
		return o, fmt.Errorf("figure: width %g cm: take 6 to 60 cm", o.WidthCM)
	case o.DPI < 50 || o.DPI > 1200:
		return o, fmt.Errorf("figure: %d dots an inch: take 50 to 1200", o.DPI)
	case !finite(o.FromMyr) || !finite(o.ToMyr):
		return o, fmt.Errorf("figure: the window of time must be finite")
	case o.ToMyr != 0 && o.ToMyr <= o.FromMyr:
		return o, fmt.Errorf("figure: the window of time ends at %g Myr and starts at %g Myr: let it end later", o.ToMyr, o.FromMyr)
	}
	return o, nil
}

// body is a series with its place in the palette.
type body struct {
	Series
	slot int
}

// choose gives the bodies to draw, in the order of the history. A body keeps
// its colour whichever others are drawn, unless there are too many for that.
func choose(h History, names []string) ([]body, error) {
	for _, n := range names {
		if !slices.ContainsFunc(h.Bodies, func(s Series) bool { return s.Name == n }) {
			return nil, fmt.Errorf("figure: no body %q, there are: %s", n, h.listed())
		}
	}
	var chosen []body
	for i, s := range h.Bodies {
		if len(names) > 0 && !slices.Contains(names, s.Name) {
			continue
		}
		slot := i
		if len(h.Bodies) > maxBodies {
			slot = len(chosen)
		}
		chosen = append(chosen, body{s, slot})
	}
	if len(chosen) > maxBodies {
		return nil, fmt.Errorf("figure: %d bodies, at most %d can be told apart: name some in Options.Bodies", len(chosen), maxBodies)
	}
	return chosen, nil
}

// window gives the times at the ends of the axis, Myr.
func (o Options) window(bodies []body) (from, to float64, err error) {
	first, last, positive := math.Inf(1), math.Inf(-1), math.Inf(1)
	for _, b := range bodies {
		for _, t := range b.Time {
			first, last = math.Min(first, t), math.Max(last, t)
			if t > 0 {
				positive = math.Min(positive, t)
			}
		}
	}
	if first > last {
		return 0, 0, fmt.Errorf("figure: the history holds no times")
	}
	from, to = first, last
	if o.FromMyr != 0 {
		from = o.FromMyr
	}
	if o.ToMyr != 0 {
		to = o.ToMyr
	}
	if from > last || to < first {
		return 0, 0, fmt.Errorf("figure: nothing is recorded from %g to %g Myr: the history runs from %g to %g Myr", from, to, first, last)
	}
	if o.LogTime && from <= 0 {
		if from = positive; !(from < to) {
			return 0, 0, fmt.Errorf("figure: a logarithmic time axis needs two positive times: take a linear one")
		}
	}
	if size := math.Max(math.Abs(from), math.Abs(to)); to-from <= math.Max(1e-12, 1e-9*size) {
		// A single time, or times that labels could not tell apart, stand in the
		// middle of a short axis.
		half := math.Max(1e-3, 0.01*size)
		if o.LogTime {
			half = 0.01 * from
		}
		from, to = from-half, to+half
	}
	return from, to, nil
}

// timeUnit gives the unit of the time axis and how many of it make a Myr.
func timeUnit(from, to float64) (string, float64) {
	switch m := math.Max(math.Abs(from), math.Abs(to)); {
	case m > 3000 && to-from > 30:
		return "Gyr", 1e-3
	case m < 3e-4:
		return "yr", 1e6
	case m < 0.3:
		return "kyr", 1e3
	}
	return "Myr", 1
}
