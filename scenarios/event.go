package scenarios

import "tidekiln/thermal"

// Names of the events that triggers may wait for, besides those of interiors.
const (
	EventRocheLimit        = "roche-limit"        // pericentre inside the Roche limit; ends the history
	EventOrbitsCross       = "orbits-cross"       // two neighbours' orbits meet; ends the history
	EventResonanceLeft     = "resonance-left"     // a chain lost its lock; ends the history of the adiabatic regime
	EventResonanceEntered  = "resonance-entered"  // a circulating argument librates, in the resolved regime
	EventEccentricityLimit = "eccentricity-limit" // nearly parabolic; ends the history

	EventLibrationOverstable = "libration-overstable" // a growing libration is wide
	EventFoldNear            = "fold-near"            // the locked state is about to cease to exist
	EventLibrationsCross     = "librations-cross"     // two modes have shared their actions
	EventCentreUnstable      = "centre-unstable"      // a fast eigenvalue is real

	EventRegimeChanged = "regime-changed" // an auto history follows librations from here on, or carries them again
)

// eventNames are the names a trigger may give.
var eventNames = append([]string{
	EventRocheLimit, EventOrbitsCross, EventResonanceLeft, EventResonanceEntered, EventEccentricityLimit,
	EventLibrationOverstable, EventFoldNear, EventLibrationsCross, EventCentreUnstable, EventRegimeChanged,
}, thermal.EventNames()...)
