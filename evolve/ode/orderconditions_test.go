package ode

import (
	"fmt"
	"math"
	"testing"

	"gonum.org/v1/gonum/mat"
)

// rootedTree is the list of the branches at its root.
type rootedTree []rootedTree

func (t rootedTree) order() int {
	n := 1
	for _, b := range t {
		n += b.order()
	}
	return n
}

// density is γ(t), the order times the densities of the branches.
func (t rootedTree) density() float64 {
	d := float64(t.order())
	for _, b := range t {
		d *= b.density()
	}
	return d
}

// rootedTrees returns the trees of every order up to most; [n] is of order n.
func rootedTrees(most int) [][]rootedTree {
	trees := [][]rootedTree{nil, {rootedTree{}}}
	// grow adds branches that come at or before place `last` of order `size`.
	var grow func(n int, branches rootedTree, rest, size, last int) []rootedTree
	grow = func(n int, branches rootedTree, rest, size, last int) []rootedTree {
		if rest == 0 {
			return []rootedTree{append(rootedTree(nil), branches...)}
		}
		var all []rootedTree
		for s := min(size, rest); s >= 1; s-- {
			top := len(trees[s]) - 1
			if s == size {
				top = min(top, last)
			}
			for k := top; k >= 0; k-- {
				all = append(all, grow(n, append(branches, trees[s][k]), rest-s, s, k)...)
			}
		}
		return all
	}
	for n := 2; n <= most; n++ {
		trees = append(trees, grow(n, nil, n-1, n-1, math.MaxInt))
	}
	return trees
}

// The numbers of rooted trees (Hairer, Nørsett & Wanner I, table II.2.1; Sloane's
// A000081).
func TestRootedTrees(t *testing.T) {
	for n, want := range []int{0, 1, 1, 2, 4, 9, 20, 48, 115, 286} {
		if got := len(rootedTrees(9)[n]); got != want {
			t.Errorf("%d trees of order %d, want %d", got, n, want)
		}
	}
}

// rungeKutta holds the coefficients of a Runge–Kutta method (β = α) or, with
// β = α + (γ_ij), of a Rosenbrock one.
type rungeKutta struct {
	s           int
	alpha, beta [][]float64
}

// stageWeights returns Φ_j(t), the elementary weight of stage j: single branches
// go by β, several by α (Hairer & Wanner II, IV.7, theorem 7.4).
func (m rungeKutta) stageWeights(t rootedTree) []float64 {
	v := make([]float64, m.s)
	for j := range v {
		v[j] = 1
	}
	a := m.alpha
	if len(t) == 1 {
		a = m.beta
	}
	for _, branch := range t {
		w := m.stageWeights(branch)
		for j := range v {
			sum := 0.0
			for k, x := range w {
				sum += a[j][k] * x
			}
			v[j] *= sum
		}
	}
	return v
}

// defect returns the largest |Σ b_j Φ_j(t) − θ^n/γ(t)| over the trees of order n.
func (m rungeKutta) defect(b []float64, theta float64, trees []rootedTree) float64 {
	worst := 0.0
	for _, tree := range trees {
		sum := -math.Pow(theta, float64(tree.order())) / tree.density()
		for j, phi := range m.stageWeights(tree) {
			sum += b[j] * phi
		}
		worst = max(worst, math.Abs(sum))
	}
	return worst
}

func square0(s int) [][]float64 {
	m := make([][]float64, s)
	for i := range m {
		m[i] = make([]float64, s)
	}
	return m
}

func spread(s int, row []weighted) []float64 {
	v := make([]float64, s)
	for _, w := range row {
		v[w.stage] = w.weight
	}
	return v
}

// radauCoefficients: b(θ) is the integral of the polynomials through the nodes.
func radauCoefficients(tab *tableau) (m rungeKutta, dense func(theta float64) []float64) {
	s := tab.s
	m = rungeKutta{s: s, alpha: square0(s)}
	for i := range s {
		copy(m.alpha[i], tab.a[i][:s])
	}
	m.beta = m.alpha
	return m, func(theta float64) []float64 { return combineRows(tab.form, theta, m.alpha) }
}

// combineRows returns Σ_j w_j(θ) rows_j of a form's weights.
func combineRows(f *form, theta float64, rows [][]float64) []float64 {
	w := make([]float64, f.terms)
	f.weight(theta, w)
	b := make([]float64, len(rows[0]))
	for j, row := range rows {
		for k, a := range row {
			b[k] += w[j] * a
		}
	}
	return b
}

