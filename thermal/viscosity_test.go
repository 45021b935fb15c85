package thermal

import (
	"math"
	"testing"
)

func viscosityOf(t testing.TB, law string, keys map[string]any) viscosity {
	t.Helper()
	v, err := viscosities.build("viscosity law", valuesOf(t, Viscosities, table{law, keys}))
	if err != nil {
		t.Fatal(err)
	}
	return v
}

// η = 1.6e5 Pa s · exp(300 kJ/mol/(R T)) is 9.952e14 Pa s at 1600 K and
// 2.495e16 Pa s at 1400 K (Fischer & Spohn 1990, parameters from memory;
// arithmetic re-derived): half a unit of the fourth digit of either number.
func TestArrheniusBetweenTwoTemperatures(t *testing.T) {
	a := viscosityOf(t, "arrhenius", map[string]any{"reference": 9.952e14, "at": 1600.0, "activation_energy": 3e5})
	ln, _, _ := a.logViscosity(1400)
	near(t, "η(1400 K)", math.Exp(ln), 2.495e16, 0.5/2495+0.5/9952)
	ln, _, _ = a.logViscosity(1600)
	near(t, "η(1600 K)", math.Exp(ln), 9.952e14, 1e-13)
}

// With γ = E/(R T²) the linearised law has the value and the slope of the
// Arrhenius law at T (Solomatov & Moresi 2000).
func TestFrankKamenetskiiTouchesArrhenius(t *testing.T) {
	gamma := 3e5 / (gasConstant * 1600 * 1600)
	a := viscosityOf(t, "arrhenius", map[string]any{"reference": 1e18, "at": 1600.0, "activation_energy": 3e5})
	f := viscosityOf(t, "frank-kamenetskii", map[string]any{"reference": 1e18, "at": 1600.0, "gamma": gamma})
	la, sa, _ := a.logViscosity(1600)
	lf, sf, _ := f.logViscosity(1600)
	near(t, "ln η", lf, la, 1e-14)
	near(t, "d ln η/dT", sf, sa, 1e-14)
	near(t, "rheological scale", -1/sf, 70.95008, 1e-6) // 8.314462618·1600²/3e5
}

// Five-point differences with a step of 0.5 K: truncation (0.5/300)⁴ ≈ 1e-11,
// rounding 1e-16·40/(0.5·0.014) ≈ 1e-12.
func TestViscosityDerivatives(t *testing.T) {
	for name, v := range map[string]viscosity{
		"arrhenius":         viscosityOf(t, "arrhenius", map[string]any{"reference": 1e18, "at": 1600.0, "activation_energy": 3e5}),
		"frank-kamenetskii": viscosityOf(t, "frank-kamenetskii", map[string]any{"reference": 1e18, "at": 1600.0, "gamma": 0.014}),
	} {
		for _, T := range []float64{300, 1500, 2500} {
			_, s, c := v.logViscosity(T)
			near(t, name+" slope", s, slope(func(T float64) float64 { ln, _, _ := v.logViscosity(T); return ln }, T, 0.5), 3e-10)
			fd := slope(func(T float64) float64 { _, s, _ := v.logViscosity(T); return s }, T, 0.5)
			if !(math.Abs(c-fd) <= 3e-10*math.Abs(s/T)) {
				t.Errorf("%s curvature at %g K = %g, differences give %g", name, T, c, fd)
			}
		}
	}
}
