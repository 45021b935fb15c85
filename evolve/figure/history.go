package figure

import (
	"fmt"
	"math"
	"slices"
	"strconv"
	"strings"
)

// Series is the history of one body. Every column is nil or as long as Time;
// NaN or an infinity is no value and leaves a gap in the curve.
type Series struct {
	Name            string    // unique, not empty
	Time            []float64 // Myr, finite, never decreasing
	Eccentricity    []float64 // dimensionless
	TidalHeatW      []float64 // W, heat made by tides
	SurfaceLossW    []float64 // W, heat lost through the surface
	TemperatureK    []float64 // K, mean temperature of the mantle
	MeltFraction    []float64 // dimensionless, 0 to 1
	SemimajorAxisKm []float64 // km, drawn as change from its first value
}

// Mark is an event, drawn as a thin line at its time.
type Mark struct {
	TimeMyr float64 // Myr, finite
	Label   string  // short; may be empty
	Body    string  // name of the body it belongs to; empty for the system
}

// Observation is a measured value, drawn with its error bar.
type Observation struct {
	Body     string
	Quantity string  // eccentricity, tidal_heat, surface_loss, temperature, melt_fraction or semimajor_axis
	TimeMyr  float64 // Myr, finite
	Value    float64 // W, K or km as in Series, finite
	Error    float64 // one standard deviation, same unit, >= 0
}

// History is all that one picture shows.
type History struct {
	Title    string // above the picture; may be empty
	Note     string // below it in small print; may be empty
	Bodies   []Series
	Marks    []Mark
	Observed []Observation
}

// check says what in h cannot be drawn, nil if all can.
func (h History) check() error {
	if len(h.Bodies) == 0 {
		return fmt.Errorf("figure: the history holds no body")
	}
	seen := map[string]bool{}
	for i, s := range h.Bodies {
		switch {
		case s.Name == "":
			return fmt.Errorf("figure: body %d has no name", i)
		case seen[s.Name]:
			return fmt.Errorf("figure: two bodies are named %q: give each its own name", s.Name)
		}
		seen[s.Name] = true
		if err := s.check(); err != nil {
			return err
		}
	}
	for i, m := range h.Marks {
		if !finite(m.TimeMyr) {
			return fmt.Errorf("figure: mark %d (%q): its time is not finite", i, m.Label)
		}
	}
	for i, o := range h.Observed {
		at := fmt.Sprintf("figure: observation %d (%s of %q)", i, o.Quantity, o.Body)
		switch {
		case !seen[o.Body]:
			return fmt.Errorf("%s: no such body, there are: %s", at, h.listed())
		case !slices.ContainsFunc(quantities, func(q quantity) bool { return q.name == o.Quantity }):
			return fmt.Errorf("%s: no such quantity, there are: %s", at, quantityNames())
		case !finite(o.TimeMyr) || !finite(o.Value):
			return fmt.Errorf("%s: time and value must be finite", at)
		case !finite(o.Error) || o.Error < 0:
			return fmt.Errorf("%s: error %g must be finite and not negative", at, o.Error)
		}
	}
	return nil
}

func (s Series) check() error {
	for i, t := range s.Time {
		if !finite(t) {
			return fmt.Errorf("figure: body %q: time %d is not finite", s.Name, i)
		}
		if i > 0 && t < s.Time[i-1] {
			return fmt.Errorf("figure: body %q: time %d (%g Myr) is before the one ahead of it: sort the rows by time", s.Name, i, t)
		}
	}
	for _, q := range quantities {
		if n := len(q.column(s)); n != 0 && n != len(s.Time) {
			return fmt.Errorf("figure: body %q: %d values of %s for %d times", s.Name, n, q.name, len(s.Time))
		}
	}
	return nil
}

// listed names the bodies for a message, quoted for what names may hold.
func (h History) listed() string {
	names := make([]string, len(h.Bodies))
	for i, s := range h.Bodies {
		names[i] = strconv.Quote(s.Name)
	}
	return strings.Join(names, ", ")
}

// largest and smallest bound the values that axes are made for: differences
// and powers of ten of such numbers stay within float64.
const (
	largest  = 1e200
	smallest = 1e-200
)

// finite says that v is a value: no NaN, no infinity, nothing near one.
func finite(v float64) bool { return math.Abs(v) <= largest }
