package evolve

import (
	"context"
	"math"
	"path/filepath"
	"testing"

	"tidekiln/evolve/record"
	"tidekiln/scenarios"
)

// shipped reads a scenario that comes with the program.
func shipped(t testing.TB, name string, edits ...scenarios.Edit) *scenarios.Scenario {
	t.Helper()
	s, err := scenarios.Open(name, edits...)
	if err != nil {
		t.Fatal(err)
	}
	return s
}

func run1(t testing.TB, s *scenarios.Scenario) *History {
	t.Helper()
	h, err := Run(context.Background(), s, Options{})
	if err != nil {
		t.Fatal(err)
	}
	return h
}

func near(t *testing.T, what string, got, want, rel float64) {
	t.Helper()
	if d := math.Abs(got-want) / math.Abs(want); !(d <= rel) {
		t.Errorf("%s = %.12g, want %.12g (relative difference %.2e, tolerance %.0e)", what, got, want, d, rel)
	}
}

// save writes a history and returns the place.
func save(t testing.TB, h *History) string {
	t.Helper()
	dir := filepath.Join(t.TempDir(), "out")
	w, err := record.Create(dir, Tables(), record.CreateOptions{})
	if err != nil {
		t.Fatal(err)
	}
	if err := h.Write(w); err != nil {
		t.Fatal(err)
	}
	return dir
}

// written writes a history and opens it again.
func written(t testing.TB, h *History) *record.Dataset {
	t.Helper()
	d, err := record.Open(save(t, h))
	if err != nil {
		t.Fatal(err)
	}
	return d
}

// continuation writes a history and loads its end.
func continuation(t testing.TB, h *History) *Continuation {
	t.Helper()
	c, err := Load(save(t, h))
	if err != nil {
		t.Fatal(err)
	}
	return c
}

// value returns a column of bodies at a time, Myr.
func value(t testing.TB, bodies *record.Frame, body string, myr float64, column string) float64 {
	t.Helper()
	times, _, err := bodies.Floats("time_Myr")
	if err != nil {
		t.Fatal(err)
	}
	names, _, _ := bodies.Texts("body")
	values, valid, err := bodies.Floats(column)
	if err != nil {
		t.Fatal(err)
	}
	for i := range times {
		if times[i] == myr && names[i] == body {
			if !valid[i] {
				return math.NaN()
			}
			return values[i]
		}
	}
	t.Fatalf("no row of %s at %g Myr", body, myr)
	return 0
}

func bodiesOf(t testing.TB, h *History) *record.Frame {
	t.Helper()
	f, err := written(t, h).Read("bodies")
	if err != nil {
		t.Fatal(err)
	}
	return f
}

// digits is half a unit in the last place of a value given to that many
// significant digits, relative.
func digits(x float64, n int) float64 {
	return 0.5 * math.Pow(10, math.Floor(math.Log10(math.Abs(x)))-float64(n-1)) / math.Abs(x)
}

// The quiet chain, from an independent implementation (3-stage Radau IIA at
// two tolerances; its digits agree to about 1e-9).
func TestQuietChain(t *testing.T) {
	h := run1(t, shipped(t, "quiet-chain"))
	b := bodiesOf(t, h)
	for _, row := range []struct{ t, a1, a2, a3, e1, e2, e3, heat float64 }{
		{10, 418091.843378, 665225.960334, 1061600.197553, 0.00457875720, 0.01024279956, 0.000716730630, 5.96651529e13},
		{100, 420426.536837, 669125.517641, 1068414.136627, 0.00420157109, 0.00931925334, 0.000650682176, 4.82027702e13},
		{1000, 442194.634771, 703816.369915, 1123892.390859, 0.00419824276, 0.00924095721, 0.000644126617, 3.29565388e13},
	} {
		for i, name := range []string{"Cinder", "Brine", "Cairn"} {
			near(t, "a "+name, value(t, b, name, row.t, "semimajor_axis_km"), []float64{row.a1, row.a2, row.a3}[i], 1e-7)
			near(t, "e "+name, value(t, b, name, row.t, "eccentricity"), []float64{row.e1, row.e2, row.e3}[i], 1e-6)
		}
		near(t, "heat", value(t, b, "Cinder", row.t, "tidal_heat_W"), row.heat, 1e-5)
	}
}

