package evolve

import (
	"math"

	"tidekiln/orbit"
)

// passage is where the frequencies of two modes would cross. They repel each
// other instead: their difference is √(4c² + s²(t − t₀)²), a hyperbola. Where the
// chain drifts slowly through it each mode keeps its place in the order of
// frequencies and its action, while its vector turns into the other's; where it
// drifts fast each keeps its character and they cross. The share
//
//	P = exp(−2πc²/s)
//
// of the action goes with the character (Landau 1932, Phys. Z. Sowjetunion 2,
// 46; Zener 1932, Proc. R. Soc. A 137, 696), the rest with the place; of the
// phases, which are not carried, the mean is taken.
type passage struct {
	i, j     int
	t        float64 // t₀, s; NaN if their difference has no minimum
	slope    float64 // s, rad/s²
	crossing float64 // P; 0 if t₀ lies outside the stretch
}

// shortPassage, in units of 1/√s, is the length below which a stretch in which
// modes change places or character is passed at once, not halved: what a shorter
// stretch would resolve has c < 1.5√s, and the exchange accounts for it.
const shortPassage = 1.5

// alike is how much a mode must resemble itself over a stretch: there a mixing
// of two modes by 0.3 rad still leaves the transport, of third order in it,
// within a few per cent.
const alike = 0.9

// gap is the difference of two modes' frequencies.
func (k *knot) gap(i, j int) float64 { return k.modes.Modes[i].Frequency - k.modes.Modes[j].Frequency }

// compare reports whether all modes keep their order and character from a to b,
// and if not which two do not: those that change places, or else the one that
// has changed most and its nearest in frequency.
func compare(a, b *knot) (smooth bool, first, second int) {
	n := len(a.modes.Modes)
	for i := range n {
		for j := i + 1; j < n; j++ {
			if a.gap(i, j) > 0 != (b.gap(i, j) > 0) {
				return false, i, j
			}
		}
	}
	smooth = true
	worst := alike
	for i := range n {
		_, likeness := orbit.Transport(&a.modes.Modes[i], &b.modes.Modes[i])
		if likeness = math.Min(likeness, 1/likeness); !(likeness >= worst) {
			smooth, worst, first = false, likeness, i
		}
	}
	near := math.Inf(1)
	for j := range n {
		if d := math.Abs(b.gap(first, j)); j != first && d < near {
			near, second = d, j
		}
	}
	return smooth, first, second
}

// meet puts the hyperbola through the differences of frequencies at a, at b and
// at m in their middle.
func meet(a, m, b *knot, i, j int) passage {
	h := m.t - a.t
	p, q, r := a.gap(i, j), m.gap(i, j), b.gap(i, j)
	p, q, r = p*p, q*q, r*r
	square := (p - 2*q + r) / (2 * h * h) // s²
	pass := passage{i: i, j: j, t: math.NaN()}
	if !(square > 0) {
		return pass // the difference has no minimum
	}
	pass.slope = math.Sqrt(square)
	off := -(r - p) / (4 * h * square) // t₀ − m.t
	pass.t = m.t + off
	if off >= -h && off < h {
		least := math.Max(0, q-square*off*off) // 4c²
		pass.crossing = math.Exp(-0.5 * math.Pi * least / pass.slope)
	}
	return pass
}

// short reports whether a stretch is to be passed at once.
func (p *passage) short(span float64) bool {
	return p.slope > 0 && span*span*p.slope < shortPassage*shortPassage
}

// carryOver carries all modes from a to b over a short stretch with the passage
// in it, or a part of it, whatever their vectors do there.
func (p *passage) carryOver(a, b *knot) {
	span := b.t - a.t
	if a.gap(p.i, p.j) > 0 != (b.gap(p.i, p.j) > 0) {
		b.swap(p.i, p.j) // back into the order of frequencies
	}
	for k := range a.size {
		from := &a.modes.Modes[k]
		change, likeness := orbit.Transport(from, &b.modes.Modes[k])
		switch {
		case likeness > 0.5:
		case k == p.i:
			change, _ = orbit.Transport(from, &b.modes.Modes[p.j])
		case k == p.j:
			change, _ = orbit.Transport(from, &b.modes.Modes[p.i])
		}
		b.drift[k] = change
		b.size[k] = b.bounded(k, a.size[k]+change+0.5*span*(from.Growth+b.modes.Modes[k].Growth))
	}
}

// exchange shares out the actions of the two modes at a knot behind t₀.
func (p *passage) exchange(b *knot) {
	x, y := b.size[p.i], b.size[p.j]
	b.size[p.i], b.size[p.j] = shared(x, y, p.crossing), shared(y, x, p.crossing)
	if p.crossing > 0.5 {
		b.swap(p.i, p.j) // the number goes with the greater part
		b.size[p.i], b.size[p.j] = b.size[p.j], b.size[p.i]
	}
}

// swap exchanges two modes' vectors and widths, not their sizes.
func (k *knot) swap(i, j int) {
	m := k.modes.Modes
	m[i], m[j] = m[j], m[i]
	k.width[i], k.width[j] = k.width[j], k.width[i]
}

// shared returns ln √((1 − p) I + p J) of ln √I and ln √J.
func shared(i, j, p float64) float64 {
	most := math.Max(i, j)
	if math.IsInf(most, -1) {
		return most
	}
	return most + 0.5*math.Log((1-p)*math.Exp(2*(i-most))+p*math.Exp(2*(j-most)))
}

// counts reports whether a passage matters: where less crosses each mode simply
// keeps its place.
func (p *passage) counts() bool { return p.crossing > 1e-3 }
