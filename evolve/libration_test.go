package evolve

import (
	"fmt"
	"math"
	"testing"

	"tidekiln/evolve/ode"
	"tidekiln/orbit"
	"tidekiln/scenarios"
)

// galilean is the Galilean chain: masses and radii of JPL's satellite constants,
// GM of Jupiter 1.26686534e17 m³/s², k2/Q of Jupiter and Io near those of Lainey
// et al. 2009, Nature 459, 957. It is the case of the reference spectrum.
func galilean(t testing.TB) *scenarios.Scenario {
	t.Helper()
	s, err := scenarios.Read("galilean.toml", []byte(fmt.Sprintf(`
[run]
span = "10 Myr"
[central]
name = "Jupiter"
mass = "%v kg"
radius = "71492 km"
J2 = 0.0146965
tide = { law = "constant-q", k2_over_Q = 1.1e-5 }
[orbiter.Io]
mass = "8.9319e22 kg"
radius = "1821.6 km"
period = "%v d"
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
`, 1.26686534e17/orbit.G, 360/203.4889538)))
	if err != nil {
		t.Fatal(err)
	}
	return s
}

// projected returns a scenario's equations with a state on the slow manifold.
func projected(t testing.TB, s *scenarios.Scenario) (*System, []float64) {
	t.Helper()
	p, y, err := NewSystem(s)
	if err != nil {
		t.Fatal(err)
	}
	return p, onManifold(t, p, 0, y)
}

// onManifold projects a state.
func onManifold(t testing.TB, p *System, at float64, y []float64) []float64 {
	t.Helper()
	integ, err := ode.NewRadau(p, p.Tolerances())
	if err != nil {
		t.Fatal(err)
	}
	if err := integ.Start(at, y); err != nil {
		t.Fatal(err)
	}
	return append([]float64(nil), integ.State()...)
}

// startOf returns the librations at y.
func startOf(t testing.TB, p *System, y []float64) *carrier {
	t.Helper()
	l, err := newCarrier(p, 0, y, nil)
	if err != nil {
		t.Fatal(err)
	}
	return l
}

// Periods and damping of the reference spectra, re-derived twice by independent
// implementations, to the digits they give. The damping at the tide-free
// equilibrium shows how far off a state beside the slow manifold is.
func TestReferenceSpectra(t *testing.T) {
	for _, c := range []struct {
		name             string
		scenario         *scenarios.Scenario
		periods          [4]float64
		digits           int
		beside, onto     [4]float64
		besideDig, ontoD [4]int
	}{
		{"Galilean", galilean(t), [4]float64{1.1036, 1.2767, 1.3232, 4.4380}, 5,
			[4]float64{-6.206, -3.63e-4, -2.27e-3, -0.2487}, [4]float64{-6.029, -4.06e-4, -2.59e-3, -0.4139}, [4]int{4, 3, 3, 4}, [4]int{4, 3, 3, 4}},
		{"quiet-chain", shipped(t, "quiet-chain"), [4]float64{1.2065, 1.3617, 1.4008, 4.3304}, 5,
			[4]float64{-3.611, -9.35e-5, -3.19e-3, -0.2057}, [4]float64{-3.465, -9.92e-5, -3.53e-3, -0.3414}, [4]int{4, 3, 3, 4}, [4]int{4, 3, 3, 4}},
	} {
		p, y, err := NewSystem(c.scenario)
		if err != nil {
			t.Fatal(err)
		}
		before := startOf(t, p, y).chains[0].end().modes.Modes
		p, y = projected(t, c.scenario)
		after := startOf(t, p, y).chains[0].end().modes.Modes
		for i := range c.periods {
			what := fmt.Sprintf("%s, mode %d: ", c.name, i+1)
			// Half a unit in the last digit, and a tenth of one for theirs.
			near(t, what+"period", after[i].Period()/orbit.Year, c.periods[i], 1.2*digits(c.periods[i], c.digits))
			near(t, what+"Re λ beside the manifold", before[i].Growth*Megayear, c.beside[i], 1.2*digits(c.beside[i], c.besideDig[i]))
			near(t, what+"Re λ", after[i].Growth*Megayear, c.onto[i], 1.2*digits(c.onto[i], c.ontoD[i]))
		}
	}
}

// push is a chain whose planet's tide and whose moons' tides are given.
func push(t testing.TB, offset, central string, moons map[string]string) *scenarios.Scenario {
	t.Helper()
	edits := []scenarios.Edit{set("chain.inner.offset", offset), set("central.tide.k2_over_Q", central), {Path: "orbiter.Cinder.interior", Unset: true}}
	for name, k := range moons {
		edits = append(edits, set("orbiter."+name+".interior", `{ model = "fixed", k2_over_Q = `+k+` }`))
	}
	return shipped(t, "quiet-chain", edits...)
}

