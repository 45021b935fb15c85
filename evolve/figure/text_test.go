package figure

import (
	"slices"
	"strings"
	"testing"
)

func TestASCII(t *testing.T) {
	for in, want := range map[string]string{
		"Cinder":               "Cinder",
		"Brünn – ½ Ångström":   "Brunn - ? Angstrom",
		"木星":                   "??",
		" a\n\tb\x00\x7f c ":   "a b c",
		"\xff":                 "?",
		"10 W/m² at 3° ± 1 µm": "10 W/m^2 at 3 deg +- 1 um",
		"":                     "",
	} {
		if got := ascii(in); got != want {
			t.Errorf("%q becomes %q, want %q", in, got, want)
		}
	}
}

func TestRunsOfMarkup(t *testing.T) {
	for line, want := range map[string][]run{
		"10^{-3}":     {{text: "10"}, {"-", true, true}, {"3", false, true}},
		"3*10^{14} W": {{text: "3"}, {"*", true, false}, {text: "10"}, {"14", false, true}, {text: " W"}},
		"-0.5":        {{"-", true, false}, {text: "0.5"}},
		"semi-major":  {{text: "semi-major"}},
		"10^{":        {{text: "10"}},
	} {
		if got := runs(line, true); !slices.Equal(got, want) {
			t.Errorf("%q: %v, want %v", line, got, want)
		}
	}
	if got := runs("a^{-3}", false); len(got) != 1 || got[0].text != "a^{-3}" {
		t.Errorf("text of the user is taken for markup: %v", got)
	}
}

func TestShortenedLinesFit(t *testing.T) {
	letters, err := newTypesetter()
	if err != nil {
		t.Fatal(err)
	}
	for _, line := range []string{"short", strings.Repeat("W", 100), strings.Repeat("i", 1<<20), strings.Repeat("ab ", 50), ""} {
		got := letters.shorten(line, 9, 80)
		if w := letters.width(got, 9, false); w > 80 {
			t.Errorf("%.20q: %v wide", line, w)
		}
		if whole := letters.width(line[:min(len(line), 1000)], 9, false) <= 80; whole != (got == line) || !whole && !strings.HasSuffix(got, "...") {
			t.Errorf("%.20q became %q", line, got)
		}
	}
	lines := letters.wrap(strings.Repeat("words and more ", 40), 9, 150, 3)
	if len(lines) != 3 || !strings.HasSuffix(lines[2], "...") {
		t.Errorf("%d lines, the last %q, want 3 with a cut", len(lines), lines[len(lines)-1])
	}
	for _, l := range lines {
		if letters.width(l, 9, false) > 150 {
			t.Errorf("%q is too wide", l)
		}
	}
}
