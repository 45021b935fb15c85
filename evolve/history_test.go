package evolve

import (
	"fmt"
	"math"
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
			if c := shipped(t, s.Name); c.Run.Regime != scenarios.Adiabatic {
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

// Changes of the rules: what they do begins when they say, they are events,

// and the energy they bring is in the books.

// Recording by change: straight lines between the rows reproduce every column

// of a dense recording to the bound, with far fewer rows.

// compareByLines checks every dense value of a column against the line between

// the sparse rows about it.

// Rows of the cadence are at the nearest doubles to its decimal multiples, and

// the end of the span is one of them.

// A cancelled context ends a history, which keeps what it has.

// bare is the lone moon without an interior, on an orbit of that size.

// Ends that are results: orbits that meet, an eccentricity near 1, a stop that

// was asked for, and a step budget that makes a failed row.

// The limits that end a history, at states on either side of them.
