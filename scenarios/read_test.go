package scenarios

import (
	"errors"
	"math"
	"os"
	"path/filepath"
	"reflect"
	"strings"
	"testing"

	"tidekiln/orbit"
)

func TestVolcanicCycleInSI(t *testing.T) {
	s, err := Open("volcanic-cycle")
	if err != nil {
		t.Fatal(err)
	}
	interior := s.Orbiters[0].Interior
	// Conversions of the file's decimal values, correctly rounded: exact.
	for _, c := range []struct {
		name      string
		got, want float64
	}{
		{"span", s.Run.Span, 1500 * 31557600e6},
		{"start", s.Run.Start, 0},
		{"tolerance", s.Run.Tolerance, 1e-7},
		{"max_steps", float64(s.Run.MaxSteps), 1e6},
		{"seed", float64(s.Run.Seed), 1},
		{"central mass", s.Central.Mass, 1.6e27},
		{"central radius", s.Central.Radius, 6.6e7},
		{"J2", s.Central.J2, 0.012},
		{"central k2/Q", s.Central.Tide.Float("k2_over_Q"), 1.3e-5},
		{"mass", s.Orbiters[0].Mass, 9.1e22},
		{"radius", s.Orbiters[0].Radius, 1.79e6},
		{"period", s.Orbiters[0].Period, 164160},
		{"period of an outer member", s.Orbiters[1].Period, 0},
		{"temperature", interior.Float("temperature"), 1650},
		{"expansivity", interior.Float("expansivity"), 3e-5},
		{"rigidity", interior.Table("rheology").Float("rigidity"), 6e10},
		{"activation energy", interior.Table("viscosity").Float("activation_energy"), 3e5},
		{"melt velocity", interior.Table("melt_loss").Float("velocity"), 1e-8},
	} {
		if c.got != c.want {
			t.Errorf("%s = %v, want %v", c.name, c.got, c.want)
		}
	}
	// Three roundings of the expression on the right.
	if want := -0.7 * math.Pi / 180 / 86400; math.Abs(s.Chains[0].Offset/want-1) > 3*0x1p-53 {
		t.Errorf("offset = %v rad/s, want %v", s.Chains[0].Offset, want)
	}
	if got := s.Run.Record.EveryMyr; got.RatString() != "1" || s.Run.Record.Change != 1e-2 {
		t.Errorf("the cadence is %v Myr and %v, want 1 and 1e-2", got, s.Run.Record.Change)
	}
	if interior.Law != "rock" || interior.Table("rheology").Law != "andrade" || s.Central.Tide.Law != "constant-q" {
		t.Errorf("laws: %q, %q, %q", interior.Law, interior.Table("rheology").Law, s.Central.Tide.Law)
	}
	if c := s.Chains[0]; c.Ratios[0] != 1 || c.Ratios[1] != 1 || strings.Join(c.Members, " ") != "Cinder Brine Cairn" {
		t.Errorf("chain: %+v", c)
	}
}

func TestOrbitersAreOrderedOutward(t *testing.T) {
	s, err := Read("x.toml", []byte(strings.Replace(base, "[orbiter.Cinder]\n", "[orbiter.Outer]\nmass = \"1e20 kg\"\nradius = \"400 km\"\nsemimajor_axis = \"40 R_central\"\n[orbiter.Cinder]\n", 1)))
	if err != nil {
		t.Fatal(err)
	}
	var names []string
	for _, o := range s.Orbiters {
		names = append(names, o.Name)
	}
	if got := strings.Join(names, " "); got != "Cinder Brine Tern Outer" {
		t.Errorf("order outward: %s", got)
	}
	if got := s.Orbiters[3].SemimajorAxis; got != 40*66000e3 {
		t.Errorf("40 R_central = %v m", got)
	}
}

func TestDefaultCadence(t *testing.T) {
	// The greatest 1, 2 or 5 times a power of ten not above span/500.
	for span, want := range map[string]string{"100 Myr": "1/5", "1500 Myr": "2", "1 Gyr": "2", "5 Gyr": "10", "2.4 Gyr": "2", "2.5 Gyr": "5", "1 kyr": "1/500000"} {
		s, err := Read("x.toml", []byte(base), Edit{Path: "run.record", Unset: true}, Edit{Path: "run.span", Value: span})
		if err != nil {
			t.Fatal(err)
		}
		if got := s.Run.Record.EveryMyr.RatString(); got != want {
			t.Errorf("a span of %s is recorded every %s Myr, want %s", span, got, want)
		}
	}
}

