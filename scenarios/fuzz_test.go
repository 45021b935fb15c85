package scenarios

import (
	"errors"
	"strings"
	"testing"
)

// FuzzRead holds two promises for any bytes: no panic, every error is Errors
// that say something; and what is accepted reads back equal from its TOML.
func FuzzRead(f *testing.F) {
	for _, s := range Shipped() {
		f.Add(s.Source)
	}
	f.Add([]byte(base + changes))
	f.Add([]byte("[run]\nspan = \"1 Myr\"\n[central]\nname=\"a\"\nmass=\"1 M_sun\"\nradius=\"1 R_sun\"\n[orbiter.b]\nmass=\"1 M_earth\"\nradius=\"1e-3 R_central\"\nsemimajor_axis=\"1 AU\"\n"))
	// Found by an earlier run: a change of an orbiter where there is none.
	f.Add([]byte("[[change]]\nat = \"1 Myr\"\nset = { orbiter.a.interior.b = 1 }\n"))
	for _, c := range problemCases {
		f.Add([]byte(c.new))
	}
	f.Fuzz(func(t *testing.T, src []byte) {
		s, err := Read("fuzz.toml", src)
		if err != nil {
			var all Errors
			if !errors.As(err, &all) || len(all) == 0 || all[0].What == "" {
				t.Fatalf("not a list of problems: %#v", err)
			}
			return
		}
		text := s.TOML()
		back, err := Read("resolved.toml", []byte(text))
		if err != nil {
			t.Fatalf("the resolved text is refused: %v\n%s", err, text)
		}
		if !same(s, back) || back.ID() != s.ID() {
			t.Fatalf("reading back\n%s\ngives\n%s", text, back.TOML())
		}
	})
}

// TestHostileValues gives every key of a valid case each of a list of values
// that are the wrong kind, extreme or empty, alone.
func TestHostileValues(t *testing.T) {
	values := []string{
		"0", "-1", "1e308", "5e-324", "9223372036854775807", "99999999999999999999", "true", "inf", "[]", "{}", "[[]]", "{ a = { } }", `[1, "a", {}]`, `""`, "1979-05-27", `"\u0000"`,
		`"1e300 kg"`, `"1e-300 kg"`, `"1e300 m"`, `"1e-300 m"`, `"1e300 s"`, `"1e-300 s"`, `"1e300 K"`, `"1e-300 K"`, `"1e300 deg/day"`, `"1e-300 deg/day"`, `"1e300 Pa"`, `"1 M_central"`, `"1 R_central"`,
	}
	root, problems := parse("base", []byte(base+changes))
	if len(problems) > 0 {
		t.Fatal(problems)
	}
	paths := []string{"title", "run", "central", "orbiter", "chain", "change", "observed", "orbiter.Tern", "chain.inner", "central.tide", "orbiter.Cinder.interior", "chain.inner.members", "chain.inner.ratios"}
	under := func(at, names string) {
		for _, name := range strings.Fields(names) {
			paths = append(paths, at+"."+name)
		}
	}
	for _, at := range []string{"run", "central", "central.tide", "orbiter.Cinder", "orbiter.Cinder.interior", "orbiter.Cinder.interior.rheology", "orbiter.Cinder.interior.viscosity", "orbiter.Tern", "chain.inner"} {
		n, _ := root.find(strings.Split(at, "."))
		under(at, strings.Join(n.names, " "))
	}
	accepted := 0
	for _, p := range paths {
		for _, v := range values {
			s, err := Read("x.toml", []byte(base+changes), Edit{Path: p, Value: v})
			if err != nil {
				continue
			}
			accepted++
			if back, err := Read("resolved.toml", []byte(s.TOML())); err != nil || !same(s, back) {
				t.Errorf("%s = %s: %v\n%s", p, v, err, s.TOML())
			}
		}
	}
	if accepted == 0 {
		t.Error("nothing was accepted: the test tries too little")
	}
	t.Logf("%d of %d accepted", accepted, len(paths)*len(values))
}
