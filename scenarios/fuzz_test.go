package scenarios

import (
	"errors"
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
