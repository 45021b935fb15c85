package thermal

import (
	"math"
	"testing"
)

// temperatures lie on all three phases, either side of the onset of convection.
var temperatures = []float64{300, 900, 1200, 1550, 1610, 1650, 1750, 1990, 2010, 2600}

// The rows of case 9.2 computed by an independent implementation (3-stage Radau
// IIA), columns a (km), e, T (K) and tidal heat (W). The heat is
// (21/2)(G M² R⁵ n/a⁶) e² K(n)(1 + O(e²)), times (λ̇ − ϖ̇)/n, which lies between 1
// and 1.02 in this chain.
func TestResponseThroughTheVolcanicCycle(t *testing.T) {
	r := rockOf(t, nil)
	const central = 1.6e27
	for _, c := range []struct{ a, e, T, heat float64 }{
		{417980.17124e3, 0.0048746655, 1660.22843, 9.751509e13},
		{414684.76171e3, 0.0018997739, 1753.88526, 2.926868e14},
		{412480.46030e3, 0.0011958130, 1650.31388, 4.371316e12},
		{417317.26903e3, 0.0018649882, 1629.08092, 4.444079e12},
		{421045.01042e3, 0.0030428943, 1679.49678, 8.533952e13},
		{448262.90201e3, 0.0014842446, 1649.49509, 3.672919e12},
	} {
		r.Freeze(0, []float64{r.enthalpy.of(c.T)})
		n := math.Sqrt(gravitation * (central + cinderBody.Mass) / (c.a * c.a * c.a))
		p := 10.5 * gravitation * central * central * math.Pow(cinderBody.Radius, 5) * n / math.Pow(c.a, 6) * c.e * c.e * r.K(n)
		if ratio := c.heat / p; !(ratio > 1 && ratio < 1.02) {
			t.Errorf("T = %g K: heat %g W is %.4f of (21/2)AneK", c.T, c.heat, ratio)
		}
	}
}

// dh/dt of the start of case 9.2 with the formulas of the model written out,
// f = 1/8.
func TestBalanceAtTheStartOfTheVolcanicCycle(t *testing.T) {
	r := rockOf(t, nil)
	const T, f, k, cp, L = 1650.0, 0.125, 4.0, 1200.0, 4e5
	R, m := cinderBody.Radius, cinderBody.Mass
	rho := m / (4 * math.Pi / 3 * R * R * R)
	g := gravitation * m / (R * R)
	eta := 1e18 * math.Exp(3e5/gasConstant*(1/T-1/1600.0)) * math.Exp(-25*f)
	q := 0.53 * k * math.Cbrt(rho*g*3e-5/(k/(rho*cp)*eta)) * math.Pow(gasConstant*T*T/3e5, 4.0/3)
	qm := rho * (L + cp*(T-110)) * 1e-8 * f * f * f
	b := r.Balance(0)
	area := 4 * math.Pi * R * R
	near(t, "convective loss", b.ConvectiveLoss, area*q, 1e-13)
	near(t, "melt loss", b.MeltLoss, area*qm, 1e-13)
	near(t, "surface loss", b.SurfaceLoss, area*(q+qm), 1e-13)
	near(t, "radiogenic heat", b.RadiogenicHeat, 3.5e-12*m, 1e-15)
	near(t, "energy", b.Energy, m*(cp*T+L*f), 1e-15)
	s := r.Snapshot()
	near(t, "T", s.Temperature.X, T, 4e-16)
	near(t, "f", s.MeltFraction.X, f, 1e-14)
	near(t, "η", s.Viscosity.X, eta, 1e-13)
	near(t, "μ", s.Rigidity.X, 6e10*math.Exp(-6*f), 1e-13)
	if v := r.States(); len(v) != 1 || v[0].Start != cp*T+L*f || v[0].Scale != 1.92e6 {
		t.Errorf("states %+v", v)
	}
}

// A cold body conducts: 5k(T − T_surface)/R, the flux of a uniformly heated
// sphere, whose mean temperature is ρHR²/(15k) over its surface's and whose flux
// is ρHR/3 (Carslaw & Jaeger 1959).
func TestColdRockConducts(t *testing.T) {
	r := rockOf(t, nil)
	r.Freeze(0, []float64{1200 * 900})
	near(t, "loss", r.Balance(0).SurfaceLoss, 4*math.Pi*cinderBody.Radius*5*4*(900-110), 1e-14)
}