// A resolved integration of the coupled equations, displaced along one
// libration, grows or decays at the rate that is carried: to 1 % of the greater
// of that rate and of what the drift of the centre does to it. Re λ alone, which
// is logged beside, is not that rate. Chains are displaced both ways, and the
// half difference is taken, so that the second order drops out and the third, of
// (1e-4)², stays.
func TestCarriedGrowthAgainstResolvedIntegration(t *testing.T) {
	for _, c := range []struct {
		name, offset, central string
		moons                 map[string]string
		overstable            bool // a mode is
	}{
		{"damped", "-0.7 deg/day", "1.3e-2", map[string]string{"Cinder": "1", "Cairn": "1.5"}, false},
		{"overstable", "-0.1 deg/day", "1.3e-5", map[string]string{"Brine": "1.5"}, true},
	} {
		s := push(t, c.offset, c.central, c.moons)
		p, y := projected(t, s)
		l := startOf(t, p, y)
		modes := l.chains[0].end().modes.Modes
		const span = 500 * orbit.Year
		// The adiabatic path: one step of it carries the librations.
		integ, err := ode.NewRadau(p, p.Tolerances())
		if err != nil {
			t.Fatal(err)
		}
		if err := integ.Start(0, y); err != nil {
			t.Fatal(err)
		}
		for integ.T() < span {
			seg, err := integ.Step(span)
			if err != nil {
				t.Fatal(err)
			}
			l.advance(seg)
		}
		start := startOf(t, p, y)
		from, to := start.chains[0].end(), l.chains[0].end()
		growing := false
		for k := range from.modes.Modes {
			predicted := (to.size[k] - from.size[k]) / span
			growing = growing || predicted > 0
			var ends [2][]float64
			for i, way := range []float64{1, -1} {
				z := append([]float64(nil), y...)
				scale := way * 1e-4 / widest(from.width[k])
				for j, v := range from.modes.Modes[k].Right {
					z[j] += scale * real(v)
				}
				ends[i] = extrapolated(p, z, span, modes[0].Period()/5)
			}
			amplitude := func(m *orbit.Eigenmode, a, b []float64) float64 {
				sum := complex(0, 0)
				for j, w := range m.Left {
					sum += w * complex(0.5*(a[j]-b[j]), 0)
				}
				return math.Hypot(real(sum), imag(sum))
			}
			first := 0.5 * 1e-4 / widest(from.width[k]) // w·Re v = ½, to rounding
			last := amplitude(&to.modes.Modes[k], ends[0], ends[1])
			measured := math.Log(last/first) / span
			re := from.modes.Modes[k].Growth
			drift := math.Abs(predicted - 0.5*(re+to.modes.Modes[k].Growth))
			t.Logf("%s, %.4g yr: ln √I grows at %.6g /Myr, measured %.6g; Re λ %.6g /Myr", c.name, modes[k].Period()/orbit.Year, predicted*Megayear, measured*Megayear, re*Megayear)
			if math.Abs(measured-predicted) > 0.01*math.Max(math.Abs(predicted), drift) {
				t.Errorf("%s, mode %d: grows at %.6g /Myr, carried at %.6g", c.name, k+1, measured*Megayear, predicted*Megayear)
			}
		}
		if growing != c.overstable {
			t.Errorf("%s: a growing libration is there: %v, want %v", c.name, growing, c.overstable)
		}
	}
}

func widest(w []float64) float64 {
	most := 0.0
	for _, x := range w {
		most = math.Max(most, x)
	}
	return most
}

// Migration by a torque that does not depend on the orbit keeps every action:
// the flow stays Hamiltonian and the centre moves slowly (Arnold 1989,
// Mathematical Methods of Classical Mechanics, § 52). The central torque falls
// as Λ^{−12} and thereby damps what moves Λ, by Re w·(∂Λ̇/∂Λ)v exactly. What is
// left is the transport's error over a step, of fifth order in the change of the
// vectors: 0.2 rad in the steps here, so below 1e-3 of Re λ, which is all drift;
// one mode's passes through 0, and 1e-5 of the fastest's is left to it.
func TestMigrationKeepsActions(t *testing.T) {
	p, y := projected(t, push(t, "-0.7 deg/day", "1.3e-3", nil))
	l := startOf(t, p, y)
	o := p.Tolerances()
	o.MaxStep = 0.02 * Megayear
	integ, err := ode.NewRadau(p, o)
	if err != nil {
		t.Fatal(err)
	}
	if err := integ.Start(0, y); err != nil {
		t.Fatal(err)
	}
	for range 8 {
		seg, err := integ.Step(Megayear)
		if err != nil {
			t.Fatal(err)
		}
		l.advance(seg)
		c := &l.chains[0]
		for k := range 4 {
			// Simpson's rule over the knots of the step, as growth itself is summed.
			var damped, drift float64
			for i, weight := range []float64{1. / 6, 4. / 6, 1. / 6} {
				m := &c.knots[i].modes.Modes[k]
				for j := range p.bodies {
					b := &p.bodies[j]
					damped += weight * b.primaryKick.RaiseU * real(m.Left[b.member]*m.Right[b.member])
				}
				drift += weight * math.Abs(m.Growth)
			}
			span := seg.T1 - seg.T0
			grown := (c.end().size[k]-c.begin().size[k])/span - damped
			if math.Abs(grown) > 1e-3*drift+1e-5*math.Abs(c.end().modes.Modes[0].Growth) {
				t.Errorf("mode %d to %.3g Myr: ln √I grows at %.3g /Myr, Re λ %.3g", k+1, seg.T1/Megayear, grown*Megayear, drift*Megayear)
			}
		}
	}
}

