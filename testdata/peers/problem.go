package main

import (
	"fmt"
	"io"
	"math"

	"tidekiln/evolve"
	"tidekiln/evolve/ode"
	"tidekiln/orbit"
	"tidekiln/scenarios"
	"tidekiln/scenarios/key"
)

// members is the length of the chain both cases have: the ports are written for
// it, with the interior in the innermost member.
const members = 3

// Places of the state variables.
const (
	atRe       = members
	atIm       = 2 * members
	atAngle    = 3 * members
	atEnthalpy = 4*members - 2
	dim        = 4*members - 1
)

// problem is one initial value problem: the same for every integrator.
type problem struct {
	name, title string
	scenario    *scenarios.Scenario
	system      *evolve.System
	options     ode.Options // of evolve, at the scenario's own tolerance
	given       []float64   // start state before projection
	start       []float64   // and after it
	span        float64     // s
	constants   []constant
}

func problems() ([]*problem, error) {
	var all []*problem
	for _, c := range []struct {
		name, title string
		edits       []scenarios.Edit
	}{
		{"osc", "scenario volcanic-cycle as shipped, 1500 Myr: nine relaxation cycles of the mantle", nil},
		{"def", "the same with melt_loss velocity 9e-5 m/s, 2000 Myr: settles to a steady state", []scenarios.Edit{
			{Path: "run.span", Value: "2000 Myr"},
			{Path: "orbiter.Cinder.interior.melt_loss.velocity", Value: "9e-5 m/s"},
		}},
	} {
		s, err := scenarios.Open("volcanic-cycle", c.edits...)
		if err != nil {
			return nil, err
		}
		p := &problem{name: c.name, title: c.title, scenario: s, span: s.Run.Span}
		if p.system, p.given, err = evolve.NewSystem(s); err != nil {
			return nil, err
		}
		if p.system.Dim() != dim {
			return nil, fmt.Errorf("case %s has %d state variables, its ports %d", c.name, p.system.Dim(), dim)
		}
		p.options = p.system.Tolerances()
		if p.start, err = p.project(); err != nil {
			return nil, err
		}
		if err := p.export(); err != nil {
			return nil, fmt.Errorf("case %s: %w", c.name, err)
		}
		all = append(all, p)
	}
	return all, nil
}

// project returns the start state on the slow manifold.
func (p *problem) project() ([]float64, error) {
	r, err := ode.NewRadau(p.system, p.at(1e-12))
	if err != nil {
		return nil, err
	}
	if err := r.Start(0, p.given); err != nil {
		return nil, err
	}
	return append([]float64(nil), r.State()...), nil
}

// at returns evolve's options at another relative tolerance; every absolute one
// is proportional to it.
func (p *problem) at(rtol float64) ode.Options {
	o := p.options
	o.ATol = append([]float64(nil), o.ATol...)
	for i := range o.ATol {
		o.ATol[i] *= rtol / o.RTol
	}
	o.RTol = rtol
	return o
}

// constant is a named number or list of the file both ports read.
type constant struct {
	name   string
	values []float64
}

func (p *problem) put(name string, values ...float64) {
	p.constants = append(p.constants, constant{name, values})
}

// export collects every number the ports need.
func (p *problem) export() error {
	s := p.scenario
	if len(s.Orbiters) != members || len(s.Chains) != 1 || len(s.Chains[0].Members) != members || len(s.Changes) != 0 {
		return fmt.Errorf("the ports are for one chain of %d orbiters without changes", members)
	}
	p.put("span", p.span)
	p.put("rtol", p.options.RTol)
	p.put("atol", p.options.ATol...)
	odd := make([]float64, dim)
	for i, is := range p.options.Odd {
		if is {
			odd[i] = 1
		}
	}
	p.put("odd", odd...)
	p.put("given", p.given...)
	p.put("start", p.start...)
	if err := p.exportOrbits(); err != nil {
		return err
	}
	return p.exportInterior()
}

