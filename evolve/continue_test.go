package evolve

import (
	"context"
	"errors"
	"fmt"
	"testing"

	"tidekiln/scenarios"
)

func TestContinuing(t *testing.T) {
	change := scenarios.Edit{Path: "change", Value: `[{ at = "100 Myr", set = { central.tide.k2_over_Q = 2e-5 } }]`}
	whole := run1(t, shipped(t, "volcanic-cycle", set("run.span", "400 Myr"), change))
	half := run1(t, shipped(t, "volcanic-cycle", set("run.span", "200 Myr"), change))
	from := continuation(t, half)
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
