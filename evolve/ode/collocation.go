package ode

import (
	"fmt"
	"math"
	"sync"

	"gonum.org/v1/gonum/mat"
)

const maxStages = 5

type square [maxStages][maxStages]float64

// tableau is a Radau IIA method of s stages (Hairer & Wanner II, IV.5 and IV.8):
// collocation at the zeros c of P_{s−1} − P_s on [0, 1], order 2s − 1.
type tableau struct {
	nodes
	form    *form
	a       square // a_ij = ∫₀^{c_i} ℓ_j; its last row is the weights b
	t, tinv square // a⁻¹ = t Λ t⁻¹; last row of t: 1, 1, 0, 1, 0

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
	tab := &tableau{nodes: newNodes(s), iterations: 7 + 5*(s-3)/2}
	tab.form = newCollocationForm(tab.nodes)
	for i, ci := range tab.c[:s] {
		tab.integrals(ci, tab.a[i][:s])
	}
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
