package orbit

import (
	"math"

	"gonum.org/v1/gonum/dsp/fourier"
)

// Hansen returns the Hansen coefficient
//
//	X_k^{n,m}(e) = (1/2π) ∫ (r/a)^n e^{imf} e^{−ikM} dM,
//
// f and M the true and mean anomaly, by the trapezoidal rule in eccentric
// anomaly, which converges geometrically. points is the number of nodes; 400
// give 1e-15 for e ≤ 0.6 and |k| ≤ 12. Kaula's G_2pq(e) is
// X^{−3, 2−2p}_{2−2p+q}(e) (Kaula 1966, Theory of Satellite Geodesy).
func Hansen(n, m, k int, e float64, points int) float64 {
	sum := 0.0
	for i := 0; i < points; i++ {
		s, c := math.Sincos(2 * math.Pi * float64(i) / float64(points))
		r := 1 - e*c
		f := math.Atan2(math.Sqrt(1-e*e)*s, c-e)
		M := 2*math.Pi*float64(i)/float64(points) - e*s
		sum += math.Pow(r, float64(n+1)) * math.Cos(float64(m)*f-float64(k)*M)
	}
	return sum / float64(points)
}

// tidalHarmonics returns the Fourier coefficients in mean anomaly of the two
// functions a planar quadrupole tide needs: wave[k] = X_k^{−3,2} for
// k = −len/2…len/2−1 (negative k wrapped to the end) and breath[k] = X_k^{−3,0}.
// points is a power of two, well above twice the highest harmonic wanted.
func tidalHarmonics(e float64, points int) (wave, breath []float64) {
	w := make([]complex128, points)
	b := make([]complex128, points)
	root := math.Sqrt(1 - e*e)
	for i := range w {
		s, c := math.Sincos(eccentricAnomaly(2*math.Pi*float64(i)/float64(points), e))
		r := 1 - e*c
		cosf, sinf := (c-e)/r, root*s/r
		cube := 1 / (r * r * r)
		w[i] = complex(cube*(cosf*cosf-sinf*sinf), cube*2*cosf*sinf)
		b[i] = complex(cube, 0)
	}
	fft := fourier.NewCmplxFFT(points)
	w, b = fft.Coefficients(nil, w), fft.Coefficients(nil, b)
	wave, breath = make([]float64, points), make([]float64, points)
	for i := range w {
		// r is even and f odd in M, so every coefficient is real.
		wave[i] = real(w[i]) / float64(points)
		breath[i] = real(b[i]) / float64(points)
	}
	return wave, breath
}

// eccentricAnomaly solves E − e sin E = M for 0 ≤ M < 2π, 0 ≤ e < 1, to
// rounding. Newton's method from M + e·sign(sin M)·min(1, …) is monotone; 30
// iterations bound it.
func eccentricAnomaly(M, e float64) float64 {
	E := M
	switch {
	case M == 0:
		return 0
	case M < math.Pi:
		E += e
	case M > math.Pi:
		E -= e
	}
	for i := 0; i < 30; i++ {
		s, c := math.Sincos(E)
		step := (E - e*s - M) / (1 - e*c)
		E -= step
		if math.Abs(step) < 1e-15 {
			break
		}
	}
	return E
}