// The volcanic cycle, from the same implementation (its digits agree to about
// 1e-7 here).
func TestVolcanicCycle(t *testing.T) {
	h := run1(t, shipped(t, "volcanic-cycle"))
	b := bodiesOf(t, h)
	for _, row := range []struct{ t, a, e1, e2, e3, T, heat float64 }{
		{1, 417980.17124, 0.0048746655, 0.010970587, 0.00076884231, 1660.22843, 9.751509e13},
		{10, 414684.76171, 0.0018997739, 0.0040138717, 0.00027606654, 1753.88526, 2.926868e14},
		{50, 412480.46030, 0.0011958130, 0.0024741200, 0.00016854709, 1650.31388, 4.371316e12},
		{100, 417317.26903, 0.0018649882, 0.0039350691, 0.00027052566, 1629.08092, 4.444079e12},
		{150, 421045.01042, 0.0030428943, 0.0065900490, 0.00045709521, 1679.49678, 8.533952e13},
		{200, 417392.44486, 0.0012757796, 0.0026456777, 0.00018048001, 1644.42581, 3.656473e12},
		{500, 425715.70231, 0.0013333566, 0.0027677758, 0.00018895363, 1644.78813, 3.531074e12},
		{1000, 438791.04334, 0.0016015493, 0.0033455878, 0.00022918016, 1632.55914, 2.622532e12},
		{1500, 448262.90201, 0.0014842446, 0.0030872641, 0.00021111982, 1649.49509, 3.672919e12},
	} {
		for i, name := range []string{"Cinder", "Brine", "Cairn"} {
			near(t, "e "+name, value(t, b, name, row.t, "eccentricity"), []float64{row.e1, row.e2, row.e3}[i], 1e-6)
		}
		near(t, "a", value(t, b, "Cinder", row.t, "semimajor_axis_km"), row.a, 1e-7)
		if T := value(t, b, "Cinder", row.t, "temperature_K"); math.Abs(T-row.T) > 1e-3 {
			t.Errorf("T = %.6f at %g Myr, want %.5f to 1e-3", T, row.t, row.T)
		}
		near(t, "heat", value(t, b, "Cinder", row.t, "tidal_heat_W"), row.heat, 1e-4)
	}
	t.Logf("outcome %s, period %.4g Myr, swing %.4g K, closures %.2g %.2g, %+v", h.Outcome, h.Bodies[0].Period/Megayear, h.Bodies[0].Swing, h.Closure.Energy, h.Closure.Momentum, h.Stats)
}

// The Rosenbrock method, for loose tolerances: at 1e-5 its histories agree with
// those of Radau at 1e-8 to a hundred tolerances (it keeps each step to one or two,
// and nine cycles add them up), on the fronts of a cycle, where a shift in time by
// that shows tenfold, to a thousand; the books close as well.
func TestRosenbrock(t *testing.T) {
	for _, name := range []string{"quiet-chain", "volcanic-cycle", "lone-moon"} {
		loose := run1(t, shipped(t, name, set("run.method", "rosenbrock"), set("run.tolerance", "1e-5"), set("run.record", "10 Myr")))
		tight := run1(t, shipped(t, name, set("run.tolerance", "1e-8"), set("run.record", "10 Myr")))
		a, b := bodiesOf(t, loose), bodiesOf(t, tight)
		for _, column := range []string{"eccentricity", "temperature_K", "semimajor_axis_km"} {
			d := greatest(t, a, b, column)
			t.Logf("%s: %s differs by %.1e", name, column, d)
			if d > map[bool]float64{true: 1000e-5, false: 100e-5}[name == "volcanic-cycle"] {
				t.Errorf("%s: %s differs by %.1e", name, column, d)
			}
		}
		if loose.Outcome != tight.Outcome || loose.Suspect || loose.Closure.Energy > 1e-4 {
			t.Errorf("%s: %s, closure %g; by Radau %s", name, loose.Outcome, loose.Closure.Energy, tight.Outcome)
		}
	}
}
