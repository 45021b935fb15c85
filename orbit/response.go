package orbit

// Response is how a body answers a forcing at frequency w, rad/s: the seam
// between orbits and interiors.
//
//	K(ω) = −Im k₂(ω), dimensionless, odd in ω, positive for ω > 0, K(0) = 0.
//
// Harmonics writes K at n, 2n, 3n, … into k, for n > 0: a body that responds to
// several harmonics of one motion can share most of the work. KDerivs also
// returns dK/dω, s, and writes the derivatives to the body's own state variables
// into dx, which has one place for each of them.
type Response interface {
	K(w float64) float64
	Harmonics(n float64, k []float64)
	KDerivs(w float64, dx []float64) (k, dw float64)
}
