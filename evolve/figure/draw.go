package figure

import (
	"cmp"
	"image/color"
	"math"
	"slices"

	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
)

// plain is black text, left-aligned and centred on its line.
func plain(size vg.Length) ink { return ink{size: size, color: black, alignY: 0.5} }

// draw puts the whole picture on a canvas of its size.
func (p *picture) draw(c vg.Canvas) {
	fillRectangle(c, vg.Rectangle{Max: vg.Point{X: p.width, Y: p.height}}, white)
	y := p.height - p.margin
	left := p.panels[0].in.Min.X
	if p.title != "" {
		at := max(p.margin, min(left, p.width-p.margin-p.typesetter.width(p.title, p.label, false)))
		p.write(c, vg.Point{X: at, Y: y - 0.75*p.label}, p.title, plain(p.label))
		y -= 1.5 * p.label
	}
	p.drawLegend(c, y)
	for i := range p.panels {
		p.drawGrid(c, &p.panels[i])
	}
	p.drawFlags(c)
	for i := range p.panels {
		p.drawCurves(c, &p.panels[i])
		p.drawFrame(c, &p.panels[i])
		p.drawObserved(c, &p.panels[i])
	}
	p.drawTimeAxis(c)
	for i, line := range p.note {
		k := ink{size: p.small, color: muted}
		p.write(c, vg.Point{X: p.margin, Y: p.margin + (vg.Length(len(p.note)-1-i)*1.25+0.25)*p.small}, line, k)
	}
}

func fillRectangle(c vg.Canvas, r vg.Rectangle, ink color.Color) {
	c.SetColor(ink)
	var p vg.Path
	p.Move(r.Min)
	p.Line(vg.Point{X: r.Max.X, Y: r.Min.Y})
	p.Line(r.Max)
	p.Line(vg.Point{X: r.Min.X, Y: r.Max.Y})
	p.Close()
	c.Fill(p)
}

// stroke draws one stretch of a curve; a single point as a dot.
func (p *picture) stroke(c vg.Canvas, line []vg.Point, ink color.Color, dashed bool) {
	c.SetColor(ink)
	if len(line) == 1 {
		drawMarker(c, 0, line[0], 0.8*p.line, ink, ink)
		return
	}
	c.SetLineWidth(p.line)
	c.SetLineDash(nil, 0)
	if dashed {
		c.SetLineDash([]vg.Length{3.5 * p.line, 2 * p.line}, 0)
	}
	c.Stroke(path(line))
}

// segment draws a thin straight line.
func segment(c vg.Canvas, x0, y0, x1, y1 vg.Length) {
	var l vg.Path
	l.Move(vg.Point{X: x0, Y: y0})
	l.Line(vg.Point{X: x1, Y: y1})
	c.Stroke(l)
}

func (p *picture) drawGrid(c vg.Canvas, q *panel) {
	c.SetColor(gridded)
	c.SetLineWidth(0.4)
	c.SetLineDash(nil, 0)
	area := draw.Canvas{Rectangle: q.in}
	for _, t := range q.ticks {
		if t.label != "" {
			y := area.Y(q.y.at(t.value))
			segment(c, q.in.Min.X, y, q.in.Max.X, y)
		}
	}
	for _, t := range p.xTicks {
		if t.label != "" {
			x := area.X(p.x.at(t.value))
			segment(c, x, q.in.Min.Y, x, q.in.Max.Y)
		}
	}
}

// markersPerCurve stand along each curve where there are several bodies.
const markersPerCurve = 5

// drawCurves draws the restless curves first: one that swings within the
// width of its stroke is a band, which would hide the others.
func (p *picture) drawCurves(c vg.Canvas, q *panel) {
	lines := make([][][]vg.Point, len(q.curves))
	travel := make([]vg.Length, len(q.curves))
	order := make([]int, len(q.curves))
	for i, v := range q.curves {
		order[i] = i
		lines[i] = v.lines(p.x, q.y, q.in, p.column)
		for _, l := range lines[i] {
			for k := 1; k < len(l); k++ {
				travel[i] += vg.Length(math.Abs(float64(l[k].Y - l[k-1].Y)))
			}
		}
	}
	slices.SortStableFunc(order, func(a, b int) int { return cmp.Compare(travel[b], travel[a]) })
	for _, i := range order {
		for _, l := range lines[i] {
			p.stroke(c, l, palette[p.bodies[q.curves[i].body].slot], q.curves[i].dashed)
		}
	}
	if len(p.bodies) == 1 {
		return
	}
	for k, v := range q.curves {
		b := p.bodies[v.body]
		for i := range markersPerCurve {
			// Each body at other times, so that equal curves show both.
			share := (float64(v.body) + 0.5) / float64(len(p.bodies))
			if v.dashed {
				share += 0.25 / float64(len(p.bodies))
			}
			x := q.in.Min.X + vg.Length((float64(i)+share)/markersPerCurve)*q.in.Size().X
			if y, ok := crossing(lines[k], x); ok {
				drawMarker(c, b.slot, vg.Point{X: x, Y: y}, p.marker, palette[b.slot], palette[b.slot])
			}
		}
	}
}

