package evolve

import (
	"testing"

	"tidekiln/evolve/ode"
)

func BenchmarkDerivs(b *testing.B) {
	p, y, err := NewSystem(shipped(b, "volcanic-cycle"))
	if err != nil {
		b.Fatal(err)
	}
	dy := make([]float64, p.dim)
	b.ReportAllocs()
	for b.Loop() {
		p.Derivs(0, y, dy)
	}
}

func BenchmarkJacobian(b *testing.B) {
	p, y, err := NewSystem(shipped(b, "volcanic-cycle"))
	if err != nil {
		b.Fatal(err)
	}
	dy, jac := make([]float64, p.dim), make([]float64, p.dim*p.dim)
	b.ReportAllocs()
	for b.Loop() {
		p.Jacobian(0, y, dy, jac)
	}
}

// BenchmarkIntegrate times the integration alone, without rows.
func BenchmarkIntegrate(b *testing.B) {
	for _, name := range []string{"volcanic-cycle", "quiet-chain", "lone-moon"} {
		b.Run(name, func(b *testing.B) {
			s := shipped(b, name)
			steps := 0
			for b.Loop() {
				p, y, err := NewSystem(s)
				if err != nil {
					b.Fatal(err)
				}
				integ, err := ode.NewRadau(p, p.Tolerances())
				if err != nil {
					b.Fatal(err)
				}
				if err := integ.Start(0, y); err != nil {
					b.Fatal(err)
				}
				for integ.T() < s.Run.Span {
					if _, err := integ.Step(s.Run.Span); err != nil {
						b.Fatal(err)
					}
				}
				steps = integ.Stats().Steps
			}
			b.ReportMetric(float64(steps), "steps")
		})
	}
}

// BenchmarkHistory times a whole history, rows and outcome included.
func BenchmarkHistory(b *testing.B) {
	s := shipped(b, "volcanic-cycle")
	for b.Loop() {
		run1(b, s)
	}
}
