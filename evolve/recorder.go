package evolve

import (
	"math"
	"slices"

	"tidekiln/evolve/ode"
	"tidekiln/evolve/record"
)

// recorder turns accepted steps into rows: those of the cadence, and, where
// recording by change is asked for, as many between them as straight lines
// need to reproduce every column.
type recorder struct {
	sampler *sampler
	ledger  *ledger
	books   books
	grid    *grid
	change  float64
	turning []bool
	peak    []float64 // greatest magnitude each column has had
	anchor  *candidate
	pending []candidate
	y, q    []float64
	last    float64 // Myr, of the row last written; NaN before the first

	bodies, resonances, librations, system *record.Rows
}

// candidate is a possible row.
type candidate struct {
	t          float64 // Myr
	values     []float64
	grid       bool
	bodies     []bodySample
	resonances []resonanceSample
	librations []librationSample
	system     systemSample
}

func newRecorder(p *System, carried *carrier, l *ledger, g *grid, change float64, runID string) *recorder {
	r := &recorder{
		ledger: l, grid: g, change: change, last: math.NaN(),
		bodies: record.NewRows(&bodiesTable.Table), resonances: record.NewRows(&resonancesTable.Table), system: record.NewRows(&systemTable.Table),
		librations: record.NewRows(&librationsTable.Table),
	}
	r.follow(p, carried, runID)
	return r
}

// follow takes up a system, at the start and after a change of the rules.
func (r *recorder) follow(p *System, carried *carrier, runID string) {
	r.sampler = newSampler(p, carried, runID)
	r.y, r.q = make([]float64, p.dim), make([]float64, p.NumQuadratures())
	r.turning = nil
	for range r.sampler.bodies {
		r.turning = append(r.turning, bodiesTable.turning()...)
	}
	for range r.sampler.resonances {
		r.turning = append(r.turning, resonancesTable.turning()...)
	}
	for range r.sampler.librations {
		r.turning = append(r.turning, librationsTable.turning()...)
	}
	r.turning = append(r.turning, systemTable.turning()...)
	if r.peak == nil {
		r.peak = make([]float64, len(r.turning))
	}
}

// state records the state y itself, at t in s and as it is written in Myr.
func (r *recorder) state(t, myr float64, y, sums []float64, step float64) {
	r.books = books{r.ledger.imposed, r.ledger.closure(r.sampler.p, t, y, sums), step}
	r.sampler.take(t, y, r.books, sums, myr, r.grid.on(myr))
	r.offer(r.snapshot(), true)
}

// step records what falls on seg up to the time end, s, of it; sums are the
// quadratures at its beginning. A row exactly at last, the end of the history,
// is left to state.
func (r *recorder) step(seg *ode.Segment, end, last float64, sums []float64) {
	if r.change <= 0 && (!r.grid.more() || r.grid.time()*Megayear > end) {
		return // no row falls on it
	}
	seg.Eval(seg.T1, r.y)
	for i, q := range seg.Quadratures() {
		r.q[i] = sums[i] + q
	}
	r.books = books{r.ledger.imposed, r.ledger.closure(r.sampler.p, seg.T1, r.y, r.q), seg.T1 - seg.T0}
	from := seg.T0
	for r.grid.more() {
		t := r.grid.time() * Megayear
		if t > end || t >= last {
			break
		}
		r.between(seg, from, t, sums, false)
		r.offer(r.at(seg, t, r.grid.time(), r.grid.every != nil, sums), true)
		if r.grid.every != nil {
			r.grid.next++
		}
		from = t
	}
	r.between(seg, from, end, sums, end < last)
}

// subdivisions are the equal parts of a step that are looked at first; where
// they are not straight enough they are halved at most finest times more.
const (
	subdivisions = 4
	finest       = 7
)

// lookedAt is the part of the bound that lines between the points looked at may
// use, and leftOut the part for leaving points out; the rest is a margin for
// what lies between the places that are checked.
const (
	lookedAt = 0.3
	leftOut  = 0.5
)

// between offers enough points in (a, b) that lines between them, and from
// either end, keep their part of the bound, and b itself if closed.
func (r *recorder) between(seg *ode.Segment, a, b float64, sums []float64, closed bool) {
	if r.change <= 0 || !(b > a) {
		return
	}
	left := r.at(seg, a, a/Megayear, false, sums)
	parts := math.Ceil(subdivisions * (b - a) / (seg.T1 - seg.T0))
	for i := 1.0; i <= parts; i++ {
		t := a + (b-a)*i/parts
		right := r.at(seg, t, t/Megayear, false, sums)
		r.halve(seg, left, right, sums, finest)
		if i < parts || closed {
			r.offer(right, false)
		}
		left = right
	}
}

