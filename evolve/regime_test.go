package evolve

import (
	"math"
	"slices"
	"strings"
	"testing"

	"tidekiln/evolve/record"
	"tidekiln/orbit"
	"tidekiln/scenarios"
	"tidekiln/scenarios/key"
)

// averaged measures the librations of the first chain of a run in the resolved
// regime, over a few of them from its present state, by an integrator of its own.
func averaged(t testing.TB, r *run) (actions []float64, span float64) {
	t.Helper()
	g := newGauge(r.gauge.aside, r.t, r.gauge.still)
	was := r.gauge.aside.chains[0]
	defer func() { r.gauge.aside.chains[0] = was }()
	in, err := r.p.resolving(r.y, 1e6)
	if err != nil {
		t.Fatal(err)
	}
	if err := in.Start(r.t, r.y); err != nil {
		t.Fatal(err)
	}
	if err := g.place(r.p, r.t, r.y); err != nil {
		t.Fatal(err)
	}
	for g.begin(r.t); in.T() < g.until; {
		if _, err := in.Step(g.until); err != nil {
			t.Fatal(err)
		}
		g.take(in.State())
	}
	span = g.until - r.t
	for _, sum := range g.sums[0] {
		actions = append(actions, sum/g.count)
	}
	return actions, span
}

// follow goes on until a run has passed a time.
func follow(r *run, until float64) {
	for r.h.Status == "" && r.t < until {
		r.advance()
	}
}

// regimes lists the changes of regime of a history.
func regimes(h *History) []Event {
	var list []Event
	for _, e := range h.Events {
		if e.Name == scenarios.EventRegimeChanged {
			list = append(list, e)
		}
	}
	return list
}

// An overstable libration is followed from where it is told to be 10 degrees
// wide, with the action that was carried, and its action grows on at the rate at
// which it would have been carried on: the linear law is off by the square of the
// width, 3 %, and what is asked for is 5 %. The books close over the change.
func TestAutoFollowsAnOverstableLibration(t *testing.T) {
	adiabatic, err := begin(shipped(t, "overstable-pair", set("run.regime", "adiabatic")), Options{})
	if err != nil {
		t.Fatal(err)
	}
	r, err := begin(shipped(t, "overstable-pair"), Options{})
	if err != nil {
		t.Fatal(err)
	}
	for r.h.Status == "" && !r.resolved {
		r.advance()
	}
	list := regimes(r.h)
	if len(list) != 1 || !strings.HasPrefix(list[0].Detail, scenarios.Resolved) || list[0].Time != r.t {
		t.Fatalf("changes of regime %v at %g Myr, want one", list, r.t/Megayear)
	}
	begun := r.t
	c := &r.gauge.aside.chains[0]
	carried := 2 * c.end().size[0]
	first, span := averaged(t, r)
	// Over half the mean it has grown by 0.7 %; one of 8 slow periods is short of the
	// beats by the width's share in them.
	near(t, "action where it begins to be followed", math.Log(first[0]), carried, 0.02/carried)
	follow(r, begun+1000*orbit.Year)
	later, _ := averaged(t, r)
	measured := math.Log(later[0]/first[0]) / (r.t - begun)

	follow(adiabatic, r.t+span)
	told := 0.
	for _, e := range adiabatic.h.Events {
		if e.Name == scenarios.EventLibrationOverstable && told == 0 {
			told = e.Time
		}
	}
	if told != begun {
		t.Errorf("followed from %.12g Myr, told to be overstable at %.12g", begun/Megayear, told/Megayear)
	}
	end := adiabatic.carried.chains[0].end()
	near(t, "growth of the action", measured, (2*end.size[0]-carried)/(adiabatic.t-begun), 0.05)

	follow(r, begun+2000*orbit.Year)
	r.stop(StatusInterrupted, "seen enough")
	r.finish()
	if r.h.Closure.Energy > sampling || r.h.Closure.Momentum > 30*sampling {
		t.Errorf("the books close to %v", r.h.Closure)
	}
	f, err := written(t, r.h).Read("system")
	if err != nil {
		t.Fatal(err)
	}
	times, _, err := f.Floats("time_Myr")
	if err != nil {
		t.Fatal(err)
	}
	names, _, err := f.Texts("regime")
	if err != nil {
		t.Fatal(err)
	}
	// A row either side of the change, a unit in the last place apart.
	change := slices.Index(names, scenarios.Resolved)
	if change < 1 || slices.Contains(names[change:], scenarios.Adiabatic) {
		t.Fatalf("regimes of the rows %v", names)
	}
	for _, row := range []int{change - 1, change} {
		near(t, "row at the change", times[row]*Megayear, begun, 1e-15)
	}
	for i := 1; i < len(times); i++ {
		if !(times[i] > times[i-1]) {
			t.Fatalf("row %d at %.17g Myr behind one at %.17g", i, times[i], times[i-1])
		}
	}
}

// damped is a pair both of whose librations decay.
func damped(t testing.TB, libration string, edits ...scenarios.Edit) *scenarios.Scenario {
	t.Helper()
	return shipped(t, "overstable-pair", append([]scenarios.Edit{
		set("orbiter.Shoal.mass", "5e23 kg"), set("orbiter.Shoal.radius", "5000 km"),
		set("orbiter.Shoal.interior", `{ model = "fixed", k2_over_Q = 1.0 }`),
		set("chain.pair.offset", "-1 deg/day"), set("chain.pair.libration", libration),
	}, edits...)...)
}

