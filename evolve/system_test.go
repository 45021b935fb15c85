package evolve

import (
	"math"
	"math/rand/v2"
	"testing"

	"gonum.org/v1/gonum/diff/fd"
	"gonum.org/v1/gonum/mat"

	"tidekiln/evolve/ode"
	"tidekiln/orbit"
	"tidekiln/scenarios"
)

// systems returns every shipped scenario as equations, at a displaced state.
func systems(t testing.TB) map[string]struct {
	p *System
	y []float64
} {
	t.Helper()
	out := map[string]struct {
		p *System
		y []float64
	}{}
	rng := rand.New(rand.NewPCG(3, 5))
	for _, s := range scenarios.Shipped() {
		p, y, err := NewSystem(shipped(t, s.Name))
		if err != nil {
			t.Fatal(err)
		}
		for i := range y {
			// 0.1 % of an enthalpy of 2e6 J/kg, of a forced eccentricity more.
			y[i] += 1e-3 * rng.NormFloat64() * math.Max(math.Abs(y[i]), 1e-3)
		}
		p.Freeze(0, y)
		out[s.Name] = struct {
			p *System
			y []float64
		}{p, y}
	}
	return out
}

// The analytic Jacobian of the whole system against central differences. The
// right-hand side of a chain cancels three to four digits of n ≈ 4e-5 rad/s in
// its offsets, and steps of 1e-6 leave its rounding over that.
func TestJacobianOfTheSystem(t *testing.T) {
	for name, s := range systems(t) {
		t.Run(name, func(t *testing.T) {
			p, y, dim := s.p, s.y, s.p.Dim()
			dy, jac := make([]float64, dim), make([]float64, dim*dim)
			p.Jacobian(0, y, dy, jac)
			direct := make([]float64, dim)
			p.Derivs(0, y, direct)
			for i := range dy {
				if dy[i] != direct[i] {
					t.Errorf("component %d: Jacobian gives a rate of %g, Derivs %g", i, dy[i], direct[i])
				}
			}
			scale := make([]float64, dim)
			for i := range scale {
				scale[i] = 1
				if math.Abs(y[i]) > 1e3 {
					scale[i] = 1e6
				}
			}
			z, x := make([]float64, dim), make([]float64, dim)
			for i := range x {
				x[i] = y[i] / scale[i]
			}
			numeric := mat.NewDense(dim, dim, nil)
			fd.Jacobian(numeric, func(out, x []float64) {
				for i := range z {
					z[i] = x[i] * scale[i]
				}
				p.Derivs(0, z, out)
			}, x, &fd.JacobianSettings{Formula: fd.Central, Step: 1e-6})
			for i := 0; i < dim; i++ {
				largest := 0.0
				for j := 0; j < dim; j++ {
					largest = math.Max(largest, math.Abs(numeric.At(i, j)))
				}
				for j := 0; j < dim; j++ {
					got, want := jac[i*dim+j]*scale[j], numeric.At(i, j)
					if math.Abs(got-want) > 1e-6*largest+1e-4*math.Abs(want) {
						t.Errorf("d[%s]/d[%s] = %.9g, differences give %.9g", p.component(i), p.component(j), got, want)
					}
				}
			}
		})
	}
}

func TestStepsDoNotAllocate(t *testing.T) {
	p, y, err := NewSystem(shipped(t, "volcanic-cycle"))
	if err != nil {
		t.Fatal(err)
	}
	integ, err := ode.NewRadau(p, p.Tolerances())
	if err != nil {
		t.Fatal(err)
	}
	if err := integ.Start(0, y); err != nil {
		t.Fatal(err)
	}
	for range 20 { // past the first use of every table
		if _, err := integ.Step(1500 * Megayear); err != nil {
			t.Fatal(err)
		}
	}
	if n := testing.AllocsPerRun(100, func() {
		if _, err := integ.Step(1500 * Megayear); err != nil {
			t.Fatal(err)
		}
	}); n != 0 {
		t.Errorf("a step allocates %g times", n)
	}
}

// still is a scenario without any tide.
func still(t testing.TB, name string) *scenarios.Scenario {
	return shipped(t, name,
		scenarios.Edit{Path: "central.tide", Unset: true},
		scenarios.Edit{Path: "orbiter.Cinder.interior", Unset: true})
}

// Without tides an equilibrium stays: H and Σ(Λ − Γ) to 1e-12 over 1 Gyr.
func TestEquilibriumStaysWithoutTides(t *testing.T) {
	s := still(t, "quiet-chain")
	p, y, err := NewSystem(s)
	if err != nil {
		t.Fatal(err)
	}
	g := p.groups[0]
	h0, l0 := g.TotalEnergy(y), g.TotalAngularMomentum(y)
	h := run1(t, s)
	near(t, "H", g.TotalEnergy(h.end.state), h0, 1e-12)
	near(t, "Σ(Λ−Γ)", g.TotalAngularMomentum(h.end.state), l0, 1e-12)
	if !math.IsNaN(h.Closure.Momentum) {
		t.Errorf("a closure of %g of an angular momentum that nothing turns over, want null", h.Closure.Momentum)
	}
}

