package orbit

import (
	"math"
	"sync"
)

// Harmonics are the squared eccentricity functions of the planar quadrupole
// tide at one eccentricity, as [Harmonics.At] fills them:
//
//	Wave(q)   = G_20q(e)²,  q = −Order…Order   (the m = 2 tide)
//	Breath(q) = G_21q(e)²,  the same for ±q    (the m = 0 tide)
//
// and their derivatives to x = e². Order is chosen from e so that what is left
// out of the heat is below 1e-13 of it.
type Harmonics struct {
	Order              int
	wave, dwave        []float64 // index q + capacity
	breath, dbreath    []float64 // index q ≥ 0
	synchronous, dsync []float64 // index j − 1: S_j(e)/e² and its derivative
	panel              *panel
}

// MaxEccentricity bounds the tables of eccentricity functions.
const MaxEccentricity = 0.95

// Wave returns G_20q² and its derivative to e². |q| ≤ Order.
func (h *Harmonics) Wave(q int) (g, dx float64) {
	i := q + h.panel.order
	return h.wave[i], h.dwave[i]
}

// Breath returns G_21q² = G_21,−q² and its derivative to e². |q| ≤ Order.
func (h *Harmonics) Breath(q int) (g, dx float64) {
	if q < 0 {
		q = -q
	}
	return h.breath[q], h.dbreath[q]
}

// Synchronous returns S_j(e)/e² and its derivative to e², where the heat of a
// synchronous, planar orbiter is (G M² R⁵ n/a⁶) Σ_{j≥1} S_j(e) K(jn):
//
//	S_j = j [ ¾ (G_20j² + G_20,−j²) + ½ G_21j² ] = (21/2) e² + … for j = 1.
//
// 1 ≤ j ≤ Order.
func (h *Harmonics) Synchronous(j int) (s, dx float64) {
	return h.synchronous[j-1], h.dsync[j-1]
}

// NewHarmonics returns an empty set; At fills it without allocating
// once it has seen the panel of its eccentricity.
func NewHarmonics() *Harmonics { return &Harmonics{} }

// At fills h for x = e² and returns false if x is not in [0, 0.95²].
func (h *Harmonics) At(x float64) bool { return h.at(x, true) }

// SynchronousAt fills only what Synchronous needs.
func (h *Harmonics) SynchronousAt(x float64) bool { return h.at(x, false) }

// synchronousValues is SynchronousAt without the derivatives.
func (h *Harmonics) synchronousValues(x float64) bool {
	p := h.panel
	if p == nil || !(x >= p.low && x < p.high) {
		return h.at(x, false)
	}
	u := 2*(x-p.low)/(p.high-p.low) - 1
	h.Order = p.orderAt(x)
	for j := range h.synchronous[:h.Order] {
		// Clenshaw's recurrence.
		var b1, b2 float64
		c := p.synchronous[j]
		for k := len(c) - 1; k >= 1; k-- {
			b1, b2 = 2*u*b1-b2+c[k], b1
		}
		h.synchronous[j] = u*b1 - b2 + c[0]
	}
	return true
}

func (h *Harmonics) at(x float64, all bool) bool {
	if !(x >= 0 && x <= MaxEccentricity*MaxEccentricity) {
		return false
	}
	p := panelOf(x)
	if h.panel != p {
		h.panel = p
		n := p.order
		h.wave, h.dwave = make([]float64, 2*n+1), make([]float64, 2*n+1)
		h.breath, h.dbreath = make([]float64, n+1), make([]float64, n+1)
		h.synchronous, h.dsync = make([]float64, n), make([]float64, n)
	}
	u := 2*(x-p.low)/(p.high-p.low) - 1
	scale := 2 / (p.high - p.low)
	h.Order = p.orderAt(x)
	for j := 1; j <= h.Order; j++ {
		h.synchronous[j-1], h.dsync[j-1] = clenshaw(p.synchronous[j-1], u, scale)
	}
	if all {
		for q := -h.Order; q <= h.Order; q++ {
			i := q + p.order
			h.wave[i], h.dwave[i] = clenshaw(p.wave[i], u, scale)
		}
		for q := 0; q <= h.Order; q++ {
			h.breath[q], h.dbreath[q] = clenshaw(p.breath[q], u, scale)
		}
	}
	return true
}

// panel is an interval of x = e² on which every function is a Chebyshev series.
type panel struct {
	low, high   float64
	order       int
	wave        [][]float64
	breath      [][]float64
	synchronous [][]float64
	weight      []float64 // S_j/S_1 at the upper end
}

// orderAt returns the number of harmonics that matter at x. A harmonic's share
// falls as x^{j−1}, so near a circular orbit two or three are enough.
func (p *panel) orderAt(x float64) int {
	ratio := (x + 1e-12) / p.high
	share := 1.0
	for j := 2; j <= p.order; j++ {
		share *= ratio
		if p.weight[j-1]*share < 1e-14 {
			return j - 1
		}
	}
	return p.order
}

