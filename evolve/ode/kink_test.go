package ode

import (
	"math"
	"strings"
	"testing"
)

// ramp is y' = 1 + b max(0, y − 1), from y(0) = 0: y = t up to t = 1 and
// 1 + (exp(b(t−1)) − 1)/b from there.
type ramp struct {
	b      float64
	beyond bool
}

func (*ramp) Dim() int { return 1 }
func (p *ramp) Derivs(t float64, y, dy []float64) {
	dy[0] = 1
	if p.beyond {
		dy[0] += p.b * (y[0] - 1)
	}
}
func (p *ramp) Jacobian(t float64, y, dy, j []float64) {
	p.Derivs(t, y, dy)
	j[0] = 0
	if p.beyond {
		j[0] = p.b
	}
}
func (p *ramp) Freeze(t float64, y []float64)              { p.beyond = y[0] > 1 }
func (p *ramp) Kinks() int                                 { return 1 }
func (p *ramp) Kink(i int, t float64, y []float64) float64 { return y[0] - 1 }
func (p *ramp) Cross(i int, up bool)                       { p.beyond = up }
func (p *ramp) exact(t float64) float64                    { return 1 + math.Expm1(p.b*(t-1))/p.b }

// switching hides the kinks of a ramp: the branch follows the sign at every call.
type switching struct{ *ramp }

func (p switching) Dim() int { return 1 }
func (p switching) Derivs(t float64, y, dy []float64) {
	dy[0] = 1 + p.b*max(0, y[0]-1)
}
func (p switching) Jacobian(t float64, y, dy, j []float64) {
	p.Derivs(t, y, dy)
	if j[0] = 0; y[0] > 1 {
		j[0] = p.b
	}
}
func (p switching) Kinks() int { return 0 }

// Fixed steps keep their order across a located kink and fall to about 2, the
// order of a step across a jump of f', without. The kink is met at t = 1 inside a
// step for every h used.
func TestOrderAcrossKink(t *testing.T) {
	worst := func(sys System, f formula, h float64) float64 {
		r := f.start(t, sys, Options{RTol: 1e-13, ATol: same(1, 1e-13), FixedStep: h}, 0, []float64{0})
		run(t, r, 2.5, nil)
		return math.Abs(r.State()[0]/(&ramp{b: 2}).exact(2.5) - 1)
	}
	for _, c := range []struct {
		formula
		h     float64
		order float64
	}{{radauThree, 0.3, 5}, {radauFive, 0.6, 9}, {rodas, 0.15, 5}, {dop, 0.3, 8}} {
		coarse, fine := worst(&ramp{b: 2}, c.formula, c.h), worst(&ramp{b: 2}, c.formula, c.h/2)
		if slope := math.Log2(coarse / fine); slope < c.order-0.7 {
			t.Errorf("%v: order %.2f across the kink, want %g (errors %g, %g)", c.formula, slope, c.order, coarse, fine)
		}
		if without := worst(switching{&ramp{b: 2}}, c.formula, c.h/2); without < 100*fine {
			t.Errorf("%v: error %g without and %g with location: no gain", c.formula, without, fine)
		}
	}
}

func TestKinkTimeAndSegment(t *testing.T) {
	for _, f := range formulas {
		t.Run(f.String(), func(t *testing.T) {
			r := f.start(t, &ramp{b: 2}, Options{RTol: 1e-9, ATol: same(1, 1e-9)}, 0, []float64{0})
			crossed := -1.0
			run(t, r, 2.5, func(seg *Segment) {
				if seg.KinkCrossed() == 0 {
					crossed = seg.T1
					// Asked after the crossing, the inside is still that of the old branch.
					var y [1]float64
					mid := (seg.T0 + seg.T1) / 2
					if seg.Eval(mid, y[:]); math.Abs(y[0]-mid) > 1e-12 {
						t.Errorf("y = %g at t = %g, want the same", y[0], mid)
					}
				}
			})
			// y = t is integrated exactly and the step landed to 1e-12 of its length.
			if math.Abs(crossed-1) > 1e-11 {
				t.Errorf("kink at t = %.15g, want 1", crossed)
			}
			if n := r.Stats().KinksCrossed; n != 1 {
				t.Errorf("%d kinks crossed, want 1", n)
			}
			if d := math.Abs(r.State()[0]/(&ramp{b: 2}).exact(2.5) - 1); d > 1e-9 {
				t.Errorf("end off by %g", d)
			}
		})
	}
}

// A run that ends where the kink lies goes on past it.
func TestEndOnKink(t *testing.T) {
	for _, f := range formulas {
		t.Run(f.String(), func(t *testing.T) {
			r := f.start(t, &ramp{b: 2}, Options{RTol: 1e-9, ATol: same(1, 1e-9)}, 0, []float64{0})
			run(t, r, 1, nil)
			if r.T() != 1 {
				t.Errorf("ended at %v, want 1", r.T())
			}
			run(t, r, 2.5, nil)
			if d := math.Abs(r.State()[0]/(&ramp{b: 2}).exact(2.5) - 1); d > 1e-9 {
				t.Errorf("end off by %g", d)
			}
		})
	}
}

// A start on the kink takes the branch the path enters, whatever was frozen.
func TestStartOnKink(t *testing.T) {
	for _, f := range formulas {
		t.Run(f.String(), func(t *testing.T) {
			r := f.start(t, &ramp{b: 2}, Options{RTol: 1e-9, ATol: same(1, 1e-9)}, 1, []float64{1})
			run(t, r, 2.5, nil)
			if d := math.Abs(r.State()[0]/(&ramp{b: 2}).exact(2.5) - 1); d > 1e-9 {
				t.Errorf("end off by %g", d)
			}
		})
	}
}

