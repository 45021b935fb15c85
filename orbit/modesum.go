package orbit

// ModeRates are the rates a planar tide gives, in units of the prefactor
// A = G M_B² R⁵/a⁶ of the disturbed body (radius R) and its disturber (mass
// M_B): N m. Multiplied by A, Heat and OrbitPower are in W and the torques in
// N m.
//
//	Heat        Σ c ω K(ω)               made in the disturbed body
//	SpinTorque  Σ c m K(ω)               on its spin
//	OrbitPower  −Σ c (2−2p+q) n K(ω)     dE of the orbit
//	OrbitTorque −Σ c m K(ω)              dL of the orbit
//
// Heat + OrbitPower + SpinTorque·W = 0 and SpinTorque + OrbitTorque = 0.
type ModeRates struct {
	Heat, SpinTorque, OrbitPower, OrbitTorque float64
}

// ModeSum sums the planar quadrupole tide over the harmonics h of one
// eccentricity, for mean motion n and spin rate, rad/s, and any response
// K(ω) = −Im k₂(ω), evaluated once per frequency ω = (2−2p+q)n − mW:
//
//	m = 2: c = ¾ G_20q²,   m = 0: c = ¼ G_21q²
//
// (Kaula 1964, Rev. Geophys. 2, 661; weights as in Boué & Efroimsky 2019,
// CeMDA 131, 30). The rates close to rounding because all come from one table
// of c·K.
func ModeSum(h *Harmonics, n, spin float64, k func(w float64) float64) ModeRates {
	var s ModeRates
	for q := -h.Order; q <= h.Order; q++ {
		f := float64(2 + q)
		c, _ := h.Wave(q)
		w := f*n - 2*spin
		ck := 0.75 * c * k(w)
		s.Heat += w * ck
		s.SpinTorque += 2 * ck
		s.OrbitPower -= f * n * ck
	}
	for q := 1; q <= h.Order; q++ {
		// ±q share a frequency and K is odd, so the two terms are equal.
		c, _ := h.Breath(q)
		w := float64(q) * n
		ck := 0.5 * c * k(w)
		s.Heat += w * ck
		s.OrbitPower -= w * ck
	}
	s.OrbitTorque = -s.SpinTorque
	return s
}
