package evolve

import (
	"context"
	"errors"
	"fmt"
	"math"
	"strings"
	"testing"

	"tidekiln/evolve/record"
	"tidekiln/orbit"
	"tidekiln/scenarios"
)

func set(path, value string) scenarios.Edit { return scenarios.Edit{Path: path, Value: value} }

// Successive decades of tolerance differ in e by no more than 30 times the
// looser one, over the whole history.
func TestDecadesOfTolerance(t *testing.T) {
	for _, name := range []string{"quiet-chain", "volcanic-cycle"} {
		var before *record.Frame
		for k := 5; k <= 9; k++ {
			tol := fmt.Sprintf("1e-%d", k)
			now := bodiesOf(t, run1(t, shipped(t, name, set("run.tolerance", tol), set("run.record", "10 Myr"))))
			if before != nil {
				loose := math.Pow(10, float64(1-k))
				if d := greatest(t, before, now, "eccentricity"); d > 30*loose {
					t.Errorf("%s: e differs by %.2e between tolerances %g and %s, more than 30 times the looser", name, d, loose, tol)
				}
			}
			before = now
		}
	}
}

// greatest returns the greatest relative difference of a column.
func greatest(t *testing.T, a, b *record.Frame, column string) float64 {
	t.Helper()
	x, vx, err := a.Floats(column)
	if err != nil {
		t.Fatal(err)
	}
	y, vy, err := b.Floats(column)
	if err != nil {
		t.Fatal(err)
	}
	if len(x) != len(y) || len(x) == 0 {
		t.Fatalf("%d and %d rows of %s", len(x), len(y), column)
	}
	worst := 0.0
	for i := range x {
		if vx[i] != vy[i] {
			t.Fatalf("row %d of %s is null in one only", i, column)
		}
		if vx[i] && x[i] != y[i] {
			worst = math.Max(worst, math.Abs(x[i]-y[i])/math.Max(math.Abs(x[i]), math.Abs(y[i])))
		}
	}
	return worst
}

// In the quiet chain the heat over the steady-state heat of its resonance
// (Lissauer, Peale & Cuzzi 1984; lowest order in e) is 1.19, 1.0023, 1.0007 at
// 10, 100 and 1000 Myr (re-derived by an independent implementation).
func TestQuietChainReachesItsSteadyState(t *testing.T) {
	s := shipped(t, "quiet-chain")
	b := bodiesOf(t, run1(t, s))
	primary := orbit.Primary{Mass: s.Central.Mass, Radius: s.Central.Radius}
	for _, c := range []struct{ t, want, tol float64 }{{10, 1.19, 0.005 / 1.19}, {100, 1.0023, 1e-3}, {1000, 1.0007, 1e-3}} {
		var masses, axes, motions, torques []float64
		for _, o := range s.Orbiters {
			a := value(t, b, o.Name, c.t, "semimajor_axis_km") * 1e3
			masses, axes = append(masses, o.Mass), append(axes, a)
			motions = append(motions, value(t, b, o.Name, c.t, "mean_motion_deg_per_day")*degreePerDay)
			torques = append(torques, primary.CircularTorque(1.3e-5, o.Mass, a))
		}
		near(t, fmt.Sprintf("heat/H_eq at %g Myr", c.t), value(t, b, "Cinder", c.t, "tidal_heat_W")/orbit.SteadyHeat(primary.Mass, masses, axes, motions, torques), c.want, c.tol)
	}
}

