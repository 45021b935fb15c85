package scenarios

import "testing"

func TestShippedScenariosAreValidAndRoundTrip(t *testing.T) {
	for _, sh := range Shipped() {
		t.Run(sh.Name, func(t *testing.T) {
			s, err := Open(sh.Name)
			if err != nil {
				t.Fatal(err)
			}
			text := s.TOML()
			back, err := Read("resolved", []byte(text))
			if err != nil {
				t.Fatalf("%v\n%s", err, text)
			}
			if back.TOML() != text || back.ID() != s.ID() {
				t.Errorf("reading the resolved text gives\n%s\ninstead of\n%s", back.TOML(), text)
			}
			t.Log(text)
		})
	}
}
