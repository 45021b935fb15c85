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
