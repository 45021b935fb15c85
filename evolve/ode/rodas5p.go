package ode

import "sync"

const rosenbrockStages = 8

// rosenbrock is a method in the form that needs no product with the Jacobian
// (Hairer & Wanner II, IV.7): for i = 1…s
//
//	(1/(hγ) − J) u_i = f(t + α_i h, y + Σ a_ij u_j) + Σ (c_ij/h) u_j + h γ_i ∂f/∂t,
//
// J and ∂f/∂t at (t, y). The last two stages continue the one before,
// Y_i = Y_{i−1} + u_{i−1}; y₁ = Y_s + u_s, and u_s is the error estimate.
type rosenbrock struct {
	gamma  float64
	alpha  [rosenbrockStages]float64
	gammas [rosenbrockStages]float64 // γ_i = γ + Σ γ_ij
	a, c   [rosenbrockStages][]weighted
	order  float64 // of the step; that of the estimate is one less
	dense  [3][]weighted
	form   *form
}

// rodas5P is the method Rodas5P of Steinebach 2023, BIT Numer. Math. 63, 27: order
// 5, the embedded one 4 and the dense output 4, stiffly accurate, L-stable.
//
// The dense output is, with Δ = y₁ − y₀ and k_l = Σ_j dense_lj u_j,
//
//	y(t₀ + θh) = y₀ + θΔ + θ(1 − θ)(k₁ + θ(k₂ + θk₃)).
var rodas5P = sync.OnceValue(func() *rosenbrock {
	m := &rosenbrock{
		gamma: 0.21193756319429014,
		order: 5,
		alpha: [...]float64{0, 0.6358126895828704, 0.4095798393397535, 0.9769306725060716, 0.4288403609558664, 1, 1, 1},
		gammas: [...]float64{0.21193756319429014, -0.42387512638858027, -0.3384627126235924,
			1.8046452872882734, 2.325825639765069, 0, 0, 0},
	}
	for i, row := range [rosenbrockStages][]float64{
		1: {3},
		2: {2.849394379747939, 0.45842242204463923},
		3: {-6.954028509809101, 2.489845061869568, -10.358996098473584},
		4: {2.8029986275628964, 0.5072464736228206, -0.3988312541770524, -0.04721187230404641},
		5: {-7.502846399306121, 2.561846144803919, -11.627539656261098, -0.18268767659942256, 0.030198172008377946},
	} {
		m.a[i] = sparse(row)
	}
	for i, row := range [rosenbrockStages][]float64{
		1: {-14.155112264123755},
		2: {-17.97296035885952, -2.859693295451294},
		3: {147.12150275711716, -1.41221402718213, 71.68940251302358},
		4: {165.43517024871676, -0.4592823456491126, 42.90938336958603, -5.961986721573306},
		5: {24.854864614690072, -3.0009227002832186, 47.4931110020768, 5.5814197821558125, -0.6610691825249471},
		6: {30.91273214028599, -3.1208243349937974, 77.79954646070892, 34.28646028294783, -19.097331116725623,
			-28.087943162872662},
		7: {37.80277123390563, -3.2571969029072276, 112.26918849496327, 66.9347231244047, -40.06618937091002,
			-54.66780262877968, -9.48861652309627},
	} {
		m.c[i] = sparse(row)
	}
	for l, row := range [...][]float64{
		{25.948786856663858, -2.5579724845846235, 10.433815404888879, -2.3679251022685204, 0.524948541321073,
			1.1241088310450404, 0.4272876194431874, -0.17202221070155493},
		{-9.91568850695171, -0.9689944594115154, 3.0438037242978453, -24.495224566215796, 20.176138334709044,
			15.98066361424651, -6.789040303419874, -6.710236069923372},
		{11.419903575922262, 2.8879645146136994, 72.92137995996029, 80.12511834622643, -52.072871366152654,
			-59.78993625266729, -0.15582684282751913, 4.883087185713722},
	} {
		m.dense[l] = sparse(row)
	}
	// The integral of an integrand known to h⁵ needs a quadrature of order ≥ 5 and
	// as many nodes as keep it at h⁵ inside the step.
	m.form = newForm(newNodes(4), 4, func(theta float64, w []float64) {
		w[0] = theta
		w[1] = theta * (1 - theta)
		w[2] = w[1] * theta
		w[3] = w[2] * theta
	})
	return m
})
