package evolve

import (
	"context"
	"fmt"
	"math"
	"strings"
	"testing"

	"tidekiln/evolve/ode"
	"tidekiln/evolve/record"
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
	integ, err := ode.NewRadau(p, p.options())
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
		integ, err := ode.NewRadau(p, p.options())
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
			if err := l.advance(seg); err != nil {
				t.Fatal(err)
			}
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
				ends[i] = resolved(p, z, span, modes[0].Period()/5)
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
	o := p.options()
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
		if err := l.advance(seg); err != nil {
			t.Fatal(err)
		}
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

// twins are a heavy inner moon and a light outer one, whose free
// eccentricities turn at rates that cross as the pair is driven together.
// Their coupling goes with the root of the light one's mass.
func twins(t testing.TB, mass float64) *scenarios.Scenario {
	t.Helper()
	s, err := scenarios.Read("twins.toml", []byte(fmt.Sprintf(`
[run]
span = "10 Myr"
[central]
name = "Ombra"
mass = "1.6e27 kg"
radius = "66000 km"
J2 = 0.012
tide = { law = "constant-q", k2_over_Q = 1.3e-2 }
[orbiter.Cinder]
mass = "1e23 kg"
radius = "1790 km"
period = "1.9 d"
[orbiter.Crumb]
mass = "%v kg"
radius = "%v m"
[chain.pair]
members = ["Cinder", "Crumb"]
ratios = ["2:1"]
offset = "-0.22 deg/day"
`, mass, math.Cbrt(3*mass/(4*math.Pi*2500)))))
	if err != nil {
		t.Fatal(err)
	}
	return s
}

// Two librations meet in frequency, wide, near and sharp: where the actions go
// is that of a resolved integration, to 1 % of the whole. The passage takes a
// hundred periods here, which leaves the theory of slow passages that much to
// be wrong.
func TestPassageOfTwoLibrations(t *testing.T) {
	const span = 1100 * orbit.Year
	for _, c := range []struct {
		mass    float64
		told    bool
		crossed bool // the greater part keeps its character
	}{{1e14, true, true}, {1e17, true, true}, {1e18, true, true}, {1e19, true, false}, {1e20, false, false}} {
		p, y := projected(t, twins(t, c.mass))
		l := startOf(t, p, y)
		path := &l.chains[0]
		from := startOf(t, p, y).chains[0].end()
		// Of the same action, one would not see that they exchange it.
		path.end().size[0], path.end().size[1] = 0, math.Log(math.Sqrt(3))
		integ, err := ode.NewRadau(p, p.options())
		if err != nil {
			t.Fatal(err)
		}
		if err := integ.Start(0, y); err != nil {
			t.Fatal(err)
		}
		told := false
		for integ.T() < span {
			seg, err := integ.Step(span)
			if err != nil {
				t.Fatal(err)
			}
			if err := l.advance(seg); err != nil {
				t.Fatal(err)
			}
			told = told || len(path.passed) > 0
		}
		to := path.end()
		if told != c.told {
			t.Errorf("%g kg: a passage is told: %v, want %v", c.mass, told, c.told)
		}
		if crossed := to.gap(0, 1) < 0; crossed != c.crossed {
			t.Errorf("%g kg: the modes have changed places: %v, want %v", c.mass, crossed, c.crossed)
		}
		var want [2]float64
		for k, start := range []float64{1, 3} {
			var ends [2][]float64
			scale := 1e-4 / widest(from.width[k])
			for i, way := range []float64{1, -1} {
				z := append([]float64(nil), y...)
				for j, v := range from.modes.Modes[k].Right {
					z[j] += way * scale * real(v)
				}
				ends[i] = resolved(p, z, span, from.modes.Modes[0].Period()/5)
			}
			for q := range want {
				sum := complex(0, 0)
				for j, w := range to.modes.Modes[q].Left {
					sum += w * complex((ends[0][j]-ends[1][j])/scale, 0)
				}
				want[q] += start * (real(sum)*real(sum) + imag(sum)*imag(sum))
			}
		}
		for k, w := range want {
			if got := math.Exp(2 * to.size[k]); math.Abs(got-w) > 0.01*4 {
				t.Errorf("%g kg: mode %d ends with an action of %.4f, want %.4f", c.mass, k+1, got, w)
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

// columnOf returns a column of floats of librations for one mode.
func columnOf(t testing.TB, d *record.Dataset, mode int64, name string) []float64 {
	t.Helper()
	f, err := d.Read("librations")
	if err != nil {
		t.Fatal(err)
	}
	modes, _, err := f.Ints("mode")
	if err != nil {
		t.Fatal(err)
	}
	values, valid, err := f.Floats(name)
	if err != nil {
		t.Fatal(err)
	}
	var out []float64
	for i := range values {
		if modes[i] != mode {
			continue
		}
		if !valid[i] {
			values[i] = math.NaN()
		}
		out = append(out, values[i])
	}
	return out
}

// The tables: a half-width of the start as asked for, growth null there and
// consistent with the widths and actions behind, a width of each resonance.
func TestLibrationTables(t *testing.T) {
	d := written(t, run1(t, shipped(t, "quiet-chain", set("run.span", "10 Myr"), set("run.record", "0.1 Myr"), set("chain.inner.libration", "0.5 deg"))))
	for mode := int64(1); mode <= 4; mode++ {
		time, width, action := columnOf(t, d, mode, "time_Myr"), columnOf(t, d, mode, "half_width_deg"), columnOf(t, d, mode, "action_J_s")
		widening, growth := columnOf(t, d, mode, "width_growth_per_Myr"), columnOf(t, d, mode, "action_growth_per_Myr")
		if len(time) != 101 {
			t.Fatalf("%d rows of mode %d, want 101", len(time), mode)
		}
		near(t, "width at the start", width[0], 0.5, 1e-14)
		if !math.IsNaN(growth[0]) || !math.IsNaN(widening[0]) {
			t.Errorf("mode %d: growth of %g and %g at the start, want null", mode, growth[0], widening[0])
		}
		for i := 2; i < len(time); i++ {
			h := time[i] - time[i-1]
			for _, c := range []struct {
				what      string
				got, mean float64
			}{
				{"width", math.Log(width[i]/width[i-1]) / h, 0.5 * (widening[i] + widening[i-1])},
				{"action", math.Log(action[i]/action[i-1]) / h, 0.5 * (growth[i] + growth[i-1])},
			} {
				// The drift's part is a mean over half a step, some 1 Myr here, in
				// which it changes by a few hundredths of the damping; widths go
				// straight between knots, where they change by a per cent.
				if math.Abs(c.got-c.mean) > 0.02*math.Abs(c.mean)+2e-3 {
					t.Errorf("mode %d at %g Myr: %s grows at %.5g /Myr, said to grow at %.5g", mode, time[i], c.what, c.got, c.mean)
				}
			}
		}
	}
	f, err := d.Read("resonances")
	if err != nil {
		t.Fatal(err)
	}
	widths, valid, err := f.Floats("half_width_deg")
	if err != nil {
		t.Fatal(err)
	}
	for i, w := range widths {
		// Four modes of at most 0.5 deg at the start, and damped since; the
		// pericentres' widths grow by a few per cent as eccentricities fall.
		if !valid[i] || !(w > 0) || w > 2.2 {
			t.Errorf("row %d: a half-width of %g deg", i, w)
		}
	}
	none := written(t, run1(t, shipped(t, "quiet-chain", set("run.span", "10 Myr"), set("chain.inner.libration", "0 deg"))))
	for _, w := range columnOf(t, none, 2, "half_width_deg") {
		if w != 0 {
			t.Fatalf("a libration that starts at 0 is %g deg wide", w)
		}
	}
}

// A libration that grows beyond 10 degrees is told once and ends nothing,
// unless it is asked to.
func TestOverstableLibrationIsTold(t *testing.T) {
	edits := []scenarios.Edit{
		set("chain.inner.offset", "-0.1 deg/day"), set("chain.inner.libration", "5 deg"), set("run.span", "2 Myr"), set("run.record", "0.01 Myr"),
		{Path: "orbiter.Cinder.interior", Unset: true}, set("orbiter.Brine.interior", `{ model = "fixed", k2_over_Q = 1.5 }`),
	}
	h := run1(t, shipped(t, "quiet-chain", edits...))
	var told []Event
	for _, e := range h.Events {
		if e.Name == EventLibrationOverstable {
			told = append(told, e)
		}
	}
	if h.Status != Complete || len(told) == 0 {
		t.Fatalf("%s %s, %d overstable librations, want a complete history with some", h.Status, h.Reason, len(told))
	}
	d := written(t, h)
	for _, e := range told {
		var mode int64
		if _, err := fmt.Sscanf(e.Detail, "chain inner: libration %d", &mode); err != nil || e.Ends {
			t.Fatalf("event %+v: %v", e, err)
		}
		time, width, growth := columnOf(t, d, mode, "time_Myr"), columnOf(t, d, mode, "half_width_deg"), columnOf(t, d, mode, "action_growth_per_Myr")
		for i := range time {
			now := e.Time / Megayear
			if i > 0 && time[i-1] > now && time[i-1] < now+0.01 && !(width[i] > 10 && growth[i] > 0) {
				t.Errorf("mode %d, told at %g Myr, is %g deg wide and grows at %g /Myr behind", mode, now, width[i], growth[i])
			}
			if i > 1 && time[i] < now && time[i] > now-0.01 && width[i-1] > 10 && growth[i-1] > 0 {
				t.Errorf("mode %d, told at %g Myr, is %g deg wide and grows at %g /Myr before", mode, now, width[i-1], growth[i-1])
			}
			if width[i] > 180 {
				t.Errorf("mode %d is %g deg wide", mode, width[i])
			}
		}
	}
	ended := run1(t, shipped(t, "quiet-chain", append(edits, set("run.stop", `[{ event = "libration-overstable" }]`))...))
	if ended.Status != Ended || ended.End != told[0].Time {
		t.Errorf("%s %s at %.9g Myr, want it ended at %.9g", ended.Status, ended.Reason, ended.End/Megayear, told[0].Time/Megayear)
	}
}

// Divergent migration, by a torque against the motion, pushes a chain over a
// fold: the slowest libration's ω² falls to 0 as the resonance angle turns to
// 90 degrees from its centre. That the fold is near is told before.
func TestFoldIsTold(t *testing.T) {
	r, err := begin(shipped(t, "quiet-chain", scenarios.Edit{Path: "orbiter.Cinder.interior", Unset: true}), Options{})
	if err != nil {
		t.Fatal(err)
	}
	r.p.bodies[0].primary = orbit.NewPrimaryTide(r.p.groups[0].Group, 0, orbit.CentralTide{K2OverQ: -1e-2})
	if err := r.start(); err != nil {
		t.Fatal(err)
	}
	for r.h.Status == "" {
		if err := r.advance(); err != nil {
			t.Fatal(err)
		}
	}
	var names []string
	for _, e := range r.h.Events {
		names = append(names, e.Name)
	}
	if got := strings.Join(names, " "); got != EventFoldNear+" "+EventResonanceLeft {
		t.Errorf("events %s, want %s and %s", got, EventFoldNear, EventResonanceLeft)
	}
}

// A continued history carries the librations on: those of an uninterrupted one
// to what two sequences of steps leave.
func TestContinuingLibrations(t *testing.T) {
	name := "red-dwarf-planets"
	whole := run1(t, shipped(t, name, set("run.span", "400 Myr")))
	half := run1(t, shipped(t, name, set("run.span", "200 Myr")))
	dir := t.TempDir() + "/half"
	w, err := record.Create(dir, Tables(), record.CreateOptions{})
	if err != nil {
		t.Fatal(err)
	}
	if err := half.Write(w); err != nil {
		t.Fatal(err)
	}
	from, err := Load(dir)
	if err != nil {
		t.Fatal(err)
	}
	rest, err := Run(context.Background(), shipped(t, name, set("run.span", "400 Myr")), Options{From: from})
	if err != nil {
		t.Fatal(err)
	}
	a, b := written(t, half), written(t, rest)
	for mode := int64(1); mode <= 4; mode++ {
		for _, c := range []string{"half_width_deg", "action_J_s", "period_yr"} {
			last, first := columnOf(t, a, mode, c), columnOf(t, b, mode, c)
			// The projection at the new start moves the state by parts in 10¹³, and
			// frequencies, differences of mean motions, by parts in 10⁹.
			near(t, fmt.Sprintf("%s of mode %d where the history is continued", c, mode), first[0], last[len(last)-1], 1e-8)
		}
		x, y := columnOf(t, written(t, whole), mode, "half_width_deg"), columnOf(t, b, mode, "half_width_deg")
		near(t, fmt.Sprintf("width of mode %d at the end", mode), y[len(y)-1], x[len(x)-1], 3e-3)
	}
	if _, err := Run(context.Background(), shipped(t, name, set("run.span", "400 Myr")), Options{From: &Continuation{
		RunID: from.RunID, Time: from.Time, state: from.state, ledger: from.ledger, changes: from.changes, librations: from.librations[1:],
	}}); err == nil {
		t.Error("a list of librations that is too short is taken")
	}
}

// A change of the rules keeps the actions; only their growth is another.
func TestChangeKeepsActions(t *testing.T) {
	change := scenarios.Edit{Path: "change", Value: `[{ at = "5 Myr", set = { orbiter.Cinder.interior.k2_over_Q = 0.12 } }]`}
	d := written(t, run1(t, shipped(t, "quiet-chain", set("run.span", "10 Myr"), set("run.record", "0.001 Myr"), change)))
	time, action, growth := columnOf(t, d, 4, "time_Myr"), columnOf(t, d, 4, "action_J_s"), columnOf(t, d, 4, "action_growth_per_Myr")
	for i := range time {
		if time[i] != 5 {
			continue
		}
		near(t, "action over the change", action[i+1], action[i], 2e-3*math.Abs(growth[i+1]))
		near(t, "growth over the change", growth[i+1], 10*growth[i], 0.1)
		return
	}
	t.Error("no row at the change")
}
