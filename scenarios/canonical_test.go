package scenarios

import (
	"reflect"
	"strings"
	"testing"
)

func mustRead(t *testing.T, src string) *Scenario {
	t.Helper()
	s, err := Read("x.toml", []byte(src))
	if err != nil {
		t.Fatal(err)
	}
	return s
}

// same compares two scenarios but for the cadence, a rational, which it
// compares by value.
func same(a, b *Scenario) bool {
	p, q := a.Run.Record.EveryMyr, b.Run.Record.EveryMyr
	x, y := *a, *b
	x.Run.Record.EveryMyr, y.Run.Record.EveryMyr = nil, nil
	return (p == nil) == (q == nil) && (p == nil || p.Cmp(q) == 0) && reflect.DeepEqual(x, y)
}

func TestRoundTrip(t *testing.T) {
	sources := map[string]string{"changes": base + changes, "odd title": strings.Replace(base, `"base"`, `"\"a\"\\ é"`, 1), "stop": strings.Replace(base, "[central]", "[[run.stop]]\nevent = \"solidus-crossed\"\nbody = \"Cinder\"\n[central]", 1)}
	for _, s := range Shipped() {
		sources[s.Name] = string(s.Source)
	}
	for name, src := range sources {
		s := mustRead(t, src)
		back, err := Read("resolved.toml", []byte(s.TOML()))
		if err != nil {
			t.Errorf("%s: %v\n%s", name, err, s.TOML())
			continue
		}
		if !same(s, back) || back.TOML() != s.TOML() || back.ID() != s.ID() {
			t.Errorf("%s: reading the resolved text gives\n%s\ninstead of\n%s", name, back.TOML(), s.TOML())
		}
	}
}

func TestIDIgnoresForm(t *testing.T) {
	id := mustRead(t, base).ID()
	if len(id) != 16 {
		t.Errorf("the fingerprint %q has %d digits, want 16", id, len(id))
	}
	for _, c := range [][2]string{
		{`"base"`, `"another title"`},
		{`radius = "1790 km"`, "# a comment\nradius = \"1.79e6 m\""},
		{`mass = "9.1e22 kg"`, `mass = "9.1e25 g"`},
		{`record = "1 Myr"`, `record = { every = "1000 kyr" }`},
		{`span = "100 Myr"`, "span = \"0.1 Gyr\"\nregime = \"adiabatic\"\ntolerance = 1.0e-7\nseed = 1\nmax_steps = 1_000_000"},
		{`set = { central.tide.k2_over_Q = 4e-5 }`, `set = { central.tide.k2_over_Q = 0.00004 }`},
		{`value = "1e14 W"`, `value = "100 TW"`}, {`value = "1e14 W"`, `value = 1e14`},
		{"[run]\nspan = \"100 Myr\"\nrecord = \"1 Myr\"\n", "run = { record = \"1 Myr\", span = \"100 Myr\" }\n"},
		{"[orbiter.Brine]\nmass = \"4.4e22 kg\"\nradius = \"1520 km\"\n[orbiter.Tern]\nmass = \"1e21 kg\"\nradius = \"500 km\"\nperiod = \"12 d\"\neccentricity = 0.01\n", "[orbiter.Tern]\neccentricity = 0.01\nperiod = \"12 d\"\nradius = \"500 km\"\nmass = \"1e21 kg\"\n[orbiter.Brine]\nradius = \"1520 km\"\nmass = \"4.4e22 kg\"\n"},
	} {
		src := strings.Replace(base, c[0], c[1], 1)
		if src == base {
			t.Fatalf("base has no %q", c[0])
		}
		if got := mustRead(t, src).ID(); got != id {
			t.Errorf("%q for %q changes the fingerprint", c[1], c[0])
		}
	}
}

func TestIDKnowsEveryValue(t *testing.T) {
	src := base + changes
	seen := map[string]string{mustRead(t, src).ID(): "nothing"}
	for _, c := range [][2]string{
		{`span = "100 Myr"`, `span = "100.00000000000001 Myr"`}, // one ulp
		{`record = "1 Myr"`, `record = "2 Myr"`}, {`record = "1 Myr"`, `record = { change = 1e-3 }`},
		{"[central]", "seed = 2\n[central]"}, {"[central]", "tolerance = 1e-8\n[central]"}, {"[central]", "start = \"1 Myr\"\n[central]"},
		{"[central]", "judge = \"Cinder\"\n[central]"}, {"[central]", "max_steps = 10\n[central]"}, {"[central]", "stop = [{ event = \"roche-limit\" }]\n[central]"},
		{`"Ombra"`, `"Umbra"`}, {"1.6e27", "1.7e27"}, {`"66000 km"`, `"66001 km"`}, {"0.012", "0.013"}, {"1.3e-5", "1.4e-5"},
		{"1.3e-5 }", "1.3e-5, eccentric = true }"},
		{"9.1e22", "9.2e22"}, {"1790", "1791"}, {"1.9 d", "1.8 d"}, {"1650", "1651"}, {"1200 J", "1201 J"}, {`"60 GPa"`, `"61 GPa"`},
		{`"60 GPa" }`, `"60 GPa", alpha = 0.31 }`}, {`"stagnant-lid"`, `"mobile-lid"`}, {`"stagnant-lid" }`, `"stagnant-lid", coefficient = 0.5 }`},
		{"eccentricity = 0.01", "eccentricity = 0.011"}, {"-0.70", "-0.71"}, {`["2:1"]`, `["3:2"]`}, {"[chain.inner]", "[chain.other]"},
		{`"50 Myr"`, `"51 Myr"`}, {"4e-5", "5e-5"}, {"1e14 W", "2e14 W"}, {"0.1e14", "0.2e14"}, {"surface_loss_W", "tidal_heat_W"},
		{`at = "70 Myr"`, `at = "71 Myr"`}, {"liquidus-crossed", "solidus-crossed"},
	} {
		changed := strings.Replace(src, c[0], c[1], 1)
		if changed == src {
			t.Fatalf("the source has no %q", c[0])
		}
		id := mustRead(t, changed).ID()
		if other, ok := seen[id]; ok {
			t.Errorf("%q for %q has the fingerprint of %s", c[1], c[0], other)
		}
		seen[id] = c[1]
	}
}
