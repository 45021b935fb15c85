package thermal

// gravitation is the Newtonian constant, m³ kg⁻¹ s⁻², and gasConstant the
// molar gas constant, J mol⁻¹ K⁻¹ (CODATA 2018).
const (
	gravitation = 6.67430e-11
	gasConstant = 8.314462618
)
