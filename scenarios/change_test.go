package scenarios

import (
	"strings"
	"testing"
)

const changes = `
[[change]]
when = { event = "liquidus-crossed", body = "Cinder" }
set = { orbiter.Cinder.interior.rheology = { model = "maxwell", rigidity = "50 GPa" }, central.tide.k2_over_Q = 2e-5 }
[[change]]
at = "80 Myr"
set = { orbiter.Cinder.interior.viscosity.gamma = "0.02 /K" }
[[change]]
at = "70 Myr"
[change.set]
orbiter.Cinder.interior.viscosity = { law = "frank-kamenetskii", reference = "1e18 Pa s", at = "1600 K", gamma = "0.01 /K" }
`

func TestChangesAreReadAndTried(t *testing.T) {
	s, err := Read("x.toml", []byte(base+changes))
	if err != nil {
		t.Fatal(err)
	}
	if len(s.Changes) != 4 {
		t.Fatalf("%d changes, want 4", len(s.Changes))
	}
	if c := s.Changes[0]; c.When != nil || c.At != 50*31557600e6 || len(c.Set) != 1 || c.Set[0] != (Setting{"central.tide.k2_over_Q", "4e-5"}) {
		t.Errorf("the first change: %+v", c)
	}
	// Settings are sorted by path, their values complete with defaults.
	if c := s.Changes[1]; c.When == nil || *c.When != (Trigger{"liquidus-crossed", "Cinder", ""}) || len(c.Set) != 2 || c.Set[0] != (Setting{"central.tide.k2_over_Q", "2e-5"}) || !strings.HasPrefix(c.Set[1].Value, `{ model = "maxwell", rigidity = "50 GPa"`) {
		t.Errorf("the second change: %+v", c)
	}
	// The third is valid only after the fourth, which comes earlier in time.
	if c := s.Changes[2]; len(c.Set) != 1 || c.Set[0] != (Setting{"orbiter.Cinder.interior.viscosity.gamma", `"0.02 /K"`}) {
		t.Errorf("the third change: %+v", c)
	}
}

func TestWith(t *testing.T) {
	s, err := Read("x.toml", []byte(base+changes))
	if err != nil {
		t.Fatal(err)
	}
	before := s.TOML()
	changed, err := s.With(s.Changes[1].Set)
	if err != nil {
		t.Fatal(err)
	}
	if got := changed.Central.Tide.Float("k2_over_Q"); got != 2e-5 {
		t.Errorf("k2/Q = %v after the change, want 2e-5", got)
	}
	if r := changed.Orbiters[0].Interior.Table("rheology"); r.Law != "maxwell" || r.Float("rigidity") != 50e9 {
		t.Errorf("rheology after the change: %+v", r)
	}
	if s.TOML() != before {
		t.Error("the scenario itself changed")
	}
	if len(changed.Changes) != 4 || changed.Orbiters[0].Mass != s.Orbiters[0].Mass {
		t.Error("the change touched something else")
	}
	for _, c := range []struct {
		set  Setting
		want string
	}{
		{Setting{"orbiter.Cinder.interior.model", `"fixed"`}, "set orbiter.Cinder.interior.model: cannot be changed during the history"},
		{Setting{"orbiter.Cinder.mass", `"1e22 kg"`}, "set orbiter.Cinder.mass: cannot be changed"},
		{Setting{"orbiter.Cinder.interior", `{ model = "fixed", k2_over_Q = 0.1 }`}, "set orbiter.Cinder.interior: cannot be changed"},
		{Setting{"run.tolerance", "1e-8"}, "set run.tolerance: cannot be changed"},
		{Setting{"orbiter", "{}"}, "set orbiter: cannot be changed"},
		{Setting{"orbiter.Cinder.interior.solidus", `"1 km"`}, `set orbiter.Cinder.interior.solidus: "1 km" is a length, but a temperature is needed`},
		{Setting{"orbiter.Nobody.interior.solidus", `"1 K"`}, `set orbiter.Nobody.interior.solidus: there is no orbiter "Nobody"`},
		{Setting{"central.tide..law", `1`}, "set central.tide..law: is not a path"},
	} {
		if _, err := s.With([]Setting{c.set}); err == nil || !strings.HasPrefix(err.Error(), c.want) {
			t.Errorf("%v: got %v, want %s", c.set, err, c.want)
		}
	}
}

func TestABrokenChangeIsReportedOnce(t *testing.T) {
	src := strings.Replace(base, "central.tide.k2_over_Q = 4e-5", "central.tide.k2_over_Q = -1", 1) + changes
	_, err := Read("x.toml", []byte(src))
	if err == nil || strings.Count(err.Error(), "\n  hint:") != 1 || !strings.HasPrefix(err.Error(), "x.toml:42: change[1].set.central.tide.k2_over_Q: -1 is out of range") {
		t.Errorf("got\n%v", err)
	}
}
