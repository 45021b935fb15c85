package ode

import (
	"errors"
	"math"
	"testing"
)

// pendulum is q” = −sin q about its rest, whose remainder is a pure kick: the
// midpoint rule is exact for it and the composition's error alone is left.
type pendulum struct{}

func (pendulum) Dim() int                         { return 2 }
func (pendulum) Oscillators() [][2]int            { return [][2]int{{0, 2}} }
func (pendulum) Oscillate(_ int, y, dy []float64) { dy[0], dy[1] = y[1], -math.Sin(y[0]) }
func (pendulum) Hold(float64, []float64)          {}
func (pendulum) Drift(_, dy, _ []float64)         { clear(dy) }
func (pendulum) NumQuadratures() int              { return 0 }
func (p pendulum) OscillateJacobian(_ int, y, dy, jac []float64) {
	p.Oscillate(0, y, dy)
	jac[0], jac[1], jac[2], jac[3] = 0, 1, -math.Cos(y[0]), 0
}

func newTestSplitting(t testing.TB, sys Split, opt SplittingOptions, y []float64) *Splitting {
	t.Helper()
	if opt.RTol == 0 {
		opt.RTol = 1e-6
	}
	if opt.ATol == nil {
		opt.ATol = make([]float64, sys.Dim())
		for i := range opt.ATol {
			opt.ATol[i] = opt.RTol
		}
	}
	s, err := NewSplitting(sys, opt)
	if err != nil {
		t.Fatal(err)
	}
	if err := s.Start(0, y); err != nil {
		t.Fatal(err)
	}
	return s
}

// through steps to the end and returns the state and the sum of the integrals.
func through(t testing.TB, s Integrator, end float64, each func(*Segment)) (y, q []float64) {
	t.Helper()
	for s.T() < end {
		seg, err := s.Step(end)
		if err != nil {
			t.Fatal(err)
		}
		if q == nil {
			q = make([]float64, len(seg.Quadratures()))
		}
		for i, v := range seg.Quadratures() {
			q[i] += v
		}
		if each != nil {
			each(seg)
		}
	}
	return s.State(), q
}

// The error is of order εh⁸ + ε²h⁶ + ε³h⁴, ε = sin q/q − 1 ≈ q²/6: released at
// 0.01 rad the first term is all that is above rounding, at 2 rad the last rules
// at small h. A wrong digit in a coefficient of the composition would leave an
// error of order 2 at every amplitude. Half an order is left for the next terms.
func TestOrdersOfTheComposition(t *testing.T) {
	const end = 100
	miss := func(q, h float64) float64 {
		release := func(h float64) []float64 {
			y, _ := through(t, newTestSplitting(t, pendulum{}, SplittingOptions{Block: end, FixedStep: h}, []float64{q, 0}), end, nil)
			return y
		}
		y, ref := release(h), release(1./64)
		return math.Hypot(y[0]-ref[0], y[1]-ref[1]) / q
	}
	for _, c := range []struct{ q, h, order float64 }{
		{0.01, 2, 8},
		{0.1, 1, 5.7}, // between the first two terms and the third
		{2, 0.25, 4},
	} {
		a, b := miss(c.q, c.h), miss(c.q, c.h/2)
		order := math.Log2(a / b)
		t.Logf("from %g rad: error %.2e at h = %g, %.2e at %g: order %.2f", c.q, a, c.h, b, c.h/2, order)
		if !(order > c.order-0.5) {
			t.Errorf("from %g rad: order %.2f, want %g", c.q, order, c.order)
		}
	}
}

// bob hangs from a point at x that is drawn along, damped by something warm: the
// block holds q, v and x, and the warmth s outside is heated by the damping.
//
//	q' = v, v' = −ω²(q − x) − β(q − x)² − γ s v, x' = ε s, s' = γ s v² − k s
type bob struct{ s float64 }

const (
	bobOmega, bobBeta, bobGamma, bobPull, bobCooling = 2.0, 1.0, 2e-3, 1e-3, 5e-3
)

func (*bob) Dim() int              { return 4 }
func (*bob) NumQuadratures() int   { return 1 }
func (*bob) Oscillators() [][2]int { return [][2]int{{0, 3}} }
func (*bob) Oscillate(_ int, y, dy []float64) {
	d := y[0] - y[2]
	dy[0], dy[1], dy[2] = y[1], -bobOmega*bobOmega*d-bobBeta*d*d, 0
}
func (b *bob) OscillateJacobian(_ int, y, dy, jac []float64) {
	b.Oscillate(0, y, dy)
	stiff := bobOmega*bobOmega + 2*bobBeta*(y[0]-y[2])
	copy(jac, []float64{0, 1, 0, -stiff, 0, stiff, 0, 0, 0})
}
func (b *bob) Hold(_ float64, y []float64) { b.s = y[3] }
func (b *bob) Drift(y, dy, q []float64) {
	heat := bobGamma * b.s * y[1] * y[1]
	dy[0], dy[1], dy[2], dy[3] = 0, -bobGamma*b.s*y[1], bobPull*b.s, heat-bobCooling*b.s
	q[0] = heat
}

