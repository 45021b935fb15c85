package key

import "math"

// Positive admits x > 0.
func Positive() Range { return Range{Set: true, Min: 0, Max: math.Inf(1), MinOpen: true} }

// AtLeast admits x ≥ min.
func AtLeast(min float64) Range { return Range{Set: true, Min: min, Max: math.Inf(1)} }

// Between admits min ≤ x ≤ max.
func Between(min, max float64) Range { return Range{Set: true, Min: min, Max: max} }

// Inside admits min < x < max.
func Inside(min, max float64) Range {
	return Range{Set: true, Min: min, Max: max, MinOpen: true, MaxOpen: true}
}

// From admits min ≤ x < max.
func From(min, max float64) Range { return Range{Set: true, Min: min, Max: max, MaxOpen: true} }

// Contains reports whether x is finite and lies in the range.
func (r Range) Contains(x float64) bool {
	if math.IsNaN(x) || math.IsInf(x, 0) {
		return false
	}
	if !r.Set {
		return true
	}
	low := x > r.Min || !r.MinOpen && x == r.Min
	high := x < r.Max || !r.MaxOpen && x == r.Max
	return low && high
}