// With tides on, energy and angular momentum close to 1e-6 in every shipped
// scenario, in the last row and in every other. (Where librations are resolved
// the first rows have turned over little beside what these pass to and fro; tests
// of that regime judge its books.)
func TestLedgersClose(t *testing.T) {
	for _, s := range scenarios.Shipped() {
		h := run1(t, shipped(t, s.Name))
		if h.Status != StatusComplete || h.Suspect {
			t.Errorf("%s: %s %s, suspect: %v", s.Name, h.Status, h.Reason, h.Suspect)
		}
		f, err := written(t, h).Read("system")
		if err != nil {
			t.Fatal(err)
		}
		for _, column := range []string{"energy_closure", "momentum_closure"} {
			v, valid, err := f.Floats(column)
			if err != nil {
				t.Fatal(err)
			}
			if c := shipped(t, s.Name); c.Run.Regime == scenarios.Resolved {
				// Its early rows hold more libration than turnover: see the last.
				if last := v[len(v)-1]; !(last < 1e-6) {
					t.Errorf("%s: %s is %.2e at the end", s.Name, column, last)
				}
				continue
			}
			for i := range v {
				// A turnover of nothing has no closure, and that of the first
				// rows is still small beside the rounding of the stores.
				if valid[i] != (i > 0) {
					t.Errorf("%s: row %d of %s is null: %v", s.Name, i, column, !valid[i])
				}
				if v[i] > 1e-6 {
					t.Errorf("%s: %s is %.2e in row %d", s.Name, column, v[i], i)
				}
			}
		}
	}
}

// A circular orbit pushed by a constant k2/Q alone: a^{13/2} grows linearly,
// a^{13/2} = a₀^{13/2} + (39/2)(k2/Q)(m/M) R⁵ √(G(M+m)) t · exact for the
// torque (3/2)(k2/Q) G m² R⁵/a⁶ on Λ = β√(μa): ȧ = 3 (k2/Q)(m/M)(R/a)⁵ n a.
func TestAnalyticMigration(t *testing.T) {
	s := shipped(t, "lone-moon",
		set("orbiter.Ember.eccentricity", "0"), scenarios.Edit{Path: "orbiter.Ember.period", Unset: true}, set("orbiter.Ember.semimajor_axis", "3e5 km"),
		scenarios.Edit{Path: "orbiter.Ember.interior", Unset: true}, set("central.J2", "0"), set("central.tide.k2_over_Q", "1e-3"))
	b := bodiesOf(t, run1(t, s))
	o, c := s.Orbiters[0], s.Central
	rate := 19.5 * 1e-3 * o.Mass / c.Mass * math.Pow(c.Radius, 5) * math.Sqrt(orbit.G*(c.Mass+o.Mass))
	for _, myr := range []float64{10, 300, 1000} {
		want := math.Pow(math.Pow(3e8, 6.5)+rate*myr*Megayear, 1/6.5)
		near(t, fmt.Sprintf("a at %g Myr", myr), value(t, b, "Ember", myr, "semimajor_axis_km")*1e3, want, 1e-8)
	}
	if grown := value(t, b, "Ember", 1000, "semimajor_axis_km") / 3e5; grown < 1.1 {
		t.Errorf("the orbit grew to %.3g of its size only, too little to test its law", grown)
	}
}

// The same scenario gives the same rows to the bit.
func TestSameBits(t *testing.T) {
	a, b := bodiesOf(t, run1(t, shipped(t, "volcanic-cycle"))), bodiesOf(t, run1(t, shipped(t, "volcanic-cycle")))
	for _, c := range a.Table().Columns {
		if c.Kind != record.Float {
			continue
		}
		if d := greatest(t, a, b, c.Name); d != 0 {
			t.Errorf("%s differs by %g", c.Name, d)
		}
	}
}