// Derivs is the whole, for another method.
func (b *bob) Derivs(_ float64, y, dy []float64) {
	b.Oscillate(0, y, dy)
	heat := bobGamma * y[3] * y[1] * y[1]
	dy[1] -= bobGamma * y[3] * y[1]
	dy[2], dy[3] = bobPull*y[3], heat-bobCooling*y[3]
}
func (b *bob) Integrands(_ float64, y, q []float64) { q[0] = bobGamma * y[3] * y[1] * y[1] }

var _ Integrator = (*Splitting)(nil)

// The damped bob against DOP853 at 1e-13: what is held is of second order in the
// block, at a step whose kicks leave less. (The heat at the ends of a block
// swings, and a block of 4 holds 2.5 swings: half an order for that.)
func TestHeldStateIsOfSecondOrderInTheBlock(t *testing.T) {
	start, end := []float64{0.12, 0, 0, 1}, 200.0
	d, err := NewDOP853(&bob{}, Options{RTol: 1e-13, ATol: []float64{1e-14, 1e-14, 1e-14, 1e-14}})
	if err != nil {
		t.Fatal(err)
	}
	if err := d.Start(0, start); err != nil {
		t.Fatal(err)
	}
	want, heat := through(t, d, end, nil)
	want = append([]float64(nil), want...)
	var last float64
	for i, block := range []float64{40, 20, 10} {
		y, q := through(t, newTestSplitting(t, &bob{}, SplittingOptions{Block: block, FixedStep: 1. / 64}, start), end, nil)
		miss := math.Abs(y[3] - want[3])
		t.Logf("block %g: s off by %.2e, x by %.2e, heat by %.2e of itself", block, miss, y[2]-want[2], q[0]/heat[0]-1)
		if i > 0 {
			if order := math.Log2(last / miss); !(order > 1.5) {
				t.Errorf("block %g: order %.2f, want 2", block, order)
			}
		}
		last = miss
	}
}

// Kicks of g leave an error of g h² while g h ≪ h², here 1e-4 h against h². (A
// kick takes g where its first half begins: g² h more.)
func TestKicksAreOfSecondOrder(t *testing.T) {
	var last float64
	sys := &damped{}
	exact := func(h float64) []float64 {
		y, _ := through(t, newTestSplitting(t, sys, SplittingOptions{Block: 10, FixedStep: h}, []float64{1, 0}), 50, nil)
		return append([]float64(nil), y...)
	}
	// q” = −q − 2γq' from q = 1 at rest.
	const gamma = 5e-5
	w := math.Sqrt(1 - gamma*gamma)
	sin, cos := math.Sincos(w * 50)
	want := math.Exp(-gamma*50) * (cos + gamma/w*sin)
	for i, h := range []float64{1, 0.5, 0.25} {
		miss := math.Abs(exact(h)[0] - want)
		if i > 0 {
			if order := math.Log2(last / miss); math.Abs(order-2) > 0.2 {
				t.Errorf("h %g: order %.2f, want 2", h, order)
			}
		}
		last = miss
	}
}

// damped is a harmonic oscillator with friction: no remainder at all.
type damped struct{}

func (damped) Dim() int                         { return 2 }
func (damped) Oscillators() [][2]int            { return [][2]int{{0, 2}} }
func (damped) Oscillate(_ int, y, dy []float64) { dy[0], dy[1] = y[1], -y[0] }
func (damped) Hold(float64, []float64)          {}
func (damped) Drift(y, dy, _ []float64)         { dy[0], dy[1] = 0, -1e-4*y[1] }
func (damped) NumQuadratures() int              { return 0 }
func (d damped) OscillateJacobian(_ int, y, dy, jac []float64) {
	d.Oscillate(0, y, dy)
	copy(jac, []float64{0, 1, -1, 0})
}

// Inside a step of 2 rad the seven-node polynomial misses the cosine by
// 2⁸/8!·max|Π(θ − c)| ≤ 6e-3·2e-4 of the amplitude; at the ends it is exact.
func TestInsideOfASplittingStep(t *testing.T) {
	y := make([]float64, 2)
	through(t, newTestSplitting(t, pendulum{}, SplittingOptions{Block: 20, FixedStep: 2}, []float64{0.01, 0}), 20, func(seg *Segment) {
		for k := range 11 {
			at := seg.T0 + (seg.T1-seg.T0)*float64(k)/10
			seg.Eval(at, y)
			// The period is longer by q²/16: 6e-6 of 20 rad.
			if miss := math.Abs(y[0] - 0.01*math.Cos(at*(1-0.01*0.01/16))); miss > 0.01*2e-6 {
				t.Errorf("at %g off by %.2e of the amplitude", at, miss/0.01)
			}
		}
	})
}

