package thermal

import (
	"math"

	"tidekiln/scenarios/key"
)

var andradeLaw = &key.Law{
	Name:    "andrade",
	Meaning: "transient creep t^α on top of a Maxwell body",
	Source:  "Andrade 1910, Proc. R. Soc. A 84, 1; Efroimsky 2012, ApJ 746, 150",
	Keys: rigidityKeys(
		key.Key{Name: "alpha", Kind: key.Number, Default: 0.3, Range: key.Inside(0, 1),
			Meaning: "exponent of the transient creep",
			Source:  "0.2–0.4 for olivine and ice, Efroimsky 2012, ApJ 746, 150"},
		key.Key{Name: "zeta", Kind: key.Number, Default: 1.0, Range: key.Positive(),
			Meaning: "ratio of the Andrade time to the Maxwell time",
			Source:  "about 1, Castillo-Rogez, Efroimsky & Lainey 2011, JGR 116, E09008"},
	),
}

// andrade is
//
//	J* = (1/μ) [1 + Γ(1+α) (iωτζ)^{−α}] − i/(ηω), τ = η/μ
//
// with 0 < α < 1, ζ > 0 (Efroimsky 2012, ApJ 746, 150).
type andrade struct {
	alpha, lnZeta float64
	phase         complex128 // Γ(1+α) i^{−α}
	fall          *[sharedHarmonics]float64
}

// sharedHarmonics is how many harmonics share one power; beyond them each takes
// its own.
const sharedHarmonics = 32

func newAndrade(v key.Values) Rheology {
	alpha := v.Float("alpha")
	sin, cos := math.Sincos(alpha * math.Pi / 2)
	g := math.Gamma(1 + alpha)
	fall := new([sharedHarmonics]float64) // j^{−α}
	for j := range fall {
		fall[j] = math.Pow(float64(j+1), -alpha)
	}
	return andrade{alpha, math.Log(v.Float("zeta")), complex(g*cos, -g*sin), fall}
}

// Harmonics implements [harmonicRheology]: (jω)^{−α} = j^{−α} ω^{−α}.
func (a andrade) Harmonics(w, mu, eta float64, j []complex128) {
	stiff, flow := 1/mu, 1/(eta*w)
	creep := stiff * math.Exp(-a.alpha*(math.Log(w*eta*stiff)+a.lnZeta))
	for i := range j {
		c := creep
		if i < sharedHarmonics {
			c *= a.fall[i]
		} else {
			c *= math.Pow(float64(i+1), -a.alpha)
		}
		j[i] = complex(stiff+c*real(a.phase), c*imag(a.phase)-flow/float64(i+1))
	}
}

// Compliance implements [Rheology].
func (a andrade) Compliance(w, mu, eta float64) (j, dw, dmu, deta complex128) {
	stiff, perW, perEta := 1/mu, 1/w, 1/eta
	flow := perEta * perW
	// Real logarithm and exponential: a complex power would cost as much as
	// everything else in a response.
	creep := stiff * math.Exp(-a.alpha*(math.Log(w*eta*stiff)+a.lnZeta))
	re, im := creep*real(a.phase), creep*imag(a.phase)
	byRe, byIm := -a.alpha*re, flow-a.alpha*im // to ln ω, and to ln η
	dmu = complex(-stiff*(stiff+(1-a.alpha)*re), -stiff*(1-a.alpha)*im)
	return complex(stiff+re, im-flow), complex(byRe*perW, byIm*perW), dmu, complex(byRe*perEta, byIm*perEta)
}
