package evolve

import (
	"math"
	"testing"

	"tidekiln/evolve/ode"
	"tidekiln/orbit"
	"tidekiln/scenarios"
)

// averaged measures the librations of the first chain of a run in the resolved
// regime, over a few of them from its present state, which it does not move: by
// DOP853 of its own.
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

func TestEXP(t *testing.T) {
	for _, at := range []float64{3e-3, 8e-3, 15e-3, 1} {
		r, err := begin(shipped(t, "overstable-pair"), Options{})
		if err != nil {
			t.Fatal(err)
		}
		for r.h.Status == "" && !r.resolved {
			r.advance()
			if r.t/Megayear > at && !r.resolved {
				r.resolve("x")
			}
		}
		c := &r.gauge.aside.chains[0]
		k := c.end()
		a, span := averaged(t, r)
		t.Logf("at %g: carried %g %g measured %g %g over %g yr; ratio %g %g; growth %g %g widths %g %g", r.t/Megayear, 2*k.size[0], 2*k.size[1], math.Log(a[0]), math.Log(a[1]), span/orbit.Year, a[0]/math.Exp(2*k.size[0]), a[1]/math.Exp(2*k.size[1]), c.at(k.t).real(0), 2*k.modes.Modes[0].Growth*Megayear, widest(k.width[0])*math.Exp(k.size[0])/degree, widest(k.width[1])*math.Exp(k.size[1])/degree)
		t0 := r.t
		for r.t < t0+1000*orbit.Year {
			r.advance()
		}
		if !r.resolved {
			t.Log("relaxed")
			continue
		}
		b, _ := averaged(t, r)
		t.Logf("   growth %g %g", math.Log(b[0]/a[0])/(r.t-t0)*Megayear, math.Log(b[1]/a[1])/(r.t-t0)*Megayear)
	}
	_ = ode.Stats{}
	_ = scenarios.Auto
}