// A history continued from its end equals an uninterrupted one to what two
// sequences of steps at the tolerance can differ.
func TestContinuing(t *testing.T) {
	change := scenarios.Edit{Path: "change", Value: `[{ at = "100 Myr", set = { central.tide.k2_over_Q = 2e-5 } }]`}
	whole := run1(t, shipped(t, "volcanic-cycle", set("run.span", "400 Myr"), change))
	half := run1(t, shipped(t, "volcanic-cycle", set("run.span", "200 Myr"), change))
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
	s, err := scenarios.Read("stored", []byte(from.Scenario), set("run.span", "400 Myr"))
	if err != nil {
		t.Fatal(err)
	}
	rest, err := Run(context.Background(), s, Options{From: from})
	if err != nil {
		t.Fatal(err)
	}
	if rest.Parent != half.RunID || rest.RunID == whole.RunID || rest.Begin != half.End {
		t.Errorf("continued run %s from %s at %g, want a run of its own from %s at %g", rest.RunID, rest.Parent, rest.Begin, half.RunID, half.End)
	}
	a, b := bodiesOf(t, whole), bodiesOf(t, rest)
	for _, myr := range []float64{200, 201, 300, 400} {
		for _, c := range []string{"semimajor_axis_km", "eccentricity", "temperature_K"} {
			// 1e-6 in e is what the tolerance of 1e-7 leaves at any time.
			near(t, fmt.Sprintf("%s at %g Myr", c, myr), value(t, b, "Cinder", myr, c), value(t, a, "Cinder", myr, c), 1e-6)
		}
	}
	if !(rest.Closure.Energy < 1e-6) || !(rest.Closure.Momentum < 1e-6) {
		t.Errorf("the continued ledger closes to %g and %g", rest.Closure.Energy, rest.Closure.Momentum)
	}
	for _, e := range rest.Events {
		if e.Name == EventChange {
			t.Error("a change made before the end is made again")
		}
	}
	short, err := scenarios.Read("stored", []byte(from.Scenario))
	if err != nil {
		t.Fatal(err)
	}
	var span *SpanError
	if _, err := Run(context.Background(), short, Options{From: from}); !errors.As(err, &span) {
		t.Errorf("a span that is over already: %v, want a SpanError", err)
	}
}

// Changes of the rules: what they do begins when they say, they are events,
// and the energy they bring is in the books.
func TestChanges(t *testing.T) {
	list := `[
  { at = "30 Myr", set = { central.tide.k2_over_Q = 0 } },
  { at = "60 Myr", set = { orbiter.Cinder.interior.temperature = "1700 K" } },
  { when = { event = "solidus-crossed", body = "Cinder" }, set = { orbiter.Cinder.interior.radiogenic = "0 W/kg" } },
]`
	s := shipped(t, "volcanic-cycle", set("run.span", "600 Myr"), scenarios.Edit{Path: "change", Value: list})
	h := run1(t, s)
	b := bodiesOf(t, h)
	if h.Status != StatusComplete {
		t.Fatalf("%s: %s", h.Status, h.Reason)
	}
	var changes []Event
	var solidus float64
	for _, e := range h.Events {
		switch e.Name {
		case EventChange:
			changes = append(changes, e)
		case "solidus-crossed":
			solidus = e.Time
		}
	}
	if len(changes) != 3 || changes[0].Time != 30*Megayear || changes[1].Time != 60*Megayear || changes[2].Time != solidus || solidus == 0 {
		t.Fatalf("changes %+v, solidus crossed at %g Myr", changes, solidus/Megayear)
	}
	if v := value(t, b, "Cinder", math.Ceil(solidus/Megayear), "radiogenic_heat_W"); v != 0 {
		t.Errorf("radiogenic heat is %g W after the change that ends it", v)
	}
	before := value(t, b, "Cinder", 59, "temperature_K")
	if after := value(t, b, "Cinder", 61, "temperature_K"); !(before < 1660 && after > 1690) {
		t.Errorf("temperature goes from %g to %g K over a change to 1700 K", before, after)
	}
	f, err := written(t, h).Read("system")
	if err != nil {
		t.Fatal(err)
	}
	imposed, _, err := f.Floats("imposed_energy_J")
	if err != nil {
		t.Fatal(err)
	}
	// m c_p ΔT and the latent heat of ΔT/400 K of melt, from the temperature
	// just before: within the Myr between rows.
	want := 9.1e22 * (1200 + 4e5/400) * (1700 - before)
	if got := imposed[len(imposed)-1]; math.Abs(got/want-1) > 0.05 {
		t.Errorf("imposed energy %g J, want about %g", got, want)
	}
	if !(h.Closure.Energy < 1e-6) || !(h.Closure.Momentum < 1e-6) {
		t.Errorf("ledger closes to %g and %g over changes", h.Closure.Energy, h.Closure.Momentum)
	}
}

