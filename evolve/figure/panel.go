package figure

import (
	"fmt"
	"math"

	"gonum.org/v1/plot/vg"
)

// panel is one of the stacked graphs.
type panel struct {
	sheet
	index    int // into sheets
	y        scale
	ticks    []tick
	factor   int // power of ten taken out of the ticks' labels
	title    []string
	curves   []curve
	observed []observed
	in       vg.Rectangle // of the data
}

// observed is an observation in the panel's unit.
type observed struct {
	body            int
	time            float64
	value, low, top float64
	open            bool // outlined marker, of the quantity drawn dashed
}

// panelsFor gives the panels that have something to show from one time to
// another, with curves and axes but no place yet.
func panelsFor(h History, bodies []body, from, to float64) ([]panel, error) {
	panels := make([]panel, len(sheets))
	values := make([][]float64, len(sheets))
	for i := range sheets {
		panels[i].sheet, panels[i].index = sheets[i], i
	}
	index := map[string]int{}
	start := map[string]float64{}
	for i, b := range bodies {
		index[b.Name] = i
		start[b.Name] = firstValue(b.SemimajorAxisKm)
		for _, q := range quantities {
			v := q.column(b.Series)
			if len(v) == 0 {
				continue
			}
			if q.panel == axisSheet {
				v = percentFrom(start[b.Name], v)
			}
			c := curve{body: i, dashed: q.dashed, time: b.Time, value: v}.cut(from, to)
			panels[q.panel].curves = append(panels[q.panel].curves, c)
			values[q.panel] = append(values[q.panel], c.shown(from, to)...)
		}
	}
	for _, o := range h.Observed {
		i, drawn := index[o.Body]
		if !drawn || o.TimeMyr < from || o.TimeMyr > to {
			continue
		}
		for _, q := range quantities {
			if q.name != o.Quantity {
				continue
			}
			ends := []float64{o.Value, o.Value - o.Error, o.Value + o.Error}
			if q.panel == axisSheet {
				if math.IsNaN(start[o.Body]) {
					return nil, fmt.Errorf("figure: observed semi-major axis of %q: the history has none to compare it with", o.Body)
				}
				ends = percentFrom(start[o.Body], ends)
			}
			p := &panels[q.panel]
			open := q.dashed && q.panel == heatSheet
			p.observed = append(p.observed, observed{i, o.TimeMyr, ends[0], ends[1], ends[2], open})
			values[q.panel] = append(values[q.panel], ends...)
		}
	}
	var shown []panel
	for i, p := range panels {
		var ok bool
		if p.y, ok = p.scaleFor(values[i]); ok {
			if i == heatSheet {
				p.label = p.heatLabel()
			}
			shown = append(shown, p)
		}
	}
	if len(shown) == 0 {
		return nil, fmt.Errorf("figure: no body has a value from %g to %g Myr", from, to)
	}
	return shown, nil
}

// heatLabel names the one kind of heat in the panel, or both.
func (p panel) heatLabel() string {
	switch made, lost := p.kinds(); {
	case made && lost:
		return "heat made, lost"
	case lost:
		return "heat lost"
	}
	return "heat made"
}

// kinds says whether the panel holds anything solid and anything dashed.
func (p panel) kinds() (solid, dashed bool) {
	for _, c := range p.curves {
		solid, dashed = solid || !c.dashed, dashed || c.dashed
	}
	for _, o := range p.observed {
		solid, dashed = solid || !o.open, dashed || o.open
	}
	return solid, dashed
}
