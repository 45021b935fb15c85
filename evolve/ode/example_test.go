package ode_test

import (
	"fmt"

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
