package orbit

import "math"

// refinements is the most iterations a refinement takes. They gain cubically:
// from a change of 10 % two are enough.
const refinements = 6

// settled is the relative change of the eigenvalue after which an iteration was
// the last: the vectors then hold to that times a few tenths of their own last
// error, which is rounding.
const settled = 1e-9

// refine improves eigenvectors by two-sided Rayleigh quotient iteration
// (Ostrowski 1959, Arch. Rational Mech. Anal. 3, 325; Parlett 1974, Math. Comp.
// 28, 679): with the quotient λ = w·Jv/w·v,
//
//	v ← (J − λ)⁻¹ v,  w ← (J − λ)⁻ᵀ w,
//
// and scales them. It reports whether it came to a libration.
func (l *Librations) refine(m *Eigenmode, jac []float64, stride int) bool {
	n := l.chain.Dim()
	v, w := m.Right, m.Left
	quotient := func() complex128 { return l.lu.bilinear(w, jac, stride, v) / product(w, v) }
	value := quotient()
	done := false
	for range refinements {
		l.lu.factor(jac, stride, value)
		l.lu.solve(v)
		l.lu.solveTransposed(w)
		flatten(v)
		flatten(w)
		next := quotient()
		change := abs(next - value)
		value = next
		if done = change <= settled*abs(next); done {
			break
		}
	}
	m.Frequency, m.Growth = imag(value), real(value)
	if !done || !(m.Frequency > 0) || !(math.Abs(m.Growth) <= l.steep*m.Frequency) {
		return false
	}
	size := math.Abs(l.chain.action(v))
	if !(size > 0) || math.IsInf(size, 0) {
		return false
	}
	scale := complex(1/math.Sqrt(size), 0)
	for i := range v[:n] {
		v[i] *= scale
	}
	scale = 1 / product(w, v)
	for i := range w[:n] {
		w[i] *= scale
	}
	return true
}

// flatten scales a vector to a greatest component of about 1.
func flatten(v []complex128) {
	big := 0.0
	for _, x := range v {
		if s := real(x)*real(x) + imag(x)*imag(x); s > big {
			big = s
		}
	}
	if big > 0 {
		scale := complex(1/math.Sqrt(big), 0)
		for i := range v {
			v[i] *= scale
		}
	}
}

// shifted is the LU decomposition of J − λ with row pivoting.
type shifted struct {
	n     int
	a     []complex128
	pivot []int
}

func newShifted(n int) *shifted {
	return &shifted{n: n, a: make([]complex128, n*n), pivot: make([]int, n)}
}

// bilinear returns w·J v.
func (s *shifted) bilinear(w []complex128, jac []float64, stride int, v []complex128) complex128 {
	sum := complex128(0)
	for i := range w[:s.n] {
		re, im := 0.0, 0.0
		row := jac[i*stride : i*stride+s.n]
		for j, x := range v[:s.n] {
			re += row[j] * real(x)
			im += row[j] * imag(x)
		}
		sum += w[i] * complex(re, im)
	}
	return sum
}

// factor decomposes J − λ and keeps the pivots' reciprocals. A pivot of 0, which
// an exact eigenvalue brings, is replaced by rounding: the solution is then the
// eigenvector.
func (s *shifted) factor(jac []float64, stride int, value complex128) {
	n := s.n
	for i := 0; i < n; i++ {
		for j, x := range jac[i*stride : i*stride+n] {
			s.a[i*n+j] = complex(x, 0)
		}
		s.a[i*n+i] -= value
	}
	for k := 0; k < n; k++ {
		p, most := k, -1.0
		for i := k; i < n; i++ {
			if x := s.a[i*n+k]; real(x)*real(x)+imag(x)*imag(x) > most {
				p, most = i, real(x)*real(x)+imag(x)*imag(x)
			}
		}
		s.pivot[k] = p
		top := s.a[k*n : (k+1)*n]
		if p != k {
			other := s.a[p*n : (p+1)*n]
			for j := range top {
				top[j], other[j] = other[j], top[j]
			}
		}
		if top[k] == 0 {
			top[k] = complex(1e-16*abs(value), 0)
		}
		inverse := 1 / top[k]
		top[k] = inverse
		for i := k + 1; i < n; i++ {
			row := s.a[i*n : (i+1)*n]
			if row[k] == 0 {
				continue
			}
			f := row[k] * inverse
			row[k] = f
			for j := k + 1; j < n; j++ {
				row[j] -= f * top[j]
			}
		}
	}
}

// solve overwrites b with (J − λ)⁻¹ b.
func (s *shifted) solve(b []complex128) {
	n := s.n
	for k, p := range s.pivot {
		b[k], b[p] = b[p], b[k]
	}
	for i := 1; i < n; i++ {
		for j := 0; j < i; j++ {
			b[i] -= s.a[i*n+j] * b[j]
		}
	}
	for i := n - 1; i >= 0; i-- {
		for j := i + 1; j < n; j++ {
			b[i] -= s.a[i*n+j] * b[j]
		}
		b[i] *= s.a[i*n+i]
	}
}

// solveTransposed overwrites b with (J − λ)⁻ᵀ b.
func (s *shifted) solveTransposed(b []complex128) {
	n := s.n
	for i := 0; i < n; i++ {
		b[i] *= s.a[i*n+i]
		for j := i + 1; j < n; j++ {
			b[j] -= s.a[i*n+j] * b[i]
		}
	}
	for i := n - 1; i > 0; i-- {
		for j := 0; j < i; j++ {
			b[j] -= s.a[i*n+j] * b[i]
		}
	}
	for k := n - 1; k >= 0; k-- {
		p := s.pivot[k]
		b[k], b[p] = b[p], b[k]
	}
}
