package thermal

import (
	"fmt"
	"math"
	"strings"
	"testing"

	"tidekiln/scenarios/key"
)

func rheologyOf(t testing.TB, model string, keys map[string]any) Rheology {
	t.Helper()
	if keys == nil {
		keys = map[string]any{}
	}
	keys["rigidity"] = 60e9
	r, err := NewRheology(valuesOf(t, Rheologies, table{model, keys}))
	if err != nil {
		t.Fatal(err)
	}
	return r
}

// Io of reference row 13: homogeneous, ρ = 3528 kg/m³, at its orbital frequency.
const (
	ioRadius    = 1821600.0
	ioDensity   = 3528.0
	ioFrequency = 4.1105928968288e-5
)

func uniform(density, radius float64) sphere {
	return newSphere(density, 4*math.Pi/3*gravitation*density*radius, radius)
}

// J*μ, μ* and k₂ re-derived in two ways for μ = 6e10 Pa, η = 1e16 Pa s;
// formulas of Efroimsky 2012, ApJ 746, 150. Twelve digits are given, so the
// last one allows 1e-11 at worst.
func TestCompliancesAndLoveNumbersOfIo(t *testing.T) {
	body := uniform(ioDensity, ioRadius)
	for _, c := range []struct {
		model     string
		j, mu, k2 complex128
	}{
		{"maxwell", 1 - 0.145964345061i, 58748332120.9 + 8575161821.49i, 0.0297950571453 - 0.00426086323129i},
		{"andrade", 1.44892645211 - 0.374703797362i, 38814154942.8 + 10037646305.2i, 0.0428509439429 - 0.0107451151579i},
	} {
		j, _, _, _ := rheologyOf(t, c.model, nil).Compliance(ioFrequency, 6e10, 1e16)
		k, _ := body.response(j)
		for _, p := range []struct {
			name      string
			got, want complex128
		}{{"J*μ", j * 6e10, c.j}, {"μ*", 1 / j, c.mu}, {"k₂", body.love(j), c.k2}} {
			near(t, c.model+" Re "+p.name, real(p.got), real(p.want), 1e-11)
			near(t, c.model+" Im "+p.name, imag(p.got), imag(p.want), 1e-11)
		}
		near(t, c.model+" K", k, -imag(c.k2), 1e-11)
	}
}

// A homogeneous Maxwell Io of ρ = 3527.5 kg/m³, P = 152853.5 s, re-derived with
// a layered propagator of 40 digits. G of both is CODATA 2018.
func TestMaxwellIoAtThreeViscosities(t *testing.T) {
	body := uniform(3527.5, ioRadius)
	for eta, want := range map[float64]complex128{
		1e14: 0.14363531827 - 0.392984580911i,
		1e15: 0.0310075897857 - 0.0425616631328i,
		1e16: 0.0297867766964 - 0.00425970342042i,
	} {
		j, _, _, _ := maxwell{}.Compliance(2*math.Pi/152853.5, 6e10, eta)
		near(t, "Re k₂", real(body.love(j)), real(want), 1e-10)
		near(t, "Im k₂", imag(body.love(j)), imag(want), 1e-10)
	}
}

// The elastic limit, R = 1821.6 km, ρ = 3527.5 kg/m³, μ = 5e10 Pa: Love 1911,
// value re-derived by closed form and propagator to 1e-15. At η = 1e40 Pa s
// Andrade's creep is (ωτ)^{−0.3} = 1e-8 of the compliance.
func TestStiffRockIsElastic(t *testing.T) {
	body := uniform(3527.5, ioRadius)
	const k2 = 0.0355880400416971
	for model, tol := range map[string]float64{"maxwell": 1e-13, "andrade": 1e-7} {
		j, _, _, _ := rheologyOf(t, model, nil).Compliance(ioFrequency, 5e10, 1e40)
		near(t, model+" k₂", real(body.love(j)), k2, tol)
		if k, _ := body.response(j); !(k >= 0 && k < 1e-8) {
			t.Errorf("%s: K = %g of an elastic body", model, k)
		}
	}
}

