package figure

import (
	"image/color"
	"math"

	"gonum.org/v1/plot/vg"
)

// maxBodies is how many bodies one picture tells apart.
const maxBodies = len(palette)

// palette holds the colours of Okabe and Ito (Color Universal Design, 2008),
// darkest contrasts first; grey stands in for their yellow, which is too faint
// for a line on white paper.
var palette = [...]color.RGBA{
	{0x00, 0x72, 0xb2, 0xff}, // blue
	{0xd5, 0x5e, 0x00, 0xff}, // vermillion
	{0x00, 0x9e, 0x73, 0xff}, // bluish green
	{0xcc, 0x79, 0xa7, 0xff}, // reddish purple
	{0xe6, 0x9f, 0x00, 0xff}, // orange
	{0x56, 0xb4, 0xe9, 0xff}, // sky blue
	{0x00, 0x00, 0x00, 0xff}, // black
	{0x88, 0x88, 0x88, 0xff}, // grey
}

var (
	black   = color.RGBA{0x00, 0x00, 0x00, 0xff}
	white   = color.RGBA{0xff, 0xff, 0xff, 0xff}
	gridded = color.RGBA{0xe4, 0xe4, 0xe4, 0xff}
	muted   = color.RGBA{0x60, 0x60, 0x60, 0xff}
)

// shapes are the markers in the order of palette: corners, and the angle of
// the first one. A circle is a polygon too: the PDF canvas draws no arcs well.
var shapes = [...]struct {
	corners int
	first   float64
	size    float64
}{
	{24, 0, 1},              // circle
	{4, math.Pi / 4, 1.2},   // square
	{3, math.Pi / 2, 1.35},  // triangle
	{4, 0, 1.35},            // diamond
	{3, -math.Pi / 2, 1.35}, // triangle on its tip
	{5, math.Pi / 2, 1.2},   // pentagon
	{3, 0, 1.35},            // triangle to the right
	{3, math.Pi, 1.35},      // triangle to the left
}

// drawMarker draws the marker of that place in the palette.
func drawMarker(c vg.Canvas, slot int, at vg.Point, radius vg.Length, fill, edge color.Color) {
	s := shapes[slot]
	var p vg.Path
	for i := range s.corners {
		sin, cos := math.Sincos(s.first + 2*math.Pi*float64(i)/float64(s.corners))
		r := radius * vg.Length(s.size)
		corner := at.Add(vg.Point{X: r * vg.Length(cos), Y: r * vg.Length(sin)})
		if i == 0 {
			p.Move(corner)
		} else {
			p.Line(corner)
		}
	}
	p.Close()
	c.SetColor(fill)
	c.Fill(p)
	c.SetColor(edge)
	c.SetLineWidth(radius * 0.4)
	c.SetLineDash(nil, 0)
	c.Stroke(p)
}
