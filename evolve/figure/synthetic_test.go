package figure

import (
	"fmt"
	"math"
)

// oscillating is an invented pair: Cinder's heat and melt swing with its
// eccentricity, Brine follows and has no melt.
func oscillating(n int) History {
	var a, b Series
	a.Name, b.Name = "Cinder", "Brine"
	for i := range n {
		t := 900 * float64(i) / float64(n-1)
		swing := 0.5 + 0.5*math.Sin(2*math.Pi*t/120)
		e := 0.0035 + 0.009*math.Pow(swing, 4)
		a.Time = append(a.Time, t)
		a.Eccentricity = append(a.Eccentricity, e)
		a.TidalHeatW = append(a.TidalHeatW, 9e13*math.Pow(e/0.0041, 2))
		a.SurfaceLossW = append(a.SurfaceLossW, 6e13*(1+0.8*math.Sin(2*math.Pi*(t-20)/120)))
		a.TemperatureK = append(a.TemperatureK, 1530+70*math.Sin(2*math.Pi*(t-25)/120))
		a.MeltFraction = append(a.MeltFraction, math.Max(0, 0.15*math.Sin(2*math.Pi*(t-25)/120)))
		a.SemimajorAxisKm = append(a.SemimajorAxisKm, 421800*(1+2e-5*t))
		b.Time = append(b.Time, t)
		b.Eccentricity = append(b.Eccentricity, 0.0094+0.0004*math.Cos(2*math.Pi*t/120))
		b.TidalHeatW = append(b.TidalHeatW, 2e12*(1+0.1*math.Cos(2*math.Pi*t/120)))
		b.SurfaceLossW = append(b.SurfaceLossW, 4e12*math.Exp(-t/700))
		b.TemperatureK = append(b.TemperatureK, 1350-0.1*t)
		b.SemimajorAxisKm = append(b.SemimajorAxisKm, 671000*(1+1.6e-5*t))
	}
	return History{
		Title:  "Cinder and Brine in 2:1",
		Note:   "Invented system; run 0123456789abcdef, physics 3.",
		Bodies: []Series{a, b},
		Marks: []Mark{
			{TimeMyr: 24, Label: "melting begins", Body: "Cinder"},
			{TimeMyr: 96, Label: "frozen", Body: "Cinder"},
			{TimeMyr: 610, Label: "slow phase"},
		},
		Observed: []Observation{
			{"Cinder", "tidal_heat", 900, 1.05e14, 0.12e14},
			{"Cinder", "eccentricity", 900, 0.0041, 0.0002},
			{"Brine", "surface_loss", 900, 1.5e12, 1e12},
		},
	}
}

// many is a history of n bodies whose names are unlike in length.
func many(n int) History {
	h := History{Title: "Many bodies"}
	for k := range n {
		s := Series{Name: fmt.Sprintf("Body %c%0*d", 'A'+k, 1+2*k, k)}
		for i := range 300 {
			t := 4500 * float64(i) / 299
			s.Time = append(s.Time, t)
			s.Eccentricity = append(s.Eccentricity, 0.02*math.Exp(-t/(300+400*float64(k)))+1e-6)
			s.TidalHeatW = append(s.TidalHeatW, 1e14*math.Exp(-2*t/(300+400*float64(k))))
			s.TemperatureK = append(s.TemperatureK, 1200+50*float64(k)+100*math.Exp(-t/1000))
			s.MeltFraction = append(s.MeltFraction, 0.02*float64(k)*math.Exp(-t/1000))
			s.SemimajorAxisKm = append(s.SemimajorAxisKm, 3e5*float64(k+1)*(1+1e-8*t*float64(k+1)))
		}
		h.Bodies = append(h.Bodies, s)
	}
	return h
}
