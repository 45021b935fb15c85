package ode

import (
	"fmt"
	"math"
)

// Options of an integrator. RTol and ATol are required; every other zero
// value is a sensible default.
type Options struct {
	RTol float64   // relative tolerance, 1e-14…0.1
	ATol []float64 // absolute tolerance of each component, > 0: |err_i| ≤ RTol·|y_i| + ATol_i in the root mean square

	// Not for DOP853, which follows an oscillation.
	Odd     []bool  // components whose tolerance is multiplied by max(1, OddTime/h); nil: none
	OddTime float64 // > 0 if Odd has members

	// Fast is the block projected onto the slow manifold; nil: no projection. Not
	// for DOP853. It must include the slow variables that move the centre of the oscillation, or
	// the state ends at rest instead of moving with it.
	Fast           []bool
	ProjectionStep float64 // h of the projection filter, much longer than the fast periods and much shorter than the slow times; > 0 if Fast has members

	Stages int // of Radau: 3, 5, or 0: 5, but 3 when RTol > 1e-5 and where the Newton iteration of 5 keeps failing

	FirstStep float64 // 0: guessed from y and f
	MaxStep   float64 // 0: no limit
	MinStep   float64 // a step that must be shorter stops the run, unless it ends on a kink or at tEnd; 0: the resolution of t
	FixedStep float64 // > 0: every step has this length and there is no error control
	MaxSteps  int     // attempted steps, accepted or not, counted since the integrator was made; 0: no limit
}

func (o *Options) check(n int, m Method) error {
	if !(o.RTol >= 1e-14 && o.RTol <= 0.1) {
		return fmt.Errorf("ode: RTol is %g, must lie in 1e-14…0.1", o.RTol)
	}
	if len(o.ATol) != n {
		return fmt.Errorf("ode: ATol has %d values for %d components; give one each", len(o.ATol), n)
	}
	for i, a := range o.ATol {
		if !(a > 0) || math.IsInf(a, 0) {
			return fmt.Errorf("ode: ATol of component %d is %g, must be > 0: the size below which it does not matter", i, a)
		}
	}
	if err := checkSet("Odd", o.Odd, "OddTime", o.OddTime, n); err != nil {
		return err
	}
	if err := checkSet("Fast", o.Fast, "ProjectionStep", o.ProjectionStep, n); err != nil {
		return err
	}
	switch {
	case m == MethodDOP853 && (o.Odd != nil || o.Fast != nil):
		return fmt.Errorf("ode: Odd and Fast are for stepping over an oscillation, which DOP853 follows; use Radau or Rosenbrock, or leave them out")
	case m != MethodRadau && o.Stages != 0:
		return fmt.Errorf("ode: Stages is %d, but the choice is Radau's only; leave it 0 with %v", o.Stages, m)
	case o.Stages != 0 && o.Stages != 3 && o.Stages != 5:
		return fmt.Errorf("ode: Stages is %d, must be 0, 3 or 5", o.Stages)
	case o.Stages == 5 && o.RTol > 1e-4 && o.FixedStep == 0:
		return fmt.Errorf("ode: 5 stages with RTol %g can converge to a wrong state; use 3 stages or RTol ≤ 1e-4", o.RTol)
	case o.MaxSteps < 0:
		return fmt.Errorf("ode: MaxSteps is %d, must be ≥ 0", o.MaxSteps)
	}
	for _, s := range []struct {
		name string
		h    float64
	}{{"FirstStep", o.FirstStep}, {"MaxStep", o.MaxStep}, {"MinStep", o.MinStep}, {"FixedStep", o.FixedStep}} {
		if !(s.h >= 0) || math.IsInf(s.h, 0) {
			return fmt.Errorf("ode: %s is %g, must be ≥ 0 and finite", s.name, s.h)
		}
	}
	if o.MaxStep > 0 && o.MinStep > o.MaxStep {
		return fmt.Errorf("ode: MinStep %g exceeds MaxStep %g", o.MinStep, o.MaxStep)
	}
	return nil
}

// checkSet checks a set of components and the time it needs if not empty.
func checkSet(name string, set []bool, timeName string, time float64, n int) error {
	if set == nil {
		return nil
	}
	if len(set) != n {
		return fmt.Errorf("ode: %s has %d values for %d components; give one each", name, len(set), n)
	}
	for _, in := range set {
		if in && (!(time > 0) || math.IsInf(time, 0)) {
			return fmt.Errorf("ode: %s is %g, must be > 0 with %s", timeName, time, name)
		}
	}
	return nil
}
