package thermal

// sphere is a homogeneous, incompressible body:
//
//	k₂ = (3/2) J*/(J* + B), B = 19/(2ρgR), 1/Pa
//
// (Love 1911; Munk & MacDonald 1960), so K = −Im k₂ = (3/2) B J″/|J* + B|²
// with J″ = −Im J*.
type sphere struct {
	b float64 // 1/Pa
}

func newSphere(density, gravity, radius float64) sphere {
	return sphere{19 / (2 * density * gravity * radius)}
}

// love returns k₂ at the compliance j, 1/Pa.
func (s sphere) love(j complex128) complex128 { return 1.5 * j / (j + complex(s.b, 0)) }

// response returns K and dk₂/dJ* = (3/2) B/(J* + B)², Pa: a change of the
// compliance by dj changes K by −Im(dk₂/dJ* · dj).
func (s sphere) response(j complex128) (k float64, slope complex128) {
	re, im := real(j)+s.b, imag(j)
	n := 1 / (re*re + im*im)
	re, im = re*n, -im*n // 1/(J* + B)
	return -1.5 * s.b * imag(j) * n, complex(1.5*s.b*(re*re-im*im), 3*s.b*re*im)
}

// turn returns dK for a change dj of the compliance.
func turn(slope, dj complex128) float64 {
	return -(real(slope)*imag(dj) + imag(slope)*real(dj))
}

// HomogeneousLove returns the Love numbers k, h and l of a homogeneous,
// incompressible, self-gravitating sphere at a degree n ≥ 2 (Love 1911; Munk &
// MacDonald 1960), for a complex rigidity mu, Pa, a density, kg/m³, the surface
// gravity, m/s², and the radius, m:
//
//	k = 3/(2(n−1)) / (1 + μ̃),  h = (2n+1)/3 · k,  l = k/n
//
// with the effective rigidity μ̃ = (2n²+4n+3)/n · μ/(ρgR).
func HomogeneousLove(degree int, mu complex128, density, gravity, radius float64) (k, h, l complex128) {
	n := float64(degree)
	stiff := complex((2*n*n+4*n+3)/n/(density*gravity*radius), 0) * mu
	k = complex(1.5/(n-1), 0) / (1 + stiff)
	h = complex((2*n+1)/3, 0) * k
	l = k / complex(n, 0)
	return k, h, l
}