// Recording by change: straight lines between the rows reproduce every column
// of a dense recording to the bound, with far fewer rows.
func TestRecordingByChange(t *testing.T) {
	const bound = 1e-2
	dense := written(t, run1(t, shipped(t, "volcanic-cycle", set("run.span", "300 Myr"), set("run.record", "0.1 Myr"))))
	sparse := written(t, run1(t, shipped(t, "volcanic-cycle", set("run.span", "300 Myr"), set("run.record", "{ change = 1e-2 }"))))
	for _, table := range []string{"bodies", "resonances", "system"} {
		a, err := dense.Read(table)
		if err != nil {
			t.Fatal(err)
		}
		b, err := sparse.Read(table)
		if err != nil {
			t.Fatal(err)
		}
		if b.Len() > a.Len()/4 {
			t.Errorf("%s: %d rows by change, %d in full: hardly fewer", table, b.Len(), a.Len())
		}
		for _, c := range a.Table().Columns {
			if c.Kind != record.Float || strings.HasSuffix(c.Name, "closure") || c.Name == "argument_deg" || c.Name == "time_Myr" || c.Name == "step_Myr" {
				continue
			}
			compareByLines(t, table, c.Name, a, b, bound)
		}
	}
}

// compareByLines checks every dense value of a column against the line between
// the sparse rows about it.
func compareByLines(t *testing.T, table, column string, dense, sparse *record.Frame, bound float64) {
	t.Helper()
	type series struct{ t, v []float64 }
	split := func(f *record.Frame) map[string]series {
		out := map[string]series{}
		times, _, err := f.Floats("time_Myr")
		if err != nil {
			t.Fatal(err)
		}
		values, valid, err := f.Floats(column)
		if err != nil {
			t.Fatal(err)
		}
		key := make([]string, f.Len())
		for _, name := range []string{"body", "inner_body"} {
			if texts, _, err := f.Texts(name); err == nil {
				key = texts
			}
		}
		for i := range times {
			if valid[i] {
				s := out[key[i]]
				s.t, s.v = append(s.t, times[i]), append(s.v, values[i])
				out[key[i]] = s
			}
		}
		return out
	}
	lines := split(sparse)
	for key, d := range split(dense) {
		l, j := lines[key], 0
		peak := 0.0
		for i := range d.t {
			peak = math.Max(peak, math.Abs(d.v[i]))
		}
		for i := range d.t {
			for j+2 < len(l.t) && l.t[j+1] < d.t[i] {
				j++
			}
			w := (d.t[i] - l.t[j]) / (l.t[j+1] - l.t[j])
			got := l.v[j] + w*(l.v[j+1]-l.v[j])
			if e := math.Abs(got - d.v[i]); e > bound*math.Max(math.Abs(d.v[i]), floorShare*peak) {
				t.Errorf("%s.%s %s at %g Myr: a line gives %g, the history %g", table, column, key, d.t[i], got, d.v[i])
				return
			}
		}
	}
}

// Rows of the cadence are at the nearest doubles to its decimal multiples, and
// the end of the span is one of them.
func TestCadenceIsExact(t *testing.T) {
	f := bodiesOf(t, run1(t, shipped(t, "quiet-chain", set("run.span", "7 Myr"), set("run.record", "0.1 Myr"))))
	times, _, err := f.Floats("time_Myr")
	if err != nil {
		t.Fatal(err)
	}
	grid, _, err := f.Bools("on_grid")
	if err != nil {
		t.Fatal(err)
	}
	if len(times) != 3*71 {
		t.Fatalf("%d rows, want 71 times of three bodies", len(times))
	}
	for i := range times {
		var want float64
		if _, err := fmt.Sscan(fmt.Sprintf("%d.%d", i/30, i/3%10), &want); err != nil {
			t.Fatal(err)
		}
		if times[i] != want || !grid[i] {
			t.Fatalf("row %d is at %v (on grid: %v), want %v", i, times[i], grid[i], want)
		}
	}
}

// A cancelled context ends a history, which keeps what it has.
func TestInterruption(t *testing.T) {
	ctx, cancel := context.WithCancelCause(context.Background())
	reason := errors.New("enough")
	h, err := Run(ctx, shipped(t, "volcanic-cycle"), Options{Progress: func(p Progress) {
		if p.Time > 100*Megayear {
			cancel(reason)
		}
	}})
	if err != nil {
		t.Fatal(err)
	}
	if h.Status != StatusInterrupted || h.Reason != "enough" || !(h.End > 100*Megayear && h.End < 300*Megayear) {
		t.Errorf("%s (%s) at %g Myr", h.Status, h.Reason, h.End/Megayear)
	}
	f := bodiesOf(t, h)
	if f.Len() < 300 {
		t.Errorf("%d rows of 100 Myr kept", f.Len())
	}
}

