package figure

import (
	"bytes"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

func TestErrorsLeaveNoFile(t *testing.T) {
	good := oscillating(50)
	changed := func(f func(*History)) History {
		h := oscillating(50)
		f(&h)
		return h
	}
	nan := math.NaN()
	for _, c := range []struct {
		name string
		h    History
		file string
		opt  Options
		want string // in the message
	}{
		{"unknown extension", good, "h.jpg", Options{}, ".pdf, .png, .svg"},
		{"no extension", good, "h", Options{}, ".pdf, .png, .svg"},
		{"no such directory", good, "none/h.png", Options{}, "none"},
		{"unknown body", good, "h.png", Options{Bodies: []string{"Ombra"}}, `no body "Ombra", there are: "Cinder", "Brine"`},
		{"too narrow", good, "h.png", Options{WidthCM: 2}, "6 to 60"},
		{"width not a number", good, "h.png", Options{WidthCM: nan}, "6 to 60"},
		{"resolution", good, "h.png", Options{DPI: -1}, "50 to 1200"},
		{"window backward", good, "h.png", Options{FromMyr: 5, ToMyr: 4}, "end later"},
		{"window elsewhere", good, "h.png", Options{FromMyr: 5000}, "runs from 0 to 900"},
		{"no bodies", History{}, "h.png", Options{}, "no body"},
		{"no values", History{Bodies: []Series{{Name: "Ombra", Time: []float64{0, 1}}}}, "h.svg", Options{}, "no body has a value"},
		{"no times", History{Bodies: []Series{{Name: "Ombra"}}}, "h.svg", Options{}, "no times"},
		{"logarithm of no positive time", History{Bodies: []Series{{Name: "Ombra", Time: []float64{-1, 0}, Eccentricity: []float64{1, 2}}}}, "h.svg", Options{LogTime: true}, "positive times"},
		{"unnamed body", changed(func(h *History) { h.Bodies[1].Name = "" }), "h.pdf", Options{}, "no name"},
		{"two of a name", changed(func(h *History) { h.Bodies[1].Name = "Cinder" }), "h.pdf", Options{}, "two bodies"},
		{"short column", changed(func(h *History) { h.Bodies[0].MeltFraction = h.Bodies[0].MeltFraction[:7] }), "h.pdf", Options{}, "7 values of melt_fraction for 50 times"},
		{"times out of order", changed(func(h *History) { h.Bodies[0].Time[9] = 0 }), "h.pdf", Options{}, "sort"},
		{"time not a number", changed(func(h *History) { h.Bodies[0].Time[9] = nan }), "h.pdf", Options{}, "not finite"},
		{"mark not a number", changed(func(h *History) { h.Marks[0].TimeMyr = nan }), "h.pdf", Options{}, "mark 0"},
		{"observed quantity", changed(func(h *History) { h.Observed[0].Quantity = "colour" }), "h.pdf", Options{}, "tidal_heat"},
		{"observed body", changed(func(h *History) { h.Observed[0].Body = "Ombra" }), "h.pdf", Options{}, "Brine"},
		{"observed error", changed(func(h *History) { h.Observed[0].Error = -1 }), "h.pdf", Options{}, "not negative"},
		{"observed value", changed(func(h *History) { h.Observed[0].Value = nan }), "h.pdf", Options{}, "finite"},
		{"observed axis without one", changed(func(h *History) {
			h.Bodies[0].SemimajorAxisKm = nil
			h.Observed[0].Quantity = "semimajor_axis"
		}), "h.pdf", Options{}, "none to compare"},
	} {
		dir := t.TempDir()
		err := Draw(c.h, filepath.Join(dir, c.file), c.opt)
		if err == nil || !strings.Contains(err.Error(), c.want) || !strings.HasPrefix(err.Error(), "figure: ") {
			t.Errorf("%s: error %v, want one with %q", c.name, err, c.want)
		}
		if left, _ := os.ReadDir(dir); len(left) != 0 {
			t.Errorf("%s: left %v", c.name, left)
		}
	}
}

func TestPictureReplacesFileInOneStep(t *testing.T) {
	path := filepath.Join(t.TempDir(), "h.SVG")
	if err := os.WriteFile(path, []byte("old"), 0o600); err != nil {
		t.Fatal(err)
	}
	if err := Draw(History{}, path, Options{}); err == nil {
		t.Fatal("an empty history was drawn")
	}
	if data, _ := os.ReadFile(path); string(data) != "old" {
		t.Errorf("a failed drawing changed the file to %.20q", data)
	}
	if err := Draw(oscillating(50), path, Options{}); err != nil {
		t.Fatal(err)
	}
	if data, _ := os.ReadFile(path); !bytes.HasPrefix(data, []byte("<?xml")) {
		t.Errorf("the file was not replaced: %.20q", data)
	}
	// A directory cannot be replaced, and stays.
	dir := filepath.Join(t.TempDir(), "d.svg")
	if err := os.Mkdir(dir, 0o755); err != nil {
		t.Fatal(err)
	}
	if err := Draw(oscillating(50), dir, Options{}); err == nil {
		t.Error("a directory was replaced")
	}
	if left, _ := os.ReadDir(filepath.Dir(dir)); len(left) != 1 {
		t.Errorf("left %v", left)
	}
}

func TestFailureOfACanvasIsAnError(t *testing.T) {
	p, err := compose(oscillating(20), Options{WidthCM: 16, DPI: 300})
	if err != nil {
		t.Fatal(err)
	}
	p.face = nil // stands for any failure inside a canvas, which panics
	if _, err := render(p, ".pdf", 300); err == nil || !strings.Contains(err.Error(), "TMPDIR") {
		t.Errorf("error %v", err)
	}
}
