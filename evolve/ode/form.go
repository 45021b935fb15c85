package ode

// form is the polynomial of a method over a step,
//
//	y(t₀ + θh) = y₀ + Σ_j w_j(θ) z_j,
//
// z_j being vectors of the step. Integrands are sampled, and changes of sign looked
// for, at its nodes.
type form struct {
	nodes
	terms  int
	weight func(theta float64, w []float64)
	atNode [maxNodes][]float64 // w at the nodes
	total  []float64           // weights of the integrands for the whole step
}

func newForm(nd nodes, terms int, weight func(theta float64, w []float64)) *form {
	f := &form{nodes: nd, terms: terms, weight: weight, total: make([]float64, nd.s)}
	for j, c := range nd.c[:nd.s] {
		f.atNode[j] = make([]float64, terms)
		weight(c, f.atNode[j])
	}
	nd.integrals(1, f.total)
	return f
}

// newCollocationForm has the increments at the nodes for terms.
func newCollocationForm(nd nodes) *form {
	f := newForm(nd, nd.s, nd.basis)
	for j := range nd.s {
		clear(f.atNode[j]) // of rounding
		f.atNode[j][j] = 1
	}
	return f
}