// rosenbrockCoefficients undoes u = Γ k: Γ = (1/γ − c)⁻¹, α = aΓ.
func rosenbrockCoefficients(tab *rosenbrock) (m rungeKutta, b, embedded []float64, gamma [][]float64, dense func(theta float64) []float64) {
	const s = rosenbrockStages
	inverse := mat.NewDense(s, s, nil)
	a := square0(s)
	for i := range s {
		for _, c := range tab.c[i] {
			inverse.Set(i, c.stage, -c.weight)
		}
		inverse.Set(i, i, 1/tab.gamma)
		if copy(a[i], spread(s, tab.a[i])); tab.a[i] == nil && i > 0 {
			copy(a[i], a[i-1])
			a[i][i-1] = 1
		}
	}
	var g mat.Dense
	if err := g.Inverse(inverse); err != nil {
		panic(err)
	}
	timesGamma := func(u []float64) []float64 {
		var v mat.VecDense
		v.MulVec(g.T(), mat.NewVecDense(s, u))
		return v.RawVector().Data
	}
	m = rungeKutta{s: s, alpha: square0(s), beta: square0(s)}
	gamma = square0(s)
	for i := range s {
		copy(m.alpha[i], timesGamma(a[i]))
		copy(gamma[i], g.RawRowView(i))
		for j := range s {
			m.beta[i][j] = m.alpha[i][j] + gamma[i][j]
		}
	}
	last := append([]float64(nil), a[s-1]...)
	embedded = timesGamma(last)
	last[s-1] = 1
	b = timesGamma(last)
	rows := [][]float64{b}
	for _, d := range tab.dense {
		rows = append(rows, timesGamma(spread(s, d)))
	}
	return m, b, embedded, gamma, func(theta float64) []float64 { return combineRows(tab.form, theta, rows) }
}

// dop853Coefficients: the terms of the polynomial in the stages, over h.
func dop853Coefficients(tab *explicitPair) (m rungeKutta, b []float64, dense func(theta float64) []float64) {
	const s, end = dop853Extended, dop853Stages
	m = rungeKutta{s: s, alpha: square0(s)}
	for i := range s {
		copy(m.alpha[i], spread(s, tab.a[i]))
	}
	m.beta = m.alpha
	b = m.alpha[end]
	rows := square0(s)[:3]
	for j, w := range b {
		rows[0][j], rows[1][j], rows[2][j] = w, -w, 2*w
	}
	rows[1][0]++
	rows[2][0]--
	rows[2][end]--
	for _, d := range tab.dense {
		rows = append(rows, spread(s, d))
	}
	return m, b, func(theta float64) []float64 { return combineRows(tab.form, theta, rows) }
}

// The order conditions Σ b_j Φ_j(t) = θ^n/γ(t) hold for every rooted tree of
// n ≤ order vertices, and not for all of one more (Hairer, Nørsett & Wanner I, II.2;
// Hairer & Wanner II, IV.7), for each method, its embedded formulas and its dense
// output: this proves the tables.
func TestOrderConditions(t *testing.T) {
	type conditions struct {
		name     string
		m        rungeKutta
		dense    func(theta float64) []float64
		at       []float64
		order    int
		rounding float64
	}
	ends, inside := []float64{1}, []float64{0.1, 0.35, 0.6, 0.85}
	fixed := func(b []float64) func(float64) []float64 { return func(float64) []float64 { return b } }
	minus := func(b, d []float64) []float64 {
		r := append([]float64(nil), b...)
		for i := range d {
			r[i] -= d[i]
		}
		return r
	}
	var list []conditions
	// Rounding: sums of terms no larger than 1, some tens of them: 1e-14.
	for _, tab := range []*tableau{radau3(), radau5()} {
		m, dense := radauCoefficients(tab)
		name := fmt.Sprintf("Radau, %d stages", tab.s)
		list = append(list,
			conditions{name, m, dense, ends, 2*tab.s - 1, tableRounding},
			conditions{name + ", dense", m, dense, inside, tab.s, tableRounding})
	}
	{
		// The dense weights reach 100, and c with a cancels a factor 100.
		m, b, embedded, _, dense := rosenbrockCoefficients(rodas5P())
		list = append(list,
			conditions{"Rosenbrock", m, fixed(b), ends, 5, 10 * tableRounding},
			conditions{"Rosenbrock, embedded", m, fixed(embedded), ends, 4, 10 * tableRounding},
			conditions{"Rosenbrock, dense at the end", m, dense, ends, 5, 100 * tableRounding},
			conditions{"Rosenbrock, dense", m, dense, inside, 4, 100 * tableRounding})
	}
	{
		// Coefficients reach 43, and those of the dense output 528.
		m, b, dense := dop853Coefficients(dop853())
		e5, e3 := spread(m.s, dop853().e5), spread(m.s, dop853().e3)
		list = append(list,
			conditions{"DOP853", m, fixed(b), ends, 8, 10 * tableRounding},
			conditions{"DOP853, fifth-order estimate", m, fixed(minus(b, e5)), ends, 5, 10 * tableRounding},
			conditions{"DOP853, third-order estimate", m, fixed(minus(b, e3)), ends, 3, 10 * tableRounding},
			conditions{"DOP853, dense at the end", m, dense, ends, 8, 100 * tableRounding},
			conditions{"DOP853, dense", m, dense, inside, 7, 100 * tableRounding})
	}
	trees := rootedTrees(10)
	for _, f := range list {
		for _, theta := range f.at {
			b := f.dense(theta)
			for n := 1; n <= f.order; n++ {
				if d := f.m.defect(b, theta, trees[n]); d > f.rounding {
					t.Errorf("%s, θ = %g: order %d fails by %g", f.name, theta, n, d)
				}
			}
			beyond := f.m.defect(b, theta, trees[f.order+1])
			t.Logf("%s, θ = %g: order %d, next defect %.1e", f.name, theta, f.order, beyond)
			// Far above rounding: a table of that order would be another method.
			if beyond < 1e-9 {
				t.Errorf("%s, θ = %g: order %d holds too (%g)", f.name, theta, f.order+1, beyond)
			}
		}
	}
}