func TestRecordForms(t *testing.T) {
	for text, want := range map[string]string{
		`"0.1 Myr"`:                          `"0.1 Myr"`,
		`"100 kyr"`:                          `"0.1 Myr"`,
		`"3e6 d"`:                            `"2.592e11 s"`,
		`{ every = "1 Myr", change = 1e-3 }`: `{ every = "1 Myr", change = 0.001 }`,
		`{ change = 1e-3 }`:                  `{ change = 0.001 }`,
	} {
		s, err := Read("x.toml", []byte(strings.Replace(base, `record = "1 Myr"`, "record = "+text, 1)))
		if err != nil {
			t.Error(err)
			continue
		}
		if got := s.Run.Record.toml(); got != want {
			t.Errorf("record = %s is %s, want %s", text, got, want)
		}
	}
}

func TestAllProblemsAtOnce(t *testing.T) {
	src := base
	for _, c := range [][2]string{
		{`record = "1 Myr"`, `record = "1 kg"`},
		{`J2 = 0.012`, `J2 = "0.012"`},
		{`radius = "1790 km"`, `radius = 1790`},
		{`eccentricity = 0.01`, `eccentricty = 0.01`},
		{`ratios = ["2:1"]`, `ratios = ["3:1"]`},
		{`set = { central.tide.k2_over_Q = 4e-5 }`, `set = { central.tide.k2_over_Q = -1 }`},
		{`body = "Cinder"`, `body = "Nobody"`},
	} {
		src = strings.Replace(src, c[0], c[1], 1)
	}
	_, err := Read("all.toml", []byte(src), Edit{Path: "run.spam", Value: "1"})
	var all Errors
	if !errors.As(err, &all) {
		t.Fatalf("not Errors: %v", err)
	}
	var got []string
	for _, p := range all {
		if p.Hint == "" || p.What == "" {
			t.Errorf("says too little: %v", p)
		}
		got = append(got, strings.SplitN(p.String(), ": ", 2)[0])
	}
	if want := "all.toml:4 all.toml:9 all.toml:13 all.toml:35 all.toml:38 all.toml:42 all.toml:44 --set run.spam"; strings.Join(got, " ") != want {
		t.Errorf("problems at %v, want %v:\n%v", got, want, err)
	}
}

func TestLockThatFailsNamesTheChain(t *testing.T) {
	// Without oblateness nothing detunes the precession, so the forced
	// eccentricity grows as 1/offset and passes 1 at some 1e-3 deg/day.
	src := strings.Replace(strings.Replace(base, "J2 = 0.012\n", "", 1), `"-0.70 deg/day"`, `"-1e-5 deg/day"`, 1)
	_, err := Read("near.toml", []byte(src))
	if err == nil || !strings.HasPrefix(err.Error(), "near.toml:38: chain.inner.offset: the chain has no locked start: ") {
		t.Errorf("got %v", err)
	}
}

func TestWhatIsNoScenario(t *testing.T) {
	dir := t.TempDir()
	file := func(name, content string) string {
		p := filepath.Join(dir, name)
		if err := os.WriteFile(p, []byte(content), 0o600); err != nil {
			t.Fatal(err)
		}
		return p
	}
	huge := file("huge.toml", "")
	if err := os.Truncate(huge, 100<<20); err != nil {
		t.Fatal(err)
	}
	for _, c := range []struct{ path, part string }{
		{huge, "is larger than 1048576 bytes"},
		{file("binary.toml", "a = 1\x00"), "is a binary file"},
		{file("latin.toml", "title = \"x\"\n# caf\xe9\n"), "latin.toml:2: is not UTF-8"},
		{file("empty.toml", " \n"), "is empty"},
		{dir, "is a directory"},
		{filepath.Join(dir, "none.toml"), "there is no such file"},
		{file("deep.toml", "a = "+strings.Repeat("[", 100000)), "nested more than the maximum"},
		{file("tables.toml", "a = "+strings.Repeat("{a=", 5000)+"1"+strings.Repeat("}", 5000)), "nest more than 32 deep"},
		{file("keys.toml", strings.Repeat("a.", 100000)+"a = 1"), "nest more than 32 deep"},
		{file("header.toml", "["+strings.Repeat("a.", 100000)+"a]"), "nest more than 32 deep"},
	} {
		if _, err := ReadFile(c.path); err == nil || !strings.Contains(err.Error(), c.part) || len(err.Error()) > 1000 {
			t.Errorf("%s: got %.1000v, want %q", filepath.Base(c.path), err, c.part)
		}
	}
	if _, err := ReadFile(file("bom.toml", "\uFEFF"+base)); err != nil {
		t.Errorf("a byte order mark: %v", err)
	}
	if _, err := ReadFile(file("crlf.toml", strings.ReplaceAll(base, "\n", "\r\n"))); err != nil {
		t.Errorf("Windows line ends: %v", err)
	}
}

