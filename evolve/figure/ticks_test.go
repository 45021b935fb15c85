package figure

import (
	"math"
	"slices"
	"strconv"
	"testing"
)

// labels are those of the major ticks.
func labels(ticks []tick) []string {
	var out []string
	for _, t := range ticks {
		if t.label != "" {
			out = append(out, t.label)
		}
	}
	return out
}

func TestLinearLabels(t *testing.T) {
	for _, c := range []struct {
		lo, hi        float64
		count, factor int
		want          []string
	}{
		{0, 900, 10, 0, []string{"0", "100", "200", "300", "400", "500", "600", "700", "800", "900"}},
		{0, 4.5, 10, 0, []string{"0.0", "0.5", "1.0", "1.5", "2.0", "2.5", "3.0", "3.5", "4.0", "4.5"}},
		{0, 4.5, 5, 0, []string{"0", "1", "2", "3", "4"}},
		{-0.12, 0.13, 6, 0, []string{"-0.10", "-0.05", "0.00", "0.05", "0.10"}},
		{1337.9, 1340.1, 5, 0, []string{"1338.0", "1338.5", "1339.0", "1339.5", "1340.0"}},
		{2.4e-6, 5.1e-6, 4, -6, []string{"3", "4", "5"}},
		{1.02e14, 1.31e14, 4, 14, []string{"1.1", "1.2", "1.3"}},
		// 0.3/0.1 is less than 3 in binary: the last one may not get lost.
		{0.1, 0.3, 3, 0, []string{"0.1", "0.2", "0.3"}},
		// Three at most would leave the 5 alone; one more makes an axis of it.
		{1.1, 9.9, 3, 0, []string{"2", "4", "6", "8"}},
	} {
		got := linearTicks(c.lo, c.hi, c.count, c.factor)
		if !slices.Equal(labels(got), c.want) {
			t.Errorf("%g to %g: labels %q, want %q", c.lo, c.hi, labels(got), c.want)
		}
		for _, k := range got {
			if slack := 1e-9 * (c.hi - c.lo); k.value < c.lo-slack || k.value > c.hi+slack {
				t.Errorf("%g to %g: tick at %g", c.lo, c.hi, k.value)
			}
		}
	}
}

func TestLogLabels(t *testing.T) {
	for _, c := range []struct {
		lo, hi float64
		count  int
		label  func(m, e int) string
		want   []string
	}{
		{3e11, 1.2e15, 5, powerLabel, []string{"10^{12}", "10^{13}", "10^{14}", "10^{15}"}},
		{1e-3, 0.1, 5, powerLabel, []string{"10^{-3}", "10^{-2}", "10^{-1}"}},
		{0.5, 200, 5, powerLabel, []string{"1", "10", "10^{2}"}},
		// One decade alone: its multiples too.
		{2e13, 4e14, 4, powerLabel, []string{"3*10^{13}", "10^{14}", "3*10^{14}"}},
		{1.1e-3, 5.9e-3, 4, powerLabel, []string{"2*10^{-3}", "5*10^{-3}"}},
		// Thirteen decades, four labels: every fourth.
		{1e2, 1e14, 4, powerLabel, []string{"10^{4}", "10^{8}", "10^{12}"}},
		{0.01, 4500, 10, decimalLabel, []string{"0.01", "0.1", "1", "10", "100", "1000"}},
		{1e-6, 1e-3, 10, decimalLabel, []string{"10^{-6}", "10^{-5}", "10^{-4}", "0.001"}},
	} {
		got := logTicks(c.lo, c.hi, c.count, c.label)
		if !slices.Equal(labels(got), c.want) {
			t.Errorf("%g to %g: labels %q, want %q", c.lo, c.hi, labels(got), c.want)
		}
	}
	minor := logTicks(1, 100, 5, powerLabel)
	// 1, 2 to 9, 10, 20 to 90, 100.
	if len(minor) != 19 {
		t.Errorf("%d ticks from 1 to 100, want 19", len(minor))
	}
}

// A label and its tick must name the same number, whatever the axis.
func TestLabelsNameTheirValues(t *testing.T) {
	for lo := 1.7e-9; lo < 1e20; lo *= 7.3 {
		for _, ratio := range []float64{1.002, 1.3, 3, 30, 1e9} {
			s := scale{log: ratio > 2, lo: lo, hi: lo * ratio}
			ticks, factor := s.ticks(4)
			if n := len(labels(ticks)); n < 2 || n > 9 {
				t.Errorf("%+v: %d labels", s, n)
			}
			for _, k := range ticks {
				if k.label == "" {
					continue
				}
				// Labels are exact decimals, values are rounded in a few products.
				want := k.value / math.Pow(10, float64(factor))
				if got := number(t, k.label); math.Abs(got-want) > 1e-9*math.Abs(want) {
					t.Errorf("%+v: %q stands at %g", s, k.label, want)
				}
			}
		}
	}
}

// number reads a label back.
func number(t *testing.T, label string) float64 {
	t.Helper()
	mantissa, sup, digits := 1.0, "", ""
	for _, r := range runs(label, true) {
		switch {
		case r.sup:
			sup += r.text
		case r.text == "*":
			mantissa, digits = parse(t, digits), ""
		default:
			digits += r.text
		}
	}
	value := parse(t, digits)
	if sup != "" {
		value = math.Pow(value, parse(t, sup))
	}
	return mantissa * value
}

func parse(t *testing.T, digits string) float64 {
	t.Helper()
	v, err := strconv.ParseFloat(digits, 64)
	if err != nil {
		t.Fatal(err)
	}
	return v
}

func TestUnitLabels(t *testing.T) {
	for want, got := range map[string]string{
		"eccentricity":                  unitLabel("eccentricity", "", 0),
		"eccentricity / 10^{-4}":        unitLabel("eccentricity", "", -4),
		"mantle temperature / K":        unitLabel("mantle temperature", "K", 0),
		"heat made, lost / 10^{14} W":   unitLabel("heat made, lost", "W", 14),
		"melt fraction / 10^{-4}":       unitLabel("melt fraction", "", factorFor(1e-5, 9.9e-4)),
		"mantle temperature / 10^{5} K": unitLabel("mantle temperature", "K", factorFor(0, 1e5)),
	} {
		if got != want {
			t.Errorf("label %q, want %q", got, want)
		}
	}
	for _, m := range []float64{0, 1e-3, 0.5, 99999} {
		if f := factorFor(-m/2, m); f != 0 {
			t.Errorf("up to %g: factor 10^%d, want none", m, f)
		}
	}
}

func TestTimeUnits(t *testing.T) {
	for _, c := range []struct {
		from, to float64
		unit     string
		per      float64
	}{
		{0, 900, "Myr", 1}, {0, 3000, "Myr", 1}, {0, 3001, "Gyr", 1e-3}, {4500, 4510, "Myr", 1},
		{0, 0.2, "kyr", 1e3}, {0, 1e-4, "yr", 1e6},
	} {
		if unit, per := timeUnit(c.from, c.to); unit != c.unit || per != c.per {
			t.Errorf("%g to %g Myr: in %s, want %s", c.from, c.to, unit, c.unit)
		}
	}
	p, err := compose(many(1), Options{WidthCM: 16, DPI: 300})
	if err != nil {
		t.Fatal(err)
	}
	// 4500 Myr: ticks in Gyr stand at their time in Myr.
	last := p.xTicks[len(p.xTicks)-1]
	if p.xTitle != "time / Gyr" || last.label != "4.5" || math.Abs(last.value-4500) > 1e-9 {
		t.Errorf("%s: the last tick is %q at %g Myr", p.xTitle, last.label, last.value)
	}
}