// bare is the lone moon without an interior, on an orbit of that size.
func bare(t *testing.T, a, e, k string, more ...scenarios.Edit) *scenarios.Scenario {
	return shipped(t, "lone-moon", append([]scenarios.Edit{
		set("run.span", "10 Gyr"), set("run.record", "100 Myr"),
		{Path: "orbiter.Ember.interior", Unset: true}, {Path: "orbiter.Ember.period", Unset: true},
		set("orbiter.Ember.semimajor_axis", a), set("orbiter.Ember.eccentricity", e), set("central.tide.k2_over_Q", k),
	}, more...)...)
}

// Ends that are results: orbits that meet, an eccentricity near 1, a stop that
// was asked for, and a step budget that makes a failed row.
func TestEnds(t *testing.T) {
	last := func(h *History) Event { return h.Events[len(h.Events)-1] }

	// The tide of the central body pumps e of an orbit without a tide of its own.
	h := run1(t, bare(t, "4e5 km", "0.6", "1e-4"))
	if h.Status != StatusEnded || last(h).Name != scenarios.EventEccentricityLimit || math.Abs(h.Bodies[0].Eccentricity.Max-nearlyParabolic) > 1e-7 {
		t.Errorf("%s (%s) at e = %g, want the end at e = %g", h.Status, h.Reason, h.Bodies[0].Eccentricity.Max, nearlyParabolic)
	}

	// The heavier inner one is pushed out faster and meets the outer one.
	h = run1(t, bare(t, "3e5 km", "0", "1e-3", set("orbiter.Pebble", `{ mass = "1e17 kg", radius = "40 km", semimajor_axis = "3.2e5 km" }`)))
	b := bodiesOf(t, h)
	end := h.End / Megayear
	if h.Status != StatusEnded || last(h).Name != scenarios.EventOrbitsCross || h.Outcome != Disrupted || h.OrbitOutcome != OrbitDisrupted {
		t.Errorf("%s (%s), %s/%s, want crossing orbits", h.Status, h.Reason, h.Outcome, h.OrbitOutcome)
	}
	near(t, "semi-major axis at the crossing", value(t, b, "Ember", end, "semimajor_axis_km"), value(t, b, "Pebble", end, "semimajor_axis_km"), 1e-7)

	s := shipped(t, "lone-moon", scenarios.Edit{Path: "run.stop", Value: `[{ event = "solidus-crossed", body = "Ember" }]`})
	h = run1(t, s)
	if e := last(h); h.Status != StatusEnded || e.Name != "solidus-crossed" || !e.Ends || h.End != e.Time || !strings.Contains(h.Reason, "solidus-crossed: Ember") {
		t.Errorf("%s (%s) at %g Myr with %+v, want the stop asked for", h.Status, h.Reason, h.End/Megayear, e)
	}

	h = run1(t, shipped(t, "volcanic-cycle", set("run.max_steps", "100")))
	if h.Status != StatusFailed || h.Outcome != Failed || !strings.Contains(h.Reason, "run.max_steps") {
		t.Errorf("%s %s (%s), want a failure that names the budget", h.Status, h.Outcome, h.Reason)
	}
	if f := bodiesOf(t, h); f.Len() < 10 {
		t.Errorf("a failed history keeps %d rows", f.Len())
	}
}

