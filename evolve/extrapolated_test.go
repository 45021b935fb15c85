package evolve

import "math"

// extrapolated follows y over a span in equal steps of at most the given length by
// the extrapolated midpoint rule (Gragg 1965, SIAM J. Numer. Anal. 2, 384; Bulirsch &
// Stoer 1966, Numer. Math. 8, 1), explicit and of order 16: with subdivisions
// n = 2, 4, … 16 an oscillation of frequency ω keeps its amplitude to
// (ωh)^17/Π n² a step, that is 5e-13 for steps of a fifth of a period.
func extrapolated(p *System, y []float64, span, longest float64) []float64 {
	const columns = 8
	n := len(y)
	steps := math.Ceil(span / longest)
	h := span / steps
	y = append([]float64(nil), y...)
	f, g := make([]float64, n), make([]float64, n)
	a, b := make([]float64, n), make([]float64, n)
	var table [columns][]float64
	for i := range table {
		table[i] = make([]float64, n)
	}
	for k := range int(steps) {
		t := float64(k) * h
		p.Derivs(t, y, f)
		for c := range table {
			m := 2 * (c + 1)
			d := h / float64(m)
			copy(a, y)
			for i := range b {
				b[i] = y[i] + d*f[i]
			}
			for s := 1; s < m; s++ {
				p.Derivs(t+float64(s)*d, b, g)
				for i := range a {
					a[i], b[i] = b[i], a[i]+2*d*g[i]
				}
			}
			copy(table[c], b)
			// Aitken and Neville, in (h/m)²; table[j] ends with column c − j.
			for j := c - 1; j >= 0; j-- {
				r := float64(c+1) / float64(j+1)
				for i := range table[j] {
					table[j][i] = table[j+1][i] + (table[j+1][i]-table[j][i])/(r*r-1)
				}
			}
		}
		copy(y, table[0])
	}
	return y
}
