package figure

import (
	"bytes"
	"encoding/xml"
	"image"
	"image/png"
	"io"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

// drawn gives the bytes of a picture, and fails if anything else is left in
// its directory.
func drawn(t *testing.T, h History, ext string, opt Options) []byte {
	t.Helper()
	dir := t.TempDir()
	path := filepath.Join(dir, "history"+ext)
	if err := Draw(h, path, opt); err != nil {
		t.Fatal(err)
	}
	data, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	if left, _ := os.ReadDir(dir); len(left) != 1 {
		t.Errorf("%d files in the directory, want the picture alone", len(left))
	}
	return data
}

// height is the height in centimetres that the layout gives a history.
func height(t *testing.T, h History, opt Options) float64 {
	t.Helper()
	opt, err := opt.withDefaults()
	if err != nil {
		t.Fatal(err)
	}
	p, err := compose(h, opt)
	if err != nil {
		t.Fatal(err)
	}
	return float64(p.height / points(1))
}

func TestPNGHasItsSizeAndShowsBothBodies(t *testing.T) {
	h := oscillating(2000)
	for _, opt := range []Options{{}, {WidthCM: 8.5, DPI: 150}} {
		data := drawn(t, h, ".png", opt)
		img, err := png.Decode(bytes.NewReader(data))
		if err != nil {
			t.Fatal(err)
		}
		cm, dpi := opt.WidthCM, float64(opt.DPI)
		if cm == 0 {
			cm, dpi = 16, 300
		}
		// Whole pixels: half a pixel of rounding.
		got := img.Bounds().Size()
		if want := cm / 2.54 * dpi; math.Abs(float64(got.X)-want) > 0.5 {
			t.Errorf("%+v: %d pixels wide, want %.1f", opt, got.X, want)
		}
		if want := height(t, h, opt) / 2.54 * dpi; math.Abs(float64(got.Y)-want) > 0.5 {
			t.Errorf("%+v: %d pixels high, want %.1f", opt, got.Y, want)
		}
		for _, ink := range palette[:2] {
			// Each body crosses the whole width at least once.
			if n := pixels(img, ink.R, ink.G, ink.B); n < got.X {
				t.Errorf("%+v: %d pixels of colour %v, want at least %d", opt, n, ink, got.X)
			}
		}
		if n := pixels(img, palette[2].R, palette[2].G, palette[2].B); n != 0 {
			t.Errorf("%+v: %d pixels in the colour of a third body", opt, n)
		}
	}
}

func pixels(img image.Image, r, g, b uint8) int {
	n := 0
	for y := img.Bounds().Min.Y; y < img.Bounds().Max.Y; y++ {
		for x := img.Bounds().Min.X; x < img.Bounds().Max.X; x++ {
			if cr, cg, cb, _ := img.At(x, y).RGBA(); uint8(cr>>8) == r && uint8(cg>>8) == g && uint8(cb>>8) == b {
				n++
			}
		}
	}
	return n
}

// The chunk is checked by its bytes: PNG specification, third edition, 11.3.4.3.
func TestPNGCarriesItsResolution(t *testing.T) {
	data := drawn(t, oscillating(50), ".png", Options{WidthCM: 6, DPI: 300})
	// 300 / 0.0254 = 11811.02 pixels a metre = 0x2e23.
	want := []byte("\x00\x00\x00\x09pHYs\x00\x00\x2e\x23\x00\x00\x2e\x23\x01")
	if !bytes.Equal(data[33:33+len(want)], want) {
		t.Errorf("after the header: % x, want % x", data[33:33+len(want)], want)
	}
}

// texts are the pieces of text in an SVG, which must be well-formed.
func texts(t *testing.T, svg []byte) []string {
	t.Helper()
	var out []string
	d := xml.NewDecoder(bytes.NewReader(svg))
	in := false
	for {
		tok, err := d.Token()
		if err == io.EOF {
			return out
		}
		if err != nil {
			t.Fatalf("not well-formed: %v", err)
		}
		switch e := tok.(type) {
		case xml.StartElement:
			in = e.Name.Local == "text"
		case xml.CharData:
			if in {
				out = append(out, string(e))
			}
		case xml.EndElement:
			in = false
		}
	}
}

func TestSVGHoldsTheLabels(t *testing.T) {
	svg := drawn(t, oscillating(500), ".svg", Options{})
	all := "\n" + strings.Join(texts(t, svg), "\n") + "\n"
	for _, want := range []string{
		"eccentricity", "heat made, lost / W", "mantle temperature / K", "melt fraction", "semi-major axis / %", "time / Myr",
		"Cinder", "Brine", "heat made", "heat lost, melt", "observed", "melting begins", "frozen", "slow phase", "Cinder and Brine in 2:1",
		"10\n15", // a base and its raised exponent
	} {
		if !strings.Contains(all, "\n"+want+"\n") {
			t.Errorf("no text %q in%s", want, all)
		}
	}
	if !bytes.Contains(svg, []byte("@font-face")) {
		t.Error("the font is not embedded")
	}
}

func TestPDFIsWholeAndEmbedsItsFont(t *testing.T) {
	pdf := drawn(t, oscillating(500), ".pdf", Options{})
	if !bytes.HasPrefix(pdf, []byte("%PDF-1.")) || !bytes.HasSuffix(bytes.TrimSpace(pdf), []byte("%%EOF")) {
		t.Errorf("starts with %q and ends in %q", pdf[:8], pdf[len(pdf)-8:])
	}
	if !bytes.Contains(pdf, []byte("/FontFile2")) {
		t.Error("the font is not embedded")
	}
	// ISO 32000-1, 7.5.5: startxref names the byte where the table begins.
	at := bytes.LastIndex(pdf, []byte("startxref\n"))
	var offset int
	for _, d := range strings.Fields(string(pdf[at+len("startxref\n"):]))[0] {
		offset = 10*offset + int(d-'0')
	}
	if !bytes.HasPrefix(pdf[offset:], []byte("xref")) {
		t.Errorf("the cross-reference table is not at byte %d", offset)
	}
}

func TestEqualInputGivesEqualBytes(t *testing.T) {
	for _, ext := range Formats() {
		a, b := drawn(t, oscillating(300), ext, Options{DPI: 100}), drawn(t, oscillating(300), ext, Options{DPI: 100})
		if !bytes.Equal(a, b) {
			t.Errorf("%s: two pictures of one history differ", ext)
		}
	}
	pdf := drawn(t, oscillating(300), ".pdf", Options{})
	for _, key := range []string{"/CreationDate (D:20000101000000)", "/ModDate (D:20000101000000)"} {
		if !bytes.Contains(pdf, []byte(key)) {
			t.Errorf("no %s: the PDF carries the time of drawing", key)
		}
	}
}

func TestOptionsChangeThePicture(t *testing.T) {
	h := oscillating(400)
	plain := drawn(t, h, ".svg", Options{})
	for name, opt := range map[string]Options{
		"width": {WidthCM: 8.5}, "bodies": {Bodies: []string{"Brine"}}, "from": {FromMyr: 200}, "to": {ToMyr: 500}, "log time": {LogTime: true},
	} {
		if bytes.Equal(plain, drawn(t, h, ".svg", opt)) {
			t.Errorf("%s: no change", name)
		}
	}
	only := strings.Join(texts(t, drawn(t, h, ".svg", Options{Bodies: []string{"Brine"}})), "\n")
	if strings.Contains(only, "Cinder\n") || strings.Contains(only, "melting begins") {
		t.Error("a body not chosen is in the picture, or its marks are")
	}
}

func TestHostileTextIsDrawn(t *testing.T) {
	h := oscillating(200)
	h.Observed = nil
	h.Bodies[0].Name = "</text><script>\x00\n\t\\()%^{" + strings.Repeat("W", 1<<16)
	h.Bodies[1].Name = "木星\u202e\xff\xfe"
	h.Title, h.Note = strings.Repeat("é^{-3} & ", 1<<12), strings.Repeat("x", 1<<16)
	for i := range 300 {
		h.Marks = append(h.Marks, Mark{float64(3 * i), strings.Repeat("]]>", i), ""})
	}
	for _, ext := range Formats() {
		data := drawn(t, h, ext, Options{WidthCM: 8.5, DPI: 72})
		if ext != ".svg" {
			continue
		}
		for _, s := range texts(t, data) {
			if len(s) > 200 || ascii(s) != strings.TrimSpace(s) {
				t.Errorf("%d bytes of text: %.60q", len(s), s)
			}
		}
	}
}

func TestOneToEightBodies(t *testing.T) {
	for n := 1; n <= maxBodies; n++ {
		for _, cm := range []float64{8.5, 16} {
			if err := Draw(many(n), filepath.Join(t.TempDir(), "h.svg"), Options{WidthCM: cm}); err != nil {
				t.Errorf("%d bodies at %g cm: %v", n, cm, err)
			}
		}
	}
	if err := Draw(many(9), filepath.Join(t.TempDir(), "h.svg"), Options{}); err == nil || !strings.Contains(err.Error(), "at most 8") {
		t.Errorf("9 bodies: %v", err)
	}
	h := many(9)
	if err := Draw(h, filepath.Join(t.TempDir(), "h.svg"), Options{Bodies: []string{h.Bodies[8].Name}}); err != nil {
		t.Errorf("one of 9 bodies: %v", err)
	}
}
