package figure

import (
	"math"
	"slices"
	"testing"

	"gonum.org/v1/plot/vg"
)

func TestThinKeepsExtremesAndEnds(t *testing.T) {
	var line []vg.Point
	for i := range 10000 {
		line = append(line, vg.Point{X: vg.Length(i) * 0.01, Y: vg.Length(math.Sin(float64(i) * 0.7))})
	}
	line[4321].Y, line[7777].Y = 50, -40 // spikes of a single sample
	const column = 0.25
	got := thin(line, column)
	// 100 pt in 400 columns, at most four points each.
	if len(got) > 4*400 {
		t.Errorf("%d points left of %d", len(got), len(line))
	}
	if got[0] != line[0] || got[len(got)-1] != line[len(line)-1] {
		t.Error("an end is lost")
	}
	byX := func(a, b vg.Point) int { return int(math.Copysign(1, float64(a.X-b.X))) }
	if !slices.IsSortedFunc(got, func(a, b vg.Point) int { return byX(a, b) }) {
		t.Error("the points changed their order")
	}
	extremes := func(line []vg.Point) map[int][2]vg.Length {
		out := map[int][2]vg.Length{}
		for _, p := range line {
			k := int(math.Floor(float64(p.X / column)))
			e, ok := out[k]
			if !ok {
				e = [2]vg.Length{p.Y, p.Y}
			}
			out[k] = [2]vg.Length{min(e[0], p.Y), max(e[1], p.Y)}
		}
		return out
	}
	want, have := extremes(line), extremes(got)
	for k, e := range want {
		if have[k] != e {
			t.Errorf("column %d spans %v, want %v", k, have[k], e)
		}
	}
	for _, p := range []vg.Point{line[4321], line[7777]} {
		if !slices.Contains(got, p) {
			t.Errorf("the spike at %v is lost", p)
		}
	}
}

func TestThinLeavesSparseLinesAlone(t *testing.T) {
	line := []vg.Point{{X: 0, Y: 3}, {X: 1, Y: 1}, {X: 2, Y: 2}}
	if got := thin(line, 0.5); !slices.Equal(got, line) {
		t.Errorf("got %v, want %v", got, line)
	}
	if got := thin(line, 100); !slices.Equal(got, line) {
		t.Errorf("in one column %v, want first, lowest and last: %v", got, line)
	}
}

var unit = vg.Rectangle{Max: vg.Point{X: 100, Y: 100}}

func TestGapsAndZerosBreakTheLine(t *testing.T) {
	nan, inf := math.NaN(), math.Inf(1)
	c := curve{time: []float64{0, 1, 2, 3, 4, 5, 6, 7, 8}, value: []float64{1, 2, nan, 4, inf, 6, 7, 0, 9}}
	x := scale{lo: 0, hi: 8}
	lengths := func(y scale) []int {
		var n []int
		for _, l := range c.lines(x, y, unit, 0.1) {
			n = append(n, len(l))
		}
		return n
	}
	if got := lengths(scale{lo: 0, hi: 10}); !slices.Equal(got, []int{2, 1, 4}) {
		t.Errorf("linear: stretches of %v points, want 2, a dot and 4", got)
	}
	if got := lengths(scale{log: true, lo: 0.5, hi: 20}); !slices.Equal(got, []int{2, 1, 2, 1}) {
		t.Errorf("logarithmic: stretches of %v points, want 2, a dot, 2 and, after the zero, a dot", got)
	}
}

func TestLinesAreClippedAtTheFrame(t *testing.T) {
	c := curve{time: []float64{-10, 10, 30}, value: []float64{-10, 10, 30}}
	got := c.lines(scale{lo: 0, hi: 20}, scale{lo: 0, hi: 20}, unit, 0.1)
	if len(got) != 1 || got[0][0] != (vg.Point{}) || got[0][len(got[0])-1] != (vg.Point{X: 100, Y: 100}) {
		t.Errorf("got %v, want one line from corner to corner", got)
	}
}

func TestCutKeepsTheNeighbours(t *testing.T) {
	c := curve{time: []float64{0, 1, 2, 3, 4, 5}, value: []float64{10, 11, 12, 13, 14, 15}}
	if got := c.cut(2, 3).value; !slices.Equal(got, []float64{11, 12, 13, 14}) {
		t.Errorf("from 2 to 3: %v", got)
	}
	if got := c.cut(2, 3).shown(2, 3); !slices.Equal(got, []float64{12, 13}) {
		t.Errorf("shown from 2 to 3: %v", got)
	}
	if got := c.cut(2.2, 2.8).shown(2.2, 2.8); !slices.Equal(got, []float64{12, 13}) {
		t.Errorf("shown between two samples: %v, want those two", got)
	}
}

func TestPathStartsAnewAtSharpCorners(t *testing.T) {
	moves := func(line ...vg.Point) int {
		n := 0
		for _, c := range path(line) {
			if c.Type == vg.MoveComp {
				n++
			}
		}
		return n
	}
	if n := moves(vg.Point{}, vg.Point{X: 1, Y: 10}, vg.Point{X: 2}); n != 2 {
		t.Errorf("a spike in %d pieces, want 2", n)
	}
	if n := moves(vg.Point{}, vg.Point{X: 10, Y: 10}, vg.Point{X: 20}); n != 1 {
		t.Errorf("a right angle in %d pieces, want 1", n)
	}
}