// A chain displaced by 5 % of its forced eccentricities librates. Followed at
// 0.02 of the shortest libration period for 1000 years it keeps H, judged by
// the libration's own energy, and Σ(Λ − Γ). A step of 5-stage Radau damps an
// oscillation of phase step x = 2π·0.02 by the error of its stability function,
// a Padé approximant (4,5) of e^z whose first error is z^10·(4!5!)/(9!10!):
// with 41,000 steps and energy twice the amplitude that stays below 3e-12, so
// rounding, 1e-16 of H a step, decides: H/H_lib ≈ 2e8 times the root of the
// number of steps, 5e-6.
func TestDisplacedChainConservesInShortSteps(t *testing.T) {
	p, y, err := NewSystem(still(t, "quiet-chain"))
	if err != nil {
		t.Fatal(err)
	}
	chain := p.groups[0].chain
	n := chain.Members()
	rest := chain.Energy(y)
	modes := librations(t, p, y)
	shortest := modes[0].Period()
	for k := 0; k < n; k++ {
		y[n+k] *= 1.05
	}
	h0, l0 := chain.Energy(y), chain.AngularMomentum(y)
	own := math.Abs(h0 - rest)
	end := followFixed(t, p, y, 0.02*shortest, 1000*orbit.Year, 1e-12)
	if d := math.Abs(chain.Energy(end)-h0) / own; d > 5e-6 {
		t.Errorf("H drifts by %.2e of the libration's own energy in 1000 years", d)
	}
	if d := math.Abs(chain.AngularMomentum(end)-l0) / chain.TotalAngularMomentum(y); d > 1e-12 {
		t.Errorf("Σ(Λ−Γ) drifts by %.2e in 1000 years", d)
	}
}

// The same libration is gone after the first adiabatic steps, even without the
// projection that starts a history: L-stability damps what a resolved
// integration would keep, so nobody shall take one for the other. The
// tolerance is loose, because a tight one obliges the steps to follow it.
func TestAdiabaticStepsDampLibration(t *testing.T) {
	p, y, err := NewSystem(still(t, "quiet-chain"))
	if err != nil {
		t.Fatal(err)
	}
	n := p.groups[0].chain.Members()
	for k := 0; k < n; k++ {
		y[n+k] *= 1.05
	}
	o := p.Tolerances()
	o.RTol, o.Stages, o.Fast, o.FirstStep = 1e-3, 3, nil, 0.1*Megayear
	integ, err := ode.NewRadau(p, o)
	if err != nil {
		t.Fatal(err)
	}
	if err := integ.Start(0, append([]float64(nil), y...)); err != nil {
		t.Fatal(err)
	}
	for integ.T() < 10*Megayear {
		if _, err := integ.Step(10 * Megayear); err != nil {
			t.Fatal(err)
		}
	}
	// Of the forced eccentricity itself a part of the displacement may stay: the
	// kick also moved Σ(Λ−Γ), and the equilibrium with it.
	late := librationOf(t, p, integ.State())
	if early := librationOf(t, p, y); late > 1e-3*early {
		t.Errorf("adiabatic steps leave %.2g of the libration, want it damped", late/early)
	}
}

// librationOf returns how far y is from the slow manifold: the change a
// projection makes to Re z.
func librationOf(t *testing.T, p *System, y []float64) float64 {
	t.Helper()
	integ, err := ode.NewRadau(p, p.Tolerances())
	if err != nil {
		t.Fatal(err)
	}
	before := append([]float64(nil), y...)
	if err := integ.Start(0, append([]float64(nil), y...)); err != nil {
		t.Fatal(err)
	}
	n := p.groups[0].chain.Members()
	moved := 0.0
	for k := 0; k < n; k++ {
		moved = math.Max(moved, math.Abs(integ.State()[n+k]-before[n+k]))
	}
	return moved
}

// followFixed steps from y with 5 stages of fixed length, without projection;
// newton is how far Newton's iteration goes.
func followFixed(t *testing.T, p *System, y []float64, step, span, newton float64) []float64 {
	t.Helper()
	o := p.Tolerances()
	o.Stages, o.FixedStep, o.Fast, o.MaxSteps, o.MinStep = 5, step, nil, 0, 0
	o.RTol = newton
	integ, err := ode.NewRadau(p, o)
	if err != nil {
		t.Fatal(err)
	}
	if err := integ.Start(0, append([]float64(nil), y...)); err != nil {
		t.Fatal(err)
	}
	for integ.T() < span {
		if _, err := integ.Step(span); err != nil {
			t.Fatal(err)
		}
	}
	return integ.State()
}

// librations returns the modes of the chain at y.
func librations(t *testing.T, p *System, y []float64) []orbit.Mode {
	t.Helper()
	g := &p.groups[0]
	dy, jac := make([]float64, p.dim), make([]float64, p.dim*p.dim)
	p.Jacobian(0, y, dy, jac)
	n := g.Dim()
	block := make([]float64, n*n)
	for r := 0; r < n; r++ {
		copy(block[r*n:(r+1)*n], jac[r*p.dim:])
	}
	modes, err := g.chain.Spectrum(block, n)
	if err != nil {
		t.Fatal(err)
	}
	return modes
}
