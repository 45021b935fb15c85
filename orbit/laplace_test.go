package orbit

import (
	"math"
	"testing"

	"gonum.org/v1/gonum/integrate/quad"
)

// Values at exact commensurability, re-derived by hypergeometric series at 40
// digits and by a double Fourier average of 1/|r−r'|; the 2:1 line of f₂ holds
// the indirect term. Notation of Murray & Dermott 1999, app. B.
func TestCoefficientsAtExactCommensurability(t *testing.T) {
	for _, c := range []struct {
		j             int
		alpha, f1, f2 float64
	}{
		{1, 0.62996052494743658, -1.1904936978495037, 0.42838983414389816},
		{2, 0.76314282836888791, -2.0252226899385931, 2.4840051833039421},
		{3, 0.82548181222365667, -2.8404318567218707, 3.2832567218222157},
		{4, 0.86177387601275349, -3.6496182441156982, 4.0837053717962163},
		{5, 0.88554880765217589, -4.456142785058918, 4.8847062975003921},
		{6, 0.90233708537948272, -5.2612538318883351, 5.6860074115090479},
	} {
		f1, f2 := Coefficients(c.j)
		near(t, "alpha", ExactRatio(c.j), c.alpha, 1e-15)
		near(t, "f1", f1, c.f1, 1e-12)
		near(t, "f2", f2, c.f2, 1e-12)
	}
}

// Against the defining integral b = (2/π)∫₀^π cos jψ (1−2α cos ψ+α²)^{−s} dψ;
// Gauss–Legendre of 200 nodes is exact to rounding for α ≤ 0.63, and 1e-12 of
// the largest value covers the rounding of 200 terms.
func TestLaplaceAgainstItsIntegral(t *testing.T) {
	for _, c := range []struct {
		s     float64
		j     int
		alpha float64
	}{{0.5, 0, 0.5}, {0.5, 2, 0.629960524947}, {1.5, 1, 0.629960524947}, {1.5, 3, 0.3}} {
		want := 2 / math.Pi * quad.Fixed(func(p float64) float64 {
			return math.Cos(float64(c.j)*p) * math.Pow(1-2*c.alpha*math.Cos(p)+c.alpha*c.alpha, -c.s)
		}, 0, math.Pi, 200, nil, 0)
		near(t, "b", Laplace(c.s, c.j, c.alpha), want, 1e-12)
	}
	// Re-derived at 40 digits.
	near(t, "b_1/2^0(0.5)", Laplace(0.5, 0, 0.5), 2.1463640142987287501, 1e-14)
	near(t, "b_1/2^2", Laplace(0.5, 2, ExactRatio(1)), 0.365314270756706, 1e-14)
	near(t, "b_3/2^1", Laplace(1.5, 1, ExactRatio(1)), 4.9225613805158, 2e-14)
}

// near fails unless got is within the relative tolerance of want.
func near(t *testing.T, name string, got, want, tol float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tol*math.Abs(want)) {
		t.Errorf("%s = %.17g, want %.17g (relative difference %.2e, tolerance %.0e)", name, got, want, (got-want)/want, tol)
	}
}