// The limits that end a history, at states on either side of them.
func TestLimits(t *testing.T) {
	p, y, err := NewSystem(shipped(t, "volcanic-cycle"))
	if err != nil {
		t.Fatal(err)
	}
	find := func(name, body string, beyond []float64) {
		t.Helper()
		found := 0
		for _, w := range p.watchlist(nil) {
			if w.Name != name || w.body != body || !w.ends {
				continue
			}
			before, after := w.Value(0, y), w.Value(0, beyond)
			if before*after < 0 && (w.Direction == 0 || float64(w.Direction)*after > 0) {
				found++
			}
		}
		if found != 1 {
			t.Errorf("%d events %s of %s between the two states, want 1", found, name, body)
		}
	}
	moved := func(i int, v float64) []float64 {
		z := append([]float64(nil), y...)
		z[i] = v
		return z
	}
	// Cinder's Roche limit: 2.44 R_c (ρ_c/ρ)^{1/3} = 2.44 · 66000 km · (1.6e27/9.1e22)^{1/3} · 1790/66000.
	limit := 2.44 * 1790e3 * math.Cbrt(1.6e27/9.1e22)
	a, e := p.shape(0, y)
	find(scenarios.EventRocheLimit, "Cinder", moved(0, math.Sqrt(0.999*limit/(a*(1-e)))-1))
	find(scenarios.EventEccentricityLimit, "Cinder", moved(3, 1.18))
	find(scenarios.EventOrbitsCross, "Cinder", moved(0, 0.27))
	find(scenarios.EventResonanceLeft, "Brine", moved(9, -1.6))
	find(scenarios.EventResonanceLeft, "Cairn", moved(5, -y[5]))
	if lax := p.watchlist([]scenarios.Trigger{{Event: "solidus-crossed", Body: "Cinder"}}); !lax[0].ends {
		t.Error("a stop that was asked for does not end the history")
	}
}

func TestJudging(t *testing.T) {
	const n = 401
	build := func(f func(x float64) float64, heat, loss float64, molten bool) track {
		tr := track{kelvin: noExtremes(), e: noExtremes(), power: noExtremes()}
		for i := 0; i < n; i++ {
			x := float64(i) / (n - 1) * 1000
			tr.time = append(tr.time, x*Megayear)
			tr.temperature = append(tr.temperature, f(x))
			tr.heat, tr.loss = append(tr.heat, heat*x*Megayear), append(tr.loss, loss*x*Megayear)
			tr.molten = append(tr.molten, molten && i == n-1)
		}
		return tr
	}
	wave := func(swing float64) func(float64) float64 {
		return func(x float64) float64 { return 1650 + swing/2*math.Sin(2*math.Pi*x/100) }
	}
	for _, c := range []struct {
		name       string
		tr         track
		radiogenic float64
		want       string
	}{
		{"flat and balanced", build(func(float64) float64 { return 1650 }, 1, 1.005, false), 0, Steady},
		{"balanced by radiogenic heat", build(func(float64) float64 { return 1650 }, 0.5, 1, false), 0.5, Steady},
		{"flat but not balanced", build(func(float64) float64 { return 1650 }, 1, 1.02, false), 0, Drifting},
		{"balanced but moving", build(func(x float64) float64 { return 1650 + x/400 }, 1, 1, false), 0, Drifting},
		{"five maxima", build(wave(6), 1, 1.1, false), 0, Oscillating},
		{"swing too small", build(wave(4), 1, 1.1, false), 0, Drifting},
		{"two maxima", build(func(x float64) float64 { return 1650 + 10*math.Sin(2*math.Pi*x/230) }, 1, 1.1, false), 0, Drifting},
		{"falling", build(func(x float64) float64 { return 1650 - x/10 }, 0.4, 1, false), 0, Cooling},
		{"falling but heated", build(func(x float64) float64 { return 1650 - x/10 }, 0.6, 1, false), 0, Drifting},
		{"molten", build(func(float64) float64 { return 2100 }, 1, 1, true), 0, Runaway},
	} {
		o := c.tr.judge(0, 1000*Megayear, c.radiogenic)
		if o.Outcome != c.want {
			t.Errorf("%s: %s, want %s", c.name, o.Outcome, c.want)
		}
		if c.want == Oscillating {
			// Maxima of a sine sampled 40 times a period, refined by parabolas:
			// (2π/40)²/8 of the amplitude below, a third of a sample aside at most.
			near(t, "period", o.Period/Megayear, 100, 0.01)
			near(t, "swing", o.Swing, 6, 0.005)
		} else if !math.IsNaN(o.Period) || !math.IsNaN(o.Swing) {
			t.Errorf("%s: period %g, swing %g of what does not oscillate", c.name, o.Period, o.Swing)
		}
	}
}
