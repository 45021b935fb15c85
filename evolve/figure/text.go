package figure

import (
	"fmt"
	"image/color"
	"strings"

	"codeberg.org/go-fonts/liberation/liberationsansregular"
	"golang.org/x/image/font/opentype"
	"gonum.org/v1/plot/font"
	"gonum.org/v1/plot/vg"
)

// typesetter measures and writes lines of ASCII in Liberation Sans. In markup,
// "^{-3}" is raised, "*" a multiplication cross, and a "-" before a digit a
// minus sign. Raised digits are drawn small and the signs as strokes, for the
// font lacks some of the superscripts and draws nothing in their place.
type typesetter struct {
	face *opentype.Font
}

const (
	capHeight  = 0.716 // of the font size: height of digits and capitals
	supSize    = 0.72  // superscript, of the font size
	supRaise   = 0.38  // of the font size
	signWidth  = 0.584 // advance of a drawn sign, that of "+"
	signHeight = 0.34  // of a sign's middle above the baseline
	signStroke = 0.07
)

func newTypesetter() (typesetter, error) {
	f, err := opentype.Parse(liberationsansregular.TTF)
	if err != nil {
		return typesetter{}, fmt.Errorf("figure: font Liberation Sans: %w", err)
	}
	return typesetter{f}, nil
}

// ink is how a line is written. alignX and alignY are the share of the line's
// width and of its capitals' height that lie left of and below the point.
type ink struct {
	size           vg.Length
	color          color.Color
	alignX, alignY float64
	rotation       float64 // radians, counter-clockwise about the point
	markup         bool
}

// run is a piece of a line: text, or a sign if text is "-" or "*".
type run struct {
	text string
	sign bool
	sup  bool
}

// runs splits a line into pieces that are written alike.
func runs(line string, markup bool) []run {
	if !markup {
		return []run{{text: line}}
	}
	var out []run
	add := func(s string, sup bool) {
		from := 0
		for i := range len(s) {
			minus := s[i] == '-' && i+1 < len(s) && s[i+1] >= '0' && s[i+1] <= '9'
			if !minus && s[i] != '*' {
				continue
			}
			if i > from {
				out = append(out, run{text: s[from:i], sup: sup})
			}
			out = append(out, run{text: s[i : i+1], sign: true, sup: sup})
			from = i + 1
		}
		if from < len(s) {
			out = append(out, run{text: s[from:], sup: sup})
		}
	}
	for line != "" {
		before, rest, found := strings.Cut(line, "^{")
		add(before, false)
		if !found {
			break
		}
		raised, after, _ := strings.Cut(rest, "}")
		add(raised, true)
		line = after
	}
	return out
}

func (t typesetter) sized(size vg.Length) font.Face {
	return font.Face{Font: font.Font{Typeface: "Liberation", Variant: "Sans", Size: size}, Face: t.face}
}

func (r run) size(size vg.Length) vg.Length {
	if r.sup {
		return size * supSize
	}
	return size
}

func (t typesetter) runWidth(r run, size vg.Length) vg.Length {
	size = r.size(size)
	if r.sign {
		return size * signWidth
	}
	f := t.sized(size)
	return f.Width(r.text)
}

// width is the length of a line at that size.
func (t typesetter) width(line string, size vg.Length, markup bool) vg.Length {
	var w vg.Length
	for _, r := range runs(line, markup) {
		w += t.runWidth(r, size)
	}
	return w
}

// write puts one line at pt.
func (t typesetter) write(c vg.Canvas, pt vg.Point, line string, k ink) {
	c.Push()
	defer c.Pop()
	c.Translate(pt)
	if k.rotation != 0 {
		c.Rotate(k.rotation)
	}
	c.SetColor(k.color)
	x := -vg.Length(k.alignX) * t.width(line, k.size, k.markup)
	base := -vg.Length(k.alignY) * capHeight * k.size
	for _, r := range runs(line, k.markup) {
		size, y := r.size(k.size), base
		if r.sup {
			y += supRaise * k.size
		}
		if r.sign {
			drawSign(c, r.text, vg.Point{X: x, Y: y}, size)
		} else {
			c.FillString(t.sized(size), vg.Point{X: x, Y: y}, r.text)
		}
		x += t.runWidth(r, k.size)
	}
}