// exportOrbits reads the chain's references off its exported methods: at
// l = 0 and z = 0 each of them is one constant alone.
func (p *problem) exportOrbits() error {
	s, c := p.scenario, p.scenario.Chains[0]
	primary := orbit.Primary{Mass: s.Central.Mass, Radius: s.Central.Radius, J2: s.Central.J2}
	want := orbit.LockedStart{Primary: primary, Ratios: c.Ratios, Offset: c.Offset,
		Period: s.Orbiters[0].Period, SemimajorAxis: s.Orbiters[0].SemimajorAxis}
	for _, o := range s.Orbiters {
		want.Masses = append(want.Masses, o.Mass)
	}
	chain, locked, err := orbit.Lock(want)
	if err != nil {
		return err
	}
	for i, v := range locked {
		if v != p.given[i] {
			return fmt.Errorf("component %d of the locked chain is %g, of the system %g", i, v, p.given[i])
		}
	}
	tide := orbit.NewCentralTide(s.Central.Tide)
	if tide.Eccentric != nil && *tide.Eccentric {
		return fmt.Errorf("the ports know only the circular torque of the central body")
	}
	w := chain.NewRates()
	y, dy := make([]float64, chain.Dim()), make([]float64, chain.Dim())
	chain.Flow(y, dy, w)
	var ref, motion, slope, axis, push []float64
	for k, m := range want.Masses {
		e := chain.Elements(k, y, w)
		y[k] = 1
		l := chain.AngularMomentum(y)
		y[k] = 0
		ref = append(ref, l)
		motion = append(motion, e.KeplerMotion)
		slope = append(slope, -w.Slope[k])
		axis = append(axis, e.SemimajorAxis)
		push = append(push, primary.CircularTorque(tide.Response.K(1), m, e.SemimajorAxis)/l)
	}
	p.put("reference_action", ref...)
	p.put("reference_motion", motion...)
	p.put("oblate_slope", slope...)
	p.put("central_push", push...)
	p.put("offset", c.Offset)
	var j, inner, outer, sign []float64
	for r, ratio := range c.Ratios {
		f1, f2 := orbit.Coefficients(ratio)
		energy := orbit.G * want.Masses[r] * want.Masses[r+1] / axis[r+1]
		j = append(j, float64(ratio))
		inner, outer = append(inner, energy*f1), append(outer, energy*f2)
		sign = append(sign, math.Copysign(1, math.Cos(chain.Centre(r))))
	}
	p.put("commensurability", j...)
	p.put("inner_coupling", inner...)
	p.put("outer_coupling", outer...)
	p.put("centre_sign", sign...)
	o := s.Orbiters[0]
	p.put("synchronous_scale", orbit.G*primary.Mass*primary.Mass*math.Pow(o.Radius, 5)/math.Pow(axis[0], 6)/ref[0])
	return p.exportHarmonics()
}

// exportInterior writes the numbers of the rock as the scenario gave them; the
// ports know the laws.
func (p *problem) exportInterior() error {
	for _, o := range p.scenario.Orbiters[1:] {
		if o.Interior.Law != "" {
			return fmt.Errorf("the ports know an interior in the innermost member alone")
		}
	}
	o := p.scenario.Orbiters[0]
	v := o.Interior
	for _, law := range []struct {
		v    key.Values
		name string
	}{
		{v, "rock"}, {v.Table("rheology"), "andrade"}, {v.Table("viscosity"), "arrhenius"},
		{v.Table("convection"), "stagnant-lid"}, {v.Table("melt_loss"), "heat-pipe"},
	} {
		if law.v.Law != law.name {
			return fmt.Errorf("the ports know the law %s, not %s", law.name, law.v.Law)
		}
	}
	p.put("mass", o.Mass)
	p.put("radius", o.Radius)
	p.put("gravitation", orbit.G)
	p.put("gas_constant", gasConstant)
	for _, k := range []string{"heat_capacity", "latent_heat", "solidus", "liquidus", "surface_temperature", "conductivity", "expansivity", "radiogenic"} {
		p.put(k, v.Float(k))
	}
	for _, t := range []struct {
		table string
		keys  []string
	}{
		{"rheology", []string{"rigidity", "melt_exponent", "alpha", "zeta"}},
		{"viscosity", []string{"reference", "at", "activation_energy", "melt_exponent"}},
		{"convection", []string{"coefficient", "theta_exponent", "rayleigh_exponent"}},
		{"melt_loss", []string{"velocity", "exponent"}},
	} {
		for _, k := range t.keys {
			p.put(t.table+"."+k, v.Table(t.table).Float(k))
		}
	}
	return nil
}

// gasConstant is the molar gas constant, J mol⁻¹ K⁻¹ (CODATA 2018, exact to the
// digits given).
const gasConstant = 8.314462618

// write writes the constants, one a line: name, how many, values in full.
func (p *problem) write(w io.Writer) error {
	for _, c := range p.constants {
		if _, err := fmt.Fprintf(w, "%s %d", c.name, len(c.values)); err != nil {
			return err
		}
		for _, v := range c.values {
			fmt.Fprintf(w, " %.17g", v)
		}
		fmt.Fprintln(w)
	}
	return nil
}

// frozen is the bare right-hand side on the branches of the start: what the
// peers integrate, without integrals along the path or a search for kinks.
type frozen struct{ p *evolve.System }

func (f frozen) Dim() int                               { return f.p.Dim() }
func (f frozen) Derivs(t float64, y, dy []float64)      { f.p.Derivs(t, y, dy) }
func (f frozen) Jacobian(t float64, y, dy, j []float64) { f.p.Jacobian(t, y, dy, j) }

// distance is the largest relative difference of Λ, e and enthalpy.
func distance(y, ref []float64) float64 {
	worst := math.Abs(y[atEnthalpy]/ref[atEnthalpy] - 1)
	for k := range members {
		worst = max(worst, math.Abs((y[k]-ref[k])/(1+ref[k])))
		worst = max(worst, math.Abs(eccentricity(k, y)/eccentricity(k, ref)-1))
	}
	if math.IsNaN(worst) {
		return math.Inf(1)
	}
	return worst
}

// eccentricity returns e = √(r(2 − r)), r = Γ/Λ, Γ = |z|²Λ0/2.
func eccentricity(k int, y []float64) float64 {
	x, v := y[atRe+k], y[atIm+k]
	r := 0.5 * (x*x + v*v) / (1 + y[k])
	return math.Sqrt(r * (2 - r))
}
