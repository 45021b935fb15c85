package figure

import (
	"image"
	"image/color"
	"math"
	"testing"

	"gonum.org/v1/plot/font"
	"gonum.org/v1/plot/vg"
)

// tracer is a canvas that notes where text and strokes fall.
type tracer struct {
	at      []frame
	strings []box
	corners []vg.Point
}

// frame is a shifted and rotated system of coordinates.
type frame struct {
	origin vg.Point
	angle  float64
}

// box is the place of a string: capitals alone, and with descenders.
type box struct {
	text       string
	caps, full vg.Rectangle
}

func newTracer() *tracer { return &tracer{at: make([]frame, 1)} }

func (t *tracer) top() *frame { return &t.at[len(t.at)-1] }

func (t *tracer) paper(p vg.Point) vg.Point {
	f := t.top()
	sin, cos := math.Sincos(f.angle)
	s, c := vg.Length(sin), vg.Length(cos)
	return f.origin.Add(vg.Point{X: p.X*c - p.Y*s, Y: p.X*s + p.Y*c})
}

func (t *tracer) Push()                              { t.at = append(t.at, *t.top()) }
func (t *tracer) Pop()                               { t.at = t.at[:len(t.at)-1] }
func (t *tracer) Translate(p vg.Point)               { t.top().origin = t.paper(p) }
func (t *tracer) Rotate(angle float64)               { t.top().angle += angle }
func (t *tracer) Scale(x, y float64)                 {}
func (t *tracer) SetLineWidth(vg.Length)             {}
func (t *tracer) SetLineDash([]vg.Length, vg.Length) {}
func (t *tracer) SetColor(color.Color)               {}
func (t *tracer) DrawImage(vg.Rectangle, image.Image) {
}

func (t *tracer) Stroke(p vg.Path) {
	for _, c := range p {
		if c.Type != vg.CloseComp {
			t.corners = append(t.corners, t.paper(c.Pos))
		}
	}
}

func (t *tracer) Fill(p vg.Path) { t.Stroke(p) }

func (t *tracer) FillString(f font.Face, p vg.Point, s string) {
	rectangle := func(bottom, top float64) vg.Rectangle {
		a := t.paper(p.Add(vg.Point{Y: vg.Length(bottom) * f.Font.Size}))
		b := t.paper(p.Add(vg.Point{X: f.Width(s), Y: vg.Length(top) * f.Font.Size}))
		return vg.Rectangle{
			Min: vg.Point{X: min(a.X, b.X), Y: min(a.Y, b.Y)},
			Max: vg.Point{X: max(a.X, b.X), Y: max(a.Y, b.Y)},
		}
	}
	// Liberation Sans descends 0.212 em below the baseline (its hhea table).
	t.strings = append(t.strings, box{s, rectangle(0, capHeight), rectangle(-0.212, capHeight)})
}

// overlap says that two rectangles share more than an edge; a tenth of a
// point is less than a hair.
func overlap(a, b vg.Rectangle) bool {
	const hair = 0.1
	return a.Min.X < b.Max.X-hair && b.Min.X < a.Max.X-hair && a.Min.Y < b.Max.Y-hair && b.Min.Y < a.Max.Y-hair
}