// drawSign strokes a minus or a multiplication cross of the given font size.
func drawSign(c vg.Canvas, sign string, at vg.Point, size vg.Length) {
	c.SetLineWidth(signStroke * size)
	c.SetLineDash(nil, 0)
	mid := vg.Point{X: at.X + signWidth/2*size, Y: at.Y + signHeight*size}
	line := func(dx, dy vg.Length) {
		var p vg.Path
		p.Move(mid.Sub(vg.Point{X: dx, Y: dy}))
		p.Line(mid.Add(vg.Point{X: dx, Y: dy}))
		c.Stroke(p)
	}
	if sign == "-" {
		line(0.24*size, 0)
		return
	}
	line(0.17*size, 0.17*size)
	line(0.17*size, -0.17*size)
}

// shorten cuts a line to a width, ending it in "...".
func (t typesetter) shorten(line string, size, width vg.Length) string {
	// No letter is wider than the font's size, none narrower than a fifth of
	// it: cutting first keeps a hostile line of a megabyte cheap.
	if most := int(5*width/size) + 3; len(line) > most {
		line = line[:most] + "..."
	}
	if t.width(line, size, false) <= width {
		return line
	}
	for n := len(line) - 1; n > 0; n-- {
		if s := strings.TrimRight(line[:n], " .") + "..."; t.width(s, size, false) <= width {
			return s
		}
	}
	return ""
}

// wrap breaks a text at blanks into at most most lines of a width; what does
// not fit is cut with "...".
func (t typesetter) wrap(s string, size, width vg.Length, most int) []string {
	var lines []string
	words := strings.Fields(s)
	for len(words) > 0 && len(lines) < most {
		n := 1
		for n < len(words) && t.width(strings.Join(words[:n+1], " "), size, false) <= width {
			n++
		}
		if len(lines) == most-1 {
			n = len(words)
		}
		lines = append(lines, t.shorten(strings.Join(words[:n], " "), size, width))
		words = words[n:]
	}
	return lines
}

// folded spells the letters and signs that titles and names commonly hold.
var folded = strings.NewReplacer(
	"à", "a", "á", "a", "â", "a", "ã", "a", "ä", "a", "å", "a", "æ", "ae", "ç", "c",
	"è", "e", "é", "e", "ê", "e", "ë", "e", "ì", "i", "í", "i", "î", "i", "ï", "i", "ñ", "n",
	"ò", "o", "ó", "o", "ô", "o", "õ", "o", "ö", "o", "ø", "o", "ù", "u", "ú", "u", "û", "u", "ü", "u", "ý", "y", "ß", "ss",
	"À", "A", "Á", "A", "Â", "A", "Ã", "A", "Ä", "A", "Å", "A", "Æ", "AE", "Ç", "C",
	"È", "E", "É", "E", "Ê", "E", "Ë", "E", "Í", "I", "Î", "I", "Ñ", "N",
	"Ó", "O", "Ô", "O", "Ö", "O", "Ø", "O", "Ú", "U", "Ü", "U", "č", "c", "ě", "e", "ř", "r", "š", "s", "ž", "z",
	"–", "-", "—", "-", "−", "-", "×", "x", "·", ".", "°", " deg", "±", "+-", "µ", "u", "μ", "u", "…", "...",
	"‘", "'", "’", "'", "“", "\"", "”", "\"", "₂", "2", "²", "^2", "³", "^3",
)

// ascii spells s in printable ASCII: accents dropped, white space and control
// characters to one blank, anything else to "?".
func ascii(s string) string {
	var b strings.Builder
	blank := true // swallows leading blanks
	for _, r := range folded.Replace(s) {
		switch {
		case r <= ' ' || r == 0x7f || r == 0xa0 || r == 0x2028 || r == 0x2029:
			if !blank {
				b.WriteByte(' ')
			}
			blank = true
			continue
		case r > '~':
			r = '?'
		}
		b.WriteRune(r)
		blank = false
	}
	return strings.TrimRight(b.String(), " ")
}
