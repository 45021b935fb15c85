package evolve

import (
	"fmt"

	"tidekiln/evolve/ode"
	"tidekiln/orbit"
	"tidekiln/scenarios"
)

// oddTime is the step beyond which the odd components of a chain, Im z and the
// resonance angles, are judged by their distance from their instantaneous
// equilibrium no more: there they are multipliers of an index-2 system, whose
// error falls a power of h more slowly.
const oddTime = Megayear

// projectionStep is the length of the implicit step that filters librations
// (years) out of a state and leaves its drift (Myr).
const projectionStep = 1e-4 * Megayear

// shortestStep is the length below which the integrator would be following
// librations: a state off the slow manifold stops with a reason instead.
const shortestStep = 1e-9 * Megayear

// Tolerances are the integrator's options for the scenario: relative tolerances
// throughout, above the smallest size that matters of each variable, and which
// variables of a chain are fast.
func (p *System) Tolerances() ode.Options {
	run := p.scenario.Run
	rtol := run.Tolerance
	o := ode.Options{
		RTol: rtol, ATol: make([]float64, p.dim),
		MinStep: shortestStep, MaxSteps: int(run.MaxSteps),
	}
	for i := range o.ATol {
		o.ATol[i] = 1e-3 * rtol
	}
	for i := range p.groups {
		g := &p.groups[i]
		if g.chain == nil || g.free {
			continue
		}
		if o.Fast == nil {
			o.Fast, o.Odd = make([]bool, p.dim), make([]bool, p.dim)
			o.OddTime, o.ProjectionStep = oddTime, projectionStep
		}
		n := g.chain.Members()
		for j := 0; j < g.Dim(); j++ {
			o.Fast[g.at+j] = true
			o.Odd[g.at+j] = j >= 2*n
		}
	}
	for i := range p.bodies {
		b := &p.bodies[i]
		if b.states == 0 {
			continue
		}
		for k, v := range b.interior.States() {
			o.ATol[b.at+k] = rtol * v.Scale
		}
	}
	return o
}

// adiabaticMethod is the integrator of the adiabatic regime.
func (p *System) adiabaticMethod() ode.Method {
	if p.scenario.Run.Method == scenarios.Rosenbrock {
		return ode.MethodRosenbrock
	}
	return ode.MethodRadau
}

// TimeDerivative writes ∂f/∂t: no law depends on time by itself.
func (p *System) TimeDerivative(_ float64, _, dfdt []float64) { clear(dfdt) }

// component names a state variable.
func (p *System) component(i int) string {
	for k := range p.groups {
		g := &p.groups[k]
		j := i - g.at
		if j < 0 || j >= g.Dim() {
			continue
		}
		n := g.Members()
		if g.chain == nil {
			return [2]string{"the semi-major axis", "the eccentricity"}[j] + " of " + p.bodies[g.body[0]].name
		}
		if j >= 3*n {
			return fmt.Sprintf("resonance angle %d of chain %s", j-3*n+1, g.name)
		}
		return [3]string{"the semi-major axis", "the eccentricity", "the pericentre"}[j/n] + " of " + p.bodies[g.body[j%n]].name
	}
	for k := range p.bodies {
		b := &p.bodies[k]
		if j := i - b.at; b.states > 0 && j >= 0 && j < b.states {
			return b.interior.States()[j].Name + " of " + b.name
		}
	}
	return fmt.Sprintf("component %d", i)
}

// explain words why the integration stopped.
func (r *run) explain(e *ode.StopError) string {
	at := fmt.Sprintf("at %.9g Myr", e.T/Megayear)
	where := ""
	if e.Component >= 0 && e.Component < r.p.dim {
		where = ", from " + r.p.component(e.Component)
	}
	switch e.Reason {
	case ode.StepBudget:
		return fmt.Sprintf("step budget of %d used up %s%s; raise run.max_steps or loosen run.tolerance", r.h.Scenario.Run.MaxSteps, at, where)
	case ode.StepTooSmall:
		if r.resolved {
			break
		}
		return fmt.Sprintf("step of %.2g yr too small %s%s; a chain near the end of its lock has left the slow manifold that the adiabatic regime follows", e.H/orbit.Year, at, where)
	case ode.NotFinite:
		return fmt.Sprintf("the right-hand side is not finite %s%s; the state has left the domain of its model", at, where)
	}
	return fmt.Sprintf("%s %s%s", e.Reason, at, where)
}
