package evolve

import (
	"fmt"
	"math"
	"testing"
	"time"

	"tidekiln/evolve/ode"
	"tidekiln/orbit"
	"tidekiln/scenarios"
)

// resolvedCase is a tide-free chain, displaced from its equilibrium.
type resolvedCase struct {
	s      *scenarios.Scenario
	p      *System
	g      *group
	y0, y  []float64
	width  float64
	hLib   float64 // energy of the libration, J
	energy float64
}

func newResolvedCase(t testing.TB, s *scenarios.Scenario, width float64) *resolvedCase {
	t.Helper()
	s.Run.Regime = scenarios.Resolved
	p, y0, err := NewSystem(s)
	if err != nil {
		t.Fatal(err)
	}
	c := &resolvedCase{s: s, p: p, g: &p.groups[0], y0: y0, y: append([]float64(nil), y0...), width: width}
	displace(c.g, c.y, width)
	c.energy = c.g.Energy(c.y)
	c.hLib = math.Abs(c.energy - c.g.Energy(y0))
	return c
}

// displace makes a chain librate: its angles by so many radians, its z by that
// part of themselves, each differently.
func displace(g *group, y []float64, width float64) {
	n := g.Members()
	gy := y[g.at : g.at+g.Dim()]
	for k := 0; k < n; k++ {
		z := gy[n+k]
		gy[n+k] += width * z * math.Cos(float64(2*k))
		gy[2*n+k] += width * z * math.Sin(float64(2*k)+0.3)
	}
	for i := 3 * n; i < len(gy); i++ {
		gy[i] += width
	}
}

// integrator makes one of fixed step, or with the tolerance where step is 0.
func (c *resolvedCase) integrator(t testing.TB, method string, rtol, step float64) ode.Integrator {
	t.Helper()
	c.s.Run.Method, c.s.Run.Tolerance = method, rtol
	in, err := c.p.resolving(c.y, int(c.s.Run.MaxSteps))
	if step > 0 && method == scenarios.DOP853 {
		in, err = ode.NewDOP853(c.p, ode.Options{RTol: rtol, ATol: c.p.resolvedTolerances(), FixedStep: step})
	} else if step > 0 {
		var s *split
		if s, err = newSplit(c.s); err == nil {
			in, err = ode.NewSplitting(s, ode.SplittingOptions{RTol: rtol, ATol: c.p.resolvedTolerances(), Block: blockLength, FixedStep: step})
		}
	}
	if err != nil {
		t.Fatal(err)
	}
	return in
}

type resolvedResult struct {
	y     []float64
	drift float64 // greatest error of H over the energy of the libration
	steps int
	wall  time.Duration
}

func (c *resolvedCase) run(t testing.TB, in ode.Integrator, span float64) resolvedResult {
	t.Helper()
	if err := in.Start(0, c.y); err != nil {
		t.Fatal(err)
	}
	var r resolvedResult
	begin := time.Now()
	for k := 0; in.T() < span; k++ {
		if _, err := in.Step(span); err != nil {
			t.Fatal(err)
		}
		if k%29 == 0 {
			r.drift = math.Max(r.drift, math.Abs(c.g.Energy(in.State())-c.energy)/c.hLib)
		}
	}
	r.wall, r.steps = time.Since(begin), in.Stats().Steps
	r.y = append([]float64(nil), in.State()...)
	return r
}

// miss is the distance of z and angles over that of the libration: an error of
// its phase, rad.
func (c *resolvedCase) miss(a, b []float64) float64 {
	n, sum := c.g.Members(), 0.0
	for i := n; i < c.g.Dim(); i++ {
		d := a[c.g.at+i] - b[c.g.at+i]
		if i < 3*n {
			d /= c.y0[c.g.at+n+i%n]
		}
		sum += d * d
	}
	return math.Sqrt(sum) / c.width
}

// The splitting against DOP853 of fixed steps of 0.03 yr, whose own phase error
// is 0.3⁸ of that at 0.1 yr, some 1e-9: of order 6 in h on a chain that librates by
// 5 % (ε²h⁶; half an order for the h⁴ of ε³), and its H within the error of its
// phase times the size of the cubic terms.
func TestSplittingFollowsLibrations(t *testing.T) {
	const span = 300 * orbit.Year
	c := newResolvedCase(t, still(t, "quiet-chain"), 0.05)
	ref := c.run(t, c.integrator(t, scenarios.DOP853, 1e-12, 0.03*orbit.Year), span)
	long := c.run(t, c.integrator(t, scenarios.Splitting, 1e-9, 0.4*orbit.Year), span)
	short := c.run(t, c.integrator(t, scenarios.Splitting, 1e-9, 0.2*orbit.Year), span)
	a, b := c.miss(long.y, ref.y), c.miss(short.y, ref.y)
	order := math.Log2(a / b)
	t.Logf("phase off by %.1e at 0.4 yr, %.1e at 0.2 yr: order %.2f; H by %.1e and %.1e of the libration's", a, b, order, long.drift, short.drift)
	if !(order > 5.5) {
		t.Errorf("order %.2f, want 6", order)
	}
	if long.drift > 0.1*c.width || short.drift > 0.1*long.drift {
		t.Errorf("H drifts by %.1e and %.1e of the libration's energy", long.drift, short.drift)
	}
}

