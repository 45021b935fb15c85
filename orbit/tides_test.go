package orbit

import (
	"fmt"
	"math"
	"math/cmplx"
	"testing"

	"gonum.org/v1/gonum/diff/fd"
)

// relaxing is a Maxwell-like response whose relaxation time is its one state.
type relaxing struct{ x float64 }

func (r relaxing) K(w float64) float64 { k, _ := r.KDerivs(w, make([]float64, 1)); return k }

func (r relaxing) Harmonics(n float64, k []float64) {
	for j := range k {
		k[j] = r.K(float64(j+1) * n)
	}
}

func (r relaxing) KDerivs(w float64, dx []float64) (k, dw float64) {
	v := w * r.x
	d := 1 + v*v
	if len(dx) > 0 {
		dx[0] = 0.3 * w * (1 - v*v) / (d * d)
	}
	return 0.3 * v / d, 0.3 * r.x * (1 - v*v) / (d * d)
}

// groups are a chain and a lone orbiter, away from equilibrium and reference.
func groups(t *testing.T) map[string]struct {
	g Group
	y []float64
} {
	t.Helper()
	o := ombra()
	c, y, err := Lock(o)
	if err != nil {
		t.Fatal(err)
	}
	for i := range y {
		y[i] += 1e-3 * math.Sin(float64(7*i+1))
	}
	l, z, err := NewLone(o.Primary, 8e22, 2.3*Day, 0, 0.3)
	if err != nil {
		t.Fatal(err)
	}
	z[0] += 0.01
	return map[string]struct {
		g Group
		y []float64
	}{"chain": {c, y}, "lone": {l, z}}
}

// Derivatives of every kick and of its power against central differences of
// the same functions. Steps of 1e-6 of the variable leave a rounding of about
// 1e-10 of the function over the variable and a truncation below it.
func TestKicksAndPowerDerivatives(t *testing.T) {
	o := ombra()
	eccentric := true
	const x0 = 4e4
	lagging := relaxing{2e4} // a central body that answers by frequency, turning at 9e-5 rad/s
	for name, s := range groups(t) {
		for k := 0; k < s.g.Members(); k++ {
			sync := NewSynchronousTide(s.g, k, o.Primary, 1.8e6, 1)
			prim := NewPrimaryTide(s.g, k, CentralTide{Response: lagging, Spin: 9e-5, Eccentric: &eccentric})
			circ := NewPrimaryTide(s.g, k, CentralTide{Response: lagging, Spin: 9e-5, Eccentric: new(bool)})
			for tide, kick := range map[string]func(y []float64, x float64, kick *Kick, derivs bool){
				"synchronous": func(y []float64, x float64, kick *Kick, d bool) {
					l, g := s.g.Actions(k, y)
					sync.Kick(l, g, relaxing{x}, kick, d)
				},
				"primary": func(y []float64, x float64, kick *Kick, d bool) {
					l, g := s.g.Actions(k, y)
					prim.Kick(l, g, kick)
				},
				"circular": func(y []float64, x float64, kick *Kick, d bool) {
					l, g := s.g.Actions(k, y)
					circ.Kick(l, g, kick)
				},
			} {
				t.Run(fmt.Sprint(name, " ", k, " ", tide), func(t *testing.T) {
					dim := s.g.Dim()
					w := s.g.NewRates()
					value := func(out, v []float64) { // v = y, x·1e-4
						k1 := NewKick(1)
						kick(v[:dim], v[dim]*1e4, k1, false)
						for i := range out {
							out[i] = 0
						}
						s.g.Flow(v[:dim], out[:dim], w)
						for i := range out[:dim] {
							out[i] = 0
						}
						s.g.Push(k, k1, v[:dim], out[:dim])
						out[dim] = s.g.Power(k, k1, v[:dim], w)
					}
					at := append(append([]float64(nil), s.y...), x0*1e-4)
					f := make([]float64, dim+1)
					value(f, at)
					numeric := jacobian(value, dim+1, at)

					jac := make([]float64, (dim+1)*(dim+1))
					k1 := NewKick(1)
					kick(s.y, x0, k1, true)
					s.g.PushDerivs(k, k1, s.y, jac, dim+1, dim)
					dy := make([]float64, dim)
					s.g.Flow(s.y, dy, w)
					s.g.PowerDerivs(k, k1, s.y, w, 1, jac[dim*(dim+1):], dim)
					for i := 0; i <= dim; i++ {
						largest := 0.0
						for j := 0; j <= dim; j++ {
							largest = math.Max(largest, math.Abs(numeric[i*(dim+1)+j]))
						}
						for j := 0; j <= dim; j++ {
							got := jac[i*(dim+1)+j]
							if j == dim {
								got *= 1e4
							}
							if want := numeric[i*(dim+1)+j]; math.Abs(got-want) > 1e-6*largest+1e-6*math.Abs(want) {
								t.Errorf("d[%d]/d[%d] = %.9g, differences give %.9g", i, j, got, want)
							}
						}
					}
				})
			}
		}
	}
}

