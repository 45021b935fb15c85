package ode

import "math"

// lu is the decomposition of (shift)·I − J with row exchanges; the diagonal holds
// the reciprocal pivots.
type lu[T float64 | complex128] struct {
	n    int
	a    []T
	row  []int
	size func(T) float64
}

func newRealLU(n int) *lu[float64] {
	return &lu[float64]{n: n, a: make([]float64, n*n), row: make([]int, n), size: math.Abs}
}

func newComplexLU(n int) *lu[complex128] {
	return &lu[complex128]{n: n, a: make([]complex128, n*n), row: make([]int, n),
		size: func(z complex128) float64 { return math.Abs(real(z)) + math.Abs(imag(z)) }}
}

// shiftReal sets d to γI − J and decomposes it; false if it has no inverse.
func shiftReal(d *lu[float64], gamma float64, jac []float64) bool {
	for i, v := range jac {
		d.a[i] = -v
	}
	for i := 0; i < len(d.a); i += d.n + 1 {
		d.a[i] += gamma
	}
	return d.factor()
}

// shiftComplex is the same with a complex shift.
func shiftComplex(d *lu[complex128], shift complex128, jac []float64) bool {
	for i, v := range jac {
		d.a[i] = complex(-v, 0)
	}
	for i := 0; i < len(d.a); i += d.n + 1 {
		d.a[i] += shift
	}
	return d.factor()
}

func (d *lu[T]) factor() bool {
	n := d.n
	for k := range n {
		p, big := k, d.size(d.a[k*n+k])
		for i := k + 1; i < n; i++ {
			if v := d.a[i*n+k]; v != 0 {
				if v := d.size(v); v > big {
					p, big = i, v
				}
			}
		}
		if !(big > 0) || math.IsInf(big, 0) {
			return false
		}
		top := d.a[k*n : k*n+n]
		d.row[k] = p
		if p != k {
			other := d.a[p*n : p*n+n]
			for j, v := range top {
				top[j], other[j] = other[j], v
			}
		}
		inv := 1 / top[k]
		top[k] = inv
		rest := top[k+1:]
		for i := k + 1; i < n; i++ {
			low := d.a[i*n+k : i*n+n]
			m := low[0]
			if m == 0 {
				continue
			}
			m *= inv
			low[0] = m
			low = low[1:]
			low = low[:len(rest)]
			for j, v := range rest {
				low[j] -= m * v
			}
		}
	}
	return true
}

// solve overwrites b with the solution.
func (d *lu[T]) solve(b []T) {
	n := d.n
	for k, p := range d.row {
		if p != k {
			b[k], b[p] = b[p], b[k]
		}
	}
	for i := 1; i < n; i++ {
		sum := b[i]
		for j, v := range d.a[i*n : i*n+i] {
			sum -= v * b[j]
		}
		b[i] = sum
	}
	for i := n - 1; i >= 0; i-- {
		row := d.a[i*n : i*n+n]
		sum := b[i]
		for j := i + 1; j < n; j++ {
			sum -= row[j] * b[j]
		}
		b[i] = sum * row[i]
	}
}