// Every chain, from two to five members, conserves H and Σ(Λ−Γ) by either
// method at the default tolerance of 1e-7 a step, here to 1e-3 of what the libration
// itself holds: its own energy, and Σ Γ times its width. (Steps of 1e-7 of z, which
// is 50 times the libration, add to 1e4·1e-7·50·2 % if they all point one way.)
func TestResolvedChainsConserve(t *testing.T) {
	const span = 2000 * orbit.Year
	for name, s := range chainScenarios(t) {
		for _, method := range []string{scenarios.Splitting, scenarios.DOP853} {
			t.Run(name+"/"+method, func(t *testing.T) {
				c := newResolvedCase(t, s, 0.02)
				r := c.run(t, c.integrator(t, method, 1e-7, 0), span)
				gamma := math.Abs(c.g.AngularMomentum(c.y0)) // less its reference, with every l at 0
				momentum := math.Abs(c.g.AngularMomentum(r.y)-c.g.AngularMomentum(c.y)) / (gamma * c.width)
				t.Logf("%.1f steps/yr; H off by %.1e of the libration's, Σ(Λ−Γ) by %.1e of ΣΓ times the width", float64(r.steps)/2000, r.drift, momentum)
				if r.drift > 1e-3 || momentum > 1e-3 {
					t.Errorf("H off by %.1e of the libration's, Σ(Λ−Γ) by %.1e", r.drift, momentum)
				}
			})
		}
	}
}

// chainScenarios are tide-free chains of invented bodies.
func chainScenarios(t testing.TB) map[string]*scenarios.Scenario {
	t.Helper()
	out := map[string]*scenarios.Scenario{"three": still(t, "quiet-chain")}
	for name, ratios := range map[string]string{"two": `["3:2"]`, "four": `["3:2", "3:2", "4:3"]`, "five": `["3:2", "3:2", "4:3", "3:2"]`} {
		src := "[run]\nspan = \"1 Myr\"\n[central]\nname = \"Red\"\nmass = \"2e29 kg\"\nradius = \"90000 km\"\nJ2 = 1e-6\n"
		members := ""
		for i, mass := range []float64{6e24, 4e24, 5e24, 7e24, 3e24}[:map[string]int{"two": 2, "four": 4, "five": 5}[name]] {
			src += fmt.Sprintf("[orbiter.P%d]\nmass = \"%g kg\"\nradius = \"6000 km\"\n", i, mass)
			if i == 0 {
				src += "period = \"2 d\"\n"
			} else {
				members += ", "
			}
			members += fmt.Sprintf("\"P%d\"", i)
		}
		src += "[chain.all]\nmembers = [" + members + "]\nratios = " + ratios + "\noffset = \"-0.3 deg/day\"\n"
		s, err := scenarios.Read(name, []byte(src))
		if err != nil {
			t.Fatal(err)
		}
		out[name] = s
	}
	return out
}

// drifted compares the changes that tides make from the same projected start in
// the adiabatic and the resolved regime, relative to the change.
func drifted(t *testing.T, span string, method string) (actions, eccentricities float64) {
	t.Helper()
	edits := []scenarios.Edit{{Path: "run.span", Value: span}, {Path: "run.record", Value: span}, {Path: "run.tolerance", Value: "1e-10"}, {Path: "chain.inner.libration", Value: "0 deg"}}
	adiabatic := run1(t, shipped(t, "quiet-chain", edits...))
	s := shipped(t, "quiet-chain", append(edits, scenarios.Edit{Path: "run.regime", Value: "resolved"}, scenarios.Edit{Path: "run.method", Value: method})...)
	resolved := run1(t, s)
	r, err := begin(s, Options{})
	if err != nil {
		t.Fatal(err)
	}
	if resolved.Status != StatusComplete || resolved.OrbitOutcome != OrbitLocked || resolved.Suspect {
		t.Errorf("%s: %s %s, outcome %s, closures %v", method, resolved.Status, resolved.Reason, resolved.OrbitOutcome, resolved.Closure)
	}
	a, b := adiabatic.end.state, resolved.end.state
	for k := range 3 {
		l := math.Abs(a[k]-b[k]) / math.Abs(b[k]-r.y[k])
		e := math.Abs(math.Hypot(a[3+k], a[6+k])-math.Hypot(b[3+k], b[6+k])) / math.Abs(math.Hypot(b[3+k], b[6+k])-math.Abs(r.y[3+k]))
		t.Logf("%s, body %d: changes of Λ differ by %.1e of themselves, of e by %.1e", method, k+1, l, e)
		actions, eccentricities = math.Max(actions, l), math.Max(eccentricities, e)
	}
	return actions, eccentricities
}

