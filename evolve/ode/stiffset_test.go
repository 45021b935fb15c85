package ode

import (
	"math"
	"math/rand/v2"
	"testing"
)

// number lets a right-hand side take a complex step.
type number interface{ float64 | complex128 }

// vanDerPol is y₁' = y₂, y₂' = ((1 − y₁²) y₂ − y₁)/ε.
type vanDerPol struct{ eps float64 }

func vanDerPolDerivs[T number](y, dy []T, eps T) {
	dy[0], dy[1] = y[1], ((1-y[0]*y[0])*y[1]-y[0])/eps
}

func (vanDerPol) Dim() int                            { return 2 }
func (p vanDerPol) Derivs(_ float64, y, dy []float64) { vanDerPolDerivs(y, dy, p.eps) }
func (p vanDerPol) complexDerivs(y, dy []complex128)  { vanDerPolDerivs(y, dy, complex(p.eps, 0)) }
func (p vanDerPol) Jacobian(t float64, y, dy, j []float64) {
	p.Derivs(t, y, dy)
	copy(j, []float64{0, 1, (-2*y[0]*y[1] - 1) / p.eps, (1 - y[0]*y[0]) / p.eps})
}

// robertson is the autocatalytic reaction of Robertson 1966.
type robertson struct{}

func robertsonDerivs[T number](y, dy []T) {
	a, b, c := 0.04*y[0], 1e4*y[1]*y[2], 3e7*y[1]*y[1]
	dy[0], dy[1], dy[2] = b-a, a-b-c, c
}

func (robertson) Dim() int                          { return 3 }
func (robertson) Derivs(_ float64, y, dy []float64) { robertsonDerivs(y, dy) }
func (robertson) complexDerivs(y, dy []complex128)  { robertsonDerivs(y, dy) }
func (p robertson) Jacobian(t float64, y, dy, j []float64) {
	p.Derivs(t, y, dy)
	copy(j, []float64{
		-0.04, 1e4 * y[2], 1e4 * y[1],
		0.04, -1e4*y[2] - 6e7*y[1], -1e4 * y[1],
		0, 6e7 * y[1], 0,
	})
}

// hires is the photomorphogenesis of Schäfer 1975, eight reactants.
type hires struct{}

func hiresDerivs[T number](y, dy []T) {
	dy[0] = -1.71*y[0] + 0.43*y[1] + 8.32*y[2] + 0.0007
	dy[1] = 1.71*y[0] - 8.75*y[1]
	dy[2] = -10.03*y[2] + 0.43*y[3] + 0.035*y[4]
	dy[3] = 8.32*y[1] + 1.71*y[2] - 1.12*y[3]
	dy[4] = -1.745*y[4] + 0.43*y[5] + 0.43*y[6]
	dy[5] = -280*y[5]*y[7] + 0.69*y[3] + 1.71*y[4] - 0.43*y[5] + 0.69*y[6]
	dy[6] = 280*y[5]*y[7] - 1.81*y[6]
	dy[7] = -dy[6]
}

func (hires) Dim() int                          { return 8 }
func (hires) Derivs(_ float64, y, dy []float64) { hiresDerivs(y, dy) }
func (hires) complexDerivs(y, dy []complex128)  { hiresDerivs(y, dy) }
func (p hires) Jacobian(t float64, y, dy, j []float64) {
	p.Derivs(t, y, dy)
	a, b := 280*y[7], 280*y[5]
	copy(j, []float64{
		-1.71, 0.43, 8.32, 0, 0, 0, 0, 0,
		1.71, -8.75, 0, 0, 0, 0, 0, 0,
		0, 0, -10.03, 0.43, 0.035, 0, 0, 0,
		0, 8.32, 1.71, -1.12, 0, 0, 0, 0,
		0, 0, 0, 0, -1.745, 0.43, 0.43, 0,
		0, 0, 0, 0.69, 1.71, -a - 0.43, 0.69, -b,
		0, 0, 0, 0, 0, a, -1.81, b,
		0, 0, 0, 0, 0, -a, 1.81, -b,
	})
}

// oregonator is the Belousov–Zhabotinskii reaction of Field & Noyes 1974.
type oregonator struct{}