// The functions are singular at x = 1 and near x = −0.44 (the radius of
// convergence of Kepler's equation, e = 0.6627…, on the imaginary axis), so
// panels shrink towards x = 1 and the degree below reaches rounding on each.
const (
	nearCircular       = 1e-3 // the end of the first panel, where degree 5 is exact
	nearCircularDegree = 5    // and more nodes would be nearer to 0, where S_j/e² is rounding
	panelDegree        = 18
	panelShrink        = 0.82 // (1 − high)/(1 − low)
)

// panels are constants of mathematics, each made when first asked for.
var panels = func() []func() *panel {
	var list []func() *panel
	low := 0.0
	for high := nearCircular; low < MaxEccentricity*MaxEccentricity; high = 1 - panelShrink*(1-high) {
		a, b := low, high
		list = append(list, sync.OnceValue(func() *panel { return newPanel(a, b) }))
		low = high
	}
	return list
}()

func panelOf(x float64) *panel {
	if x < nearCircular {
		return panels[0]()
	}
	i := 1 + int(math.Log((1-x)/(1-nearCircular))/math.Log(panelShrink))
	return panels[min(i, len(panels)-1)]()
}

func newPanel(low, high float64) *panel {
	points := 64
	top := math.Sqrt(high)
	// Harmonics fall as exp(−k·c(e)) with c = log((1+√(1−e²))/e) − √(1−e²);
	// 45 e-foldings are 1e-19, and the transform wants twice that.
	root := math.Sqrt(1 - high)
	fall := math.Log((1+root)/top) - root
	for float64(points) < 2*(45/fall+40) {
		points *= 2
	}
	order := points/2 - 4
	nodes := panelDegree + 1
	if low == 0 {
		nodes = nearCircularDegree + 1
	}
	waves, breaths, x := make([][]float64, nodes), make([][]float64, nodes), make([]float64, nodes)
	for i := range x {
		x[i] = low + (high-low)*0.5*(1+math.Cos(math.Pi*(float64(i)+0.5)/float64(nodes)))
		waves[i], breaths[i] = tidalHarmonics(math.Sqrt(x[i]), points)
	}
	at := func(w []float64, k int) float64 { return w[(k+points)%points] }
	square := func(v float64) float64 { return v * v }
	sync := func(i, j int) float64 {
		// q = −j is k = 2 − j, q = +j is k = 2 + j of X_k^{−3,2}.
		return float64(j) * (0.75*(square(at(waves[i], 2+j))+square(at(waves[i], 2-j))) + 0.5*square(at(breaths[i], j))) / x[i]
	}
	total, used := 0.0, order-2
	for j := 1; j <= order-2; j++ {
		total += sync(0, j)
	}
	for rest := 0.0; used > 4; used-- {
		rest += sync(0, used)
		if rest > 1e-14*total {
			break
		}
	}
	p := &panel{low: low, high: high, order: used}
	f := make([]float64, nodes)
	fit := func(value func(i int) float64) []float64 {
		for i := range f {
			f[i] = value(i)
		}
		return trim(chebyshev(f))
	}
	for q := -used; q <= used; q++ {
		p.wave = append(p.wave, fit(func(i int) float64 { return square(at(waves[i], 2+q)) }))
	}
	for q := 0; q <= used; q++ {
		p.breath = append(p.breath, fit(func(i int) float64 { return square(at(breaths[i], q)) }))
	}
	for j := 1; j <= used; j++ {
		p.synchronous = append(p.synchronous, fit(func(i int) float64 { return sync(i, j) }))
		p.weight = append(p.weight, sync(0, j)/sync(0, 1))
	}
	return p
}

// chebyshev returns the coefficients of the interpolant through values at the
// Chebyshev points cos(π(i+½)/n), i = 0…n−1; the first one is already halved.
func chebyshev(f []float64) []float64 {
	n := len(f)
	c := make([]float64, n)
	for k := range c {
		for i := range f {
			c[k] += f[i] * math.Cos(math.Pi*float64(k)*(float64(i)+0.5)/float64(n))
		}
		c[k] *= 2 / float64(n)
	}
	c[0] /= 2
	return c
}

// trim drops the trailing coefficients that are rounding of the largest.
func trim(c []float64) []float64 {
	largest := 0.0
	for _, v := range c {
		largest = math.Max(largest, math.Abs(v))
	}
	n := len(c)
	for n > 1 && math.Abs(c[n-1]) < 4e-16*largest {
		n--
	}
	return c[:n]
}

// clenshaw sums a Chebyshev series and its derivative, times scale, at u.
func clenshaw(c []float64, u, scale float64) (f, df float64) {
	var b1, b2, d1, d2 float64
	for k := len(c) - 1; k >= 1; k-- {
		d1, d2 = 2*u*d1-d2+2*b1, d1
		b1, b2 = 2*u*b1-b2+c[k], b1
	}
	return u*b1 - b2 + c[0], (u*d1 - d2 + b1) * scale
}
