package thermal

import (
	"math"

	"tidekiln/scenarios/key"
)

var fixedLaw = &key.Law{
	Name:    "fixed",
	Meaning: "a response that nothing changes, K(ω) = (k2/Q) sign ω; the body keeps no heat",
	Source:  "Goldreich & Soter 1966, Icarus 5, 375",
	Keys: []key.Key{
		{Name: "k2_over_Q", Kind: key.Number, Range: key.Between(0, 1.5),
			Meaning: "−Im k₂ of the body at every frequency; 1.5 is |k₂| of a homogeneous liquid"},
	},
}

// fixed is K(ω) = (k2/Q) sign ω, without a thermal state.
type fixed struct {
	k float64
}

var _ Interior = fixed{}

func newFixed(v key.Values) func(Body) (Interior, error) {
	return func(Body) (Interior, error) { return fixed{v.Float("k2_over_Q")}, nil }
}

func (f fixed) K(w float64) float64 {
	if w == 0 {
		return 0
	}
	return math.Copysign(f.k, w)
}

func (f fixed) Harmonics(_ float64, k []float64) {
	for j := range k {
		k[j] = f.k
	}
}

func (f fixed) KDerivs(w float64, _ []float64) (k, dw float64) { return f.K(w), 0 }

// Love knows the imaginary part alone.
func (f fixed) Love(w float64) complex128 { return complex(math.NaN(), -f.K(w)) }

func (fixed) States() []StateVar                         { return nil }
func (fixed) Set([]float64)                              {}
func (fixed) Rates(_, _ float64, _ []float64)            {}
func (fixed) RatesDerivs(_, _ float64, _, _ []float64)   {}
func (fixed) Balance(float64) Balance                    { return Balance{} }
func (fixed) Freeze(float64, []float64)                  {}
func (fixed) Kinks() int                                 { return 0 }
func (fixed) Kink(_ int, _ float64, _ []float64) float64 { return 1 }
func (fixed) Cross(int, bool)                            {}
func (fixed) Snapshot() Snapshot                         { return Snapshot{} }
func (fixed) Events() []EventFunc                        { return nil }
