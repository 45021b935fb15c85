package thermal

import (
	"math"
	"testing"
)

// example is the layer of the worked example: ρ 3300 kg/m³, α 3e-5 /K, g 1.8
// m/s², κ 1e-6 m²/s, k 4 W/m/K, D 1000 km.
var example = layer{density: 3300, gravity: 1.8, depth: 1e6, conductivity: 4, diffusivity: 1e-6, expansivity: 3e-5}

func fluxOf(t testing.TB, law string, keys map[string]any, drop, scale, eta float64) float64 {
	t.Helper()
	lid, err := convections.build("law of convection", valuesOf(t, Convections, table{law, keys}))
	if err != nil {
		t.Fatal(err)
	}
	ln, _, _, _ := lid(example).logFlux(drop, scale, math.Log(eta))
	return math.Exp(ln)
}

// E 300 kJ/mol, T 1600 K, T_surface 100 K, η 1e18 Pa s: θ = 21.1416, Ra =
// 2.673e8, Nu = 5.840154969, q = 0.03504092981 W/m², re-derived from both the
// global and the local form of Solomatov & Moresi 2000, JGR 105, 21795. Ten
// digits.
func TestStagnantLidExample(t *testing.T) {
	scale := gasConstant * 1600 * 1600 / 3e5
	q := fluxOf(t, "stagnant-lid", nil, 1500, scale, 1e18)
	near(t, "q", q, 0.03504092981, 2e-10)
	near(t, "Nu", q*1e6/(4*1500), 5.840154969, 2e-10)
	// Neither drop nor depth matters to the local form.
	near(t, "q at another drop", fluxOf(t, "stagnant-lid", nil, 700, scale, 1e18), q, 1e-13)
}

// The steady scaling Nu = 1.89 θ^{−1.02} Ra^{0.2} (Moresi & Solomatov 1995,
// Phys. Fluids 7, 2154, from memory) by its exponents, against the formula.
func TestStagnantLidWithOtherExponents(t *testing.T) {
	scale := gasConstant * 1600 * 1600 / 3e5
	q := fluxOf(t, "stagnant-lid", map[string]any{"coefficient": 1.89, "theta_exponent": 1.02, "rayleigh_exponent": 0.2}, 1500, scale, 1e18)
	near(t, "q", q, 4*1500/1e6*1.89*math.Pow(1500/scale, -1.02)*math.Pow(2.673e8, 0.2), 1e-12)
}

// Nu = (Ra/1100.65)^{1/3} by hand, Ra = 2.673e8: the cube of Nu is
// 242856.49…, so q = 0.006 W/m² · 62.391.
func TestMobileLidExample(t *testing.T) {
	q := fluxOf(t, "mobile-lid", nil, 1500, 71, 1e18)
	near(t, "q", q, 0.006*math.Cbrt(2.673e8/1100.65), 1e-12)
	near(t, "q", q, 0.37433, 1e-4)
}

// A heat flow of 2.5 W/m² from rock of 3000 kg/m³, L 4e5 J/kg, c 1200 J/kg/K,
// 1500 K warmer than the surface needs 1.19536 cm of melt a year (re-derived;
// balance of O'Reilly & Davies 1981, GRL 8, 313). Six digits.
func TestHeatPipe(t *testing.T) {
	in := cinder()
	in.keys["surface_temperature"] = 500.0
	in.keys["temperature"] = 2000.0
	in.keys["melt_loss"] = table{"heat-pipe", map[string]any{"velocity": 1.19536e-2 / (365.25 * 86400)}}
	body := Body{Radius: 1.5e6, Mass: 3000 * 4 * math.Pi / 3 * 1.5e6 * 1.5e6 * 1.5e6}
	r, err := NewInterior(valuesOf(t, Interiors, in), body)
	if err != nil {
		t.Fatal(err)
	}
	near(t, "q_m", r.Balance(0).MeltLoss/(4*math.Pi*1.5e6*1.5e6), 2.5, 5e-6)
	p := newHeatPipe(valuesOf(t, MeltLosses, table{"heat-pipe", map[string]any{"velocity": 1e-8, "exponent": 2.5}}))
	u, _ := p.velocity(0.25)
	near(t, "u", u, 1e-8/32, 1e-14) // 0.25^2.5 = 1/32
}