func TestOpen(t *testing.T) {
	t.Chdir(t.TempDir())
	if err := os.WriteFile("mine.toml", []byte(base), 0o600); err != nil {
		t.Fatal(err)
	}
	if err := os.Mkdir("lone-moon", 0o700); err != nil { // a dataset beside
		t.Fatal(err)
	}
	for name, title := range map[string]string{"mine.toml": "base", "lone-moon": "A lone rocky moon becomes circular", "lone-moon.toml": "A lone rocky moon becomes circular"} {
		if s, err := Open(name); err != nil || s.Title != title {
			t.Errorf("%s: %v, %v", name, s, err)
		}
	}
	for name, hint := range map[string]string{"lone-mon": "did you mean lone-moon?", "mien.toml": "did you mean mine.toml?", "xyzzy": "shipped are lone-moon, overstable-pair, quiet-chain, red-dwarf-planets, resolved-chain, resonance-capture, three-two-pair, volcanic-cycle"} {
		if _, err := Open(name); err == nil || !strings.Contains(err.Error(), hint) {
			t.Errorf("%s: %v, want the hint %q", name, err, hint)
		}
	}
}

// A libration that is not given is 0.01 deg, the same case to the bit as one
// that says so; any other is another case, and 0 is allowed.
func TestLibrationOfAChain(t *testing.T) {
	var ids []string
	for _, text := range []string{"", `libration = "0.01 deg"`, `libration = "0 deg"`} {
		s, err := Read("x.toml", []byte(strings.Replace(base, `ratios = ["2:1"]`, "ratios = [\"2:1\"]\n"+text, 1)))
		if err != nil {
			t.Fatal(err)
		}
		ids = append(ids, s.ID())
		if want := 0.01 * math.Pi / 180; len(ids) < 3 && s.Chains[0].Libration != want {
			t.Errorf("%q gives %v rad, want %v", text, s.Chains[0].Libration, want)
		}
	}
	if ids[0] != ids[1] || ids[0] == ids[2] {
		t.Errorf("fingerprints %v, want the first two equal and the third another", ids)
	}
}

// A free chain gives its members' elements, and its canonical form reads back
// the same.
func TestFreeChain(t *testing.T) {
	const src = `[run]
span = "1 kyr"
regime = "resolved"
[central]
name = "Ombra"
mass = "1.6e27 kg"
radius = "66000 km"
[orbiter.Cinder]
mass = "9.1e22 kg"
radius = "1790 km"
period = "1.9 d"
eccentricity = 0.005
pericentre = "-30 deg"
mean_longitude = "0.5 rad"
[orbiter.Brine]
mass = "4.4e22 kg"
radius = "1520 km"
semimajor_axis = "665000 km"
eccentricity = 0.01
pericentre = "180 deg"
mean_longitude = "400 deg"
[chain.pair]
members = ["Cinder", "Brine"]
ratios = ["2:1"]
state = "free"
`
	s := mustRead(t, src)
	c := s.Chains[0]
	if !c.Free || c.Offset != 0 || s.Run.Regime != Resolved || s.Run.Method != "" || s.Run.MaxSteps != 1e9 {
		t.Errorf("chain %+v, run %+v", c, s.Run)
	}
	if o := s.Orbiters[0]; math.Abs(o.Pericentre+math.Pi/6) > 1e-16 || o.MeanLongitude != 0.5 || o.Eccentricity != 0.005 {
		t.Errorf("%+v", o)
	}
	again := mustRead(t, s.TOML())
	if !reflect.DeepEqual(s, again) || s.ID() != again.ID() {
		t.Errorf("reads back as\n%s", again.TOML())
	}
	chain, y, err := c.Start(orbit.Primary{Mass: s.Central.Mass, Radius: s.Central.Radius}, s.Orbiters)
	if err != nil {
		t.Fatal(err)
	}
	if got := math.Atan2(y[4], y[2]) + 2*s.Orbiters[1].MeanLongitude - 0.5 - s.Orbiters[0].Pericentre; math.Abs(math.Remainder(got, 2*math.Pi)) > 1e-14 {
		t.Errorf("arg z of member 1 misses ϖ − ψ by %g", got)
	}
	if chain.Members() != 2 {
		t.Error("not a pair")
	}
}
