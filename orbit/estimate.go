package orbit

import "math"

// SteadyHeat returns the power, W, that a chain dissipates once its resonance
// is steady, every orbit expanding together under the circular torques T_k
// (N m) of the central body:
//
//	H_eq = Σ n_k T_k − (Σ T_k)(Σ n_k L_k)/(Σ L_k),   L_k = m_k √(G M a_k)
//
// to lowest order in eccentricity (Lissauer, Peale & Cuzzi 1984, Icarus 58,
// 159; Meyer & Wisdom 2007, Icarus 188, 535). Axes in m, motions in rad/s.
func SteadyHeat(centralMass float64, masses, axes, motions, torques []float64) float64 {
	var power, torque, nl, l float64
	for k, m := range masses {
		lk := m * math.Sqrt(G*centralMass*axes[k])
		power += motions[k] * torques[k]
		torque += torques[k]
		nl += motions[k] * lk
		l += lk
	}
	return power - torque*nl/l
}

// CircularTorque returns (3/2)(k2/Q) G m² R_c⁵/a⁶, N m.
func (p Primary) CircularTorque(k2OverQ, mass, a float64) float64 {
	return k2OverQ * p.torqueScale(mass, a)
}

// Stretch is the mechanical bound on what an eccentric orbit can dissipate in
// a body: all the work that is cycled, most of which returns elastically.
type Stretch struct {
	ForceSwing   float64 // change of the tidal force between pericentre and apocentre, N
	Displacement float64 // mean displacement of the rock, m
	Power        float64 // ForceSwing · Displacement per half orbit, W
}

// StretchWork returns the bound for a body of that mass and radius at
// semi-major axis a, eccentricity e and orbital period (SI). The tidal force
// is its gradient 2GMm/r³ times the diameter. A displacement of 0 takes half
// of the fluid surface's h(M/m)(R/a)³R·6e with h = 2.5. (Common practice, no
// source.)
func (p Primary) StretchWork(mass, radius, a, e, period, displacement float64) Stretch {
	near, far := a*(1-e), a*(1+e)
	swing := 2 * G * p.Mass * mass * 2 * radius * (1/(near*near*near) - 1/(far*far*far))
	if displacement == 0 {
		const fluidLove = 2.5
		r := radius / a
		displacement = 0.5 * fluidLove * p.Mass / mass * r * r * r * radius * 6 * e
	}
	return Stretch{ForceSwing: swing, Displacement: displacement, Power: swing * displacement / (period / 2)}
}