func (r *recorder) halve(seg *ode.Segment, a, b candidate, sums []float64, depth int) {
	t := 0.5 * (a.t + b.t)
	if depth == 0 || !(t > a.t && t < b.t) {
		return
	}
	m := r.at(seg, t*Megayear, t, false, sums)
	if r.straight(&a, &b, &m, lookedAt*r.change) {
		// An error that is odd about the middle shows only beside it.
		u := 0.75*a.t + 0.25*b.t
		q := r.at(seg, u*Megayear, u, false, sums)
		if r.straight(&a, &b, &q, lookedAt*r.change) {
			return
		}
	}
	r.halve(seg, a, m, sums, depth-1)
	r.offer(m, false)
	r.halve(seg, m, b, sums, depth-1)
}

// at samples the step at t.
func (r *recorder) at(seg *ode.Segment, t, myr float64, onGrid bool, sums []float64) candidate {
	seg.Eval(t, r.y)
	seg.QuadraturesTo(t, r.q)
	for i, s := range sums {
		r.q[i] += s
	}
	r.sampler.take(t, r.y, r.books, r.q, myr, onGrid)
	return r.snapshot()
}

// snapshot copies the sampler's samples. Without recording by change rows are
// written at once and the copies are not needed.
func (r *recorder) snapshot() candidate {
	s := r.sampler
	c := candidate{t: s.system.t, grid: s.system.grid, bodies: s.bodies, resonances: s.resonances, librations: s.librations, system: s.system}
	if r.change <= 0 {
		return c
	}
	c.values = make([]float64, 0, len(r.turning))
	c.bodies, c.resonances, c.librations = slices.Clone(s.bodies), slices.Clone(s.resonances), slices.Clone(s.librations)
	for i := range c.bodies {
		c.values = bodiesTable.smooth(c.values, &c.bodies[i])
	}
	for i := range c.resonances {
		c.values = resonancesTable.smooth(c.values, &c.resonances[i])
	}
	for i := range c.librations {
		c.values = librationsTable.smooth(c.values, &c.librations[i])
	}
	c.values = systemTable.smooth(c.values, &c.system)
	return c
}

// pendingLimit bounds the points kept back; a row is written when it is met.
const pendingLimit = 256

// offer passes a point on; must forces a row. A point kept back is written
// when a line over it would stray.
func (r *recorder) offer(c candidate, must bool) {
	if r.change <= 0 {
		r.write(&c)
		return
	}
	for i, v := range c.values {
		if a := math.Abs(v); a > r.peak[i] {
			r.peak[i] = a
		}
	}
	if r.anchor != nil && len(r.pending) > 0 {
		bad := len(r.pending) >= pendingLimit
		for i := range r.pending {
			if bad {
				break
			}
			bad = !r.straight(r.anchor, &c, &r.pending[i], leftOut*r.change)
		}
		if bad {
			last := r.pending[len(r.pending)-1]
			r.write(&last)
			r.anchor, r.pending = &last, r.pending[:0]
		}
	}
	if must || r.anchor == nil {
		r.write(&c)
		r.anchor, r.pending = &c, r.pending[:0]
		return
	}
	r.pending = append(r.pending, c)
}

// floorShare is the part of a column's greatest magnitude below which its
// error is not judged by its own size, for columns that pass through zero.
const floorShare = 1e-3

// straight reports whether the line from a to b passes m within the bound.
func (r *recorder) straight(a, b, m *candidate, bound float64) bool {
	w := (m.t - a.t) / (b.t - a.t)
	for i, v := range m.values {
		va, vb := a.values[i], b.values[i]
		if math.IsNaN(v) != math.IsNaN(va) || math.IsNaN(v) != math.IsNaN(vb) {
			return false
		}
		if r.turning[i] && math.Abs(vb-va) > 180 {
			return false
		}
		if d := math.Abs(va + w*(vb-va) - v); d > bound*math.Max(math.Abs(v), floorShare*r.peak[i]) {
			return false
		}
	}
	return true
}

func (r *recorder) write(c *candidate) {
	r.last = c.t
	r.grid.passed(c.t)
	for i := range c.bodies {
		bodiesTable.add(r.bodies, &c.bodies[i])
	}
	for i := range c.resonances {
		resonancesTable.add(r.resonances, &c.resonances[i])
	}
	for i := range c.librations {
		librationsTable.add(r.librations, &c.librations[i])
	}
	systemTable.add(r.system, &c.system)
}
