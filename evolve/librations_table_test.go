package evolve

import (
	"math"
	"os"
	"testing"

	"tidekiln/evolve/ode"
	"tidekiln/orbit"
	"tidekiln/scenarios"
)

// The cost of resolving a chain of three against its accuracy, printed: seconds a
// Myr (with tides the second figure), the greatest error of H in the libration's
// energy, and the phase error after 2000 yr against DOP853 at steps of 0.03 yr.
// TIDEKILN_LONG=1 go test ./evolve -run CostOfLibrations -v
func TestCostOfLibrations(t *testing.T) {
	if os.Getenv("TIDEKILN_LONG") == "" {
		t.Skip("prints a table of costs; set TIDEKILN_LONG=1 to see it")
	}
	const span = 2000 * orbit.Year
	for _, width := range []float64{0.05, 0.005} {
		c := newResolvedCase(t, still(t, "quiet-chain"), width)
		ref := c.run(t, c.integrator(t, scenarios.DOP853, 1e-13, 0.03*orbit.Year), span)
		warm := shipped(t, "volcanic-cycle", scenarios.Edit{Path: "run.regime", Value: "resolved"})
		w := newResolvedCase(t, warm, width)
		row := func(method string, rtol, step float64) resolvedResult {
			r := c.run(t, c.integrator(t, method, rtol, step), span)
			tides := w.run(t, w.integrator(t, method, rtol, step), span)
			per := orbit.Year * 1e6 / span
			t.Logf("%5.3g %-9s rtol %.0e step %-5.3g %5.1f steps/yr %6.1f %6.1f s/Myr  H %.1e  phase %.1e",
				width, method, rtol, step/orbit.Year, float64(r.steps)/2000, r.wall.Seconds()*per, tides.wall.Seconds()*per, r.drift, c.miss(r.y, ref.y))
			return r
		}
		for _, rtol := range []float64{1e-7, 1e-8, 1e-9, 1e-10} {
			row(scenarios.Splitting, rtol, 0)
		}
		for _, h := range []float64{0.45, 0.3, 0.2, 0.1} {
			row(scenarios.Splitting, 1e-7, h*orbit.Year)
		}
		for _, rtol := range []float64{1e-7, 1e-10} {
			row(scenarios.DOP853, rtol, 0)
		}
		for _, h := range []float64{0.3, 0.2, 0.1} {
			row(scenarios.DOP853, 1e-7, h*orbit.Year)
		}
		// At the default tolerance the phase is good to 1e-3 of a radian.
		if r := row(scenarios.Splitting, 1e-7, 0); c.miss(r.y, ref.y) > 1e-3 || math.IsNaN(r.drift) {
			t.Errorf("phase off by %.1e at the default tolerance", c.miss(r.y, ref.y))
		}
	}
}

// A step with tides does not allocate.
func TestResolvedStepsDoNotAllocate(t *testing.T) {
	for _, method := range []string{scenarios.Splitting, scenarios.DOP853} {
		s := shipped(t, "volcanic-cycle", scenarios.Edit{Path: "run.regime", Value: "resolved"})
		c := newResolvedCase(t, s, 0.01)
		in := c.integrator(t, method, 1e-7, 0)
		if err := in.Start(0, c.y); err != nil {
			t.Fatal(err)
		}
		step := func() {
			if _, err := in.Step(Megayear); err != nil {
				t.Fatal(err)
			}
		}
		step()
		if n := testing.AllocsPerRun(50, step); n != 0 {
			t.Errorf("%s: a step allocates %g times", method, n)
		}
	}
}

func BenchmarkResolvedStep(b *testing.B) {
	for _, method := range []string{scenarios.Splitting, scenarios.DOP853} {
		b.Run(method, func(b *testing.B) {
			s := shipped(b, "volcanic-cycle", scenarios.Edit{Path: "run.regime", Value: "resolved"})
			c := newResolvedCase(b, s, 0.01)
			var in ode.Integrator = c.integrator(b, method, 1e-7, 0)
			if err := in.Start(0, c.y); err != nil {
				b.Fatal(err)
			}
			begin := in.T()
			for b.Loop() {
				if _, err := in.Step(1e3 * Megayear); err != nil {
					b.Fatal(err)
				}
			}
			b.ReportMetric((in.T()-begin)/orbit.Year/float64(b.N), "yr/step")
		})
	}
}