// jacobian returns central differences of f, row-major.
func jacobian(f func(out, v []float64), n int, at []float64) []float64 {
	out := make([]float64, n*n)
	up, down := make([]float64, n), make([]float64, n)
	v := append([]float64(nil), at...)
	for j := range at {
		h := 3e-6 * math.Max(math.Abs(at[j]), 1e-3)
		v[j] = at[j] + h
		f(up, v)
		v[j] = at[j] - h
		f(down, v)
		v[j] = at[j]
		for i := range up {
			out[i*n+j] = (up[i] - down[i]) / (2 * h)
		}
	}
	return out
}

// Power is ∇H·(kick), so it is the directional derivative of Energy.
func TestPowerIsTheEnergyAKickBrings(t *testing.T) {
	o := ombra()
	for name, s := range groups(t) {
		for k := 0; k < s.g.Members(); k++ {
			tide := NewSynchronousTide(s.g, k, o.Primary, 1.8e6, 1)
			l, g := s.g.Actions(k, s.y)
			kick := NewKick(1)
			tide.Kick(l, g, relaxing{4e4}, kick, false)
			dir := make([]float64, s.g.Dim())
			s.g.Push(k, kick, s.y, dir)
			unit := 1e-4 / math.Abs(kick.Pump)
			got := fd.Derivative(func(h float64) float64 {
				z := append([]float64(nil), s.y...)
				for i := range z {
					z[i] += h * unit * dir[i]
				}
				return s.g.Energy(z)
			}, 0, &fd.Settings{Formula: fd.Central, Step: 1}) / unit
			w := s.g.NewRates()
			s.g.Flow(s.y, make([]float64, s.g.Dim()), w)
			// truncation: (1e-4)² of the third derivative; rounding: 1e-16·Λn over
			// the step's 1e-4·2gΛn.
			near(t, name, s.g.Power(k, kick, s.y, w), got, 1e-7)
		}
	}
}

// The heat a synchronous orbiter receives, −∇H·change, is P(λ̇ − ϖ̇)/n exactly.
func TestHeatIsModeSumTimesApsidalRatio(t *testing.T) {
	o := ombra()
	c, y, err := Lock(o)
	if err != nil {
		t.Fatal(err)
	}
	dim, n := c.Dim(), c.Members()
	for i := range y {
		y[i] += 2e-4 * math.Cos(float64(3*i))
	}
	w := c.NewRates()
	dy := make([]float64, dim)
	c.Flow(y, dy, w)
	for k := 0; k < n; k++ {
		tide := NewSynchronousTide(c, k, o.Primary, 1.8e6, 1)
		l, g := c.Actions(k, y)
		kick := NewKick(1)
		tide.Kick(l, g, relaxing{4e4}, kick, false)
		z := complex(y[n+k], y[2*n+k])
		apsis := w.Offset[0] + imag(complex(dy[n+k], dy[2*n+k])*cmplx.Conj(z))/(2*g)
		el := c.Elements(k, y, w)
		want := tide.ModeHeat(l, g, kick) * (el.MeanMotion - apsis) / el.KeplerMotion
		near(t, "heat", -c.Power(k, kick, y, w), want, 1e-12)
		if tq := c.Torque(k, kick, y); math.Abs(tq) > 1e-12*math.Abs(kick.Raise)*c.members[k].ref {
			t.Errorf("a synchronous tide changes the orbit's angular momentum by %g N m", tq)
		}
	}
}

