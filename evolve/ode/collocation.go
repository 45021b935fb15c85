package ode

import (
	"fmt"
	"math"
	"sync"

	"gonum.org/v1/gonum/integrate/quad"
	"gonum.org/v1/gonum/mat"
)

const maxStages = 5

type square [maxStages][maxStages]float64

// tableau is a Radau IIA method of s stages (Hairer & Wanner II, IV.5 and IV.8):
// collocation at the zeros c of P_{s−1} − P_s on [0, 1], order 2s − 1.
type tableau struct {
	s       int
	c       [maxStages]float64
	a       square             // a_ij = ∫₀^{c_i} ℓ_j; its last row is the weights b
	bary    [maxStages]float64 // 1/Π_{m≠j}(c_j − c_m)
	t, tinv square             // a⁻¹ = t Λ t⁻¹; last row of t: 1, 1, 0, 1, 0

	// Λ is γ, then blocks [α β; −β α].
	gamma       float64
	alpha, beta [maxStages / 2]float64

	errWeights [maxStages]float64 // of the stage increments in the error estimate
	iterations int                // Newton iterations allowed
}

// The tables are computed once and never changed.
var (
	radau3 = sync.OnceValue(func() *tableau { return newTableau(3) })
	radau5 = sync.OnceValue(func() *tableau { return newTableau(5) })
)

func newTableau(s int) *tableau {
	tab := &tableau{s: s, iterations: 7 + 5*(s-3)/2}
	tab.setNodes()
	tab.setWeights()
	inverse := mat.NewDense(s, s, nil)
	if err := inverse.Inverse(tab.dense(&tab.a)); err != nil {
		panic(fmt.Sprintf("ode: collocation matrix of %d stages: %v", s, err))
	}
	tab.diagonalise(inverse)
	tab.setErrWeights(inverse)
	return tab
}

func (tab *tableau) dense(m *square) *mat.Dense {
	d := mat.NewDense(tab.s, tab.s, nil)
	for i := range tab.s {
		d.SetRow(i, m[i][:tab.s])
	}
	return d
}

// setNodes finds the zeros of P_{s−1}(x) − P_s(x), x = 2c − 1, by Newton's method
// from those of the Chebyshev polynomial of the same kind.
func (tab *tableau) setNodes() {
	s := tab.s
	tab.c[s-1] = 1
	for k := 1; k < s; k++ {
		x := math.Cos(2 * math.Pi * float64(k) / float64(2*s-1))
		for range 20 {
			p0, p1, d0, d1 := 1.0, x, 0.0, 1.0
			for m := 1; m < s; m++ {
				fm := float64(m)
				p0, p1 = p1, ((2*fm+1)*x*p1-fm*p0)/(fm+1)
				d0, d1 = d1, d0+(2*fm+1)*p0
			}
			x -= (p0 - p1) / (d0 - d1)
		}
		tab.c[s-1-k] = (1 + x) / 2
	}
}

// setWeights integrates the Lagrange polynomials with a Gauss rule that is exact
// for their degree.
func (tab *tableau) setWeights() {
	for j, cj := range tab.c[:tab.s] {
		tab.bary[j] = 1
		for m, cm := range tab.c[:tab.s] {
			if m != j {
				tab.bary[j] /= cj - cm
			}
		}
	}
	for i, ci := range tab.c[:tab.s] {
		tab.integrals(ci, tab.a[i][:tab.s])
	}
}

// integrals writes ∫₀^θ ℓ_j to w, with ℓ_j the Lagrange polynomials of the nodes.
func (tab *tableau) integrals(theta float64, w []float64) {
	clear(w)
	var x, g [(maxStages + 1) / 2]float64
	m := (tab.s + 1) / 2
	quad.Legendre{}.FixedLocations(x[:m], g[:m], 0, theta)
	for q := range m {
		for j := range tab.s {
			l := tab.bary[j] * g[q]
			for k, ck := range tab.c[:tab.s] {
				if k != j {
					l *= x[q] - ck
				}
			}
			w[j] += l
		}
	}
}

// basis writes to w the values at θ of the Lagrange polynomials that are 1 at
// c_j and 0 at the other nodes and at 0: the collocation polynomial is
// y₀ + Σ w_j z_j.
func (tab *tableau) basis(theta float64, w []float64) {
	for j, cj := range tab.c[:tab.s] {
		l := tab.bary[j] * theta / cj
		for k, ck := range tab.c[:tab.s] {
			if k != j {
				l *= theta - ck
			}
		}
		w[j] = l
	}
}

// diagonalise fills t, t⁻¹ and Λ from the eigenvectors of a⁻¹, scaled to 1 in
// their last component so that y₁ − y₀ is a plain sum.
func (tab *tableau) diagonalise(inverse *mat.Dense) {
	s := tab.s
	var eig mat.Eigen
	if !eig.Factorize(inverse, mat.EigenRight) {
		panic(fmt.Sprintf("ode: no eigenvalues of the collocation matrix of %d stages", s))
	}
	var vectors mat.CDense
	eig.VectorsTo(&vectors)
	pair := 0
	for k, lambda := range eig.Values(nil) {
		scale := 1 / vectors.At(s-1, k)
		switch {
		case imag(lambda) == 0:
			tab.gamma = real(lambda)
			for i := range s {
				tab.t[i][0] = real(vectors.At(i, k) * scale)
			}
		case imag(lambda) > 0:
			tab.alpha[pair], tab.beta[pair] = real(lambda), imag(lambda)
			for i := range s {
				v := vectors.At(i, k) * scale
				tab.t[i][1+2*pair], tab.t[i][2+2*pair] = real(v), imag(v)
			}
			pair++
		}
	}
	var tinv mat.Dense
	if err := tinv.Inverse(tab.dense(&tab.t)); err != nil {
		panic(fmt.Sprintf("ode: eigenvectors of the collocation matrix of %d stages: %v", s, err))
	}
	for i := range s {
		copy(tab.tinv[i][:s], tinv.RawRowView(i))
	}
}

// setErrWeights makes the embedded formula of order s that uses f(t₀, y₀) with
// the weight γ₀ = 1/γ (Hairer & Wanner II, IV.8): the differences d = b̂ − b satisfy
// Σ d_i c_i^{k−1} = −γ₀ δ_{k1}, k = 1…s, and the estimate, divided by γ₀h, is
// f₀ + Σ (γ dᵀa⁻¹)_i z_i/h before filtering.
func (tab *tableau) setErrWeights(inverse *mat.Dense) {
	s := tab.s
	moments := mat.NewDense(s, s, nil)
	for k := range s {
		for i := range s {
			moments.Set(k, i, math.Pow(tab.c[i], float64(k)))
		}
	}
	rhs := mat.NewVecDense(s, nil)
	rhs.SetVec(0, -1) // −γ₀, times γ
	var d, e mat.VecDense
	if err := d.SolveVec(moments, rhs); err != nil {
		panic(fmt.Sprintf("ode: error weights of %d stages: %v", s, err))
	}
	e.MulVec(inverse.T(), &d)
	for i := range s {
		tab.errWeights[i] = e.AtVec(i)
	}
}