// A pendulum that is pushed until it turns over: the steps shorten as it widens,
// and it goes on turning. Its energy is the work done on it but for the g h/2 ≤ 2e-3
// that a kick's second order adds, and the tolerance of 1e-7 a step.
func TestWideningOscillationIsFollowed(t *testing.T) {
	s := newTestSplitting(t, pushed{}, SplittingOptions{RTol: 1e-7, Block: 30}, []float64{0.05, 0})
	var longest, shortest, work float64 = 0, math.Inf(1), 0
	y, _ := through(t, s, 4600, func(seg *Segment) {
		h := seg.T1 - seg.T0
		longest, shortest = math.Max(longest, h), math.Min(shortest, h)
		work += seg.Quadratures()[0]
	})
	energy := y[1]*y[1]/2 - math.Cos(y[0]) + math.Cos(0.05)
	if math.Abs(y[0]) < 2*math.Pi {
		t.Errorf("ends at %g rad: it did not turn over", y[0])
	}
	if longest < 2 || shortest > 0.5 {
		t.Errorf("steps from %g to %g: they should shorten", shortest, longest)
	}
	steps := float64(s.Stats().Steps)
	if miss := math.Abs(energy - work); miss > (1e-7*steps+2e-3)*energy {
		t.Errorf("energy %g, work %g", energy, work)
	}
}

// pushed is a pendulum driven along its velocity.
type pushed struct{ pendulum }

func (pushed) NumQuadratures() int { return 1 }
func (pushed) Drift(y, dy, q []float64) {
	dy[0], dy[1] = 0, 0.002*y[1]
	q[0] = 0.002 * y[1] * y[1]
}

// A pendulum of 0.01 rad and period 2π(1 + q²/16) passes its rest falling at a
// quarter and five quarters; the insides of its steps hold that to 2e-6 of q.
func TestEventsAtEndsOfSplittingSteps(t *testing.T) {
	s := newTestSplitting(t, pendulum{}, SplittingOptions{Block: 20}, []float64{0.01, 0})
	ev := NewEvents([]Event{{Name: "rest", Direction: -1, Value: func(_ float64, y []float64) float64 { return y[0] }}})
	ev.AtEnds()
	ev.Reset(0, s.State())
	var times []float64
	through(t, s, 10, func(seg *Segment) {
		for _, o := range ev.Locate(seg) {
			times = append(times, o.T)
		}
	})
	if len(times) != 2 {
		t.Fatalf("found %v", times)
	}
	for i, at := range times {
		want := (0.5 + 2*float64(i)) * math.Pi * (1 + 0.01*0.01/16)
		if math.Abs(at-want) > 4e-6 {
			t.Errorf("passes its rest at %.8g, want %.8g", at, want)
		}
	}
}

func TestSplittingSteps(t *testing.T) {
	s := newTestSplitting(t, &bob{}, SplittingOptions{Block: 100}, []float64{0.1, 0, 0, 1})
	through(t, s, 37, nil)
	if s.T() != 37 {
		t.Errorf("stands at %g", s.T())
	}
	for range 3 {
		if _, err := s.Step(1e6); err != nil {
			t.Fatal(err)
		}
	}
	if n := testing.AllocsPerRun(20, func() {
		if _, err := s.Step(1e6); err != nil {
			t.Fatal(err)
		}
	}); n != 0 {
		t.Errorf("a step allocates %g times", n)
	}
	same := func() []float64 {
		s := newTestSplitting(t, &bob{}, SplittingOptions{Block: 20}, []float64{0.1, 0, 0, 1})
		y, _ := through(t, s, 50, nil)
		return y
	}
	a, b := same(), same()
	for i := range a {
		if a[i] != b[i] {
			t.Errorf("component %d: %v and %v from equal starts", i, a[i], b[i])
		}
	}
}

func TestSplittingStops(t *testing.T) {
	var stop *StopError
	s := newTestSplitting(t, pendulum{}, SplittingOptions{Block: 10, MaxSteps: 3}, []float64{0.1, 0})
	var err error
	for err == nil {
		_, err = s.Step(1000)
	}
	if !errors.As(err, &stop) || stop.Reason != StepBudget {
		t.Errorf("error %v, want the step budget", err)
	}
	s = newTestSplitting(t, pendulum{}, SplittingOptions{RTol: 1e-12, Block: 10, MinStep: 1}, []float64{2, 0})
	if _, err := s.Step(1000); !errors.As(err, &stop) || stop.Reason != StepTooSmall {
		t.Errorf("error %v, want too small a step", err)
	}
	if err := s.Start(0, []float64{math.NaN(), 0}); !errors.As(err, &stop) || stop.Reason != NotFinite {
		t.Errorf("error %v, want not finite", err)
	}
	if _, err := s.Step(1); err == nil {
		t.Error("a step after a failed start")
	}
	for name, opt := range map[string]SplittingOptions{
		"no tolerance": {ATol: []float64{1, 1}, Block: 1},
		"no block":     {RTol: 1e-6, ATol: []float64{1, 1}},
		"short ATol":   {RTol: 1e-6, ATol: []float64{1}, Block: 1},
	} {
		if _, err := NewSplitting(pendulum{}, opt); err == nil {
			t.Errorf("%s: no error", name)
		}
	}
	if _, err := NewSplitting(still{}, SplittingOptions{RTol: 1e-6, ATol: []float64{1, 1}, Block: 1}); err == nil {
		t.Error("no oscillator: no error")
	}
}

// still has no oscillator.
type still struct{ pendulum }

func (still) Oscillators() [][2]int { return nil }