// Hut 1981, A&A 99, 126: the functions of the constant-lag tide at e = 0.3,
// each from the mode sums with K = ω (k₂Δt = n = 1). With heat
// 3[Na − 2Ns + Ω s²] and spin torque 3[N − Ω s] at spin s·n. The two functions
// of ė, Ne and Ωe, come from e ė = (1−e²)[ȧ/2a − L̇/L] in units of the prefactor.
func TestConstantLagFunctions(t *testing.T) {
	const e = 0.3
	h := NewHarmonics()
	h.At(e * e)
	lag := func(w float64) float64 { return w }
	at := func(spin float64) ModeRates { return ModeSum(h, 1, spin, lag) }
	s0, s1 := at(0), at(1)
	near(t, "Na", s0.Heat/3, 5.39932201833, 1e-10)
	near(t, "N", s0.SpinTorque/3, 3.03025794462, 1e-10)
	near(t, "Ω", (s0.SpinTorque-s1.SpinTorque)/3, 1.94605419875, 1e-10)
	// ė = 27 e [(11/18) Ωe s − Ne]
	edot := func(r ModeRates) float64 {
		return (1 - e*e) / e * (r.OrbitPower - r.OrbitTorque/math.Sqrt(1-e*e))
	}
	near(t, "Ne", -edot(s0)/(27*e), 2.49716196655, 1e-10)
	near(t, "Ωe", (edot(s1)-edot(s0))/(27*e)*18/11, 1.8204390734, 1e-10)
	near(t, "pseudo-synchronous spin", s0.SpinTorque/(s0.SpinTorque-s1.SpinTorque), 1.55712926524, 1e-10)
}

// Mode sum against Hut's closed forms: K = ω, e = 0.4, spin 1.5 n, in units
// n = a = (M_B/M_A)(R/a)⁵ = k₂Δt = 1 (re-derived twice, agreeing to 1e-13).
func TestModeSumAgainstClosedForm(t *testing.T) {
	const e = 0.4
	h := NewHarmonics()
	h.At(e * e)
	r := ModeSum(h, 1, 1.5, func(w float64) float64 { return w })
	// dE = A·…, with Λ̇/Λ = ȧ/2a: ȧ = 2·OrbitPower in these units.
	near(t, "ȧ", 2*r.OrbitPower, -36.27812603952869, 1e-10)
	near(t, "ė", (1-e*e)/e*(r.OrbitPower-r.OrbitTorque/math.Sqrt(1-e*e)), -25.861135774752608, 1e-10)
}

// Energy and angular momentum of the sums close for any odd response.
func TestModeSumCloses(t *testing.T) {
	h := NewHarmonics()
	for _, e := range []float64{0, 0.01, 0.3, 0.7} {
		h.At(e * e)
		for _, spin := range []float64{0, 0.7, 1, 1.5, 20} {
			r := ModeSum(h, 1, spin, func(w float64) float64 { return w / (1 + w*w) })
			sum := r.Heat + r.OrbitPower + spin*r.SpinTorque
			if math.Abs(sum) > 1e-12*(math.Abs(r.Heat)+math.Abs(r.OrbitPower)+math.Abs(spin*r.SpinTorque)) {
				t.Errorf("e = %g, spin %g: energy leaves %g", e, spin, sum)
			}
			if r.SpinTorque+r.OrbitTorque != 0 {
				t.Errorf("e = %g, spin %g: angular momentum leaves %g", e, spin, r.SpinTorque+r.OrbitTorque)
			}
		}
	}
}

