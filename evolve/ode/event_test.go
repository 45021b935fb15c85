package ode

import (
	"math"
	"testing"
)

// circle is u' = v, v' = −u: u = cos t, v = −sin t from (1, 0).
type circle struct{}

func (circle) Dim() int                          { return 2 }
func (circle) Derivs(t float64, y, dy []float64) { dy[0], dy[1] = y[1], -y[0] }
func (p circle) Jacobian(t float64, y, dy, j []float64) {
	p.Derivs(t, y, dy)
	copy(j, []float64{0, 1, -1, 0})
}

func locate(t *testing.T, r Integrator, end float64, list []Event) []Occurrence {
	t.Helper()
	e := NewEvents(list)
	e.Reset(r.T(), r.State())
	var all []Occurrence
	run(t, r, end, func(seg *Segment) { all = append(all, e.Locate(seg)...) })
	return all
}

func check(t *testing.T, got []Occurrence, want []Occurrence, tol float64) {
	t.Helper()
	if len(got) != len(want) {
		t.Fatalf("%d occurrences %v, want %d", len(got), got, len(want))
	}
	for i, o := range got {
		w := want[i]
		if o.Event != w.Event || o.Rising != w.Rising || math.Abs(o.T-w.T) > tol {
			t.Errorf("occurrence %d: event %d rising %v at %.12g, want %d %v %.12g", i, o.Event, o.Rising, o.T, w.Event, w.Rising, w.T)
		}
	}
}

// Two events in each of two steps of 1.5, against the exact times. The polynomial's
// error is h⁶/6!·max θΠ|θ − c_i| = 11.4/720·1.2e-3 = 2e-5, over a slope of at least 0.43:
// 1e-4 allowed.
func TestEventsInOneStep(t *testing.T) {
	r := mustRadau(t, circle{}, Options{RTol: 1e-12, ATol: same(2, 1e-12), Stages: 5, FixedStep: 1.5}, 0, []float64{1, 0})
	list := []Event{
		{Name: "v crosses −0.8", Value: func(t float64, y []float64) float64 { return y[1] + 0.8 }},
		{Name: "u falls through 0.7", Value: func(t float64, y []float64) float64 { return y[0] - 0.7 }, Direction: -1},
		{Name: "v rises through −0.9", Value: func(t float64, y []float64) float64 { return y[1] + 0.9 }, Direction: 1},
		{Name: "u rises through 0.7", Value: func(t float64, y []float64) float64 { return y[0] - 0.7 }, Direction: 1},
		// The start is on this one: it does not occur by leaving.
		{Name: "u = 1", Value: func(t float64, y []float64) float64 { return y[0] - 1 }},
	}
	check(t, locate(t, r, 3, list), []Occurrence{
		{Event: 1, T: math.Acos(0.7)},
		{Event: 0, T: math.Asin(0.8)},
		{Event: 2, T: math.Pi - math.Asin(0.9), Rising: true},
		{Event: 0, T: math.Pi - math.Asin(0.8), Rising: true},
	}, 1e-4)
}

// Two events in one step of 0.1 by every method, in order, whichever comes first in
// the list. The polynomial's error is of order h^p with a coefficient below 1, and
// the slopes are 0.5 and 0.8.
func TestTwoEventsInOneStep(t *testing.T) {
	for f, order := range map[formula]float64{radauThree: 4, radauFive: 6, rodas: 5, dop: 8} {
		r := f.start(t, circle{}, Options{RTol: 1e-12, ATol: same(2, 1e-12), FixedStep: 0.1}, 0, []float64{1, 0})
		list := []Event{
			{Name: "v falls through −sin 0.57", Value: func(t float64, y []float64) float64 { return y[1] + math.Sin(0.57) }},
			{Name: "u falls through cos 0.53", Value: func(t float64, y []float64) float64 { return y[0] - math.Cos(0.53) }},
		}
		check(t, locate(t, r, 0.95, list), []Occurrence{{Event: 1, T: 0.53}, {Event: 0, T: 0.57}}, 2*math.Pow(0.1, order))
	}
}

