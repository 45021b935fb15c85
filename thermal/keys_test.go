package thermal

import (
	"strings"
	"testing"

	"tidekiln/scenarios/key"
)

// Every declared key is complete: a reader generated from the lists needs no
// knowledge of its own.
func TestDeclarationsAreComplete(t *testing.T) {
	for _, f := range []*key.Family{Interiors, Rheologies, Viscosities, Convections, MeltLosses} {
		if f.Selector == "" && len(f.Laws) != 1 {
			t.Errorf("%s has no selector but %d laws", f.Name, len(f.Laws))
		}
		for _, l := range f.Laws {
			if l.Meaning == "" || l.Source == "" || f.Find(l.Name) != l {
				t.Errorf("%s %q lacks a meaning or source, or its name is taken", f.Name, l.Name)
			}
			for _, k := range l.Keys {
				where := f.Name + " " + l.Name + "." + k.Name
				if k.Name == "" || k.Meaning == "" || k.Name == f.Selector {
					t.Errorf("%s: bad name or no meaning", where)
				}
				if k.Default != nil && k.Source == "" {
					t.Errorf("%s: a default without a source", where)
				}
				switch k.Kind {
				case key.Quantity, key.Number:
					if !k.Range.Set || (k.Kind == key.Quantity) != (k.Unit != "") {
						t.Errorf("%s: no range, or a unit that does not go with its kind", where)
					}
					if d, ok := k.Default.(float64); k.Default != nil && (!ok || !k.Range.Contains(d)) {
						t.Errorf("%s: default %v out of range", where, k.Default)
					}
				case key.Table:
					if k.Family == nil {
						t.Errorf("%s: a table of no family", where)
					}
				default:
					t.Errorf("%s: kind %v", where, k.Kind)
				}
			}
		}
	}
}

func TestRockChecksRelations(t *testing.T) {
	for _, c := range []struct {
		change map[string]float64
		key    string
	}{
		{map[string]float64{"solidus": 2000}, "solidus"},
		{map[string]float64{"surface_temperature": 1600}, "surface_temperature"},
		{map[string]float64{"temperature": 110}, "temperature"},
		{map[string]float64{"temperature": 2500}, ""}, // a magma ocean is allowed
	} {
		in := cinder()
		for name, x := range c.change {
			in.keys[name] = x
		}
		got := rockLaw.Check(valuesOf(t, Interiors, in))
		if c.key == "" {
			if len(got) != 0 {
				t.Errorf("%v: %+v", c.change, got)
			}
			continue
		}
		if len(got) != 1 || got[0].Key != c.key || !strings.Contains(got[0].What, " K") || got[0].Hint == "" {
			t.Errorf("%v: %+v", c.change, got)
		}
	}
}

// Leaving out what has a default gives the documented value.
func TestDefaults(t *testing.T) {
	v := valuesOf(t, Rheologies, table{"andrade", map[string]any{"rigidity": 60e9}})
	if v.Float("alpha") != 0.3 || v.Float("zeta") != 1 || v.Float("melt_exponent") != 0 {
		t.Errorf("andrade %+v", v)
	}
	r := rockOf(t, map[string]any{"radiogenic": nil, "melt_loss": nil})
	if b := r.Balance(0); b.RadiogenicHeat != 0 || b.MeltLoss != 0 {
		t.Errorf("balance %+v without radiogenic heat or melt loss", b)
	}
}
