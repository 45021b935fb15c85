package evolve

import (
	"context"
	"math"
	"testing"

	"tidekiln/orbit"
	"tidekiln/scenarios"
)

// A free pair below the critical eccentricity, √6 (m′α|f₁|/(3MS))^{1/3} = 0.054 for
// these masses (4.4 of Henrard & Lemaitre's model), drifts together and is caught;
// once, and it stays.
func TestFreePairIsCaught(t *testing.T) {
	h := run1(t, shipped(t, "resonance-capture"))
	var entered []Event
	for _, e := range h.Events {
		switch e.Name {
		case scenarios.EventResonanceEntered:
			entered = append(entered, e)
		case scenarios.EventResonanceLeft:
			t.Errorf("left at %g yr", e.Time/orbit.Year)
		}
	}
	if len(entered) != 1 || entered[0].Body != "Swift" || entered[0].Other != "Still" || entered[0].Ends {
		t.Fatalf("events %+v", h.Events)
	}
	if h.Status != StatusComplete || h.OrbitOutcome != OrbitLocked || h.Suspect {
		t.Errorf("%s, %s, outcome %s, closures %v", h.Status, h.Reason, h.OrbitOutcome, h.Closure)
	}
	// Caught, the eccentricity grows: e² gains at least the drift since.
	if e := h.Bodies[0].Eccentricity; e.Max < 0.03 {
		t.Errorf("e reaches %g", e.Max)
	}
	// The same, stopped by the event, and with a change of the rules by it.
	stopped := run1(t, shipped(t, "resonance-capture", set("run.stop", `[{ event = "resonance-entered" }]`)))
	if stopped.Status != StatusEnded || stopped.End != entered[0].Time {
		t.Errorf("stopped: %s at %g, want %g", stopped.Status, stopped.End, entered[0].Time)
	}
	changed := run1(t, shipped(t, "resonance-capture", set("change", `[{ when = { event = "resonance-entered" }, set = { central.tide.k2_over_Q = 0.0 } }]`), set("run.span", "5.5 kyr")))
	if changed.Status != StatusComplete || !(changed.Bodies[0].Eccentricity.Max < h.Bodies[0].Eccentricity.Max) || len(changed.Events) != 3 {
		t.Errorf("without a tide from then on: %s, e up to %g", changed.Status, changed.Bodies[0].Eccentricity.Max)
	}
}

// A locked pair that drifts apart keeps the action of its libration while the
// forced eccentricity falls below it: its argument goes round, and the history goes
// on.
func TestLibratingPairIsLost(t *testing.T) {
	edits := []scenarios.Edit{
		set("chain.pair.state", "locked"), set("chain.pair.offset", "-0.7 deg/day"),
		set("orbiter.Swift.mass", "1e21 kg"), set("orbiter.Swift.radius", "500 km"), set("central.tide.k2_over_Q", "1"),
		{Path: "orbiter.Still.period", Unset: true},
	}
	for _, name := range []string{"Swift", "Still"} {
		for _, key := range []string{"eccentricity", "pericentre", "mean_longitude"} {
			edits = append(edits, scenarios.Edit{Path: "orbiter." + name + "." + key, Unset: true})
		}
	}
	s := shipped(t, "resonance-capture", edits...)
	for _, method := range []string{scenarios.Splitting, scenarios.DOP853} {
		s.Run.Method = method
		h := runLibrating(t, s, 0.5)
		left := 0
		for _, e := range h.Events {
			if e.Name == scenarios.EventResonanceLeft {
				left++
				if e.Ends || e.Body != "Swift" {
					t.Errorf("%s: %+v", method, e)
				}
			}
		}
		if left != 1 || h.Status != StatusComplete || h.OrbitOutcome != OrbitLeft || h.End != s.Run.Span {
			t.Errorf("%s: left %d times, %s %s, outcome %s, events %+v", method, left, h.Status, h.Reason, h.OrbitOutcome, h.Events)
		}
	}
}

// The shipped chain librates all its time: its Laplace angle stays within 10° of
// 180° (it starts 4° off, and other modes add as much), its books close.
func TestShippedChainLibrates(t *testing.T) {
	h := run1(t, shipped(t, "resolved-chain", scenarios.Edit{Path: "run.span", Value: "10 kyr"}))
	if h.Status != StatusComplete || h.OrbitOutcome != OrbitLocked || h.Suspect {
		t.Fatalf("%s %s, outcome %s, closures %v", h.Status, h.Reason, h.OrbitOutcome, h.Closure)
	}
	r, err := written(t, h).Read("resonances")
	if err != nil {
		t.Fatal(err)
	}
	angles, valid, err := r.Floats("angle_deg")
	if err != nil {
		t.Fatal(err)
	}
	seen := 0
	for i, a := range angles {
		if !valid[i] {
			continue // of the first pair
		}
		seen++
		if math.Abs(a-180) > 10 {
			t.Errorf("the Laplace angle is %g deg", a)
		}
	}
	if seen != 142 { // 10 kyr by 71 yr, and both ends
		t.Errorf("%d angles", seen)
	}
	arguments, _, err := r.Floats("argument_deg")
	if err != nil {
		t.Fatal(err)
	}
	pairs, _, _ := r.Texts("inner_body")
	for i, a := range arguments {
		// The innermost's argument librates about 0, by the width of its phases.
		if pairs[i] == "Cinder" && math.Abs(a) > 15 {
			t.Errorf("the argument of Cinder is %g deg", a)
		}
	}
}

// A resolved history that is continued goes on as if it had not stopped: the
// blocks begin anew, and libration and drift agree to the tolerance.
func TestContinuingResolved(t *testing.T) {
	edit := func(span string) []scenarios.Edit {
		return []scenarios.Edit{{Path: "run.span", Value: span}, {Path: "run.record", Value: "0.1 kyr"}}
	}
	whole := run1(t, shipped(t, "resolved-chain", edit("2 kyr")...))
	half := run1(t, shipped(t, "resolved-chain", edit("1 kyr")...))
	from := continuation(t, half)
	s, err := scenarios.Read("stored", []byte(from.Scenario), edit("2 kyr")...)
	if err != nil {
		t.Fatal(err)
	}
	rest, err := Run(context.Background(), s, Options{From: from})
	if err != nil {
		t.Fatal(err)
	}
	for i, v := range whole.end.state {
		// 5000 steps of 1e-7 of z ≤ 0.011, of which one part in a hundred adds up.
		if d := math.Abs(rest.end.state[i] - v); d > 5e-6 {
			t.Errorf("component %d ends at %g, uninterrupted at %g", i, rest.end.state[i], v)
		}
	}
}