// The peak of a Maxwell sphere, K = (3/4) A/(1+A) at ωτ = 1/(1+A), is exact; the
// numbers for Io are re-derived, twelve digits.
func TestMaxwellPeak(t *testing.T) {
	body := uniform(ioDensity, ioRadius)
	const mu, a, at = 6e10, 49.3647946299274, 0.019855139038
	near(t, "A", body.b*mu, a, 1e-13)
	k := func(x float64) float64 { // x = ωτ
		j, _, _, _ := maxwell{}.Compliance(ioFrequency, mu, x*mu/ioFrequency)
		k, _ := body.response(j)
		return k
	}
	near(t, "peak", k(at), 0.735108645721, 1e-11)
	near(t, "peak in closed form", k(1/(1+a)), 0.75*a/(1+a), 1e-13)
	if k(at*1.001) >= k(at) || k(at/1.001) >= k(at) {
		t.Error("the peak is not where theory puts it")
	}
	// Low- and high-frequency limits, each exact to the next power of ωτ.
	near(t, "slow", k(1e-9), 1.5*a*1e-9, 1e-7)
	near(t, "fast", k(1e9), 1.5*a/((1+a)*(1+a)*1e9), 1e-7)
}

// Im J* ≤ 0 for a passive body, and every derivative against five-point
// differences with a relative step of 1e-3: truncation 1e-12 of a power law
// with exponents up to 1, rounding 1e-13.
func TestComplianceDerivatives(t *testing.T) {
	laws := map[string]Rheology{
		"maxwell":          rheologyOf(t, "maxwell", nil),
		"andrade":          rheologyOf(t, "andrade", nil),
		"andrade, ice":     rheologyOf(t, "andrade", map[string]any{"alpha": 0.33, "zeta": 0.1}),
		"andrade, α = 0.9": rheologyOf(t, "andrade", map[string]any{"alpha": 0.9, "zeta": 100.0}),
	}
	for name, law := range laws {
		for _, eta := range []float64{1e2, 1e12, 1e16, 1e21} {
			const w, mu = 3e-5, 4e10
			j, dw, dmu, deta := law.Compliance(w, mu, eta)
			if imag(j) > 0 {
				t.Errorf("%s: Im J* = %g at η = %g", name, imag(j), eta)
			}
			for _, p := range []struct {
				to   string
				x    float64
				got  complex128
				call func(float64) complex128
			}{
				{"ω", w, dw, func(x float64) complex128 { j, _, _, _ := law.Compliance(x, mu, eta); return j }},
				{"μ", mu, dmu, func(x float64) complex128 { j, _, _, _ := law.Compliance(w, x, eta); return j }},
				{"η", eta, deta, func(x float64) complex128 { j, _, _, _ := law.Compliance(w, mu, x); return j }},
			} {
				re := slope(func(x float64) float64 { return real(p.call(x)) }, p.x, 1e-3*p.x)
				im := slope(func(x float64) float64 { return imag(p.call(x)) }, p.x, 1e-3*p.x)
				size := math.Hypot(real(j), imag(j)) / p.x
				if d := math.Hypot(re-real(p.got), im-imag(p.got)) / size; !(d < 1e-11) {
					t.Errorf("%s: dJ*/d%s off by %.1e of J*/%s at η = %g", name, p.to, d, p.to, eta)
				}
			}
		}
	}
}

func TestUnknownLawIsAnError(t *testing.T) {
	_, err := NewRheology(key.Values{Law: "burger"})
	if err == nil || !strings.Contains(fmt.Sprint(err), "maxwell, andrade") {
		t.Errorf("error %v does not list the rheologies", err)
	}
	for _, in := range []table{
		{"rheology", map[string]any{"rheology": key.Values{Law: "jelly", Map: map[string]any{"rigidity": 1.0, "melt_exponent": 0.0}}}},
		{"convection", map[string]any{"convection": key.Values{Law: "jelly"}}},
		{"melt loss", map[string]any{"melt_loss": key.Values{Law: "jelly"}}},
		{"viscosity", map[string]any{"viscosity": key.Values{Law: "jelly", Map: map[string]any{"melt_exponent": 0.0}}}},
	} {
		v := valuesOf(t, Interiors, cinder())
		for k, x := range in.keys {
			v.Map[k] = x
		}
		if _, err := NewInterior(v, cinderBody); err == nil || !strings.Contains(err.Error(), in.law) {
			t.Errorf("error %v does not name the %s", err, in.law)
		}
	}
	if _, err := NewInterior(key.Values{Law: "cheese"}, cinderBody); err == nil {
		t.Error("an unknown model was accepted")
	}
	if _, err := NewInterior(valuesOf(t, Interiors, cinder()), Body{Mass: 1e22}); err == nil {
		t.Error("a body without a radius was accepted")
	}
}