// The tide in a central body that outruns every mode is the mode sum of a
// constant-q body at a spin far above n; near e = 0 it pumps e at 57/8 of
// the circular torque's rate, e ∝ … (Goldreich & Soter 1966, Icarus 5, 375).
func TestEccentricPrimaryTide(t *testing.T) {
	p := ombra().Primary
	on := true
	const k = 1e-5
	for _, e := range []float64{1e-7, 1e-3, 0.05, 0.4, 0.8} {
		o, y, err := NewLone(p, 9e22, 2*Day, 0, e)
		if err != nil {
			t.Fatal(err)
		}
		tide := NewPrimaryTide(o, 0, CentralTide{Response: constantQ(k), Spin: math.Inf(1), Eccentric: &on})
		kick := NewKick(0)
		l, g := o.Actions(0, y)
		tide.Kick(l, g, kick)
		h := NewHarmonics()
		h.At(e * e)
		r := ModeSum(h, 1, 1e6, func(w float64) float64 { return math.Copysign(k, w) })
		scale := o.m.push / 1.5
		near(t, "Λ̇", kick.Raise, scale*r.OrbitPower, 1e-12)
		// dΓ = dΛ − dL cancels to e² of either.
		near(t, "Γ̇", 2*g*kick.Pump, scale*(r.OrbitPower-r.OrbitTorque), math.Max(1e-11, 1e-14/(e*e)))
		if e < 1e-2 {
			near(t, "ė/e", kick.Pump-kick.Raise/2, 57./8*scale*k, 30*e*e)
		}
	}
}

// The same for a central body of finite spin that answers by frequency: its rates
// are those of the general mode sum.
func TestPrimaryTideIsTheModeSum(t *testing.T) {
	p := ombra().Primary
	for _, e := range []float64{0.1, 0.5} {
		o, y, err := NewLone(p, 9e22, 2*Day, 0, e)
		if err != nil {
			t.Fatal(err)
		}
		r := relaxing{3e4}
		tide := NewPrimaryTide(o, 0, CentralTide{Response: r, Spin: 5e-5})
		kick := NewKick(0)
		l, g := o.Actions(0, y)
		tide.Kick(l, g, kick)
		h := NewHarmonics()
		h.At(e * e)
		m := ModeSum(h, o.m.n, 5e-5, r.K)
		scale := o.m.push / 1.5
		near(t, "Λ̇", kick.Raise, scale*m.OrbitPower/o.m.n, 1e-12)
		near(t, "Γ̇", 2*g*kick.Pump, scale*(m.OrbitPower/o.m.n-m.OrbitTorque), 1e-11)
	}
	if NewPrimaryTide(&Lone{}, 0, CentralTide{}) != nil {
		t.Error("a body without a response raises a tide")
	}
}

// A given mean period is that of λ, the oblateness included.
func TestLoneStart(t *testing.T) {
	o, y, err := NewLone(ombra().Primary, 9e22, 2*Day, 0, 0.2)
	if err != nil {
		t.Fatal(err)
	}
	w := o.NewRates()
	o.Flow(y, make([]float64, 2), w)
	el := o.Elements(0, y, w)
	near(t, "period", 2*math.Pi/el.MeanMotion, 2*Day, 1e-14)
	near(t, "e", el.Eccentricity, 0.2, 1e-14)
	if _, _, err := NewLone(ombra().Primary, 9e22, 2*Day, 0, 0.96); err == nil {
		t.Error("e = 0.96 accepted")
	}
}

func TestTidesDoNotAllocate(t *testing.T) {
	o := ombra()
	for name, s := range groups(t) {
		sync := NewSynchronousTide(s.g, 0, o.Primary, 1.8e6, 1)
		prim := NewPrimaryTide(s.g, 0, CentralTide{Response: constantQ(1e-5), Spin: math.Inf(1)})
		kick, w := NewKick(1), s.g.NewRates()
		dy, row := make([]float64, s.g.Dim()), make([]float64, s.g.Dim()+1)
		jac := make([]float64, len(row)*len(row))
		var r Response = relaxing{4e4}
		if a := testing.AllocsPerRun(100, func() {
			l, g := s.g.Actions(0, s.y)
			s.g.Flow(s.y, dy, w)
			sync.Kick(l, g, r, kick, true)
			s.g.Push(0, kick, s.y, dy)
			s.g.PushDerivs(0, kick, s.y, jac, len(row), len(dy))
			s.g.PowerDerivs(0, kick, s.y, w, 1, row, len(dy))
			prim.Kick(l, g, kick)
		}); a != 0 {
			t.Errorf("%s: %g allocations", name, a)
		}
	}
}
