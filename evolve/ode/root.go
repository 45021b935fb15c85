package ode

import "math"

// root returns a zero of f in [a, b], where fa = f(a) and fb = f(b) have opposite
// signs or one is 0, to rounding (Chandrupatla 1997, Adv. Eng. Softw. 28, 145).
func root(f func(float64) float64, a, b, fa, fb float64) float64 {
	if fa == 0 {
		return a
	}
	c, fc := a, fa
	t := 0.5
	for range 100 {
		x := a + t*(b-a)
		fx := f(x)
		if (fx > 0) == (fa > 0) {
			c, fc = a, fa
		} else {
			c, b = b, a
			fc, fb = fb, fa
		}
		a, fa = x, fx
		best, fbest := a, fa
		if math.Abs(fb) < math.Abs(fa) {
			best, fbest = b, fb
		}
		limit := 0x1p-51 * max(math.Abs(best), 0x1p-20) / math.Abs(b-a)
		if fbest == 0 || limit > 0.5 {
			return best
		}
		t = 0.5
		if c != b && fb != fc {
			xi, phi := (a-b)/(c-b), (fa-fb)/(fc-fb)
			if phi*phi < xi && (1-phi)*(1-phi) < 1-xi {
				t = fa/(fb-fa)*fc/(fb-fc) + (c-a)/(b-a)*fa/(fc-fa)*fb/(fc-fb)
			}
		}
		t = min(1-limit, max(limit, t))
	}
	return a
}
