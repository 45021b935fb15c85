package evolve

import (
	"fmt"
	"math"
	"testing"

	"tidekiln/orbit"
	"tidekiln/scenarios"
)

// galilean is the published system of Jupiter (masses, radii, GM, J2 and mean
// motions of the JPL satellite constants), with k2/Q = 0.015 in Io and 1.1e-5 in
// Jupiter (Lainey et al. 2009, Nature 459, 957).
func galilean(t *testing.T) *scenarios.Scenario {
	t.Helper()
	s, err := scenarios.Read("galilean", fmt.Appendf(nil, `
[run]
span = "1 Myr"
[central]
name = "Jupiter"
mass = "%.17g kg"
radius = "71492 km"
J2 = 0.0146965
tide = { law = "constant-q", k2_over_Q = 1.1e-5 }
[orbiter.Io]
mass = "8.9319e22 kg"
radius = "1821.6 km"
period = "%.17g d"
interior = { model = "fixed", k2_over_Q = 0.015 }
[orbiter.Europa]
mass = "4.7998e22 kg"
radius = "1560.8 km"
[orbiter.Ganymede]
mass = "1.4819e23 kg"
radius = "2631.2 km"
[chain.laplace]
members = ["Io", "Europa", "Ganymede"]
ratios = ["2:1", "2:1"]
offset = "-0.7395507 deg/day"
`, 1.26686534e17/orbit.G, 360/203.4889538))
	if err != nil {
		t.Fatal(err)
	}
	return s
}

// Libration periods and damping of two locked chains, from two independent
// implementations: at the tide-free equilibrium, and after projection onto the
// slow manifold, where weak damping differs by up to a factor of two.
func TestSpectra(t *testing.T) {
	for _, c := range []struct {
		name            string
		s               *scenarios.Scenario
		period          []float64 // yr
		free, projected []float64 // /Myr
	}{
		{"quiet chain", shipped(t, "quiet-chain"), []float64{1.2065, 1.3617, 1.4008, 4.3304},
			[]float64{-3.611, -9.35e-5, -3.19e-3, -0.2057}, []float64{-3.465, -9.92e-5, -3.53e-3, -0.3414}},
		{"Galilean moons", galilean(t), []float64{1.1036, 1.2767, 1.3232, 4.4380},
			[]float64{-6.206, -3.63e-4, -2.27e-3, -0.2487}, []float64{-6.029, -4.06e-4, -2.59e-3, -0.4139}},
	} {
		p, y, err := NewSystem(c.s)
		if err != nil {
			t.Fatal(err)
		}
		for i, m := range librations(t, p, y) {
			near(t, c.name+": period", m.Period()/orbit.Year, c.period[i], digits(c.period[i], 5))
			near(t, c.name+": Re λ at the tide-free equilibrium", m.Growth*Megayear, c.free[i], spectrumError(c.free[i], i))
		}
		e, err := Survey(c.s, 0)
		if err != nil {
			t.Fatal(err)
		}
		for i, m := range e.Chains[0].Modes {
			near(t, c.name+": period on the slow manifold", m.Period()/orbit.Year, c.period[i], digits(c.period[i], 5))
			near(t, c.name+": Re λ on the slow manifold", m.Growth*Megayear, c.projected[i], spectrumError(c.projected[i], i))
		}
	}
}

// spectrumError is half a unit of the last of the digits given (four in modes 1
// and 4, three in the others), relative. The eigenvalue routine adds 1e-15 of
// the fastest frequency, 5e6/Myr, some 1e-8/Myr at most.
func spectrumError(v float64, mode int) float64 {
	n := 3
	if mode == 0 || mode == 3 {
		n = 4
	}
	return digits(v, n) + 1e-8/math.Abs(v)
}

// Quick estimates of Io: the stretch-work bound (common practice, no source) is
// two orders of magnitude above what a viscoelastic Io dissipates, 9.3e13 W at
// e = 0.0041 for k2/Q = 0.015 (Lainey et al. 2009); the damping time of a free
// eccentricity is 1.533e5 yr (2/21 (m/M)(a/R)⁵ (Q/k2)/n).
func TestSurveyOfIo(t *testing.T) {
	e, err := Survey(galilean(t), 50)
	if err != nil {
		t.Fatal(err)
	}
	io := e.Bodies[0]
	// The forced eccentricity of the first-order model is 0.00443.
	scale := 0.0041 / io.Orbit.Eccentricity
	near(t, "force swing", io.Stretch.ForceSwing*scale, 2.66e19, 0.05)
	near(t, "bound", io.Stretch.Power*scale, 1.7e16, 0.05)
	if share := io.TidalHeat / io.Stretch.Power * scale; share < 1./300 || share > 1./100 {
		t.Errorf("dissipated share of the bound %g, want two orders of magnitude below it", share)
	}
	near(t, "heat", io.TidalHeat*scale*scale, 9.3375e13, 0.01) // the apsidal factor is 0.5 %
	// The formula takes the observed n for √(GM/a³); J2 and the resonance part
	// them by (3/2)J2(R/a)² = 6e-4 and more, and the rate goes with n⁵.
	near(t, "damping time", io.Damping/orbit.Year, 1.533e5, 5e-3)
	near(t, "steady heat", e.Chains[0].SteadyHeat, 6.4689e13/1.102*1.1, 0.03) // n from λ̇ and the torques on the others, 2.2 % of Io's
	near(t, "Roche limit", io.Roche, 2.44*7.1492e7*math.Cbrt(1.26686534e17/orbit.G/math.Pow(7.1492e7, 3)/(8.9319e22/math.Pow(1.8216e6, 3))), 1e-12)
	near(t, "density", io.Density, 3527.5, 1e-4)
	if !math.IsNaN(io.Cooling) || !math.IsNaN(e.Bodies[1].TidalHeat) {
		t.Error("bodies without a thermal state or an interior have figures of one")
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