// The abscissae are the row sums of α, and γ_i those of Γ. The method is stiffly
// accurate, b = β_s, from which R(∞) = 0 follows (Hairer & Wanner II, IV.7). The
// sums cancel terms of up to 150: 150 roundings.
func TestRosenbrockTable(t *testing.T) {
	tab := rodas5P()
	m, b, _, gamma, _ := rosenbrockCoefficients(tab)
	for i := range m.s {
		alphas, gammas := 0.0, 0.0
		for j := range m.s {
			alphas += m.alpha[i][j]
			gammas += gamma[i][j]
		}
		if math.Abs(alphas-tab.alpha[i]) > 10*tableRounding || math.Abs(gammas-tab.gammas[i]) > 10*tableRounding {
			t.Errorf("stage %d: row sums of α and Γ %g and %g, table %g and %g", i, alphas, gammas, tab.alpha[i], tab.gammas[i])
		}
		if d := math.Abs(b[i] - m.beta[m.s-1][i]); d > 10*tableRounding {
			t.Errorf("b[%d] differs from the last row of β by %g", i, d)
		}
	}
}

// A-stability of Rodas5P: |R(iy)| ≤ 1 on the imaginary axis, R having its only
// pole, 1/γ, on the right; by R(z) = 1 + z bᵀ(1 − zβ)⁻¹1. With R(∞) = 0 it is
// L-stable (Hairer & Wanner II, IV.3).
func TestRosenbrockStability(t *testing.T) {
	m, b, _, _, _ := rosenbrockCoefficients(rodas5P())
	r := func(z complex128) complex128 {
		// β is lower triangular.
		var v [rosenbrockStages]complex128
		sum := complex(1, 0)
		for i := range m.s {
			v[i] = 1
			for j := range i {
				v[i] += z * complex(m.beta[i][j], 0) * v[j]
			}
			v[i] /= 1 - z*complex(m.beta[i][i], 0)
			sum += z * complex(b[i], 0) * v[i]
		}
		return sum
	}
	worst := 0.0
	for k := -300; k <= 500; k++ {
		z := r(complex(0, math.Pow(10, float64(k)/100)))
		worst = max(worst, math.Hypot(real(z), imag(z)))
	}
	// Rounding: elementary factors of up to 150 with eight stages.
	if worst > 1+1e-12 {
		t.Errorf("|R| reaches %.15g on the imaginary axis", worst)
	}
	for _, z := range []complex128{-1e6, -1e8, complex(0, 1e8)} {
		// Decays like 1/|z|, with the rounding of b times z over z.
		v := r(z)
		if size := math.Hypot(real(v), imag(v)); size > 1e-4 {
			t.Errorf("|R(%v)| = %g, want it to vanish", z, size)
		}
	}
}
