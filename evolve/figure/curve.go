package figure

import (
	"math"
	"sort"

	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
)

// curve is one column of one body in a panel.
type curve struct {
	body        int // index into picture.bodies
	dashed      bool
	time, value []float64 // of the same length, Myr and the panel's unit
}

// cut leaves of a curve what a window of time needs: the samples within it and
// the neighbours just outside, to which the line leads.
func (c curve) cut(from, to float64) curve {
	lo := sort.SearchFloat64s(c.time, from)
	hi := sort.Search(len(c.time), func(i int) bool { return c.time[i] > to })
	lo, hi = max(0, lo-1), min(len(c.time), hi+1)
	c.time, c.value = c.time[lo:hi], c.value[lo:hi]
	return c
}

// shown gives the values within the window, or the neighbours' if none is.
func (c curve) shown(from, to float64) []float64 {
	lo := sort.SearchFloat64s(c.time, from)
	hi := sort.Search(len(c.time), func(i int) bool { return c.time[i] > to })
	if lo < hi {
		return c.value[lo:hi]
	}
	return c.value
}

// lines places the curve in a rectangle: unbroken stretches, clipped to it and
// thinned to columns of that width. A sample without neighbours is a line of
// one point.
func (c curve) lines(x, y scale, in vg.Rectangle, column vg.Length) [][]vg.Point {
	area := draw.Canvas{Rectangle: in}
	var out [][]vg.Point
	var line []vg.Point
	end := func() {
		switch {
		case len(line) == 1 && area.Contains(line[0]):
			out = append(out, line)
		case len(line) > 1:
			for _, part := range area.ClipLinesXY(line) {
				out = append(out, thin(part, column))
			}
		}
		line = nil
	}
	for i := range c.time {
		px, py := x.at(c.time[i]), y.at(c.value[i])
		if math.IsNaN(px) || math.IsNaN(py) {
			end()
			continue
		}
		line = append(line, vg.Point{X: area.X(px), Y: area.Y(py)})
	}
	end()
	return out
}

// thin leaves of a line at most four points in each column of that width: the
// first, the lowest, the highest and the last, in their order. A stroke wider
// than a column covers the same paper.
func thin(line []vg.Point, column vg.Length) []vg.Point {
	var out []vg.Point
	for from := 0; from < len(line); {
		at := math.Floor(float64(line[from].X / column))
		low, high, to := from, from, from
		for ; to < len(line) && math.Floor(float64(line[to].X/column)) == at; to++ {
			if line[to].Y < line[low].Y {
				low = to
			}
			if line[to].Y > line[high].Y {
				high = to
			}
		}
		keep := []int{from, min(low, high), max(low, high), to - 1}
		for i, k := range keep {
			if i == 0 || k > keep[i-1] {
				out = append(out, line[k])
			}
		}
		from = to
	}
	return out
}

// path joins a line's points. It starts anew at corners sharper than 60
// degrees: canvases that mitre the join would draw a peak there up to five
// strokes too high.
func path(line []vg.Point) vg.Path {
	p := make(vg.Path, 0, len(line))
	p.Move(line[0])
	for i := 1; i < len(line); i++ {
		p.Line(line[i])
		if i+1 < len(line) {
			back, on := line[i-1].Sub(line[i]), line[i+1].Sub(line[i])
			if float64(back.Dot(on)) > 0.5*math.Hypot(float64(back.X), float64(back.Y))*math.Hypot(float64(on.X), float64(on.Y)) {
				p.Move(line[i])
			}
		}
	}
	return p
}

// crossing is the height of the first of the lines that passes x, false if
// none does.
func crossing(lines [][]vg.Point, x vg.Length) (vg.Length, bool) {
	for _, l := range lines {
		for i := 1; i < len(l); i++ {
			a, b := l[i-1], l[i]
			if a.X <= x && x <= b.X && a.X < b.X {
				return a.Y + (b.Y-a.Y)*(x-a.X)/(b.X-a.X), true
			}
		}
	}
	return 0, false
}
