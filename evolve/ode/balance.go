package ode

import "math"

// balance fills scale with powers of two d such that d_j a_ij/d_i has rows and
// columns of about equal size (Parlett & Reinsch 1969, Numer. Math. 13, 293; the
// diagonal left out): the exponential of a matrix whose variables differ in size by
// many orders keeps their digits only so.
func balance(a []float64, scale []float64) {
	n := len(scale)
	for i := range scale {
		scale[i] = 1
	}
	for done := false; !done; {
		done = true
		for i := range n {
			row, col := 0.0, 0.0
			for j := range n {
				if j != i {
					row += math.Abs(a[i*n+j]) * scale[j] / scale[i]
					col += math.Abs(a[j*n+i]) * scale[i] / scale[j]
				}
			}
			if row == 0 || col == 0 {
				continue
			}
			f := math.Exp2(math.Round(0.5 * math.Log2(row/col)))
			if col*f+row/f < 0.95*(col+row) {
				scale[i] *= f
				done = false
			}
		}
	}
}
