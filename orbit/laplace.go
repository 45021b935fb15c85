package orbit

import "math"

// Laplace returns the Laplace coefficient
//
//	b_s^(j)(α) = 2 (s)_j/j! α^j ₂F₁(s, s+j; j+1; α²)
//
// for s > 0, j ≥ 0 and 0 ≤ α < 1, summed until a term no longer counts.
// Source: Brouwer & Clemence 1961, Methods of Celestial Mechanics, ch. 15.
func Laplace(s float64, j int, alpha float64) float64 {
	front := 2.0
	for i := 0; i < j; i++ {
		front *= (s + float64(i)) / float64(i+1) * alpha
	}
	x := alpha * alpha
	sum, term := 1.0, 1.0
	for k := 0; term > sum*1e-17; k++ {
		f := float64(k)
		term *= (s + f) * (s + float64(j) + f) / ((float64(j) + 1 + f) * (1 + f)) * x
		sum += term
	}
	return front * sum
}

// laplaceSlope returns α d/dα of b_{1/2}^(j), from the recurrence
// D b_s^(j) = s (b_{s+1}^(j−1) − 2α b_{s+1}^(j) + b_{s+1}^(j+1)).
func laplaceSlope(j int, alpha float64) float64 {
	below := j - 1
	if below < 0 {
		below = -below
	}
	return alpha * 0.5 * (Laplace(1.5, below, alpha) - 2*alpha*Laplace(1.5, j, alpha) + Laplace(1.5, j+1, alpha))
}

// ExactRatio returns α = a_inner/a_outer = (j/(j+1))^{2/3} at the exact
// (j+1):j commensurability.
func ExactRatio(j int) float64 {
	r := math.Cbrt(float64(j) / float64(j+1))
	return r * r
}

// Coefficients returns f₁ and f₂, the strengths of the inner and the outer
// eccentricity in the first-order (j+1):j term of the disturbing function, at
// exact commensurability:
//
//	f₁ = ½[−2(j+1) − α d/dα] b_{1/2}^(j+1)
//	f₂ = ½[ 2(j+1) − 1 + α d/dα] b_{1/2}^(j)   (2:1: less 1/(2α²), the indirect term)
//
// They are f₂₇ and f₃₁ of Murray & Dermott 1999, Solar System Dynamics,
// app. B. j ≥ 1.
func Coefficients(j int) (f1, f2 float64) {
	alpha := ExactRatio(j)
	p := float64(j + 1)
	f1 = 0.5 * (-2*p*Laplace(0.5, j+1, alpha) - laplaceSlope(j+1, alpha))
	f2 = 0.5 * ((2*p-1)*Laplace(0.5, j, alpha) + laplaceSlope(j, alpha))
	if j == 1 {
		f2 -= 1 / (2 * alpha * alpha)
	}
	return f1, f2
}
