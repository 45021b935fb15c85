package evolve

import (
	"context"
	"errors"
	"math"
	"testing"
)

// A recheck finds what the tolerance leaves: at the tight end little, at the
// loose end more, in rows at the very times of the first, changes and extra rows
// included.
func TestRecheck(t *testing.T) {
	change := set("change", `[{ at = "20.5 Myr", set = { central.tide.k2_over_Q = 2e-5 } }]`)
	found := map[string]float64{}
	for _, tol := range []string{"1e-5", "1e-7"} {
		h := run1(t, shipped(t, "volcanic-cycle", set("run.span", "100 Myr"), set("run.tolerance", tol), change))
		if err := h.Repeat(context.Background(), Options{}); err != nil {
			t.Fatal(err)
		}
		c := h.Recheck
		if c.Status != StatusComplete || c.Outcome != h.Outcome || c.Events != len(h.Events) {
			t.Errorf("rechecked: %s, %s, %d events; at first %s, %s, %d", c.Status, c.Outcome, c.Events, h.Status, h.Outcome, len(h.Events))
		}
		subjects := map[string]int{}
		for _, d := range c.Differences {
			subjects[d.Table]++
			if d.Relative < 0 || d.Relative > 0.3 || math.IsNaN(d.Relative) || d.Time < 0 || d.Time > 100 {
				t.Errorf("%+v", d)
			}
		}
		if subjects["bodies"] < 3*3 || subjects["resonances"] != 5 || subjects["system"] == 0 || subjects["events"] != 1 {
			t.Errorf("differences by table: %v", subjects)
		}
		e, ok := c.Worst("eccentricity")
		if !ok {
			t.Fatal("no difference of e")
		}
		found[tol] = e.Relative
		// The bound on decades of tolerance, once for each of two decades.
		loose := map[string]float64{"1e-5": 1e-5, "1e-7": 1e-7}[tol]
		if e.Relative == 0 || e.Relative > 33*loose {
			t.Errorf("e differs by %.2e at tolerance %s", e.Relative, tol)
		}
		f, err := written(t, h).Read("rechecks")
		if err != nil {
			t.Fatal(err)
		}
		if f.Len() != len(c.Differences) {
			t.Errorf("%d rows of rechecks for %d differences", f.Len(), len(c.Differences))
		}
	}
	if !(found["1e-7"] < found["1e-5"]/10) {
		t.Errorf("differences %v do not fall with the tolerance", found)
	}
}

// A jump that waits for an event comes a hair's breadth aside in the second
// history: rows about it are no difference.
func TestRecheckOverAJump(t *testing.T) {
	h := run1(t, shipped(t, "lone-moon", set("run.max_steps", "200"),
		set("change", `[{ when = { event = "solidus-crossed" }, set = { orbiter.Ember.interior.temperature = "1640 K" } }]`)))
	if err := h.Repeat(context.Background(), Options{}); err != nil {
		t.Fatal(err)
	}
	if h.Status != StatusComplete || h.Recheck.Status != StatusComplete {
		t.Fatalf("%s (%s), rechecked %s", h.Status, h.Reason, h.Recheck.Status)
	}
	// After the jump the mantle cools by some 1 K/Myr; the event moves by 1e-7 Myr.
	if d, ok := h.Recheck.Worst("temperature_K"); !ok || d.Relative > 1e-5 {
		t.Errorf("temperature differs by %.1e at %g Myr", d.Relative, d.Time)
	}
}

func TestRecheckThatCannotBe(t *testing.T) {
	h := run1(t, shipped(t, "quiet-chain", set("run.tolerance", "1e-12")))
	if err := h.Repeat(context.Background(), Options{}); err == nil || h.Recheck != nil {
		t.Errorf("the smallest tolerance was rechecked: %v", err)
	}
	ctx, cancel := context.WithCancelCause(context.Background())
	reason := errors.New("enough")
	cancel(reason)
	h = run1(t, shipped(t, "quiet-chain"))
	if err := h.Repeat(ctx, Options{}); !errors.Is(err, reason) || h.Recheck != nil {
		t.Errorf("interrupted: %v", err)
	}
}
