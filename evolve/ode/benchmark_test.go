package ode

import "testing"

// The right-hand side is chain's: 11 components, stiff, depending on time.

func BenchmarkDerivs(b *testing.B) {
	y, dy := same(11, 0.1), make([]float64, 11)
	for b.Loop() {
		chain{}.Derivs(1, y, dy)
	}
}

func BenchmarkJacobian(b *testing.B) {
	y, dy, jac := same(11, 0.1), make([]float64, 11), make([]float64, 121)
	for b.Loop() {
		chain{}.Jacobian(1, y, dy, jac)
	}
}

func BenchmarkStep(b *testing.B) {
	for _, f := range formulas {
		b.Run(f.benchmark(), func(b *testing.B) {
			r := startChain(b, f)
			for b.Loop() {
				if _, err := r.Step(1e12); err != nil {
					b.Fatal(err)
				}
			}
			b.ReportMetric(float64(r.Stats().Derivs)/float64(r.Stats().Steps), "derivs/step")
		})
	}
}

// The first call after a step of DOP853 completes its polynomial; the loop measures
// the others.
func BenchmarkDenseOutput(b *testing.B) {
	for _, f := range formulas {
		b.Run(f.benchmark(), func(b *testing.B) {
			r := startChain(b, f)
			seg, err := r.Step(1e12)
			if err != nil {
				b.Fatal(err)
			}
			y, t := make([]float64, 11), seg.T0+0.3*(seg.T1-seg.T0)
			for b.Loop() {
				seg.Eval(t, y)
			}
		})
	}
}

// A whole stiff run at one loose tolerance.
func BenchmarkRun(b *testing.B) {
	for _, f := range stiffFormulas {
		b.Run(f.benchmark(), func(b *testing.B) {
			for b.Loop() {
				r := f.start(b, vanDerPol{1e-6}, Options{RTol: 1e-5, ATol: same(2, 1e-5)}, 0, []float64{2, 0})
				run(b, r, 2, nil)
			}
		})
	}
}