// There and back: a libration of 2 degrees that is made to be followed is carried
// again a thousand years later, with the action that it has in a history that has
// carried it all the time, to 2 %.
func TestAutoKeepsActionsThereAndBack(t *testing.T) {
	const there = 4e-3 * Megayear
	r, err := begin(damped(t, "1.5 deg"), Options{})
	if err != nil {
		t.Fatal(err)
	}
	twin, err := begin(damped(t, "1.5 deg"), Options{})
	if err != nil {
		t.Fatal(err)
	}
	follow(r, there)
	if err := r.resolve("a test"); err != nil {
		t.Fatal(err)
	}
	for r.h.Status == "" && r.resolved {
		r.advance()
	}
	if list := regimes(r.h); len(list) != 2 || r.h.Status != "" {
		t.Fatalf("%s %s, changes of regime %v, want two", r.h.Status, r.h.Reason, list)
	}
	follow(twin, r.t)
	a, b := r.carried.chains[0].end(), twin.carried.chains[0].at(r.t)
	near(t, "ln √I", 2*a.size[0], 2*b.size(0), 0.02/math.Abs(2*b.size(0)))
	follow(r, r.t+1e-3*Megayear)
	r.finish()
	if r.h.end.regime != scenarios.Adiabatic || r.h.Closure.Energy > sampling || r.h.Closure.Momentum > 30*sampling {
		t.Errorf("ends %s with closures %v", r.h.end.regime, r.h.Closure)
	}
}

// A libration that is too wide at the start is followed from there, at the
// state that librates so.
func TestAutoStartsResolved(t *testing.T) {
	r, err := begin(damped(t, "12 deg"), Options{})
	if err != nil {
		t.Fatal(err)
	}
	if list := regimes(r.h); !r.resolved || len(list) != 1 || list[0].Time != 0 {
		t.Errorf("resolved: %v, changes of regime %v", r.resolved, list)
	}
	if r, err = begin(damped(t, "9 deg"), Options{}); err != nil || r.resolved || len(r.h.Events) > 0 {
		t.Errorf("9 degrees: resolved %v, events %v, %v", r.resolved, r.h.Events, err)
	}
}

// A history that is continued while librations are followed goes on following
// them, about the same centre.
func TestAutoIsContinued(t *testing.T) {
	h := run1(t, shipped(t, "overstable-pair", set("run.span", "20 kyr")))
	if h.end.regime != scenarios.Resolved {
		t.Fatalf("ends %s, want resolved", h.end.regime)
	}
	dir := t.TempDir() + "/half"
	w, err := record.Create(dir, Tables(), record.CreateOptions{})
	if err != nil {
		t.Fatal(err)
	}
	if err := h.Write(w); err != nil {
		t.Fatal(err)
	}
	from, err := Load(dir)
	if err != nil {
		t.Fatal(err)
	}
	r, err := begin(shipped(t, "overstable-pair"), Options{From: from})
	if err != nil {
		t.Fatal(err)
	}
	if len(regimes(r.h)) > 0 || !r.resolved {
		t.Fatalf("resolved: %v, events %v", r.resolved, r.h.Events)
	}
	actions, _ := averaged(t, r)
	whole, err := begin(shipped(t, "overstable-pair"), Options{})
	if err != nil {
		t.Fatal(err)
	}
	follow(whole, from.Time)
	want, _ := averaged(t, whole)
	near(t, "action where the history is continued", actions[0], want[0], 0.01)
	if _, err := Run(t.Context(), shipped(t, "overstable-pair", set("run.regime", "adiabatic")), Options{From: from}); err == nil {
		t.Error("an adiabatic history takes up librations that are followed")
	}
}

// A fold: divergent migration, by a torque against the motion, is followed by
// auto from where the least ω² is 1 % of its first, and ends where the angles
// circulate: when it does if followed from before that, to 1e-3.
func TestAutoFollowsAFold(t *testing.T) {
	left := func(from float64) (*History, float64) {
		s := shipped(t, "quiet-chain", scenarios.Edit{Path: "orbiter.Cinder.interior", Unset: true}, set("run.regime", "auto"))
		r, err := begin(s, Options{})
		if err != nil {
			t.Fatal(err)
		}
		r.p.bodies[0].primary = orbit.NewPrimaryTide(r.p.groups[0].Group, 0, orbit.NewCentralTide(key.Values{Law: "constant-q", Map: map[string]any{"k2_over_Q": -5e-2}}))
		if err := r.start(nil); err != nil {
			t.Fatal(err)
		}
		for r.h.Status == "" {
			if r.advance(); !r.resolved && r.t > from {
				if err := r.resolve("a test"); err != nil {
					t.Fatal(err)
				}
				r.gauge.next = math.Inf(1) // and stays so
			}
		}
		r.finish()
		return r.h, r.t
	}
	auto, end := left(math.Inf(1))
	if auto.Status != StatusEnded || auto.OrbitOutcome != OrbitLeft || !strings.Contains(auto.Reason, scenarios.EventResonanceLeft) {
		t.Errorf("%s: %s, %s", auto.Status, auto.Reason, auto.OrbitOutcome)
	}
	if list := regimes(auto); len(list) != 1 || !strings.Contains(list[0].Detail, scenarios.EventFoldNear) {
		t.Errorf("changes of regime %v, want one at the fold", list)
	}
	if auto.Suspect {
		t.Errorf("closures %v", auto.Closure)
	}
	_, resolved := left(0.997 * end)
	near(t, "time at which the resonance is left", end, resolved, 1e-3)
}
