package orbit

import (
	"fmt"
	"math"
	"testing"

	"gonum.org/v1/gonum/mat"
)

// migration moves the inner member of a pair outward at ṅ/n = −1/τ_n and damps
// its eccentricity at 1/τ_e at constant angular momentum (p = 3): Λ̇ = Λ/(3τ_n)
// − 2Γ/τ_e, Γ̇ = −2Γ/τ_e.
func migration(u, g, tauN, tauE float64) *Kick {
	return &Kick{
		Raise: u/(3*tauN) - 2*g/tauE, RaiseU: 1 / (3 * tauN), RaiseG: -2 / tauE,
		Pump: -1 / tauE,
	}
}

// equilibrium finds where a pair whose inner member migrates comes to rest, and
// the Jacobian there, by Newton's iteration on all variables but the outer Λ,
// which the inner member is too small to move.
func equilibrium(t *testing.T, c *Chain, y []float64, tauN, tauE float64) []float64 {
	t.Helper()
	dim := c.Dim()
	w := c.NewRates()
	dy, jac := make([]float64, dim), make([]float64, dim*dim)
	free := []int{0, 2, 3, 4, 5} // without l of the outer member
	for range 50 {
		clear(jac)
		c.Flow(y, dy, w)
		c.Jacobian(y, w, jac, dim)
		l, g := c.Actions(0, y)
		kick := migration(1+l, g, tauN, tauE)
		c.Push(0, kick, y, dy)
		c.PushDerivs(0, kick, y, jac, dim, -1)
		a, b := mat.NewDense(len(free), len(free), nil), mat.NewVecDense(len(free), nil)
		for i, p := range free {
			b.SetVec(i, -dy[p])
			for j, q := range free {
				a.Set(i, j, jac[p*dim+q])
			}
		}
		var x mat.VecDense
		if err := x.SolveVec(a, b); err != nil {
			t.Fatal(err)
		}
		change := 0.0
		for i, p := range free {
			y[p] += x.AtVec(i)
			change = math.Max(change, math.Abs(x.AtVec(i))/math.Max(math.Abs(y[p]), 1e-9))
		}
		if change < 1e-10 {
			return jac
		}
	}
	t.Fatal("no equilibrium found")
	return nil
}

// Migration with damping of the eccentricity, of a body much lighter than the
// one that stops it outside (Goldreich & Schlichting 2014, AJ 147, 32): it comes
// to rest at e² = τ_e/(3(j+1)τ_n), and its libration is overstable below
// m'/M = j/(√3 (j+1)^{3/2} β) · (τ_e/τ_n)^{3/2}, β = −αf₁. Both leave out terms of
// order e² and ψ̇/n, the distance from exact commensurability, both of order
// τ_e/τ_n at the threshold: 0.2 % at 10³ leaves a coefficient of 2.
func TestMigrationWithDamping(t *testing.T) {
	for _, c := range []struct {
		j     int
		ratio float64 // τ_n/τ_e
	}{{1, 1e3}, {1, 1e4}, {2, 1e3}, {2, 1e4}, {3, 1e3}, {3, 1e4}} {
		f1, _ := Coefficients(c.j)
		j := float64(c.j)
		beta := -math.Pow(j/(j+1), 2./3) * f1
		wantE := math.Sqrt(1 / (3 * (j + 1) * c.ratio))
		threshold := j / (math.Sqrt(3) * math.Pow(j+1, 1.5) * beta) * math.Pow(c.ratio, -1.5)
		const period = 10 * Day
		tauE := 1e7 * period / (2 * math.Pi)
		tauN := c.ratio * tauE
		// growth of the libration at a mass of the outer body.
		growth := func(mass float64) (float64, float64) {
			const sun = 2e30
			n := 2 * math.Pi / period
			chain, y, err := Lock(LockedStart{Primary: Primary{Mass: sun, Radius: 7e8}, Masses: []float64{1e-9 * mass * sun, mass * sun},
				Ratios: []int{c.j}, Offset: -n * beta * mass / wantE, Period: period})
			if err != nil {
				t.Fatal(err)
			}
			jac := equilibrium(t, chain, y, tauN, tauE)
			l := chain.NewLibrations()
			if err := l.Find(jac, chain.Dim()); err != nil {
				t.Fatal(err)
			}
			_, g := chain.Actions(0, y)
			e := math.Sqrt(eccentricitySquared(1+y[0], g))
			// The other mode is the free eccentricity of the outer body, which
			// nothing damps or drives.
			libration := l.Modes[0]
			if math.Abs(l.Modes[1].Growth) > math.Abs(libration.Growth) {
				libration = l.Modes[1]
			}
			return libration.Growth, e
		}
		low, high := 0.5*threshold, 2*threshold
		for high/low > 1+1e-9 {
			m := math.Sqrt(low * high)
			if g, _ := growth(m); g > 0 {
				low = m
			} else {
				high = m
			}
		}
		_, e := growth(high)
		name := fmt.Sprintf("%d:%d, τ_n/τ_e = %g", c.j+1, c.j, c.ratio)
		t.Logf("%s: e/formula %.6f, threshold/formula %.6f", name, e/wantE, high/threshold)
		near(t, name+": e", e, wantE, 2e-3)
		near(t, name+": threshold", high, threshold, 2e-3)
	}
}