// m dh/dt is the tidal and radiogenic heat less the loss, to the rounding of
// the largest of the three.
func TestEnergyBalanceIsExact(t *testing.T) {
	for name, r := range variants(t) {
		for _, T := range temperatures {
			r.Freeze(0, []float64{r.enthalpy.of(T)})
			b := r.Balance(0)
			const heat = 1e14
			var dx [1]float64
			r.Rates(0, heat, dx[:])
			residual := cinderBody.Mass*dx[0] - (heat + b.RadiogenicHeat - b.SurfaceLoss)
			if size := heat + b.RadiogenicHeat + math.Abs(b.SurfaceLoss); !(math.Abs(residual) <= 4e-16*size) {
				t.Errorf("%s at %g K: %g W missing of %g W", name, T, residual, size)
			}
			near(t, name+" parts of the loss", b.ConvectiveLoss+b.MeltLoss, b.SurfaceLoss, 4e-16)
		}
	}
}

// Derivatives of K and of the rates against five-point differences on the
// frozen pieces. A step of 60 J/kg changes ln η by 0.02 at 300 K, where K feels
// it to the power 0.3, and by 2e-3 or less where rock is warm: the truncation,
// the fourth power over 30, is 4e-11 at most. Rounding of h, 2e-10 of 60, gives
// 1e-11 of the change over an e-fold of η.
func TestRockDerivatives(t *testing.T) {
	const step, tol = 60, 1e-9
	for name, r := range variants(t) {
		for _, T := range temperatures {
			h := r.enthalpy.of(T)
			r.Freeze(0, []float64{h})
			with := func(get func() float64) func(float64) float64 {
				return func(h float64) float64 { r.Set([]float64{h}); return get() }
			}
			for _, w := range []float64{1e-7, ioFrequency, -ioFrequency, 3e-3} {
				r.Set([]float64{h})
				var dx [1]float64
				k, dw := r.KDerivs(w, dx[:])
				if k != r.K(w) {
					t.Errorf("%s at %g K: KDerivs gives K = %g, K gives %g", name, T, k, r.K(w))
				}
				if l := r.Love(w); -imag(l) != k || !(real(l) > 0 && real(l) <= 1.5) {
					t.Errorf("%s at %g K: k₂ = %v, K = %g", name, T, l, k)
				}
				near(t, name+" dK/dω", dw, slope(r.K, w, 1e-3*math.Abs(w)), 1e-8) // truncation (1e-3)⁴, rounding 1e-13, of a slope that may nearly vanish
				want := slope(with(func() float64 { return r.K(w) }), h, step)
				if d := math.Abs(dx[0] - want); !(d <= tol*(math.Abs(want)+math.Abs(k)/1e5)) {
					t.Errorf("%s at %g K, ω = %g: dK/dh = %g, differences give %g", name, T, w, dx[0], want)
				}
			}
			var dxdx, dxdheat, rate [1]float64
			r.Set([]float64{h})
			r.RatesDerivs(0, 1e14, dxdx[:], dxdheat[:])
			rates := func(heat float64) func() float64 {
				return func() float64 { r.Rates(0, heat, rate[:]); return rate[0] }
			}
			// Without heat, so that a small loss keeps its digits.
			want := slope(with(rates(-cinderBody.Mass*3.5e-12)), h, step)
			near(t, name+" d(dh/dt)/dh", dxdx[0], want, 1e-8)
			r.Set([]float64{h})
			near(t, name+" d(dh/dt)/dheat", dxdheat[0], slope(func(heat float64) float64 { return rates(heat)() }, 0, 1e22), 1e-12) // linear, so a step that dwarfs the loss costs nothing
		}
	}
}