func oregonatorDerivs[T number](y, dy []T) {
	dy[0] = 77.27 * (y[1] + y[0]*(1-8.375e-6*y[0]-y[1]))
	dy[1] = (y[2] - (1+y[0])*y[1]) / 77.27
	dy[2] = 0.161 * (y[0] - y[2])
}

func (oregonator) Dim() int                          { return 3 }
func (oregonator) Derivs(_ float64, y, dy []float64) { oregonatorDerivs(y, dy) }
func (oregonator) complexDerivs(y, dy []complex128)  { oregonatorDerivs(y, dy) }
func (p oregonator) Jacobian(t float64, y, dy, j []float64) {
	p.Derivs(t, y, dy)
	copy(j, []float64{
		77.27 * (1 - 2*8.375e-6*y[0] - y[1]), 77.27 * (1 - y[0]), 0,
		-y[1] / 77.27, -(1 + y[0]) / 77.27, 1 / 77.27,
		0.161, 0, -0.161,
	})
}

// e5 is the chemical pyrolysis of Enright, Hull & Lindberg 1975 in y₁, y₃ and y₄:
// y₂ = y₃ + y₄ holds exactly and is all that remains of the fourth equation, which
// rounding would let drift from it.
type e5 struct{}

func e5Derivs[T number](y, dy []T) {
	y1, y3, y4 := y[0], y[1], y[2]
	a, b, c, d := 7.89e-10*y1, 1.1e7*y1*y3, 1.13e9*(y3+y4)*y3, 1.13e3*y4
	dy[0] = -a - b
	dy[1] = a - b - c + d
	dy[2] = b - d
}

func (e5) Dim() int                          { return 3 }
func (e5) Derivs(_ float64, y, dy []float64) { e5Derivs(y, dy) }
func (e5) complexDerivs(y, dy []complex128)  { e5Derivs(y, dy) }
func (p e5) Jacobian(t float64, y, dy, j []float64) {
	p.Derivs(t, y, dy)
	y1, y3, y4 := y[0], y[1], y[2]
	copy(j, []float64{
		-7.89e-10 - 1.1e7*y3, -1.1e7 * y1, 0,
		7.89e-10 - 1.1e7*y3, -1.1e7*y1 - 1.13e9*(2*y3+y4), -1.13e9*y3 + 1.13e3,
		1.1e7 * y3, 1.1e7 * y1, -1.13e3,
	})
}

// stiffProblem is a problem with its solution at the end.
type stiffProblem struct {
	name  string
	sys   System
	start []float64
	end   float64
	scale []float64 // below it a value does not matter
	want  []float64
}

// The standard stiff problems with their solutions, from memory of the Test Set for
// IVP Solvers (Mazzia & Magherini 2008, release 2.4): VDPOL, ROBER, HIRES and OREGO;
// confirmed to 12 digits by our Radau of five stages at 1e-13 and to 11 by our
// Rosenbrock at 1e-11, which has no formula in common with it (TestStiffReferences).
//
// E5 (Hairer & Wanner II, IV.10) has there y₂ = 8.8677e-23 and y₃ = 8.8548e-23 (from
// memory), where exactly y₂ = y₃ and only the product survives rounding, 8.8612327e-23
// by its root: the eleven digits here are those on which Radau of three and of five
// stages and Rosenbrock agree in the formulation above.
func stiffProblems() []stiffProblem {
	return []stiffProblem{
		{"van der Pol", vanDerPol{1e-6}, []float64{2, 0}, 2, same(2, 1),
			[]float64{1.706167732170483, -0.8928097010247975}},
		{"Robertson", robertson{}, []float64{1, 0, 0}, 1e11, []float64{1e-9, 1e-14, 1},
			[]float64{0.2083340149701255e-07, 0.8333360770334713e-13, 0.9999999791665050}},
		{"HIRES", hires{}, []float64{1, 0, 0, 0, 0, 0, 0, 0.0057}, 321.8122, same(8, 1e-4),
			[]float64{0.7371312573325668e-3, 0.1442485726316185e-3, 0.5888729740967575e-4, 0.1175651343283149e-2,
				0.2386356198831331e-2, 0.6238968252742796e-2, 0.2849998395185769e-2, 0.2850001604814231e-2}},
		{"OREGO", oregonator{}, []float64{1, 2, 3}, 360, same(3, 1),
			[]float64{0.1000814870318523e1, 0.1228178521549917e4, 0.1320554942846706e3}},
		{"E5", e5{}, []float64{1.76e-3, 0, 0}, 1e13, []float64{1e-10, 1e-24, 1e-24},
			[]float64{0, 8.8612335213e-23, 0}},
	}
}

