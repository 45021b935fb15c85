package figure

import (
	"math"

	"gonum.org/v1/plot/vg"
)

// Draw writes the history as a picture to path, replacing what is there in one
// step. The extension gives the format, one of Formats. A bad history, option
// or path is an error and leaves no file; so is a body in Options.Bodies that
// the history does not hold.
//
// Values are drawn as they are, with three exceptions. A logarithmic axis drops
// zeros and negative values and lets a curve leave it that falls more than 6 decades (eccentricity)
// or 12 (heat) below the panel's largest value. Long histories are thinned to
// their extremes in each column of a pixel. Observations outside the window of
// time, and marks of bodies not drawn, are left out.
func Draw(h History, path string, opt Options) error {
	format, err := formatOf(path)
	if err != nil {
		return err
	}
	if opt, err = opt.withDefaults(); err != nil {
		return err
	}
	p, err := compose(h, opt)
	if err != nil {
		return err
	}
	data, err := render(p, format, opt.DPI)
	if err != nil {
		return err
	}
	return writeFile(path, data)
}

// picture is a history laid out on paper, in points from the lower left.
type picture struct {
	typesetter
	measures
	width, height vg.Length
	column        vg.Length // curves are thinned to this width

	bodies []body
	panels []panel
	x      scale
	xTicks []tick
	xTitle string
	flags  []flag
	legend [][]entry
	title  string
	note   []string
}

// measures are the sizes of the parts, in points.
type measures struct {
	label, tick, small vg.Length // font sizes: titles of axes, ticks and legend, note
	line, frame        vg.Length // strokes
	marker             vg.Length // radius
	panel, gap, margin vg.Length
}

// measuresFor gives journal sizes: 9 pt type at 16 cm, 7 pt in one column.
func measuresFor(cm float64) measures {
	font := vg.Length(math.Min(9, math.Max(7, 4.7+0.27*cm)))
	return measures{
		label: font, tick: font * 0.9, small: font * 0.78,
		line: font * 0.11, frame: 0.6, marker: font * 0.25,
		panel: vg.Length(math.Min(170, math.Max(66, 24+4.8*cm))), gap: font * 0.85, margin: 4,
	}
}

// compose checks and lays out a history.
func compose(h History, opt Options) (*picture, error) {
	if err := h.check(); err != nil {
		return nil, err
	}
	bodies, err := choose(h, opt.Bodies)
	if err != nil {
		return nil, err
	}
	from, to, err := opt.window(bodies)
	if err != nil {
		return nil, err
	}
	panels, err := panelsFor(h, bodies, from, to)
	if err != nil {
		return nil, err
	}
	letters, err := newTypesetter()
	if err != nil {
		return nil, err
	}
	p := &picture{
		typesetter: letters,
		measures:   measuresFor(opt.WidthCM),
		width:      points(opt.WidthCM),
		column:     vg.Inch / vg.Length(opt.DPI),
		bodies:     bodies,
		panels:     panels,
		x:          scale{log: opt.LogTime, lo: from, hi: to},
	}
	left, right := p.sides()
	p.timeAxis(right - left)
	inner := p.width - 2*p.margin
	p.title = p.shorten(ascii(h.Title), p.label, inner)
	p.note = p.wrap(ascii(h.Note), p.small, inner, 4)
	p.legend = p.legendRows(right - left)
	rows := p.place(h.Marks, left, right)
	p.stack(left, right, rows)
	return p, nil
}

// sides labels the y axes and gives the left and right ends of the data.
func (p *picture) sides() (left, right vg.Length) {
	var widest vg.Length
	lines := 1
	for i := range p.panels {
		q := &p.panels[i]
		tall := p.panel * vg.Length(q.height)
		q.ticks, q.factor = q.y.ticks(max(3, int(tall/(2*p.tick))))
		for _, t := range q.ticks {
			widest = max(widest, p.typesetter.width(t.label, p.tick, true))
		}
		q.title = p.axisTitle(q.sheet, q.factor, tall)
		lines = max(lines, len(q.title))
	}
	left = p.margin + vg.Length(lines)*1.2*p.label + 0.3*p.label + widest + 0.4*p.tick
	return left, p.width - p.margin - p.label
}

// axisTitle is the title of a y axis, in two lines if one is longer than the
// panel is tall.
func (p *picture) axisTitle(s sheet, factor int, tall vg.Length) []string {
	whole := unitLabel(s.label, s.unit, factor)
	if p.typesetter.width(whole, p.label, true) <= tall+p.gap {
		return []string{whole}
	}
	best, length := []string{whole}, vg.Length(math.Inf(1))
	for i := range whole {
		if whole[i] != ' ' || i+1 < len(whole) && whole[i+1] == '/' && s.unit == "" {
			continue
		}
		// A unit stays with its stroke.
		if i > 0 && whole[i-1] == '/' || i > 0 && whole[i-1] == '}' {
			continue
		}
		two := []string{whole[:i], whole[i+1:]}
		longer := max(p.typesetter.width(two[0], p.label, true), p.typesetter.width(two[1], p.label, true))
		if longer < length {
			best, length = two, longer
		}
	}
	return best
}

// timeAxis gives the time axis as many labels as fit without crowding.
func (p *picture) timeAxis(length vg.Length) {
	unit, perMyr := timeUnit(p.x.lo, p.x.hi)
	lo, hi := p.x.lo*perMyr, p.x.hi*perMyr
	p.xTitle = "time / " + unit
	room := 1.5 * p.tick
	for count := 10; ; count-- {
		var ticks []tick
		if p.x.log && hi > narrow*lo {
			ticks = logTicks(lo, hi, count, decimalLabel)
		} else {
			ticks = linearTicks(lo, hi, count, 0)
		}
		free := vg.Length(math.Inf(-1))
		fits := true
		for i := range ticks {
			ticks[i].value /= perMyr
			if ticks[i].label == "" {
				continue
			}
			half := p.typesetter.width(ticks[i].label, p.tick, true) / 2
			at := vg.Length(p.x.at(ticks[i].value)) * length
			fits = fits && at-half >= free
			free = at + half + room
		}
		if fits || count == 2 {
			p.xTicks = ticks
			return
		}
	}
}

// stack gives every panel its place and the picture its height. rows is the
// number of lines that labels of marks take above the panels.
func (p *picture) stack(left, right vg.Length, rows int) {
	y := p.margin + vg.Length(len(p.note))*1.25*p.small
	if len(p.note) > 0 {
		y += 0.6 * p.small
	}
	y += 1.3*p.label + 1.85*p.tick
	for i := len(p.panels) - 1; i >= 0; i-- {
		tall := p.panel * vg.Length(p.panels[i].height)
		p.panels[i].in = vg.Rectangle{Min: vg.Point{X: left, Y: y}, Max: vg.Point{X: right, Y: y + tall}}
		y += tall
		if i > 0 {
			y += p.gap
		}
	}
	y += vg.Length(rows)*p.flagRow() + vg.Length(len(p.legend))*p.legendRow()
	y += 0.6 * p.label
	if p.title != "" {
		y += 1.5 * p.label
	}
	p.height = y + p.margin
}