// K is odd, vanishes at ω = 0, and falls to zero there with the slope (3/2) B η
// of steady creep (reference formula of the Maxwell sphere).
func TestKIsOdd(t *testing.T) {
	for name, r := range variants(t) {
		for _, T := range temperatures {
			r.Freeze(0, []float64{r.enthalpy.of(T)})
			for w := 1e-8; w < 1; w *= 30 {
				if k := r.K(w); !(k > 0) || r.K(-w) != -k {
					t.Errorf("%s at %g K: K(±%g) = %g, %g", name, T, w, k, r.K(-w))
				}
			}
			var dx [1]float64
			k, dw := r.KDerivs(0, dx[:])
			if r.K(0) != 0 || k != 0 || dx[0] != 0 || !(dw > 0) {
				t.Errorf("%s at %g K: K(0) = %g, derivatives %g, %g", name, T, r.K(0), dw, dx[0])
			}
			near(t, name+" slope at zero", dw, 1.5*r.b*r.Snapshot().Viscosity.X, 1e-12)
			near(t, name+" k₂ at zero", real(r.Love(0)), 1.5, 1e-12)
		}
	}
}

// Nothing is lost to overflow between deep cold and a magma ocean.
func TestEverythingIsFinite(t *testing.T) {
	variants := variants(t)
	variants["very stiff"] = rockOf(t, map[string]any{
		"viscosity": table{"arrhenius", map[string]any{"reference": 1e21, "at": 1600.0, "activation_energy": 6e5}}})
	for name, r := range variants {
		for T := 20.0; T <= 3000; T += 5 {
			r.Freeze(0, []float64{r.enthalpy.of(T)})
			var dx, dk, dxdx, dh [1]float64
			k, dw := r.KDerivs(ioFrequency, dk[:])
			r.Rates(0, 1e13, dx[:])
			r.RatesDerivs(0, 1e13, dxdx[:], dh[:])
			b, l := r.Balance(0), r.Love(ioFrequency)
			for i, x := range []float64{k, dw, dk[0], dx[0], dxdx[0], dh[0], b.SurfaceLoss, b.Energy, real(l), imag(l), r.Kink(2, 0, []float64{r.now.h})} {
				if math.IsNaN(x) || math.IsInf(x, 0) {
					t.Fatalf("%s at %g K: value %d is %g", name, T, i, x)
				}
			}
		}
	}
}

// A state below absolute zero is refused, not answered.
func TestNegativeTemperatureIsNotANumber(t *testing.T) {
	r := rockOf(t, nil)
	r.Set([]float64{-1e8})
	var dx [1]float64
	r.Rates(0, 0, dx[:])
	if !math.IsNaN(dx[0]) || !math.IsNaN(r.K(1e-5)) {
		t.Errorf("dh/dt = %g, K = %g", dx[0], r.K(1e-5))
	}
	r.Set([]float64{2e6})
	if r.Rates(0, 0, dx[:]); math.IsNaN(dx[0]) {
		t.Error("the state after it is spoilt")
	}
}

func TestStepsDoNotAllocate(t *testing.T) {
	for name, r := range variants(t) {
		var i Interior = r
		x, dx, dh := []float64{2e6}, []float64{0}, []float64{0}
		if n := testing.AllocsPerRun(100, func() {
			i.Freeze(0, x)
			i.Set(x)
			i.K(1e-5)
			i.KDerivs(1e-5, dx)
			i.Rates(0, 1e13, dx)
			i.RatesDerivs(0, 1e13, dx, dh)
			i.Balance(0)
			for k := range i.Kinks() {
				i.Kink(k, 0, x)
				i.Cross(k, true)
			}
		}); n != 0 {
			t.Errorf("%s: %g allocations", name, n)
		}
	}
}

func BenchmarkSet(b *testing.B) {
	for name, r := range variants(b) {
		b.Run(name, func(b *testing.B) {
			x := []float64{2e6}
			for b.Loop() {
				r.Set(x)
			}
		})
	}
}

func BenchmarkKDerivs(b *testing.B) {
	for name, r := range variants(b) {
		b.Run(name, func(b *testing.B) {
			var dx [1]float64
			for b.Loop() {
				r.KDerivs(ioFrequency, dx[:])
			}
		})
	}
}

func BenchmarkK(b *testing.B) {
	r := rockOf(b, nil)
	for b.Loop() {
		r.K(ioFrequency)
	}
}
