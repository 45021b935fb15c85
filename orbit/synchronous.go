package orbit

import "math"

// SynchronousTide is the tide that the central body raises in one orbiter
// which turns synchronously, without obliquity. Its mode sum is
//
//	P = (G M² R⁵ n/a⁶) Σ_{j≥1} S_j(e) K(jn),   dE = −P, dL = 0,
//
// so dΛ = dΓ = −P/n: the torque of the sum itself is balanced by the permanent
// figure of the orbiter (Peale & Cassen 1978, Icarus 36, 245). n is the Kepler
// value √(μ/a³). The number of harmonics is chosen from e.
type SynchronousTide struct {
	m     *member
	scale float64 // G M² R⁵/(a₀⁶ Λ0), 1/s
	h     *Harmonics
	dk, k []float64
}

// NewSynchronousTide returns the tide in member k of the group, a body of that
// radius, m, whose response has that many states.
func NewSynchronousTide(g Group, k int, p Primary, radius float64, states int) *SynchronousTide {
	m := g.member(k)
	return &SynchronousTide{
		m:     m,
		scale: G * p.Mass * p.Mass * math.Pow(radius, 5) / math.Pow(m.a, 6) / m.ref,
		h:     NewHarmonics(), dk: make([]float64, states),
	}
}

// Kick fills t with the tide at l = Λ/Λ0 − 1 and g = Γ/Λ0:
//
//	Raise = −2gγ, Pump = −γ,   γ = P/(2g n Λ0),
//
// and, if derivs, with every derivative. Outside the domain of the
// eccentricity functions it fills t with NaN.
func (s *SynchronousTide) Kick(l, g float64, r Response, t *Kick, derivs bool) {
	p := 1 / (1 + l)
	ratio := g * p
	at := s.h.synchronousValues
	if derivs {
		at = s.h.SynchronousAt
	}
	if !at(ratio * (2 - ratio)) {
		t.Raise, t.Pump = math.NaN(), math.NaN()
		return
	}
	n := s.m.n * p * p * p
	p6 := p * p * p * p * p * p
	scale := s.scale * p6 * p6
	shape := 0.5 * (2 - ratio) * p // e²/(2g)
	if !derivs {
		for len(s.k) < s.h.Order {
			s.k = append(s.k, 0)
		}
		k := s.k[:s.h.Order]
		r.Harmonics(n, k)
		sum := 0.0
		for j, kj := range k {
			sum += s.h.synchronous[j] * kj
		}
		gamma := scale * shape * sum
		t.Raise, t.Pump = -2*g*gamma, -gamma
		return
	}
	for i := range t.PumpX {
		t.PumpX[i] = 0
	}
	var sum, sumE, sumN float64 // Σ s_j K and its derivatives to e² and n
	for j := 1; j <= s.h.Order; j++ {
		f := float64(j)
		sj, ds := s.h.Synchronous(j)
		k, dw := r.KDerivs(f*n, s.dk)
		sum += sj * k
		sumE += ds * k
		sumN += sj * f * dw
		for i, d := range s.dk {
			t.PumpX[i] += sj * d
		}
	}
	gamma := scale * shape * sum
	ratioU, ratioG := -ratio*p, p
	eU, eG := (2-2*ratio)*ratioU, (2-2*ratio)*ratioG
	shapeU, shapeG := 0.5*(-ratioU-(2-ratio)*p)*p, -0.5*ratioG*p
	gammaU := -12*p*gamma + scale*(shapeU*sum+shape*(sumE*eU-3*n*p*sumN))
	gammaG := scale * (shapeG*sum + shape*sumE*eG)
	t.Raise, t.RaiseU, t.RaiseG = -2*g*gamma, -2*g*gammaU, -2*(gamma+g*gammaG)
	t.Pump, t.PumpU, t.PumpG = -gamma, -gammaU, -gammaG
	for i, d := range t.PumpX {
		t.PumpX[i] = -scale * shape * d
		t.RaiseX[i] = 2 * g * t.PumpX[i]
	}
}

// ModeHeat returns P, W: the heat of the mode sum in the orbiter before the
// small correction of apsidal drift, at the actions and kick last computed.
func (s *SynchronousTide) ModeHeat(l, g float64, t *Kick) float64 {
	p := 1 / (1 + l)
	return -t.Raise * s.m.ref * s.m.n * p * p * p
}
