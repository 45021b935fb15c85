package orbit

import (
	"math"
	"math/rand/v2"
	"testing"
)

// Kaula 1966; values re-derived two ways (Newcomb operators in exact rationals
// and quadrature) that agree to 1e-19.
func TestEccentricityFunctionsAtThreeTenths(t *testing.T) {
	const e = 0.3
	for _, c := range []struct {
		m, q int
		want float64
	}{
		{2, 0, 0.781491999884304}, {2, 1, 0.85153416719049}, {2, 2, 0.618622437977248}, {2, -1, -0.148345968289363},
		{0, 0, 1.15196135903508}, {0, 1, 0.501083222744787}, {0, 2, 0.218460360617718},
	} {
		near(t, "G", Hansen(-3, c.m, c.m+c.q, e, 400), c.want, 1e-12)
		h := NewHarmonics()
		if !h.At(e * e) {
			t.Fatal("e = 0.3 refused")
		}
		g, _ := h.Wave(c.q)
		if c.m == 0 {
			g, _ = h.Breath(c.q)
		}
		near(t, "G²", g, c.want*c.want, 2e-12)
	}
}

// Closed identities: G_210 = (1−e²)^{−3/2}, G_20,−2 = 0, and Parseval's
// Σ G_20q² = Σ G_21q² = ⟨(a/r)⁶⟩ = (1 + 3e² + 3e⁴/8)(1−e²)^{−9/2}. The tables
// are relative to the largest term, so absolute differences are judged by it.
func TestHarmonicSumsAgainstClosedForms(t *testing.T) {
	h := NewHarmonics()
	for _, e := range []float64{0, 1e-6, 1e-3, 0.01, 0.1, 0.2, 0.3, 0.45, 0.6, 0.8, 0.9, 0.95} {
		x := e * e
		if !h.At(x) {
			t.Fatalf("e = %g refused", e)
		}
		want := (1 + 3*x + 3*x*x/8) * math.Pow(1-x, -4.5)
		waves, breaths := 0.0, 0.0
		for q := -h.Order; q <= h.Order; q++ {
			w, _ := h.Wave(q)
			b, _ := h.Breath(q)
			waves, breaths = waves+w, breaths+b
		}
		near(t, "Σ G_20q²", waves, want, 1e-12)
		near(t, "Σ G_21q²", breaths, want, 1e-12)
		g, _ := h.Breath(0)
		near(t, "G_210²", g, math.Pow(1-x, -3), 1e-12)
		if h.Order >= 2 {
			if z, _ := h.Wave(-2); math.Abs(z) > 1e-13*want {
				t.Errorf("G_20,−2² = %g at e = %g, want 0", z, e)
			}
		}
	}
	for _, x := range []float64{-1e-3, 0.91, math.NaN()} {
		if h.At(x) {
			t.Errorf("e² = %g accepted", x)
		}
	}
}

// Series through e⁸, exact rationals (re-derived by Newcomb operators). The
// first neglected term bounds the difference: its coefficient is below 2.2e3
// of e^10 for equal K and below 1e5 for the lag-weighted sum's e^12.
func TestSynchronousHeatSeries(t *testing.T) {
	h := NewHarmonics()
	for _, e := range []float64{1e-4, 0.004, 0.02, 0.05} {
		x := e * e
		h.SynchronousAt(x)
		equal, lag := 0.0, 0.0
		for j := 1; j <= h.Order; j++ {
			s, _ := h.Synchronous(j)
			equal += s
			lag += s * float64(j)
		}
		wantEqual := 10.5 + x*(1209./16+x*(1207./4+x*336953./384))
		wantLag := 10.5 + x*(189+x*(9987./8+x*(166653./32+x*4235049./256)))
		near(t, "Σ S_j/e²", equal, wantEqual, 2200*x*x*x*x/10.5+1e-13)
		near(t, "Σ j S_j/e²", lag, wantLag, 1e5*x*x*x*x*x/10.5+1e-13)
	}
}

// For a constant lag Σ j S_j = 3(Na − 2N + Ω), closed at any e (Hut 1981,
// A&A 99, 126). 1e-12: the truncation is 1e-14 of Σ S_j and j weights its tail.
func TestSynchronousHeatAgainstConstantLag(t *testing.T) {
	h := NewHarmonics()
	for _, e := range []float64{0.1, 0.3, 0.5, 0.7, 0.9} {
		h.SynchronousAt(e * e)
		sum := 0.0
		for j := 1; j <= h.Order; j++ {
			s, _ := h.Synchronous(j)
			sum += s * float64(j) * e * e
		}
		na, n, _, _, om := lagFunctions(e)
		near(t, "Σ j S_j", sum, 3*(na-2*n+om), 1e-10)
	}
}

// Derivatives against a central difference: h = 1e-5 leaves h²f‴/6 and 1e-16/h.
func TestHarmonicDerivatives(t *testing.T) {
	rng := rand.New(rand.NewPCG(1, 2))
	h := NewHarmonics()
	for range 50 {
		x := 0.001 + 0.5*rng.Float64()
		const d = 1e-5
		get := func(x float64) (s, w float64) {
			h.At(x)
			s, _ = h.Synchronous(1)
			w, _ = h.Wave(1)
			return s, w
		}
		sp, wp := get(x + d)
		sm, wm := get(x - d)
		h.At(x)
		s, ds := h.Synchronous(1)
		w, dw := h.Wave(1)
		tol := 1e-6 * (math.Abs(s) + math.Abs(w) + math.Abs(ds) + math.Abs(dw))
		if math.Abs((sp-sm)/(2*d)-ds) > tol || math.Abs((wp-wm)/(2*d)-dw) > tol {
			t.Errorf("x = %g: derivatives %g, %g against differences %g, %g", x, ds, dw, (sp-sm)/(2*d), (wp-wm)/(2*d))
		}
	}
}

func TestHarmonicsDoNotAllocate(t *testing.T) {
	h := NewHarmonics()
	h.SynchronousAt(2e-5)
	if n := testing.AllocsPerRun(100, func() { h.SynchronousAt(3e-5) }); n != 0 {
		t.Errorf("%g allocations", n)
	}
}

// lagFunctions are Na, N, Ne, Ωe, Ω of Hut 1981.
func lagFunctions(e float64) (na, n, ne, oe, om float64) {
	x := e * e
	y := 1 - x
	na = (1 + 31./2*x + 255./8*x*x + 185./16*x*x*x + 25./64*x*x*x*x) * math.Pow(y, -7.5)
	n = (1 + 15./2*x + 45./8*x*x + 5./16*x*x*x) * math.Pow(y, -6)
	ne = (1 + 15./4*x + 15./8*x*x + 5./64*x*x*x) * math.Pow(y, -6.5)
	oe = (1 + 1.5*x + x*x/8) * math.Pow(y, -5)
	om = (1 + 3*x + 3./8*x*x) * math.Pow(y, -4.5)
	return
}

func BenchmarkSynchronousHarmonics(b *testing.B) {
	for _, e := range []float64{0.004, 0.1, 0.3, 0.8} {
		b.Run("e="+map[float64]string{0.004: "0.004", 0.1: "0.1", 0.3: "0.3", 0.8: "0.8"}[e], func(b *testing.B) {
			h := NewHarmonics()
			h.SynchronousAt(e * e)
			for b.Loop() {
				h.SynchronousAt(e * e)
			}
		})
	}
}
