package ode

import (
	"cmp"
	"math"
	"slices"
)

// Event is a function of the state whose changes of sign are wanted.
type Event struct {
	Name      string
	Value     func(t float64, y []float64) float64 // must not modify y
	Direction int                                  // +1 rising, −1 falling, 0 both
}

// Occurrence is one change of sign.
type Occurrence struct {
	Event  int     // index in the list
	T      float64 // to the rounding of t
	Rising bool
	Y      []float64 // the state there, a copy
}

// Events finds occurrences in the segments of one integration.
type Events struct {
	list  []Event
	side  []int8    // last sign other than 0
	last  []float64 // value at the last point seen
	noise []float64 // what a value must exceed to have left the zero it started on
	y     []float64
	found []Occurrence
	ends  bool
}

// NewEvents prepares the search for a list of events; Reset must follow.
func NewEvents(list []Event) *Events {
	return &Events{list: slices.Clone(list), side: make([]int8, len(list)), last: make([]float64, len(list)), noise: make([]float64, len(list))}
}

// AtEnds makes Locate look for changes of sign at the ends of steps alone, for
// steps short beside the times of the events: the insides of steps are then not
// computed unless something happened.
func (e *Events) AtEnds() { e.ends = true }

// Reset forgets the past and takes (t, y) as the start; an event whose value is 0
// there does not occur by leaving 0. Those that have just occurred at this state
// are named in passed: their sign there is rounding, and they stay on the side
// they crossed to until they have left it.
func (e *Events) Reset(t float64, y []float64, passed ...Occurrence) {
	if len(e.y) != len(y) {
		e.y = make([]float64, len(y))
	}
	for i, ev := range e.list {
		e.last[i] = ev.Value(t, y)
		e.side[i], e.noise[i] = sign(e.last[i]), 0
	}
	for _, o := range passed {
		e.side[o.Event] = -1
		if o.Rising {
			e.side[o.Event] = 1
		}
		e.noise[o.Event] = awayFromZero * math.Abs(e.last[o.Event])
	}
}

// awayFromZero is how many times the value left by locating an event must be
// exceeded: another start near it leaves a value of the same size.
const awayFromZero = 8

// Locate returns the occurrences in a segment, which must follow that of the last
// call or start at the state of Reset, in order of time. Changes of sign are seen
// at the nodes of the step (Radau: its 3 or 5 stages, Rosenbrock: 4, DOP853: 7) and
// located on its polynomial; a value that only touches 0 is no occurrence. The slice is valid until the next
// call.
func (e *Events) Locate(seg *Segment) []Occurrence {
	e.found = e.found[:0]
	before := 0.0
	for j := range seg.form.s {
		if e.ends && j < seg.form.s-1 {
			continue
		}
		theta, t := seg.form.c[j], seg.T0+seg.form.c[j]*seg.h
		if j == seg.form.s-1 {
			t = seg.T1
		}
		seg.atNode(j, e.y)
		for i, ev := range e.list {
			v := ev.Value(t, e.y)
			to := sign(v)
			if to == 0 || math.Abs(v) <= e.noise[i] {
				e.last[i] = v
				continue
			}
			e.noise[i] = 0
			if e.side[i] == -to && ev.Direction != -int(to) {
				e.add(seg, i, before, theta, e.last[i], v)
				// The point is needed again by the events that follow.
				seg.atNode(j, e.y)
			}
			e.side[i], e.last[i] = to, v
		}
		before = theta
	}
	slices.SortStableFunc(e.found, func(a, b Occurrence) int { return cmp.Compare(a.T, b.T) })
	return e.found
}

// add locates event i between two points of the segment.
func (e *Events) add(seg *Segment, i int, a, b, fa, fb float64) {
	value := e.list[i].Value
	at := root(func(theta float64) float64 {
		seg.at(theta, e.y)
		return value(seg.T0+theta*seg.h, e.y)
	}, a, b, fa, fb)
	t := min(seg.T0+at*seg.h, seg.T1)
	y := make([]float64, seg.n)
	seg.Eval(t, y)
	e.found = append(e.found, Occurrence{Event: i, T: t, Rising: fb > 0, Y: y})
}
