package evolve

import (
	"math"
	"math/big"
)

// grid is the cadence of a history: the multiples of an exact number of Myr, or,
// to repeat another history's rows, a list of times.
type grid struct {
	every *big.Rat  // nil: no cadence
	list  []float64 // Myr, rising; used where every is nil
	next  int64     // the multiple, or the place in the list, that comes next
}

// newGrid returns the cadence with the first multiple after begin, Myr.
func newGrid(every *big.Rat, begin float64) *grid {
	g := &grid{every: every}
	if every == nil {
		return g
	}
	step, _ := every.Float64()
	g.next = max(0, int64(begin/step)-1)
	for g.time() <= begin {
		g.next++
	}
	return g
}

// more reports whether a time comes next.
func (g *grid) more() bool { return g.every != nil || g.next < int64(len(g.list)) }

// passed notes that there is a row at t, Myr: a list goes on behind it.
func (g *grid) passed(t float64) {
	for g.every == nil && g.more() && g.list[g.next] <= t {
		g.next++
	}
}

// time is the nearest double to the exact multiple that comes next, Myr.
func (g *grid) time() float64 {
	if g.every == nil {
		return g.list[g.next]
	}
	t, _ := new(big.Rat).Mul(g.every, new(big.Rat).SetInt64(g.next)).Float64()
	return t
}

// on reports whether t, Myr, is a multiple.
func (g *grid) on(t float64) bool {
	if g.every == nil {
		return false
	}
	q := new(big.Rat).SetFloat64(t)
	q.Quo(q, g.every)
	n, _ := q.Float64()
	m := int64(n + 0.5)
	exact, _ := new(big.Rat).Mul(g.every, new(big.Rat).SetInt64(m)).Float64()
	return exact == t
}

// myr writes a time, s, in Myr: as the multiple of the cadence that it is to
// rounding, if it is one.
func (g *grid) myr(t float64) float64 {
	myr := t / Megayear
	if g.every == nil {
		return myr
	}
	step, _ := g.every.Float64()
	n := new(big.Rat).SetInt64(int64(math.Round(myr / step)))
	exact, _ := n.Mul(n, g.every).Float64()
	if math.Abs(exact-myr) <= 4e-16*myr {
		return exact
	}
	return myr
}
