package figure

import (
	"fmt"
	"math"
	"path/filepath"

	"tidekiln/evolve"
	"tidekiln/evolve/record"
	"tidekiln/scenarios"
)

// columnOf maps the columns of bodies/ to what is drawn.
var columnOf = map[string]struct {
	quantity string
	set      func(*Series, []float64)
}{
	"eccentricity":      {"eccentricity", func(s *Series, v []float64) { s.Eccentricity = v }},
	"tidal_heat_W":      {"tidal_heat", func(s *Series, v []float64) { s.TidalHeatW = v }},
	"surface_loss_W":    {"surface_loss", func(s *Series, v []float64) { s.SurfaceLossW = v }},
	"temperature_K":     {"temperature", func(s *Series, v []float64) { s.TemperatureK = v }},
	"melt_fraction":     {"melt_fraction", func(s *Series, v []float64) { s.MeltFraction = v }},
	"semimajor_axis_km": {"semimajor_axis", func(s *Series, v []float64) { s.SemimajorAxisKm = v }},
}

// Load reads what a picture shows from a dataset of one history: the rows of
// bodies/, the events, and the observations of its scenario.
func Load(dir string) (History, error) {
	var h History
	about, err := evolve.Describe(dir)
	if err != nil {
		return h, err
	}
	d, err := record.Open(dir)
	if err != nil {
		return h, err
	}
	if err := h.loadBodies(d); err != nil {
		return h, fmt.Errorf("%s: %w", dir, err)
	}
	if err := h.loadEvents(d); err != nil {
		return h, fmt.Errorf("%s: %w", dir, err)
	}
	s, err := scenarios.Read(filepath.Join(dir, "runs"), []byte(about.Scenario))
	if err != nil {
		return h, fmt.Errorf("%s: the scenario in its footer: %w", dir, err)
	}
	h.Title = s.Title
	h.Note = fmt.Sprintf("run %s, tidekiln %s", about.RunID, about.Version)
	for _, o := range s.Observed {
		c, drawn := columnOf[o.Column]
		if !drawn {
			continue
		}
		at := o.At
		if at < 0 {
			at = about.End
		}
		h.Observed = append(h.Observed, Observation{Body: o.Body, Quantity: c.quantity, TimeMyr: at / evolve.Megayear, Value: o.Value, Error: o.Error})
	}
	return h, nil
}

func (h *History) loadBodies(d *record.Dataset) error {
	f, err := d.Read("bodies")
	if err != nil {
		return err
	}
	names, _, err := f.Texts("body")
	if err != nil {
		return err
	}
	rows := map[string][]int{}
	for i, n := range names {
		if rows[n] == nil {
			h.Bodies = append(h.Bodies, Series{Name: n})
		}
		rows[n] = append(rows[n], i)
	}
	pick := func(column string, body int) ([]float64, error) {
		x, valid, err := f.Floats(column)
		if err != nil {
			return nil, err
		}
		var out []float64
		for _, i := range rows[h.Bodies[body].Name] {
			v := x[i]
			if !valid[i] {
				v = math.NaN()
			}
			out = append(out, v)
		}
		return out, nil
	}
	for b := range h.Bodies {
		if h.Bodies[b].Time, err = pick("time_Myr", b); err != nil {
			return err
		}
		for column, c := range columnOf {
			v, err := pick(column, b)
			if err != nil {
				return err
			}
			c.set(&h.Bodies[b], v)
		}
	}
	return nil
}

func (h *History) loadEvents(d *record.Dataset) error {
	f, err := d.Read("events")
	if err != nil {
		return err
	}
	times, _, err := f.Floats("time_Myr")
	if err != nil {
		return err
	}
	names, _, err := f.Texts("event")
	if err != nil {
		return err
	}
	bodies, _, err := f.Texts("body")
	if err != nil {
		return err
	}
	for i, n := range names {
		if n != evolve.EventSpanEnded {
			h.Marks = append(h.Marks, Mark{TimeMyr: times[i], Label: n, Body: bodies[i]})
		}
	}
	return nil
}