// Growth summed over steps of the default tolerance and over those of a
// thousand times finer one. A tide that changes by a factor of two in a step
// costs Simpson's rule (ln 2)⁴/2880 = 1e-4 of the growth of the step.
func TestCarriedGrowthConverges(t *testing.T) {
	for _, name := range []string{"quiet-chain", "volcanic-cycle"} {
		var ends [2][]float64
		for i, tol := range []string{"1e-7", "1e-10"} {
			h := run1(t, shipped(t, name, set("run.span", "200 Myr"), set("run.record", "200 Myr"), set("run.tolerance", tol)))
			ends[i] = h.end.librations
		}
		p, y := projected(t, shipped(t, name))
		start := startOf(t, p, y).pack(0)
		for k := 0; k < 4; k++ {
			at := perLibratingChain + perLibration*k + 1
			grown := math.Abs(ends[1][at] - start[at])
			if d := math.Abs(ends[0][at] - ends[1][at]); d > 3e-4*grown+1e-4 {
				t.Errorf("%s, mode %d: ln √I ends %.2g apart, of a change by %.4g", name, k+1, d, grown)
			}
		}
	}
}

// An interior answers a libration within its period: leaving that out of the
// eigenvalues changes them by a part of some ten thermal rates, a few hundredths
// per Myr, over the libration's 1e6 to 5e6 rad/Myr. The library's eigenvalues of
// the whole matrix are good to 1e-9 of the rates, 1e-15 of the frequencies.
func TestInteriorsDoNotAnswerLibrations(t *testing.T) {
	p, y := projected(t, shipped(t, "volcanic-cycle"))
	dy, jac := make([]float64, p.dim), make([]float64, p.dim*p.dim)
	p.Jacobian(0, y, dy, jac)
	whole, err := p.groups[0].chain.Spectrum(jac, p.dim)
	if err != nil {
		t.Fatal(err)
	}
	for k, m := range startOf(t, p, y).chains[0].end().modes.Modes {
		if d := math.Abs(whole[k].Growth - m.Growth); d > 1e-4*math.Abs(m.Growth)+1e-9/Megayear {
			t.Errorf("mode %d: Re λ is %.9g /Myr with the interior, %.9g without", k+1, whole[k].Growth*Megayear, m.Growth*Megayear)
		}
	}
}

// Carrying over a step allocates nothing once the knots are there.
func TestCarryingAllocatesNothing(t *testing.T) {
	p, y := projected(t, shipped(t, "volcanic-cycle"))
	l := startOf(t, p, y)
	integ, err := ode.NewRadau(p, p.Tolerances())
	if err != nil {
		t.Fatal(err)
	}
	if err := integ.Start(0, y); err != nil {
		t.Fatal(err)
	}
	if n := testing.AllocsPerRun(50, func() {
		seg, err := integ.Step(1500 * Megayear)
		if err != nil {
			t.Fatal(err)
		}
		l.advance(seg)
	}); n != 0 {
		t.Errorf("%g allocations a step", n)
	}
}

// BenchmarkCarry times one step's worth.
func BenchmarkCarry(b *testing.B) {
	p, y := projected(b, shipped(b, "volcanic-cycle"))
	l := startOf(b, p, y)
	integ, err := ode.NewRadau(p, p.Tolerances())
	if err != nil {
		b.Fatal(err)
	}
	if err := integ.Start(0, y); err != nil {
		b.Fatal(err)
	}
	seg, err := integ.Step(Megayear)
	if err != nil {
		b.Fatal(err)
	}
	for b.Loop() {
		l.advance(seg)
		l.chains[0].end().t = seg.T0
	}
}
