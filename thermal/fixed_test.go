package thermal

import (
	"math"
	"testing"
)

func fixedOf(t testing.TB, k float64) Interior {
	t.Helper()
	i, err := NewInterior(valuesOf(t, Interiors, table{"fixed", map[string]any{"k2_over_Q": k}}), Body{Mass: 8.9e22, Radius: ioRadius})
	if err != nil {
		t.Fatal(err)
	}
	return i
}

// Io's heat (21/2) K n⁵R⁵e²/G with K = 0.015 (Lainey et al. 2009, Nature 459,
// 957), P = 1.769137786 d, e = 0.0041: 9.3375e13 W, re-derived, five digits.
func TestFixedResponseHeatsIo(t *testing.T) {
	n := 2 * math.Pi / (1.769137786 * 86400)
	k := fixedOf(t, 0.015).K(n)
	near(t, "heat", 10.5*k*math.Pow(n*ioRadius, 5)*0.0041*0.0041/gravitation, 9.3375e13, 1e-5)
}

func TestFixedResponseIsOddAndFlat(t *testing.T) {
	i := fixedOf(t, 0.012)
	if i.K(0) != 0 || i.K(1e-9) != 0.012 || i.K(-3) != -0.012 {
		t.Errorf("K(0), K(+), K(−) = %g, %g, %g", i.K(0), i.K(1e-9), i.K(-3))
	}
	if k, dw := i.KDerivs(-2, nil); k != -0.012 || dw != 0 {
		t.Errorf("K, dK/dω = %g, %g", k, dw)
	}
	if l := i.Love(1); imag(l) != -0.012 || !math.IsNaN(real(l)) {
		t.Errorf("k₂ = %v: the real part is not known", l)
	}
	if len(i.States()) != 0 || i.Kinks() != 0 || len(i.Events()) != 0 || i.Snapshot() != (Snapshot{}) || i.Balance(0) != (Balance{}) {
		t.Error("a fixed response claims a thermal state")
	}
}
