package evolve

import (
	"fmt"
	"math"
	"testing"

	"tidekiln/evolve/ode"
	"tidekiln/orbit"
	"tidekiln/scenarios"
)

// twins are a heavy inner moon and a light outer one, whose free
// eccentricities turn at rates that cross as the pair is driven together.
// Their coupling goes with the root of the light one's mass.
func twins(t testing.TB, mass float64) *scenarios.Scenario {
	t.Helper()
	s, err := scenarios.Read("twins.toml", []byte(fmt.Sprintf(`
[run]
span = "10 Myr"
[central]
name = "Ombra"
mass = "1.6e27 kg"
radius = "66000 km"
J2 = 0.012
tide = { law = "constant-q", k2_over_Q = 1.3e-2 }
[orbiter.Cinder]
mass = "1e23 kg"
radius = "1790 km"
period = "1.9 d"
[orbiter.Crumb]
mass = "%v kg"
radius = "%v m"
[chain.pair]
members = ["Cinder", "Crumb"]
ratios = ["2:1"]
offset = "-0.22 deg/day"
`, mass, math.Cbrt(3*mass/(4*math.Pi*2500)))))
	if err != nil {
		t.Fatal(err)
	}
	return s
}

// Two librations meet in frequency, wide, near and sharp: where the actions go
// is that of a resolved integration, to 1 % of the whole. The passage takes a
// hundred periods here, which leaves the theory of slow passages that much to
// be wrong.
func TestPassageOfTwoLibrations(t *testing.T) {
	const span = 1100 * orbit.Year
	for _, c := range []struct {
		mass    float64
		told    bool
		crossed bool // the greater part keeps its character
	}{{1e14, true, true}, {1e17, true, true}, {1e18, true, true}, {1e19, true, false}, {1e20, false, false}} {
		p, y := projected(t, twins(t, c.mass))
		l := startOf(t, p, y)
		path := &l.chains[0]
		from := startOf(t, p, y).chains[0].end()
		// Of the same action, one would not see that they exchange it.
		path.end().size[0], path.end().size[1] = 0, math.Log(math.Sqrt(3))
		integ, err := ode.NewRadau(p, p.Tolerances())
		if err != nil {
			t.Fatal(err)
		}
		if err := integ.Start(0, y); err != nil {
			t.Fatal(err)
		}
		told := false
		for integ.T() < span {
			seg, err := integ.Step(span)
			if err != nil {
				t.Fatal(err)
			}
			l.advance(seg)
			told = told || len(path.passed) > 0
		}
		to := path.end()
		if told != c.told {
			t.Errorf("%g kg: a passage is told: %v, want %v", c.mass, told, c.told)
		}
		if crossed := to.gap(0, 1) < 0; crossed != c.crossed {
			t.Errorf("%g kg: the modes have changed places: %v, want %v", c.mass, crossed, c.crossed)
		}
		var want [2]float64
		for k, start := range []float64{1, 3} {
			var ends [2][]float64
			scale := 1e-4 / widest(from.width[k])
			for i, way := range []float64{1, -1} {
				z := append([]float64(nil), y...)
				for j, v := range from.modes.Modes[k].Right {
					z[j] += way * scale * real(v)
				}
				ends[i] = extrapolated(p, z, span, from.modes.Modes[0].Period()/5)
			}
			for q := range want {
				sum := complex(0, 0)
				for j, w := range to.modes.Modes[q].Left {
					sum += w * complex((ends[0][j]-ends[1][j])/scale, 0)
				}
				want[q] += start * (real(sum)*real(sum) + imag(sum)*imag(sum))
			}
		}
		for k, w := range want {
			if got := math.Exp(2 * to.size[k]); math.Abs(got-w) > 0.01*4 {
				t.Errorf("%g kg: mode %d ends with an action of %.4f, want %.4f", c.mass, k+1, got, w)
			}
		}
	}
}
