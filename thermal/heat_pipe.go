package thermal

import (
	"math"

	"tidekiln/scenarios/key"
)

var heatPipeLaw = &key.Law{
	Name:    "heat-pipe",
	Meaning: "melt that rises to the surface at u₀ f^ν and freezes there",
	Source:  "O'Reilly & Davies 1981, GRL 8, 313; Moore 2001, Icarus 154, 548",
	Keys: []key.Key{
		{Name: "velocity", Kind: key.Quantity, Unit: "m/s", Range: key.AtLeast(0),
			Meaning: "u₀, volume of melt per area and time if everything were molten"},
		{Name: "exponent", Kind: key.Number, Default: 3.0, Range: key.Between(1, 20),
			Meaning: "ν: how the rise of melt depends on the melt fraction",
			Source:  "2–3 for porous flow, Moore 2001, Icarus 154, 548 (from memory)"},
	},
}

// heatPipe is u = u₀ f^ν, ν ≥ 1.
type heatPipe struct {
	speed    float64 // m/s
	exponent float64
	whole    int // the exponent if it is a small whole number, else 0
}

func newHeatPipe(v key.Values) meltLoss {
	p := heatPipe{speed: v.Float("velocity"), exponent: v.Float("exponent")}
	if n := int(p.exponent); float64(n) == p.exponent {
		p.whole = n
	}
	return p
}

// velocity takes a whole power as the polynomial it is, also below f = 0; any
// other power continues there as an odd function.
func (p heatPipe) velocity(f float64) (u, du float64) {
	var below float64 // f^{ν−1}
	if p.whole > 0 {
		below = 1
		for range p.whole - 1 {
			below *= f
		}
	} else {
		below = math.Pow(math.Abs(f), p.exponent-1)
	}
	return p.speed * below * f, p.speed * p.exponent * below
}
