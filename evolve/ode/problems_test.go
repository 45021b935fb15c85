package ode

import (
	"fmt"
	"math"
	"testing"
)

// spin is u′ = ρv, v′ = −ρu, ρ = u² + v²: u = cos t, v = −sin t from (1, 0). Its
// quadrature is u′.
type spin struct{}

func (spin) Dim() int { return 2 }
func (spin) Derivs(t float64, y, dy []float64) {
	rho := y[0]*y[0] + y[1]*y[1]
	dy[0], dy[1] = rho*y[1], -rho*y[0]
}
func (p spin) Jacobian(t float64, y, dy, j []float64) {
	p.Derivs(t, y, dy)
	u, v := y[0], y[1]
	j[0], j[1] = 2*u*v, u*u+3*v*v
	j[2], j[3] = -3*u*u-v*v, -2*u*v
}
func (spin) NumQuadratures() int { return 1 }
func (spin) Integrands(t float64, y, q []float64) {
	q[0] = (y[0]*y[0] + y[1]*y[1]) * y[1]
}
func (spin) integral(t float64) float64   { return math.Cos(t) - 1 }
func (spin) exact(t float64, y []float64) { y[0], y[1] = math.Cos(t), -math.Sin(t) }

// kpr is the problem of Kværnø, Prothero and Robinson (from memory; the solution
// holds by construction):
//
//	[u' v'] = A [(u² − 3 − cos ωt)/2u, (v² − 5 − cos t)/2v] − [ω sin ωt/2u, sin t/2v]
//
// with u = √(3 + cos ωt), v = √(5 + cos t). Its quadrature is (u²)′.
type kpr struct{ a, b, c, d, omega float64 }

// stiffKPR has eigenvalues near −1e4 and −1 of A.
var (
	mildKPR  = kpr{a: -2, b: 0.1, c: 0.1, d: -1, omega: 5}
	stiffKPR = kpr{a: -1e4, b: 10, c: 1, d: -1, omega: 5}
)

func (kpr) Dim() int { return 2 }
func (p kpr) Derivs(t float64, y, dy []float64) {
	u, v := y[0], y[1]
	g, h := (u*u-3-math.Cos(p.omega*t))/(2*u), (v*v-5-math.Cos(t))/(2*v)
	dy[0] = p.a*g + p.b*h - p.omega*math.Sin(p.omega*t)/(2*u)
	dy[1] = p.c*g + p.d*h - math.Sin(t)/(2*v)
}
func (p kpr) Jacobian(t float64, y, dy, j []float64) {
	p.Derivs(t, y, dy)
	u, v := y[0], y[1]
	gu := 0.5 + (3+math.Cos(p.omega*t))/(2*u*u)
	hv := 0.5 + (5+math.Cos(t))/(2*v*v)
	j[0], j[1] = p.a*gu+p.omega*math.Sin(p.omega*t)/(2*u*u), p.b*hv
	j[2], j[3] = p.c*gu, p.d*hv+math.Sin(t)/(2*v*v)
}
func (p kpr) exact(t float64, y []float64) {
	y[0], y[1] = math.Sqrt(3+math.Cos(p.omega*t)), math.Sqrt(5+math.Cos(t))
}

func (kpr) NumQuadratures() int { return 1 }
func (p kpr) Integrands(t float64, y, q []float64) {
	var dy [2]float64
	p.Derivs(t, y, dy[:])
	q[0] = 2 * y[0] * dy[0]
}
func (p kpr) integral(t float64) float64 { return math.Cos(p.omega*t) - 1 }

// relax is y' = −k (y − cos t), with y(0) = 1.
type relax struct{ k float64 }

func (relax) Dim() int                            { return 1 }
func (p relax) Derivs(t float64, y, dy []float64) { dy[0] = -p.k * (y[0] - math.Cos(t)) }
func (p relax) Jacobian(t float64, y, dy, j []float64) {
	p.Derivs(t, y, dy)
	j[0] = -p.k
}

// same returns n tolerances.
func same(n int, tol float64) []float64 {
	v := make([]float64, n)
	for i := range v {
		v[i] = tol
	}
	return v
}

func mustRadau(t testing.TB, sys System, opt Options, t0 float64, y0 []float64) *Radau {
	t.Helper()
	r, err := NewRadau(sys, opt)
	if err != nil {
		t.Fatal(err)
	}
	if err := r.Start(t0, y0); err != nil {
		t.Fatal(err)
	}
	return r
}

// formula is a method with its choice of stages.
type formula struct {
	method Method
	stages int // of Radau
}

func (f formula) String() string {
	if f.stages != 0 {
		return fmt.Sprintf("%v, %d stages", f.method, f.stages)
	}
	return f.method.String()
}

// benchmark names it as key and value.
func (f formula) benchmark() string {
	if f.stages != 0 {
		return fmt.Sprintf("method=%v%d", f.method, f.stages)
	}
	return "method=" + f.method.String()
}

var (
	radauThree = formula{MethodRadau, 3}
	radauFive  = formula{MethodRadau, 5}
	rodas      = formula{method: MethodRosenbrock}
	dop        = formula{method: MethodDOP853}

	formulas      = []formula{radauThree, radauFive, rodas, dop}
	stiffFormulas = formulas[:3]
)

func (f formula) start(t testing.TB, sys System, opt Options, t0 float64, y0 []float64) Integrator {
	t.Helper()
	opt.Stages = f.stages
	r, err := New(f.method, sys, opt)
	if err != nil {
		t.Fatal(err)
	}
	if err := r.Start(t0, y0); err != nil {
		t.Fatal(err)
	}
	return r
}

// run steps to t1, calling each if not nil with every segment.
func run(t testing.TB, r Integrator, t1 float64, each func(*Segment)) {
	t.Helper()
	for r.T() < t1 {
		seg, err := r.Step(t1)
		if err != nil {
			t.Fatal(err)
		}
		if each != nil {
			each(seg)
		}
	}
}

// maxDiff returns the largest |a_i − b_i|/max(1, |b_i|).
func maxDiff(a, b []float64) float64 {
	m := 0.0
	for i := range a {
		m = max(m, math.Abs(a[i]-b[i])/max(1, math.Abs(b[i])))
	}
	return m
}
