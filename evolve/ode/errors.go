package ode

import "fmt"

// StopReason says why a Step could not be taken.
type StopReason int

const (
	StepBudget   StopReason = iota // Options.MaxSteps attempts are used up
	StepTooSmall                   // the step needed is below Options.MinStep or below the resolution of t
	NotFinite                      // f or its Jacobian is NaN or infinite however short the step
	Singular                       // the matrix of the stages has no inverse however short the step
)

var stopTexts = [...]struct{ what, hint string }{
	StepBudget:   {"step budget used up", "raise MaxSteps, loosen the tolerance, or check for a fast part that is followed instead of stepped over, by DOP853 always"},
	StepTooSmall: {"step too small", "check this component's tolerance, whether the state has left the slow manifold, and the smoothness of f there"},
	NotFinite:    {"f or its Jacobian is not finite", "check the domain of the right-hand side at this state"},
	Singular:     {"singular matrix of the stages", "check the Jacobian for components of unequal scale or an error"},
}

func (r StopReason) String() string {
	if r < 0 || int(r) >= len(stopTexts) {
		return fmt.Sprintf("StopReason(%d)", int(r))
	}
	return stopTexts[r].what
}

// StopError reports that the integration cannot go on. The state stays that of
// the last accepted step.
type StopError struct {
	Reason    StopReason
	T, H      float64 // time reached and step last wanted
	Component int     // the component to blame, or −1
	Detail    string  // what else is known, may be empty
}

func (e *StopError) Error() string {
	msg := fmt.Sprintf("ode: %s at t = %.10g, h = %.3g", e.Reason, e.T, e.H)
	if e.Component >= 0 {
		msg += fmt.Sprintf(", component %d", e.Component)
	}
	if e.Detail != "" {
		msg += ": " + e.Detail
	}
	if e.Reason >= 0 && int(e.Reason) < len(stopTexts) {
		msg += "; " + stopTexts[e.Reason].hint
	}
	return msg
}
