package thermal

import "tidekiln/scenarios/key"

var maxwellLaw = &key.Law{
	Name:    "maxwell",
	Meaning: "a spring and a dashpot in series, J* = 1/μ − i/(ηω)",
	Source:  "Efroimsky 2012, ApJ 746, 150",
	Keys:    rigidityKeys(),
}

// maxwell is J* = 1/μ − i/(ηω) (Efroimsky 2012, ApJ 746, 150).
type maxwell struct{}

func newMaxwell(key.Values) Rheology { return maxwell{} }

// Compliance implements [Rheology].
func (maxwell) Compliance(w, mu, eta float64) (j, dw, dmu, deta complex128) {
	flow := 1 / (eta * w)
	return complex(1/mu, -flow), complex(0, flow/w), complex(-1/(mu*mu), 0), complex(0, flow/eta)
}
