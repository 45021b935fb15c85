package scenarios

import (
	"math"
	"strings"
	"testing"

	"tidekiln/orbit"
)

func TestParseQuantity(t *testing.T) {
	// Want is the correctly rounded product, so equality is exact. Conversions
	// are definitions (SI brochure, 9th ed.; Julian year; IAU 2012 B2 and 2015
	// B3) unless the comment says otherwise.
	for _, c := range []struct {
		text, unit string
		want       float64
	}{
		{"1790 km", "m", 1.79e6},
		{"1.8216 km", "m", 1821.6}, // 1.8216 × 1000 in doubles is 1821.6000000000001
		{"1 AU", "km", 149597870700},
		{"2 m2", "m^2", 2}, {"2 m^2", "m²", 2}, {"2 km²", "m2", 2e6}, {"3 m^-2", "m⁻²", 3}, {"3 m-2", "/m2", 3},
		{"4 W/m/K", "W/m/K", 4},
		{"4 W/m*m/m", "W/m", 4}, // / divides by the next factor only
		{"1200 J/kg/K", "J/K/kg", 1200},
		{"1 J/g", "J/kg", 1000},
		{"3e-5 /K", "1/K", 3e-5}, {"3e-5 1/K", "/K", 3e-5},
		{"1e18 Pa s", "Pa s", 1e18}, {"1e18 Pa*s", "Pa·s", 1e18}, {"1e18 Pa·s", "Pa s", 1e18},
		{"60 GPa", "Pa", 60e9}, {"1.5 kbar", "MPa", 1.5e8},
		{"300 kJ/mol", "J/mol", 3e5},
		{"1 d", "s", 86400}, {"1 day", "s", 86400}, {"2 h", "s", 7200}, {"2 min", "s", 120},
		{"1 yr", "s", 31557600}, {"1 Myr", "s", 31557600e6}, {"1.5 Gyr", "Myr", 1.5 * 31557600e9},
		{"180 deg", "rad", math.Pi},
		{"-0.70 deg/day", "rad/s", -0.7 * math.Pi / 180 / 86400},
		{"−2 K", "K", -2}, // the minus sign of typeset tables
		{"5 mW/m2", "W/m^2", 0.005}, {"7 µm", "m", 7e-6}, {"7 um", "m", 7e-6}, {"100 TW", "W", 1e14},
		{"2 Mg", "kg", 2000}, {"1 N m", "J", 1},
		{" 12  km ", "m", 12000},
		{"1 R_earth", "m", 6378100}, {"2 R_jup", "m", 2 * 71492000}, {"1 R_sun", "m", 6.957e8},
		{"1 M_earth", "kg", 3.986004e14 / 6.67430e-11}, {"1 M_jup", "kg", 1.2668653e17 / 6.67430e-11}, {"1 M_sun", "kg", 1.3271244e20 / 6.67430e-11},
	} {
		got, err := ParseQuantity(c.text, c.unit)
		if err != nil {
			t.Errorf("%q as %s: %v", c.text, c.unit, err)
			continue
		}
		// Where want is itself a product or quotient of doubles it carries up to
		// three roundings, 3 × 2⁻⁵³; elsewhere the two must be equal.
		slack := 0.0
		if strings.ContainsAny(c.text, "_") || strings.Contains(c.text, "deg") {
			slack = 3 * 0x1p-53 * math.Abs(c.want)
		}
		if math.Abs(got-c.want) > slack {
			t.Errorf("%q as %s = %v, want %v", c.text, c.unit, got, c.want)
		}
	}
}

func TestGravitationalConstantIsTheOneOfOrbit(t *testing.T) {
	if g, _ := rational(newtonG).Float64(); g != orbit.G {
		t.Errorf("masses of Earth, Jupiter and Sun use G = %v, orbits %v", g, orbit.G)
	}
}

func TestParseQuantityRefuses(t *testing.T) {
	for _, c := range []struct{ text, unit, part string }{
		{"1790", "km", "needs a unit"},
		{"1790 kg", "km", `"1790 kg" is a mass, but a length is needed`},
		{"4 W/m K", "W/m/K", "divides by the next factor only"},
		{"1 /day", "deg/day", "is a rate, but an angular rate is needed"},
		{"20 °C", "K", "add 273.15"},
		{"inf m", "m", "not finite"}, {"-nan m", "m", "not finite"},
		{"1e400 m", "m", "beyond"}, {"1e-400 m", "m", "beyond"}, {"1e300 Gyr", "s", "beyond"}, {"4e-324 m", "m", "beyond"},
		{"1e99999 m", "m", ""}, {"", "m", "begin with a number"}, {"km", "m", "begin with a number"},
		{"1,790 km", "m", "digits are not grouped"}, {"1 m//s", "m/s", "two operators"}, {"1 *m", "m", "two operators"},
		{"1 m/", "m", "ends with an operator"}, {"1 m^12", "m", "from -9 to 9"}, {"1 m^", "m", "from -9 to 9"},
		{"1 M_central", "kg", "M_central is not known here"},
		{"1 furlong", "m", "unknown unit"}, {"1 mmm", "m", "unknown unit"},
		{strings.Repeat("1", 70) + " m", "m", "too long"}, {"1 " + strings.Repeat("km ", 40), "m", "too long"},
	} {
		_, err := ParseQuantity(c.text, c.unit)
		if err == nil || !strings.Contains(err.Error(), c.part) {
			t.Errorf("%q as %s: got %v, want an error with %q", c.text, c.unit, err, c.part)
		}
	}
}

func TestFormattedNumbersReadBackToTheBit(t *testing.T) {
	// A fixed multiplicative sequence walks mantissas and exponents.
	x := 1.2345678901234567e-30
	for range 400 {
		for _, u := range []string{"km", "deg/day", "Myr", "J/kg/K", "d", "GPa"} {
			text := formatQuantity(x, u)
			if got, err := ParseQuantity(text, u); err != nil || got != x {
				t.Fatalf("%v is written %q, which reads back as %v, %v", x, text, got, err)
			}
		}
		x *= -1.4142731
	}
	for x, want := range map[float64]string{0: "0", 66000: "66000", 0.012: "0.012", 1.6e27: "1.6e27", -1.3e-5: "-1.3e-5", 12.5: "12.5", 1e7: "1e7", 9999999: "9999999"} {
		if got := formatNumber(x); got != want {
			t.Errorf("%v is written %s, want %s", x, got, want)
		}
	}
}

func TestColumnUnit(t *testing.T) {
	for column, want := range map[string]string{
		"surface_loss_W": "W", "heat_flux_W_per_m2": "W/m2", "mean_motion_deg_per_day": "deg/day",
		"viscosity_Pa_s": "Pa s", "semimajor_axis_km": "km", "k2_over_Q": "", "eccentricity": "", "melt_fraction": "", "K": "",
	} {
		if got := columnUnit(column); got != want {
			t.Errorf("the unit of %s is %q, want %q", column, got, want)
		}
	}
}