// solve returns the largest error at the end relative to |y| + scale.
func (p stiffProblem) solve(t *testing.T, f formula, tol float64) (worst float64, work Stats) {
	t.Helper()
	atol := make([]float64, len(p.scale))
	for i, s := range p.scale {
		atol[i] = tol * s
	}
	r := f.start(t, p.sys, Options{RTol: tol, ATol: atol, MaxSteps: 100000}, 0, p.start)
	run(t, r, p.end, nil)
	for i, y := range r.State() {
		worst = max(worst, math.Abs(y-p.want[i])/(math.Abs(p.want[i])+p.scale[i]))
	}
	return worst, r.Stats()
}

// At three tolerances, each method in its range. The flow damps errors, or at the
// end of the oscillators moves too slowly to show those of phase: the last steps
// count, few tolerances.
func TestStiffProblems(t *testing.T) {
	for _, p := range stiffProblems() {
		for _, c := range []struct {
			formula
			tolerances [3]float64
		}{
			{radauThree, [...]float64{1e-4, 1e-6, 1e-8}},
			{radauFive, [...]float64{1e-5, 1e-8, 1e-11}},
			{rodas, [...]float64{1e-4, 1e-6, 1e-8}},
		} {
			for _, tol := range c.tolerances {
				worst, work := p.solve(t, c.formula, tol)
				t.Logf("%s, %v, tolerance %.0e: error %.2g tolerances, %+v", p.name, c.formula, tol, worst/tol, work)
				if worst > 5*tol {
					t.Errorf("%s, %v, tolerance %g: error %g", p.name, c.formula, tol, worst)
				}
			}
		}
	}
}

// The reference values against tight runs of two methods that share no formula.
func TestStiffReferences(t *testing.T) {
	for _, p := range stiffProblems() {
		for _, c := range []struct {
			formula
			tol, digits float64
		}{{radauFive, 1e-13, 1e-11}, {rodas, 1e-11, 1e-9}} {
			if worst, _ := p.solve(t, c.formula, c.tol); worst > c.digits {
				t.Errorf("%s: %v at %g is %g from the reference", p.name, c.formula, c.tol, worst)
			} else {
				t.Logf("%s: %v at %g is %.1e from the reference", p.name, c.formula, c.tol, worst)
			}
		}
	}
}

// complexSystem can take a step into the complex plane.
type complexSystem interface {
	System
	complexDerivs(y, dy []complex128)
}

// Jacobians against the complex step, Im f(y + ih)/h, which has no difference to
// cancel (Squire & Trapp 1998, SIAM Rev. 40, 110), at states of the size met and of
// random signs: rounding of entries whose two or three terms cancel to no less than
// 1e-3. Those of spin and kpr are proven by the order of Rosenbrock (TestOrder).
func TestJacobians(t *testing.T) {
	rng := rand.New(rand.NewPCG(1, 2))
	for _, p := range stiffProblems() {
		sys, n := p.sys.(complexSystem), p.sys.Dim()
		for range 20 {
			y, dy, f, jac := make([]float64, n), make([]float64, n), make([]float64, n), make([]float64, n*n)
			z, dz := make([]complex128, n), make([]complex128, n)
			for i := range y {
				y[i] = (p.start[i] + p.scale[i]) * rng.NormFloat64()
			}
			sys.Derivs(0, y, f)
			sys.Jacobian(0, y, dy, jac)
			for j := range n {
				if dy[j] != f[j] {
					t.Errorf("%s: f[%d] beside the Jacobian is %g, alone %g", p.name, j, dy[j], f[j])
				}
				for i := range z {
					z[i] = complex(y[i], 0)
				}
				const h = 1e-200
				z[j] += complex(0, h)
				sys.complexDerivs(z, dz)
				for i := range n {
					want, got := imag(dz[i])/h, jac[i*n+j]
					if math.Abs(got-want) > 1e-12*math.Abs(want) {
						t.Errorf("%s: ∂f_%d/∂y_%d is %g, complex step %g", p.name, i, j, got, want)
					}
				}
			}
		}
	}
}
