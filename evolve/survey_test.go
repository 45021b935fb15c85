package evolve

import (
	"fmt"
	"math"
	"testing"

	"tidekiln/orbit"
	"tidekiln/scenarios"
)

// loneIo is Io (JPL satellite constants) on an orbit of its observed
// eccentricity, with the k2/Q of Lainey et al. 2009, Nature 459, 957.
func loneIo(t *testing.T) *scenarios.Scenario {
	t.Helper()
	s, err := scenarios.Read("io", fmt.Appendf(nil, `
[run]
span = "1 Myr"
[central]
name = "Jupiter"
mass = "%.17g kg"
radius = "71492 km"
tide = { law = "constant-q", k2_over_Q = 1.1e-5, eccentric = false }
[orbiter.Io]
mass = "8.9319e22 kg"
radius = "1821.6 km"
period = "1.769137786 d"
eccentricity = 0.0041
interior = { model = "fixed", k2_over_Q = 0.015 }
`, 1.26686534e17/orbit.G))
	if err != nil {
		t.Fatal(err)
	}
	return s
}

// Quick estimates of Io. The stretch-work bound (common practice, no source):
// a change of the tidal force near 2.66e19 N and, for a mean displacement of
// 50 m, a bound just over 1.7e16 W, within 5 %. What a viscoelastic Io dissipates
// is two orders of magnitude less: 9.3375e13 W, the leading term; the e⁴ term and
// m/M are 1e-4 of it.
func TestSurveyOfIo(t *testing.T) {
	e, err := Survey(loneIo(t), 50)
	if err != nil {
		t.Fatal(err)
	}
	io := e.Bodies[0]
	near(t, "force swing", io.Stretch.ForceSwing, 2.66e19, 0.05)
	near(t, "bound", io.Stretch.Power, 1.7e16, 0.05)
	near(t, "heat", io.TidalHeat, 9.3375e13, 1e-3)
	if share := io.TidalHeat / io.Stretch.Power; share < 1./300 || share > 1./100 {
		t.Errorf("dissipated share of the bound %g, want two orders of magnitude below it", share)
	}
	// τ_e = (2/21)(m/M)(a/R)⁵(Q/k2)/n to leading order: e⁴ terms of the heat are
	// 7.2e² = 1.2e-4 of it and M for M + m is 5e-5. With the rounded a = 421800 km
	// the published form gives 1.533e5 yr.
	a, n, ratio := io.Orbit.SemimajorAxis, io.Orbit.KeplerMotion, 8.9319e22/(1.26686534e17/orbit.G)
	near(t, "damping time", io.Damping, 2./21*ratio*math.Pow(a/1.8216e6, 5)/(0.015*n), 2.5e-4)
	near(t, "published damping time", io.Damping/orbit.Year*math.Pow(4.218e8/a, 5), 1.533e5, 5e-4)
	// a/ȧ = a⁵/(3 (k2/Q)(m/M) R_c⁵ n), from the circular torque.
	near(t, "migration", io.Migration, math.Pow(a/7.1492e7, 5)/(3*1.1e-5*ratio*n), 2*ratio)
	near(t, "Roche limit", io.Roche, 2.44*1.8216e6*math.Cbrt(1/ratio), 1e-12)
	near(t, "Hill radius", io.Hill, a*(1-0.0041)*math.Cbrt(ratio/3), 1e-9) // e of the state after projection
	near(t, "density", io.Density, 3527.5, 1e-4)
	if !math.IsNaN(io.Cooling) || !math.IsNaN(io.Maxwell) || len(e.Chains) != 0 {
		t.Error("a body without a thermal state or a chain has figures of one")
	}
}

// The cooling time of a rocky body is T over the rate at which it would cool:
// m dh/dT T/(loss − radiogenic), with dh/dT = c_p + L/(T_l − T_s) in the melting
// range.
func TestSurveyOfRock(t *testing.T) {
	e, err := Survey(shipped(t, "volcanic-cycle"), 0)
	if err != nil {
		t.Fatal(err)
	}
	b := e.Bodies[0]
	want := 9.1e22 * (1200 + 4e5/400) * 1650 / (b.Loss - b.Radiogenic)
	near(t, "cooling time", b.Cooling, want, 1e-5) // a difference over 1e-6 of the scale
	near(t, "radiogenic heat", b.Radiogenic, 3.5e-12*9.1e22, 1e-12)
	near(t, "Maxwell time", b.Maxwell, b.State.Viscosity.X/b.State.Rigidity.X, 1e-15)
}
