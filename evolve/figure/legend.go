package figure

import (
	"gonum.org/v1/plot/vg"
)

// entry is one item of the legend.
type entry struct {
	text   string
	body   int // index into picture.bodies, or one of the keys below
	x      vg.Length
	dashed bool
}

// Entries that belong to no body.
const (
	lineKey     = -1
	observedKey = -2
)

func (p *picture) legendRow() vg.Length { return 1.45 * p.tick }

// sample is the length of the stroke shown in the legend.
func (p *picture) sample() vg.Length { return 2.4 * p.tick }

// legendRows arranges bodies and kinds of stroke in as few rows as they need.
func (p *picture) legendRows(width vg.Length) [][]entry {
	var entries []entry
	for i, b := range p.bodies {
		name := ascii(b.Name)
		name = p.shorten(name, p.tick, 2*width/3-p.sample())
		entries = append(entries, entry{text: name, body: i})
	}
	var points bool
	lost := "heat lost"
	for _, q := range p.panels {
		points = points || len(q.observed) > 0
		if q.index == meltSheet {
			lost = "heat lost, melt"
		}
	}
	for _, q := range p.panels {
		if made, loss := q.kinds(); q.index == heatSheet && made && loss {
			entries = append(entries, entry{text: "heat made", body: lineKey}, entry{text: lost, body: lineKey, dashed: true})
		}
	}
	if points {
		entries = append(entries, entry{text: "observed", body: observedKey})
	}
	var rows [][]entry
	x := width // forces the first row
	for _, e := range entries {
		w := p.sample() + 0.5*p.tick + p.typesetter.width(e.text, p.tick, false)
		if x+w > width || rows == nil {
			rows, x = append(rows, nil), 0
		}
		e.x = x
		rows[len(rows)-1] = append(rows[len(rows)-1], e)
		x += w + 1.5*p.tick
	}
	return rows
}

// drawLegend draws the rows downward from the top.
func (p *picture) drawLegend(c vg.Canvas, top vg.Length) {
	left := p.panels[0].in.Min.X
	for _, row := range p.legend {
		mid := top - p.legendRow()/2
		for _, e := range row {
			x := left + e.x
			ink, center := muted, vg.Point{X: x + p.sample()/2, Y: mid}
			if e.body >= 0 {
				ink = palette[p.bodies[e.body].slot]
			}
			if e.body == observedKey {
				p.drawBar(c, center, mid-p.tick*0.45, mid+p.tick*0.45)
				drawMarker(c, 0, center, p.marker, muted, black)
			} else {
				p.stroke(c, []vg.Point{{X: x, Y: mid}, {X: x + p.sample(), Y: mid}}, ink, e.dashed)
			}
			if e.body >= 0 && len(p.bodies) > 1 {
				drawMarker(c, p.bodies[e.body].slot, center, p.marker, ink, ink)
			}
			p.write(c, vg.Point{X: x + p.sample() + 0.5*p.tick, Y: mid}, e.text, plain(p.tick))
		}
		top -= p.legendRow()
	}
}
