package orbit

import "math"

// member is one orbiter's part of the Hamiltonian, in deviation form about a
// reference Λ₀: u = Λ/Λ₀ = 1 + l, g = Γ/Λ₀.
//
//	H/Λ₀ = −(n₀/2) u⁻² − b u⁻³(u − g)⁻³,   b = G M β J₂ R_c²/(2 a₀³ Λ₀)
//
// The first term is Kepler's, the second the oblateness averaged over the
// orbit, −(G M β J₂ R_c²/2a³)(1 − Γ/Λ)⁻³.
type member struct {
	mass float64 // kg
	beta float64 // reduced mass mM/(M+m), kg
	mu   float64 // G(M+m), m³ s⁻²
	ref  float64 // Λ₀ = β√(μ a₀), kg m² s⁻¹
	n    float64 // n₀ = μ²β³/Λ₀³, the Kepler mean motion, rad/s
	a    float64 // a₀, m
	b    float64 // rad/s
	push float64 // (3/2) G m² R_c⁵/a₀⁶ / Λ₀: the central torque per k2/Q, 1/s
}

func newMember(p Primary, mass, a float64) member {
	m := member{mass: mass, a: a}
	m.beta = mass * p.Mass / (p.Mass + mass)
	m.mu = G * (p.Mass + mass)
	m.ref = m.beta * math.Sqrt(m.mu*a)
	m.n = math.Sqrt(m.mu/a) / a
	m.b = G * p.Mass * m.beta * p.J2 * p.Radius * p.Radius / (2 * a * a * a * m.ref)
	m.push = p.torqueScale(mass, a) / m.ref
	return m
}

// kepler returns n − n₀ without cancellation, and n: n = n₀ u⁻³ with u = 1 + l.
func (m *member) kepler(l float64) (dn, n float64) {
	p := 1 / (1 + l)
	dn = m.n * (-l * p) * (1 + p + p*p)
	return dn, m.n + dn
}

// oblate returns the oblateness' parts of dλ/dt = ∂H/∂Λ and of ∂H/∂Γ, rad/s.
func (m *member) oblate(u, g float64) (rate, slope float64) {
	v := 1 / (u - g)
	w := 1 / u
	c := 3 * m.b * w * w * w * v * v * v
	return c * (w + v), -c * v
}

// oblateDerivs returns the derivatives of both to u and to g.
func (m *member) oblateDerivs(u, g float64) (rateU, rateG, slopeU, slopeG float64) {
	v := 1 / (u - g)
	w := 1 / u
	c := 3 * m.b * w * w * w * v * v * v
	rateU = -c * (4*w*w + 6*w*v + 4*v*v)
	rateG = c * (3*w*v + 4*v*v)
	slopeU = c * v * (3*w + 4*v)
	slopeG = -4 * c * v * v
	return
}

// energy returns H(u, g) − H(1, 0 of the Kepler part), J: Kepler's part as a
// deviation, free of cancellation, the oblateness whole.
func (m *member) energy(l, g float64) float64 {
	u := 1 + l
	v := u - g
	return m.ref * (0.5*m.n*l*(2+l)/(u*u) - m.b/(u*u*u*v*v*v))
}

// Elements are an orbit as a practitioner reads it.
type Elements struct {
	SemimajorAxis float64 // a = Λ²/(β²μ), m
	Eccentricity  float64 // e = √(1 − (1 − Γ/Λ)²)
	MeanMotion    float64 // dλ/dt = ∂H/∂Λ, rad/s: misses Kepler's third law by O(J₂)
	KeplerMotion  float64 // √(μ/a³), rad/s: the n of the tidal frequencies
}

// eccentricitySquared returns e² = (g/u)(2 − g/u).
func eccentricitySquared(u, g float64) float64 {
	r := g / u
	return r * (2 - r)
}

// KeplerAxis returns the semi-major axis (G(M+m))^{1/3} (P/2π)^{2/3} of a
// period, m, without the oblateness.
func KeplerAxis(centralMass, mass, period float64) float64 {
	w := period / (2 * math.Pi)
	return math.Cbrt(G * (centralMass + mass) * w * w)
}

// RocheLimit returns the fluid Roche limit 2.44 R_c (ρ_c/ρ)^{1/3}, m, of a
// body of that mass and radius (Roche 1849; common practice).
func (p Primary) RocheLimit(mass, radius float64) float64 {
	return 2.44 * radius * math.Cbrt(p.Mass/mass)
}

// HillRadius returns a(1−e)(m/3M)^{1/3}, m (Hamilton & Burns 1992, Icarus 96, 43).
func (p Primary) HillRadius(mass, a, e float64) float64 {
	return a * (1 - e) * math.Cbrt(mass/(3*p.Mass))
}