// An event that comes and goes between two of the places looked at: by time alone,
// so exact to rounding.
func TestEventReturnsInOneStep(t *testing.T) {
	for _, f := range formulas {
		r := f.start(t, circle{}, Options{RTol: 1e-12, ATol: same(2, 1e-12), FixedStep: 0.1}, 0, []float64{1, 0})
		list := []Event{{Value: func(t float64, y []float64) float64 { return (t - 0.03) * (t - 0.08) }}}
		check(t, locate(t, r, 0.2, list), []Occurrence{{T: 0.03}, {T: 0.08, Rising: true}}, 1e-15)
	}
}

// A pair of crossings inside one step, seen at its stages: sin t > 0.9 from 1.12 to
// 2.02, within the step from 0.7 to 2.7 whose stages 2 to 4 lie at 1.25, 1.87, 2.42.
func TestEventsDoubleCrossing(t *testing.T) {
	r := mustRadau(t, circle{}, Options{RTol: 1e-12, ATol: same(2, 1e-12), Stages: 5, FixedStep: 2},
		0.7, []float64{math.Cos(0.7), -math.Sin(0.7)})
	list := []Event{{Value: func(t float64, y []float64) float64 { return -y[1] - 0.9 }}}
	check(t, locate(t, r, 2.7, list), []Occurrence{
		{T: math.Asin(0.9), Rising: true},
		{T: math.Pi - math.Asin(0.9)},
	}, 5e-4) // the polynomial, as above: 64/720·1.2e-3 = 1e-4 over a slope of 0.43
}

// Times to the accuracy of the run: error of y in tolerances over the slope 1.
func TestEventTimes(t *testing.T) {
	for _, f := range formulas {
		t.Run(f.String(), func(t *testing.T) {
			const tol = 1e-11
			r := f.start(t, circle{}, Options{RTol: tol, ATol: same(2, tol)}, 0, []float64{1, 0})
			got := locate(t, r, 20, []Event{{Value: func(t float64, y []float64) float64 { return y[0] }}})
			var want []Occurrence
			for k := range 6 {
				want = append(want, Occurrence{T: (float64(k) + 0.5) * math.Pi, Rising: k%2 == 1})
			}
			check(t, got, want, 20*tol)
			for _, o := range got {
				if math.Abs(o.Y[0]) > 20*tol {
					t.Errorf("state at %g: u = %g, want 0", o.T, o.Y[0])
				}
			}
		})
	}
}

// Simple, multiple and discontinuous zeros, and zeros at an end, to rounding of x.
func TestRoot(t *testing.T) {
	for _, c := range []struct {
		f    func(float64) float64
		want float64
	}{
		{func(x float64) float64 { return x*x - 0.25 }, 0.5},
		{func(x float64) float64 { return x - 1 }, 1},
		{func(x float64) float64 { return x }, 0},
		{func(x float64) float64 { return math.Copysign(1, x-0.3) }, 0.3},
		{func(x float64) float64 { d := x - 0.6; return d * d * d * d * d }, 0.6},
	} {
		got := root(c.f, 0, 1, c.f(0), c.f(1))
		if math.Abs(got-c.want) > 4e-16 {
			t.Errorf("root %g, want %g", got, c.want)
		}
	}
}

// A value that is exactly 0 at the end of a step occurs once, there, when it has
// changed sign; one that turns back does not occur.
func TestEventOnStepEnd(t *testing.T) {
	for _, f := range formulas {
		t.Run(f.String(), func(t *testing.T) {
			r := f.start(t, circle{}, Options{RTol: 1e-12, ATol: same(2, 1e-12), FixedStep: 0.5}, 0, []float64{1, 0})
			check(t, locate(t, r, 2, []Event{
				{Value: func(t float64, y []float64) float64 { return t - 1 }},
				{Value: func(t float64, y []float64) float64 { return (t - 1) * (t - 1) }},
			}), []Occurrence{{T: 1, Rising: true}}, 1e-15)
		})
	}
}