func (p *picture) drawFrame(c vg.Canvas, q *panel) {
	c.SetColor(black)
	c.SetLineWidth(p.frame)
	c.SetLineDash(nil, 0)
	var box vg.Path
	box.Move(q.in.Min)
	box.Line(vg.Point{X: q.in.Max.X, Y: q.in.Min.Y})
	box.Line(q.in.Max)
	box.Line(vg.Point{X: q.in.Min.X, Y: q.in.Max.Y})
	box.Close()
	c.Stroke(box)
	area := draw.Canvas{Rectangle: q.in}
	long := func(t tick) vg.Length {
		if t.label == "" {
			return 0.2 * p.tick
		}
		return 0.4 * p.tick
	}
	c.SetLineWidth(0.75 * p.frame)
	for _, t := range q.ticks {
		y := area.Y(q.y.at(t.value))
		segment(c, q.in.Min.X, y, q.in.Min.X+long(t), y)
		segment(c, q.in.Max.X, y, q.in.Max.X-long(t), y)
	}
	for _, t := range p.xTicks {
		x := area.X(p.x.at(t.value))
		segment(c, x, q.in.Min.Y, x, q.in.Min.Y+long(t))
		segment(c, x, q.in.Max.Y, x, q.in.Max.Y-long(t))
	}
	for _, t := range q.ticks {
		k := ink{size: p.tick, color: black, alignX: 1, alignY: 0.5, markup: true}
		p.write(c, vg.Point{X: q.in.Min.X - 0.4*p.tick, Y: area.Y(q.y.at(t.value))}, t.label, k)
	}
	for i, line := range q.title {
		k := ink{size: p.label, color: black, alignX: 0.5, rotation: math.Pi / 2, markup: true}
		up := vg.Length(len(q.title)-1-i) * 1.2 * p.label
		x := p.titleEdge() - up
		p.write(c, vg.Point{X: x, Y: area.Center().Y}, line, k)
	}
}

// titleEdge is the baseline of the last line of the y axes' titles, the same
// for every panel.
func (p *picture) titleEdge() vg.Length {
	lines := 1
	for _, q := range p.panels {
		lines = max(lines, len(q.title))
	}
	return p.margin + (vg.Length(lines)*1.2-0.3)*p.label
}

func (p *picture) drawTimeAxis(c vg.Canvas) {
	q := p.panels[len(p.panels)-1]
	area := draw.Canvas{Rectangle: q.in}
	k := ink{size: p.tick, color: black, alignX: 0.5, alignY: 1, markup: true}
	y := q.in.Min.Y - 0.55*p.tick
	for _, t := range p.xTicks {
		p.write(c, vg.Point{X: area.X(p.x.at(t.value)), Y: y}, t.label, k)
	}
	k.size = p.label
	p.write(c, vg.Point{X: area.Center().X, Y: y - 1.35*p.tick}, p.xTitle, k)
}

// drawBar draws an error bar, its caps wider than a marker.
func (p *picture) drawBar(c vg.Canvas, at vg.Point, low, top vg.Length) {
	c.SetColor(black)
	c.SetLineWidth(0.8 * p.line)
	c.SetLineDash(nil, 0)
	segment(c, at.X, low, at.X, top)
	segment(c, at.X-1.7*p.marker, low, at.X+1.7*p.marker, low)
	segment(c, at.X-1.7*p.marker, top, at.X+1.7*p.marker, top)
}

func (p *picture) drawObserved(c vg.Canvas, q *panel) {
	area := draw.Canvas{Rectangle: q.in}
	for _, o := range q.observed {
		slot := p.bodies[o.body].slot
		mid := q.y.at(o.value)
		if math.IsNaN(mid) {
			continue
		}
		// A bar that reaches zero leaves a logarithmic axis at its foot.
		low := q.y.at(o.low)
		if math.IsNaN(low) || low < 0 {
			low = 0
		}
		at := vg.Point{X: area.X(p.x.at(o.time)), Y: area.Y(max(0, mid))}
		p.drawBar(c, at, area.Y(low), area.Y(min(1, q.y.at(o.top))))
		if o.open {
			drawMarker(c, slot, at, p.marker, white, palette[slot])
		} else {
			drawMarker(c, slot, at, p.marker, palette[slot], black)
		}
	}
}