func TestNothingIsClippedOrWrittenOver(t *testing.T) {
	crowded := oscillating(300)
	for i := range 11 {
		crowded.Marks = append(crowded.Marks, Mark{float64(80 * i), "a label of some length", "Brine"})
	}
	solid := oscillating(300)
	solid.Bodies[0].TidalHeatW, solid.Bodies[1].SemimajorAxisKm = nil, nil
	for i := range solid.Bodies[0].SemimajorAxisKm {
		solid.Bodies[0].SemimajorAxisKm[i] = 421800 * (1 + 3e-9*solid.Bodies[0].Time[i])
	}
	early := oscillating(300)
	for i := range early.Bodies {
		for j := range early.Bodies[i].Time {
			early.Bodies[i].Time[j] *= 1e-9
		}
	}
	early.Marks, early.Observed = nil, nil
	for name, h := range map[string]History{
		"pair": oscillating(300), "one": many(1), "eight": many(8), "crowded": crowded, "solid": solid, "early": early,
	} {
		for _, opt := range []Options{{WidthCM: 6}, {WidthCM: 8.5}, {WidthCM: 8.5, LogTime: true}, {}, {LogTime: true}, {WidthCM: 40}} {
			opt, err := opt.withDefaults()
			if err != nil {
				t.Fatal(err)
			}
			p, err := compose(h, opt)
			if err != nil {
				t.Fatal(err)
			}
			c := newTracer()
			p.draw(c)
			page := vg.Rectangle{Max: vg.Point{X: p.width, Y: p.height}}
			in := func(q vg.Point) bool {
				return q.X >= page.Min.X && q.Y >= page.Min.Y && q.X <= page.Max.X && q.Y <= page.Max.Y
			}
			for i, s := range c.strings {
				if !in(s.full.Min) || !in(s.full.Max) {
					t.Errorf("%s %+v: %q leaves the page: %v", name, opt, s.text, s.full)
				}
				for _, o := range c.strings[:i] {
					if overlap(s.caps, o.caps) {
						t.Errorf("%s %+v: %q lies on %q", name, opt, s.text, o.text)
					}
				}
				for _, q := range p.panels {
					if overlap(s.caps, q.in) {
						t.Errorf("%s %+v: %q lies in a panel", name, opt, s.text)
					}
				}
			}
			for _, q := range c.corners {
				if !in(q) {
					t.Errorf("%s %+v: a stroke leaves the page at %v", name, opt, q)
					break
				}
			}
		}
	}
}

func TestPanelsShareSidesAndGaps(t *testing.T) {
	p, err := compose(many(3), Options{WidthCM: 16, DPI: 300})
	if err != nil {
		t.Fatal(err)
	}
	if len(p.panels) != len(sheets) {
		t.Fatalf("%d panels, want all %d", len(p.panels), len(sheets))
	}
	for i := 1; i < len(p.panels); i++ {
		a, b := p.panels[i-1].in, p.panels[i].in
		if a.Min.X != b.Min.X || a.Max.X != b.Max.X {
			t.Errorf("panels %d and %d differ in their sides: %v, %v", i-1, i, a, b)
		}
		// Sums of a dozen lengths below 1000 pt round to about 1e-12.
		if gap := a.Min.Y - b.Max.Y; math.Abs(float64(gap-p.gap)) > 1e-9 {
			t.Errorf("gap of %v below panel %d, want %v", gap, i-1, p.gap)
		}
	}
}

func TestPanelsWithoutValuesAreLeftOut(t *testing.T) {
	h := oscillating(100)
	for i := range h.Bodies {
		s := &h.Bodies[i]
		s.TidalHeatW, s.SurfaceLossW, s.TemperatureK = nil, make([]float64, len(s.Time)), make([]float64, len(s.Time))
		for j := range s.TemperatureK {
			s.TemperatureK[j] = math.NaN()
		}
		s.MeltFraction = nil
	}
	h.Observed = nil
	p, err := compose(h, Options{WidthCM: 16, DPI: 300})
	if err != nil {
		t.Fatal(err)
	}
	if len(p.panels) != 2 || p.panels[0].label != "eccentricity" || p.panels[1].index != axisSheet {
		t.Errorf("%d panels, want eccentricity and axis: no heat of zero, no temperature of NaN", len(p.panels))
	}
	for _, row := range p.legend {
		for _, e := range row {
			if e.body < 0 {
				t.Errorf("the legend explains %q, which is not drawn", e.text)
			}
		}
	}
}

func TestBodyKeepsItsColourAlone(t *testing.T) {
	h := many(5)
	alone, err := choose(h, []string{h.Bodies[3].Name})
	if err != nil {
		t.Fatal(err)
	}
	if len(alone) != 1 || alone[0].slot != 3 {
		t.Errorf("%d bodies, the first in place %d, want one in place 3", len(alone), alone[0].slot)
	}
}
