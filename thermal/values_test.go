package thermal

import (
	"math"
	"testing"

	"tidekiln/scenarios/key"
)

// table is a scenario's table in SI; law is the selector's value.
type table struct {
	law  string
	keys map[string]any
}

// valuesOf does to a table what the reader of scenarios does: every key must be
// declared, of its kind and in its range; defaults are filled in.
func valuesOf(t testing.TB, f *key.Family, in table) key.Values {
	t.Helper()
	law := f.Find(in.law)
	if law == nil {
		t.Fatalf("%s %q is not declared", f.Name, in.law)
	}
	v := key.Values{Law: in.law, Map: map[string]any{}}
	for _, k := range law.Keys {
		x, given := in.keys[k.Name]
		switch {
		case given && k.Kind == key.Table:
			v.Map[k.Name] = valuesOf(t, k.Family, x.(table))
		case given:
			if !k.Range.Contains(x.(float64)) {
				t.Fatalf("%s = %v is out of range", k.Name, x)
			}
			v.Map[k.Name] = x
		case k.Default != nil:
			v.Map[k.Name] = k.Default
		case !k.Optional:
			t.Fatalf("%s %q lacks %s", f.Name, in.law, k.Name)
		}
	}
	for name := range in.keys {
		if !v.Has(name) {
			t.Fatalf("%s %q declares no %s", f.Name, in.law, name)
		}
	}
	return v
}

// cinder is the invented volcanic moon of the shipped scenario: case 9.2.
func cinder() table {
	return table{"rock", map[string]any{
		"temperature": 1650.0, "surface_temperature": 110.0, "heat_capacity": 1200.0, "conductivity": 4.0,
		"expansivity": 3e-5, "solidus": 1600.0, "liquidus": 2000.0, "latent_heat": 4e5, "radiogenic": 3.5e-12,
		"rheology":   table{"andrade", map[string]any{"rigidity": 60e9, "alpha": 0.3, "zeta": 1.0, "melt_exponent": 6.0}},
		"viscosity":  table{"arrhenius", map[string]any{"reference": 1e18, "at": 1600.0, "activation_energy": 3e5, "melt_exponent": 25.0}},
		"convection": table{"stagnant-lid", nil},
		"melt_loss":  table{"heat-pipe", map[string]any{"velocity": 1e-8, "exponent": 3.0}},
	}}
}

var cinderBody = Body{Mass: 9.1e22, Radius: 1.79e6}

// rockOf builds cinder with some keys changed.
func rockOf(t testing.TB, change map[string]any) *rock {
	t.Helper()
	in := cinder()
	for name, x := range change {
		if x == nil {
			delete(in.keys, name)
		} else {
			in.keys[name] = x
		}
	}
	r, err := NewInterior(valuesOf(t, Interiors, in), cinderBody)
	if err != nil {
		t.Fatal(err)
	}
	return r.(*rock)
}

// variants are rocks that together use every law.
func variants(t testing.TB) map[string]*rock {
	t.Helper()
	return map[string]*rock{
		"cinder": rockOf(t, nil),
		"maxwell, frank-kamenetskii, mobile lid, no melt loss": rockOf(t, map[string]any{
			"rheology":   table{"maxwell", map[string]any{"rigidity": 50e9, "melt_exponent": 4.0}},
			"viscosity":  table{"frank-kamenetskii", map[string]any{"reference": 1e18, "at": 1600.0, "gamma": 0.014}},
			"convection": table{"mobile-lid", nil},
			"melt_loss":  nil,
		}),
		"other exponents": rockOf(t, map[string]any{
			"convection": table{"stagnant-lid", map[string]any{"coefficient": 1.89, "theta_exponent": 1.02, "rayleigh_exponent": 0.2}},
			"melt_loss":  table{"heat-pipe", map[string]any{"velocity": 1e-8, "exponent": 2.5}},
		}),
	}
}

// slope is the five-point central difference of f at x with step h: error
// h⁴f⁽⁵⁾/30 and, from rounding, about ε x/h of the change of f over x.
func slope(f func(float64) float64, x, h float64) float64 {
	return (8*(f(x+h)-f(x-h)) - (f(x+2*h) - f(x-2*h))) / (12 * h)
}

// near fails unless got is within the relative tolerance of want.
func near(t testing.TB, name string, got, want, tol float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tol*math.Abs(want)) {
		t.Errorf("%s = %.15g, want %.15g (relative difference %.2e, tolerance %.0e)", name, got, want, (got-want)/want, tol)
	}
}