// The two regimes are one equation, from one start: what is left is the square of
// the libration of 1e-6 that the projection leaves, over changes of 1e-8 and more,
// and the tolerances of 1e-10. A part in 10⁶ is asked for.
func TestResolvedDriftIsTheAdiabaticOne(t *testing.T) {
	l, e := drifted(t, "0.01 Myr", scenarios.Splitting)
	if l > 1e-6 || e > 1e-6 {
		t.Errorf("changes differ by %.1e and %.1e of themselves", l, e)
	}
}

func TestResolvedDriftIsTheAdiabaticOneForLong(t *testing.T) {
	long(t)
	for _, method := range []string{scenarios.Splitting, scenarios.DOP853} {
		l, e := drifted(t, "0.1 Myr", method)
		if l > 1e-6 || e > 1e-6 {
			t.Errorf("%s: changes differ by %.1e and %.1e of themselves", method, l, e)
		}
	}
}

// runLibrating runs a history whose chains start displaced.
func runLibrating(t testing.TB, s *scenarios.Scenario, width float64) *History {
	t.Helper()
	r, err := begin(s, Options{})
	if err != nil {
		t.Fatal(err)
	}
	for i := range r.p.groups {
		if g := &r.p.groups[i]; g.chain != nil {
			displace(g, r.y, width)
		}
	}
	*r.ledger = *newLedger(r.p, r.t, r.y)
	if err := r.start(nil); err != nil {
		t.Fatal(err)
	}
	for r.h.Status == "" {
		r.advance()
	}
	r.finish()
	return r.h
}

// A molten moon's state by blocks of 2000, 1000 and 500 yr against blocks of
// 100 yr: of second order. (Half an order for the phase of the libration at which
// blocks end.)
func TestInteriorsAreHeldToSecondOrder(t *testing.T) {
	s := shipped(t, "volcanic-cycle", scenarios.Edit{Path: "run.regime", Value: "resolved"})
	p, y, err := NewSystem(s)
	if err != nil {
		t.Fatal(err)
	}
	if err := p.still(0, y); err != nil {
		t.Fatal(err)
	}
	displace(&p.groups[0], y, 0.01)
	const span = 2e4 * orbit.Year
	enthalpy := func(block float64) float64 {
		o, err := newSplit(s)
		if err != nil {
			t.Fatal(err)
		}
		in, err := ode.NewSplitting(o, ode.SplittingOptions{RTol: 1e-7, ATol: p.resolvedTolerances(), Block: block})
		if err != nil {
			t.Fatal(err)
		}
		if err := in.Start(0, y); err != nil {
			t.Fatal(err)
		}
		for in.T() < span {
			if _, err := in.Step(span); err != nil {
				t.Fatal(err)
			}
		}
		return in.State()[p.bodies[0].at]
	}
	ref := enthalpy(100 * orbit.Year)
	last := 0.0
	for i, years := range []float64{4000, 2000, 1000, 500} {
		miss := math.Abs(enthalpy(years*orbit.Year)/ref - 1)
		t.Logf("blocks of %g yr: enthalpy off by %.1e", years, miss)
		if i > 0 && i < 3 {
			if order := math.Log2(last / miss); order < 1.5 {
				t.Errorf("blocks of %g yr: order %.2f, want 2", years, order)
			}
		}
		last = miss
	}
}

// The books of a librating history close, and their rows lie on the cadence.
func TestLibratingHistory(t *testing.T) {
	for _, method := range []string{scenarios.Splitting, scenarios.DOP853} {
		s := shipped(t, "volcanic-cycle", scenarios.Edit{Path: "run.regime", Value: "resolved"}, scenarios.Edit{Path: "run.method", Value: method},
			scenarios.Edit{Path: "run.span", Value: "2 kyr"}, scenarios.Edit{Path: "run.record", Value: "10 yr"})
		h := runLibrating(t, s, 0.05)
		if h.Status != StatusComplete || h.Suspect || h.OrbitOutcome != OrbitLocked {
			t.Errorf("%s: %s %s, outcome %s, closures %v", method, h.Status, h.Reason, h.OrbitOutcome, h.Closure)
		}
		if got := h.Rows("resonances"); got != 201*2 {
			t.Errorf("%s: %d rows of resonances, want 402", method, got)
		}
		// A part in twenty of e, between rows that see every phase.
		x := h.Bodies[0].Eccentricity
		if swing := (x.Max - x.Min) / (x.Max + x.Min); swing < 0.03 || swing > 0.2 {
			t.Errorf("%s: e swings by %.2g", method, swing)
		}
	}
}
