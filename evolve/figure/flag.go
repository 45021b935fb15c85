package figure

import (
	"cmp"
	"fmt"
	"image/color"
	"slices"

	"gonum.org/v1/plot/vg"
)

// flag is a mark with its place: a line at x and a label that starts or ends
// there, in a row above the panels.
type flag struct {
	time  float64
	x     vg.Length
	ink   color.RGBA
	text  string // empty if it has none or there is no room
	row   int
	width vg.Length
	left  bool // the label lies left of the line
}

const (
	flagRows = 3
	// manyFlags is the number of marks from which lines across the panels would
	// hide the curves: they become ticks at the top, and equal ones share a label.
	manyFlags = 12
)

func (p *picture) flagRow() vg.Length { return 1.3 * p.small }

// place gives marks in the window their flags and returns how many rows of
// labels there are. Labels that find no room are counted in the note.
func (p *picture) place(marks []Mark, left, right vg.Length) int {
	inks := map[string]color.RGBA{"": muted}
	for _, b := range p.bodies {
		inks[b.Name] = palette[b.slot]
	}
	var shown []Mark
	for _, m := range marks {
		if _, drawn := inks[m.Body]; drawn && m.TimeMyr >= p.x.lo && m.TimeMyr <= p.x.hi {
			shown = append(shown, m)
		}
	}
	slices.SortStableFunc(shown, func(a, b Mark) int { return cmp.Compare(a.TimeMyr, b.TimeMyr) })
	type kind struct{ label, body string }
	count, labelled := map[kind]int{}, map[kind]int{} // how many, and which of them has the label
	for i, m := range shown {
		k := kind{m.Label, m.Body}
		if count[k]++; count[k] == 1 {
			labelled[k] = i
		}
	}
	many := len(shown) > manyFlags
	taken := make([][][2]vg.Length, flagRows)
	rows, unlabelled := 0, 0
	// From the last one back: a label beside its line then leaves the lines
	// before it free to rise into a higher row.
	for i, m := range slices.Backward(shown) {
		f := flag{time: m.TimeMyr, ink: inks[m.Body]}
		f.x = left + vg.Length(p.x.at(m.TimeMyr))*(right-left)
		k := kind{m.Label, m.Body}
		text := ascii(m.Label)
		if many && labelled[k] != i {
			text = ""
		} else if many && count[k] > 1 && text != "" {
			text = fmt.Sprintf("%s (%d times)", p.shorten(text, p.small, (right-left)/3), count[k])
		}
		f.text = p.shorten(text, p.small, (right-left)/2)
		if f.text != "" && !p.seat(&f, left, right, taken) {
			f.text = ""
			unlabelled++
		}
		if f.text != "" {
			rows = max(rows, f.row+1)
		}
		p.flags = append(p.flags, f)
	}
	if unlabelled > 0 {
		p.note = append(p.note, fmt.Sprintf("Marks without room for a label: %d.", unlabelled))
	}
	return rows
}

// seat finds the lowest row in which a flag's label is free of others and its
// staff crosses none below; false if there is none.
func (p *picture) seat(f *flag, left, right vg.Length, taken [][][2]vg.Length) bool {
	pad := 0.35 * p.small
	f.width = p.typesetter.width(f.text, p.small, false)
	free := func(row int, a, b vg.Length) bool {
		for _, t := range taken[row] {
			if a < t[1] && b > t[0] {
				return false
			}
		}
		return true
	}
	for f.row = range taken {
		for _, f.left = range []bool{false, true} {
			a, b := f.x-0.5, f.x+f.width+3*pad
			if f.left {
				a, b = f.x-f.width-3*pad, f.x+0.5
			}
			ok := free(f.row, a, b) && a >= left-0.5 && b <= right+p.label
			for lower := range f.row {
				ok = ok && free(lower, f.x-0.5, f.x+0.5)
			}
			if !ok {
				continue
			}
			taken[f.row] = append(taken[f.row], [2]vg.Length{a, b})
			for lower := range f.row {
				taken[lower] = append(taken[lower], [2]vg.Length{f.x - 0.5, f.x + 0.5})
			}
			return true
		}
	}
	return false
}

// drawFlags draws the lines across the panels and the labels above them.
func (p *picture) drawFlags(c vg.Canvas) {
	top := p.panels[0].in.Max.Y
	many := len(p.flags) > manyFlags
	for _, f := range p.flags {
		c.SetColor(f.ink)
		c.SetLineWidth(0.5)
		line := func(from, to vg.Length, dots bool) {
			c.SetLineDash(nil, 0)
			if dots {
				c.SetLineDash([]vg.Length{1, 2}, 0)
			}
			var l vg.Path
			l.Move(vg.Point{X: f.x, Y: from})
			l.Line(vg.Point{X: f.x, Y: to})
			c.Stroke(l)
		}
		for _, q := range p.panels {
			if many {
				line(q.in.Max.Y, q.in.Max.Y-0.5*p.gap, false)
			} else {
				line(q.in.Min.Y, q.in.Max.Y, true)
			}
		}
		if f.text == "" {
			continue
		}
		base := top + vg.Length(f.row)*p.flagRow()
		line(top, base+p.flagRow()-0.2*p.small, false)
		k := ink{size: p.small, color: f.ink}
		x := f.x + 0.35*p.small
		if f.left {
			x, k.alignX = f.x-0.35*p.small, 1
		}
		p.write(c, vg.Point{X: x, Y: base + 0.35*p.small}, f.text, k)
	}
}
