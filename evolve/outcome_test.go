package evolve

import (
	"math"
	"testing"
)

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
