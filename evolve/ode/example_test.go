package ode_test

import (
	"fmt"
	"math"

	"tidekiln/evolve/ode"
)

// cooling is y' = −k (y − 1), with the heat lost as a quadrature.
type cooling struct{ k float64 }

func (cooling) Dim() int                            { return 1 }
func (c cooling) Derivs(t float64, y, dy []float64) { dy[0] = -c.k * (y[0] - 1) }
func (c cooling) Jacobian(t float64, y, dy, jac []float64) {
	c.Derivs(t, y, dy)
	jac[0] = -c.k
}
func (cooling) NumQuadratures() int                    { return 1 }
func (c cooling) Integrands(t float64, y, q []float64) { q[0] = c.k * (y[0] - 1) }

func ExampleRadau() {
	r, err := ode.NewRadau(cooling{k: 0.5}, ode.Options{RTol: 1e-8, ATol: []float64{1e-8}})
	if err != nil {
		fmt.Println(err)
		return
	}
	if err := r.Start(0, []float64{3}); err != nil {
		fmt.Println(err)
		return
	}
	halfway := ode.NewEvents([]ode.Event{{
		Name:  "half the excess is gone",
		Value: func(t float64, y []float64) float64 { return y[0] - 2 },
	}})
	halfway.Reset(r.T(), r.State())
	lost := 0.0
	for r.T() < 10 {
		seg, err := r.Step(10)
		if err != nil {
			fmt.Println(err)
			return
		}
		lost += seg.Quadratures()[0]
		for _, o := range halfway.Locate(seg) {
			fmt.Printf("t = %.5f: y = %.5f\n", o.T, o.Y[0])
		}
	}
	fmt.Printf("t = %.5f: y = %.5f, lost %.5f\n", r.T(), r.State()[0], lost)
	// Output:
	// t = 1.38629: y = 2.00000
	// t = 10.00000: y = 1.01348, lost 1.98652
}

// The Rosenbrock method on the same cooling at a loose tolerance; the choice is data.
func ExampleNew() {
	for _, m := range []ode.Method{ode.MethodRadau, ode.MethodRosenbrock, ode.MethodDOP853} {
		r, err := ode.New(m, cooling{k: 0.5}, ode.Options{RTol: 1e-6, ATol: []float64{1e-6}})
		if err != nil {
			fmt.Println(err)
			return
		}
		if err := r.Start(0, []float64{3}); err != nil {
			fmt.Println(err)
			return
		}
		for r.T() < 10 {
			if _, err := r.Step(10); err != nil {
				fmt.Println(err)
				return
			}
		}
		fmt.Printf("%v: y = %.4f\n", m, r.State()[0])
	}
	// Output:
	// Radau: y = 1.0135
	// Rosenbrock: y = 1.0135
	// DOP853: y = 1.0135
}

// kepler is motion about a unit mass: x, y and their velocities.
type kepler struct{}

func (kepler) Dim() int { return 4 }
func (kepler) Derivs(t float64, y, dy []float64) {
	r := math.Hypot(y[0], y[1])
	dy[0], dy[1] = y[2], y[3]
	dy[2], dy[3] = -y[0]/(r*r*r), -y[1]/(r*r*r)
}

// An orbit of eccentricity 0.6 followed for one period, and its apocentre.
func ExampleNewDOP853() {
	r, err := ode.NewDOP853(kepler{}, ode.Options{RTol: 1e-10, ATol: []float64{1e-10, 1e-10, 1e-10, 1e-10}})
	if err != nil {
		fmt.Println(err)
		return
	}
	if err := r.Start(0, []float64{0.4, 0, 0, 2}); err != nil {
		fmt.Println(err)
		return
	}
	apocentre := ode.NewEvents([]ode.Event{{
		Name:      "moving inward",
		Value:     func(t float64, y []float64) float64 { return y[0]*y[2] + y[1]*y[3] },
		Direction: -1,
	}})
	apocentre.Reset(r.T(), r.State())
	for r.T() < 2*math.Pi {
		seg, err := r.Step(2 * math.Pi)
		if err != nil {
			fmt.Println(err)
			return
		}
		for _, o := range apocentre.Locate(seg) {
			fmt.Printf("t = %.6f: x = %.6f\n", o.T, o.Y[0])
		}
	}
	fmt.Printf("t = %.6f: x = %.6f\n", r.T(), r.State()[0])
	// Output:
	// t = 3.141593: x = -1.600000
	// t = 6.283185: x = 0.400000
}

// lamp is y' = 3 − (y − 1), halved above y = 2: a kink.
type lamp struct{ off bool }

func (*lamp) Dim() int { return 1 }
func (l *lamp) Derivs(t float64, y, dy []float64) {
	dy[0] = 3 - (y[0] - 1)
	if l.off {
		dy[0] = 1.5 - (y[0]-1)/2
	}
}
func (l *lamp) Jacobian(t float64, y, dy, jac []float64) {
	l.Derivs(t, y, dy)
	jac[0] = -1
	if l.off {
		jac[0] = -0.5
	}
}
func (l *lamp) Freeze(t float64, y []float64)             { l.off = y[0] > 2 }
func (*lamp) Kinks() int                                  { return 1 }
func (*lamp) Kink(i int, t float64, y []float64) float64  { return y[0] - 2 }
func (l *lamp) Cross(i int, up bool)                      { l.off = up }
func (*lamp) TimeDerivative(t float64, y, dfdt []float64) { dfdt[0] = 0 }

// A step ends on the kink, and the next starts on the other branch.
func ExamplePiecewise() {
	r, err := ode.NewRosenbrock(&lamp{}, ode.Options{RTol: 1e-7, ATol: []float64{1e-7}})
	if err != nil {
		fmt.Println(err)
		return
	}
	if err := r.Start(0, []float64{1}); err != nil {
		fmt.Println(err)
		return
	}
	for r.T() < 2 {
		seg, err := r.Step(2)
		if err != nil {
			fmt.Println(err)
			return
		}
		if seg.KinkCrossed() == 0 {
			fmt.Printf("kink at t = %.5f\n", seg.T1)
		}
	}
	fmt.Printf("t = %g: y = %.5f\n", r.T(), r.State()[0])
	// Output:
	// kink at t = 0.40547
	// t = 2: y = 3.09888
}
