package evolve

import (
	"math"

	"tidekiln/thermal"
)

// held is an interior whose state is kept for a while: its response by straight
// lines in frequency about the harmonics of a mean motion, its rates by a
// straight line in the tidal heat, its fluxes as they are. Over a hundred years
// the mean motion of a librating orbiter moves by parts in 10⁶, so that the lines
// are off by the square of that.
type held struct {
	thermal.Interior
	motion      float64 // rad/s
	harmonics   []harmonic
	none        []float64 // place for derivatives nobody asked for
	heat        float64   // W, where the rates were taken
	rates, drdh []float64
	drdx        []float64
	fluxes      thermal.Balance
}

// harmonic is K and dK/dω at a multiple of the mean motion, once asked for.
type harmonic struct {
	known bool
	k, dw float64
}

func newHeld(in thermal.Interior) *held {
	n := len(in.States())
	return &held{Interior: in, none: make([]float64, n), rates: make([]float64, n), drdh: make([]float64, n), drdx: make([]float64, n*n)}
}

// hold takes the state x at time t, the mean motion there, rad/s, and the tidal
// heat, W.
func (h *held) hold(t float64, x []float64, motion float64) {
	h.Interior.Freeze(t, x)
	h.motion = motion
	clear(h.harmonics)
}

// heated takes the tidal heat, W, about which rates are linear.
func (h *held) heated(t, heat float64) {
	if len(h.rates) == 0 {
		return
	}
	h.heat = heat
	h.Interior.Rates(t, heat, h.rates)
	h.Interior.RatesDerivs(t, heat, h.drdx, h.drdh)
	h.fluxes = h.Interior.Balance(t)
}

// Set keeps the state held.
func (h *held) Set([]float64) {}

// K returns −Im k₂ by the line through the nearest harmonic.
func (h *held) K(w float64) float64 {
	j := int(math.Round(math.Abs(w) / h.motion))
	for j >= len(h.harmonics) {
		h.harmonics = append(h.harmonics, harmonic{})
	}
	c := &h.harmonics[j]
	at := math.Copysign(float64(j)*h.motion, w)
	if !c.known {
		c.k, c.dw = h.Interior.KDerivs(float64(j)*h.motion, h.none)
		c.known = true
	}
	return math.Copysign(c.k, w) + c.dw*(w-at)
}

// Harmonics writes K at the multiples of n.
func (h *held) Harmonics(n float64, k []float64) {
	for j := range k {
		k[j] = h.K(float64(j+1) * n)
	}
}

// Rates writes dx/dt under the tidal heat.
func (h *held) Rates(_, heat float64, dx []float64) {
	for i, r := range h.rates {
		dx[i] = r + h.drdh[i]*(heat-h.heat)
	}
}

// Balance returns the fluxes held.
func (h *held) Balance(float64) thermal.Balance { return h.fluxes }
