package figure

import (
	"math"
	"testing"
)

func TestAxisFollowsTheValues(t *testing.T) {
	ecc, heat, temperature, melt := sheets[0], sheets[heatSheet], sheets[2], sheets[meltSheet]
	for name, c := range map[string]struct {
		sheet  sheet
		values []float64
		log    bool
	}{
		"eccentricity of one size":   {ecc, []float64{0.002, 0.015}, false},
		"eccentricity over decades":  {ecc, []float64{0.002, 0.017}, true},
		"eccentricity with a zero":   {ecc, []float64{0, 0.002, 0.017}, true},
		"heat":                       {heat, []float64{1e14, 1.1e14}, true},
		"constant heat":              {heat, []float64{1e14, 1e14}, true},
		"temperature":                {temperature, []float64{100, 1800}, false},
		"melt":                       {melt, []float64{0, 1e-5, 0.3}, false},
		"values beside missing ones": {ecc, []float64{math.NaN(), 0.01, math.Inf(1), 0.02}, false},
	} {
		s, ok := c.sheet.scaleFor(c.values)
		if !ok || s.log != c.log || !(s.lo < s.hi) {
			t.Errorf("%s: %+v, %v, want log %v", name, s, ok, c.log)
		}
		for _, v := range c.values {
			if at := s.at(v); !(at > 0 && at < 1) && finite(v) && !(c.log && v <= 0) {
				t.Errorf("%s: %g lies at %g of the axis", name, v, at)
			}
		}
	}
	if _, ok := heat.scaleFor([]float64{0, -1, math.NaN()}); ok {
		t.Error("an axis for heat that has no positive value")
	}
	if _, ok := melt.scaleFor(nil); ok {
		t.Error("an axis for nothing")
	}
}

func TestLogAxisEndsAfterItsDecades(t *testing.T) {
	s, _ := sheets[heatSheet].scaleFor([]float64{1e-30, 1e14})
	// 12 decades, and 6 % of them at each end: 13.44.
	if got := math.Log10(s.hi / s.lo); math.Abs(got-13.44) > 1e-9 {
		t.Errorf("%.3f decades, want 13.44", got)
	}
}

func TestNoiseIsNotMagnified(t *testing.T) {
	s, _ := sheets[axisSheet].scaleFor([]float64{0, 2.2e-14, -1.1e-14})
	if s.hi-s.lo < 1 {
		t.Errorf("rounding of a constant axis fills %+v", s)
	}
	s, _ = sheets[2].scaleFor([]float64{1600, 1600.01})
	if s.hi-s.lo < 10 {
		t.Errorf("0.01 K fills %+v", s)
	}
	s, _ = sheets[meltSheet].scaleFor([]float64{0, 0})
	if s.lo < -0.01 || s.hi < 0.05 {
		t.Errorf("no melt at all on the axis %+v", s)
	}
}

// Extreme but finite numbers must neither hang nor leave an axis without ends.
func TestExtremeValuesGetAnAxis(t *testing.T) {
	for _, sh := range sheets {
		for _, v := range [][]float64{{-1e200, 1e200}, {5e-324, 1e-310}, {1e-199, 1e199}, {-1e-300, 0}, {math.MaxFloat64}} {
			s, ok := sh.scaleFor(v)
			if !ok {
				continue
			}
			if !(s.lo < s.hi) || math.IsInf(s.hi-s.lo, 0) {
				t.Errorf("%s of %g: %+v", sh.label, v, s)
			}
			if ticks, _ := s.ticks(4); len(ticks) > 200 {
				t.Errorf("%s of %g: %d ticks", sh.label, v, len(ticks))
			}
		}
	}
}

func TestWindow(t *testing.T) {
	at := func(times ...float64) []body { return []body{{Series: Series{Name: "Ombra", Time: times}}} }
	for name, c := range map[string]struct {
		opt      Options
		times    []body
		from, to float64
	}{
		"all":              {Options{}, at(0, 5, 900), 0, 900},
		"part":             {Options{FromMyr: 100, ToMyr: 200}, at(0, 5, 900), 100, 200},
		"single":           {Options{}, at(100), 99, 101},
		"single at zero":   {Options{}, at(0), -1e-3, 1e-3},
		"one ulp":          {Options{FromMyr: 100, ToMyr: math.Nextafter(100, 200)}, at(0, 900), 99, 101},
		"logarithm":        {Options{LogTime: true}, at(0, 0.5, 900), 0.5, 900},
		"before the start": {Options{FromMyr: -10}, at(0, 900), -10, 900},
	} {
		from, to, err := c.opt.window(c.times)
		// Ends are copied, or moved by one product and one sum.
		if err != nil || math.Abs(from-c.from) > 1e-9 || math.Abs(to-c.to) > 1e-9 {
			t.Errorf("%s: %g to %g, %v, want %g to %g", name, from, to, err, c.from, c.to)
		}
	}
}

func TestObservedAxisIsRelativeToTheStart(t *testing.T) {
	h := History{
		Bodies:   []Series{{Name: "Ombra", Time: []float64{0, 1}, SemimajorAxisKm: []float64{200, 220}}},
		Observed: []Observation{{"Ombra", "semimajor_axis", 1, 230, 10}},
	}
	bodies, err := choose(h, nil)
	if err != nil {
		t.Fatal(err)
	}
	panels, err := panelsFor(h, bodies, 0, 1)
	if err != nil {
		t.Fatal(err)
	}
	o := panels[0].observed[0]
	// 230, 220 and 240 over 200; a few roundings of numbers near 1, times 100.
	for i, d := range []float64{o.value - 15, o.low - 10, o.top - 20, panels[0].curves[0].value[1] - 10} {
		if math.Abs(d) > 1e-12 {
			t.Errorf("number %d is off by %g %%", i, d)
		}
	}
}