// tide is y′ = cos t, and z′ = Σ ± 1, + for every level y is above: z is the time
// above the levels less that below.
type tide struct {
	levels []float64
	above  []bool
}

func (*tide) Dim() int { return 2 }
func (p *tide) Derivs(t float64, y, dy []float64) {
	dy[0], dy[1] = math.Cos(t), 0
	for _, a := range p.above {
		if a {
			dy[1]++
		} else {
			dy[1]--
		}
	}
}
func (p *tide) Jacobian(t float64, y, dy, j []float64) { p.Derivs(t, y, dy); clear(j) }
func (p *tide) Freeze(t float64, y []float64) {
	p.above = make([]bool, len(p.levels))
	for i, l := range p.levels {
		p.above[i] = y[0] > l
	}
}
func (p *tide) Kinks() int                                 { return len(p.levels) }
func (p *tide) Kink(i int, t float64, y []float64) float64 { return y[0] - p.levels[i] }
func (p *tide) Cross(i int, up bool)                       { p.above[i] = up }

// Several kinks, two of them at one place, crossed up and down five times: the
// times above each level are exact to the landing (1e-12 of a step) and the error
// of y, over the slope √(1 − level²) of the crossing.
func TestManyCrossings(t *testing.T) {
	for _, f := range formulas {
		t.Run(f.String(), func(t *testing.T) {
			sys := &tide{levels: []float64{0.5, -0.3, 0.5, 0.9}}
			r := f.start(t, sys, Options{RTol: 1e-10, ATol: same(2, 1e-10)}, 0, []float64{0, 0})
			end := 10 * math.Pi
			run(t, r, end, nil)
			want := 0.0
			for _, l := range sys.levels {
				above := 5 * (math.Pi - 2*math.Asin(l)) // of five periods
				want += above - (end - above)
			}
			if d := math.Abs(r.State()[1] - want); d > 1e-8 {
				t.Errorf("time above less below off by %g", d)
			}
			if n := r.Stats().KinksCrossed; n != 40 {
				t.Errorf("%d kinks crossed, want 40", n)
			}
		})
	}
}

// The path touches the level from below: no lasting change of branch, no stall.
func TestGrazingKink(t *testing.T) {
	for _, f := range formulas {
		t.Run(f.String(), func(t *testing.T) {
			sys := &tide{levels: []float64{1}}
			r := f.start(t, sys, Options{RTol: 1e-10, ATol: same(2, 1e-10), MaxSteps: 2000}, 0, []float64{0, 0})
			run(t, r, 20, nil)
			// An error δ of y spends 2√(2δ) above at each of the three maxima; δ is some
			// tolerances, 1e-9.
			if d := math.Abs(r.State()[1] + 20); d > 2*3*2*math.Sqrt(2e-9) {
				t.Errorf("time above less below off by %g", d)
			}
		})
	}
}

// valve is y′ = −y − jump·sign y, with the kink at 0.
type valve struct {
	jump  float64
	above bool
}

func (*valve) Dim() int { return 1 }
func (p *valve) Derivs(t float64, y, dy []float64) {
	if dy[0] = -y[0] + p.jump; p.above {
		dy[0] = -y[0] - p.jump
	}
}
func (p *valve) Jacobian(t float64, y, dy, j []float64) {
	p.Derivs(t, y, dy)
	j[0] = -1
}
func (p *valve) Freeze(t float64, y []float64)              { p.above = y[0] > 0 }
func (p *valve) Kinks() int                                 { return 1 }
func (p *valve) Kink(i int, t float64, y []float64) float64 { return y[0] }
func (p *valve) Cross(i int, up bool)                       { p.above = up }

// A jump that both sides lead back to has no solution to follow: an error, not an
// endless chatter.
func TestSlidingStops(t *testing.T) {
	for _, f := range formulas {
		t.Run(f.String(), func(t *testing.T) {
			r := f.start(t, &valve{jump: 1}, Options{RTol: 1e-8, ATol: same(1, 1e-8), MaxSteps: 1000}, 0, []float64{0.7})
			var err error
			for err == nil && r.T() < 5 {
				_, err = r.Step(5)
			}
			if err == nil || !strings.Contains(err.Error(), "kink 0") {
				t.Fatalf("error is %v, want one that names kink 0", err)
			}
			// y + 1 = 1.7 e^{−t} is zero at t = ln 1.7; some tolerances of error, slope 1.
			if d := math.Abs(r.T() - math.Log(1.7)); d > 1e-7 {
				t.Errorf("stopped at t = %g, off by %g", r.T(), d)
			}
		})
	}
}

// An equilibrium on a kink is reached in spite of rounding across it.
func TestSettlingOnKink(t *testing.T) {
	for _, f := range formulas {
		t.Run(f.String(), func(t *testing.T) {
			r := f.start(t, &valve{}, Options{RTol: 1e-8, ATol: same(1, 1e-8), MaxSteps: 1000}, 0, []float64{0.7})
			end := 1e6
			if f == dop {
				end = 1e3 // it cannot take steps longer than the damping time
			}
			run(t, r, end, nil)
			if y := math.Abs(r.State()[0]); y > 1e-8 {
				t.Errorf("y = %g, want 0", y)
			}
		})
	}
}
