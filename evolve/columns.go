package evolve

import (
	"math"
	"strings"

	"tidekiln/evolve/record"
	"tidekiln/orbit"
	"tidekiln/thermal"
)

// The tables of a dataset. Their columns are the same for every scenario, so
// any number of datasets unite; what does not apply is null. A new column is
// one entry here.

const (
	noInterior  = "the body has no interior"
	noThermal   = "the body has no thermal state"
	unknownReal = "the body has no interior, or one that knows only Im k2"
)

// when returns x where ok, else NaN.
func when(ok bool, x float64) float64 {
	if ok {
		return x
	}
	return math.NaN()
}

func optional(v thermal.Value) float64 { return when(v.OK, v.X) }

var bodyKey = []string{"run_id", "time_Myr", "body"}

var bodiesTable = newTable("bodies", "one row a time and body: orbit, interior and heat", bodyKey,
	text("run_id", "identity of the history", "", func(s *bodySample) string { return s.runID }),
	rough("time_Myr", "Myr", "time since the start of the history", "", func(s *bodySample) float64 { return s.t }),
	truth("on_grid", "a row of the asked cadence, not an extra one", func(s *bodySample) bool { return s.grid }),
	text("body", "name of the orbiter", "", func(s *bodySample) string { return s.name }),
	float("semimajor_axis_km", "km", "a = Λ²/(β²μ)", "", func(s *bodySample) float64 { return s.orbit.SemimajorAxis / 1e3 }),
	float("eccentricity", "", "e = √(1 − (1 − Γ/Λ)²)", "", func(s *bodySample) float64 { return s.orbit.Eccentricity }),
	float("mean_motion_deg_per_day", "deg/d", "dλ/dt, precession by the oblateness and the resonances included", "", func(s *bodySample) float64 { return s.orbit.MeanMotion / degreePerDay }),
	float("spin_deg_per_day", "deg/d", "rotation rate; synchronous bodies turn at the Kepler mean motion", noInterior, func(s *bodySample) float64 { return when(s.interior, s.orbit.KeplerMotion/degreePerDay) }),
	float("temperature_K", "K", "mean temperature of the mantle", noThermal, func(s *bodySample) float64 { return optional(s.state.Temperature) }),
	float("melt_fraction", "", "share of the mantle that is molten", noThermal, func(s *bodySample) float64 { return optional(s.state.MeltFraction) }),
	float("viscosity_Pa_s", "Pa s", "viscosity of the mantle, melt weakening included", noThermal, func(s *bodySample) float64 { return optional(s.state.Viscosity) }),
	float("rigidity_Pa", "Pa", "shear modulus of the mantle, melt weakening included", noThermal, func(s *bodySample) float64 { return optional(s.state.Rigidity) }),
	float("re_k2", "", "real part of the tidal Love number k2 at the mean motion", unknownReal, func(s *bodySample) float64 { return when(s.interior, real(s.love)) }),
	float("im_k2", "", "imaginary part of k2 at the mean motion; −Im k2 is the k2/Q of the body", noInterior, func(s *bodySample) float64 { return when(s.interior, imag(s.love)) }),
	float("tidal_heat_W", "W", "heat the orbit loses into the body", noInterior, func(s *bodySample) float64 { return when(s.interior, s.heat) }),
	float("surface_loss_W", "W", "all heat that leaves through the surface; a body without a thermal state radiates its tidal heat at once", noInterior, func(s *bodySample) float64 { return when(s.interior, s.loss) }),
	float("convective_loss_W", "W", "of that, through the lid", noThermal, func(s *bodySample) float64 { return s.convective }),
	float("melt_loss_W", "W", "of that, carried by rising melt", noThermal, func(s *bodySample) float64 { return s.melt }),
	float("radiogenic_heat_W", "W", "heat of decaying isotopes", noThermal, func(s *bodySample) float64 { return when(!math.IsNaN(s.convective), s.radiogenic) }),
	float("surface_heat_flux_W_m2", "W/m2", "surface loss by area", noInterior, func(s *bodySample) float64 { return when(s.interior, s.loss/s.area) }),
)

var resonancesTable = newTable("resonances", "one row a time and resonance", []string{"run_id", "time_Myr", "inner_body", "outer_body"},
	text("run_id", "identity of the history", "", func(s *resonanceSample) string { return s.runID }),
	rough("time_Myr", "Myr", "time since the start of the history", "", func(s *resonanceSample) float64 { return s.t }),
	truth("on_grid", "a row of the asked cadence, not an extra one", func(s *resonanceSample) bool { return s.grid }),
	text("chain", "name of the chain", "", func(s *resonanceSample) string { return s.chain }),
	text("inner_body", "name of the inner orbiter", "", func(s *resonanceSample) string { return s.inner }),
	text("outer_body", "name of the outer orbiter", "", func(s *resonanceSample) string { return s.outer }),
	text("commensurability", "ratio of the mean motions, (j+1):j", "", func(s *resonanceSample) string { return ratioName(s.j) }),
	float("offset_deg_per_day", "deg/d", "(j+1) n_outer − j n_inner", "", func(s *resonanceSample) float64 { return s.offset / degreePerDay }),
	turn("angle_deg", "resonance angle ψ_r − ψ_1 between this pair and the chain's first (the Laplace angle of a chain of three)", "the first pair of a chain", func(s *resonanceSample) float64 { return s.angle / degree }),
	float("half_width_deg", "deg", "half-width of the libration of this angle, all modes in step, at most 180; for a chain's first pair that of its angle to the pericentre of either member, the wider", noLibration, func(s *resonanceSample) float64 { return s.width / degree }),
	rough("argument_deg", "deg", "resonance argument ψ_r − ϖ of the member whose eccentricity the resonance drives faster, between −180 and 180", "", func(s *resonanceSample) float64 { return s.argument / degree }),
)

const noLibration = "the libration centre has become unstable"

var librationsTable = newTable("librations", "one row a time and libration of a chain", []string{"run_id", "time_Myr", "chain", "mode"},
	text("run_id", "identity of the history", "", func(s *librationSample) string { return s.runID }),
	rough("time_Myr", "Myr", "time since the start of the history", "", func(s *librationSample) float64 { return s.t }),
	truth("on_grid", "a row of the asked cadence, not an extra one", func(s *librationSample) bool { return s.grid }),
	text("chain", "name of the chain", "", func(s *librationSample) string { return s.chain }),
	whole("mode", "number of the libration, by frequency at the start, fastest first; kept through the history", func(s *librationSample) int64 { return int64(s.mode) }),
	float("period_yr", "yr", "period of the libration", noLibration, func(s *librationSample) float64 { return 2 * math.Pi / s.frequency / orbit.Year }),
	rough("eigenvalue_real_per_Myr", "1/Myr", "real part of the eigenvalue, negative where tides damp; the drift of the centre comes on top of it", noLibration, func(s *librationSample) float64 { return s.real * Megayear }),
	rough("width_growth_per_Myr", "1/Myr", "growth rate of the half-width, drift of the centre included", "the start, or "+noLibration, func(s *librationSample) float64 { return s.widening * Megayear }),
	rough("action_growth_per_Myr", "1/Myr", "growth rate of the action, drift of the centre included: a positive one is overstable", "the start, or "+noLibration, func(s *librationSample) float64 { return s.growth * Megayear }),
	float("half_width_deg", "deg", "half-width of the libration in the angle it shows in most, to first order, at most 180", noLibration, func(s *librationSample) float64 { return s.width / degree }),
	text("angle", "the angle it shows in most: that of a resonance to the chain's first, or of the first resonance to a pericentre", noLibration, func(s *librationSample) string { return s.angle }),
	rough("action_J_s", "J s", "action of the libration, the area it encloses in phase space over 2π", noLibration, func(s *librationSample) float64 { return s.action }),
)

const noTorque = "no orbiter raises a tide in the central body"

var systemTable = newTable("system", "one row a time: the ledger of energy and angular momentum", []string{"run_id", "time_Myr"},
	text("run_id", "identity of the history", "", func(s *systemSample) string { return s.runID }),
	rough("time_Myr", "Myr", "time since the start of the history", "", func(s *systemSample) float64 { return s.t }),
	truth("on_grid", "a row of the asked cadence, not an extra one", func(s *systemSample) bool { return s.grid }),
	text("regime", "adiabatic: librations are stepped over and carried beside the state; resolved: they are followed", "", func(s *systemSample) string { return s.regime }),
	float("orbital_energy_J", "J", "the Hamiltonian of all orbits, resonances and oblateness included", "", func(s *systemSample) float64 { return s.orbital }),
	float("internal_energy_J", "J", "internal energy of all bodies with a thermal state, from an arbitrary zero", "no body has a thermal state", func(s *systemSample) float64 { return when(s.hasThermalState, s.internal) }),
	float("tidal_heat_J", "J", "tidal heat made in all orbiters since the start", "no orbiter has an interior", func(s *systemSample) float64 { return when(s.hasInterior, s.heat) }),
	float("surface_loss_J", "J", "heat lost by all orbiters since the start", "no orbiter has an interior", func(s *systemSample) float64 { return when(s.hasInterior, s.loss) }),
	float("radiogenic_heat_J", "J", "radiogenic heat of all orbiters since the start", "no body has a thermal state", func(s *systemSample) float64 { return when(s.hasThermalState, s.radiogenic) }),
	float("central_work_J", "J", "energy the central body has given to the orbits since the start", noTorque, func(s *systemSample) float64 { return when(s.hasTorque, s.work) }),
	float("imposed_energy_J", "J", "energy brought by changes of the rules", "", func(s *systemSample) float64 { return s.imposed }),
	float("angular_momentum_kg_m2_per_s", "kg m2/s", "Σ(Λ − Γ) of all orbits", "", func(s *systemSample) float64 { return s.momentum }),
	float("central_impulse_kg_m2_per_s", "kg m2/s", "angular momentum the central body has given to the orbits since the start", noTorque, func(s *systemSample) float64 { return when(s.hasTorque, s.impulse) }),
	rough("energy_closure", "", "residual of the energy ledger over the energy turned over, at the end of the step that holds this time", "nothing turned over yet", func(s *systemSample) float64 { return s.closure.energy }),
	rough("momentum_closure", "", "residual of the angular momentum ledger over the impulse turned over, at the end of the step that holds this time", "no torque acted", func(s *systemSample) float64 { return s.closure.momentum }),
	rough("step_Myr", "Myr", "step of the integration that holds this time", "the start", func(s *systemSample) float64 { return s.step / Megayear }),
)

var eventsTable = newTable("events", "one row an event", []string{"run_id", "time_Myr", "event", "body"},
	text("run_id", "identity of the history", "", func(s *Event) string { return s.runID }),
	rough("time_Myr", "Myr", "time since the start of the history", "", func(s *Event) float64 { return s.Time / Megayear }),
	text("event", "what happened", "", func(s *Event) string { return s.Name }),
	text("body", "the orbiter it happened to", "it concerns no single orbiter", func(s *Event) string { return s.Body }),
	text("other_body", "the second orbiter", "it concerns one orbiter or none", func(s *Event) string { return s.Other }),
	text("direction", "rising or falling through the limit", "the event has no direction", func(s *Event) string { return s.Direction }),
	truth("ends_history", "the history ends here", func(s *Event) bool { return s.Ends }),
	text("detail", "the rule that changed, the value at the limit, or the regime from here on and why", "there is nothing to add", func(s *Event) string { return s.Detail }),
)

var outcomesTable = newTable("outcomes", "one row a history and body: what became of it", []string{"run_id", "body"},
	text("run_id", "identity of the history", "", func(s *BodyOutcome) string { return s.runID }),
	text("body", "name of the orbiter", "", func(s *BodyOutcome) string { return s.Body }),
	text("outcome", outcomeMeaning, "the body has no thermal state and was not lost", func(s *BodyOutcome) string { return s.Outcome }),
	float("period_Myr", "Myr", "median time between maxima of the temperature over the last half", "not oscillating", func(s *BodyOutcome) float64 { return s.Period / Megayear }),
	float("swing_K", "K", "median difference between maxima and the minima that follow, over the last half", "not oscillating", func(s *BodyOutcome) float64 { return s.Swing }),
	float("temperature_min_K", "K", "lowest temperature of the history", noThermal, func(s *BodyOutcome) float64 { return s.Temperature.Min }),
	float("temperature_max_K", "K", "highest temperature of the history", noThermal, func(s *BodyOutcome) float64 { return s.Temperature.Max }),
	float("tidal_heat_min_W", "W", "least tidal heat of the history", noInterior, func(s *BodyOutcome) float64 { return s.TidalHeat.Min }),
	float("tidal_heat_max_W", "W", "greatest tidal heat of the history", noInterior, func(s *BodyOutcome) float64 { return s.TidalHeat.Max }),
	float("tidal_heat_mean_W", "W", "mean tidal heat over the last half", noInterior, func(s *BodyOutcome) float64 { return s.MeanHeat }),
	float("surface_loss_mean_W", "W", "mean surface loss over the last half", noInterior, func(s *BodyOutcome) float64 { return s.MeanLoss }),
	float("eccentricity_min", "", "least eccentricity of the history", "", func(s *BodyOutcome) float64 { return s.Eccentricity.Min }),
	float("eccentricity_max", "", "greatest eccentricity of the history", "", func(s *BodyOutcome) float64 { return s.Eccentricity.Max }),
	float("misfit", "", "root mean square of (model − observed)/error over the body's observations", "the body has no observation", func(s *BodyOutcome) float64 { return s.Misfit }),
)

var runsTable = newTable("runs", "one row a history", []string{"run_id"},
	whole("run", "number of the history in its plan", func(s *runRow) int64 { return 0 }),
	text("run_id", "identity of the history: scenario, physics number and platform", "", func(s *runRow) string { return s.RunID }),
	text("scenario_id", "identity of the scenario, the same in every version", "", func(s *runRow) string { return s.ScenarioID }),
	text("parent_run_id", "the history this one continues", "it starts anew", func(s *runRow) string { return s.ParentRunID }),
	text("title", "title of the scenario", "it has none", func(s *runRow) string { return s.scenario.Title }),
	text("version", "version of the program", "", func(s *runRow) string { return Version() }),
	whole("physics", "number of the equations, raised whenever results move", func(s *runRow) int64 { return Physics }),
	text("platform", "operating system and processor: results are equal to the bit within one", "", func(s *runRow) string { return Platform() }),
	text("status", "complete: the span was reached; ended: an event ended the history; failed: the integration stopped; interrupted: it was asked to stop", "", func(s *runRow) string { return s.Status }),
	text("reason", "what ended the history or stopped the integration", "complete", func(s *runRow) string { return s.Reason }),
	text("judged_body", "the body whose outcome is the history's", "no body has a thermal state", func(s *runRow) string { return s.Judged }),
	text("outcome", outcomeMeaning, "no body has a thermal state and none was lost", func(s *runRow) string { return s.Outcome }),
	text("orbit_outcome", "locked: every chain kept its resonances, or in the resolved regime ends with all of its arguments librating; free: there is no chain, or arguments circulate that never librated; resonance-left; disrupted", "", func(s *runRow) string { return s.OrbitOutcome }),
	text("regime", "regime of the integration", "", func(s *runRow) string { return s.scenario.Run.Regime }),
	text("end_regime", "the one of adiabatic and resolved that holds at the end", "", func(s *runRow) string { return s.endRegime }),
	float("tolerance", "", "relative tolerance of a step", "", func(s *runRow) float64 { return s.scenario.Run.Tolerance }),
	float("recheck_tolerance", "", "tolerance of the history that rechecks holds this one against", "there was no recheck", func(s *runRow) float64 {
		if s.recheck == nil {
			return math.NaN()
		}
		return s.recheck.Tolerance
	}),
	text("recheck_outcome", "outcome at that tolerance", "there was no recheck, or as for outcome", func(s *runRow) string {
		if s.recheck == nil {
			return ""
		}
		return s.recheck.Outcome
	}),
	float("begin_Myr", "Myr", "time of the first row", "", func(s *runRow) float64 { return s.Begin / Megayear }),
	float("end_Myr", "Myr", "time of the last row", "", func(s *runRow) float64 { return s.End / Megayear }),
	float("energy_closure", "", "residual of the energy ledger over the energy turned over", "nothing turned over", func(s *runRow) float64 { return s.Closure.energy }),
	float("momentum_closure", "", "residual of the angular momentum ledger over the impulse turned over", "no torque acted", func(s *runRow) float64 { return s.Closure.momentum }),
	truth("suspect", "a closure is worse than the tolerance explains", func(s *runRow) bool { return s.Suspect }),
	text("cautions", "what limits the result, and rules that never acted; separated by semicolons", "there are none", func(s *runRow) string { return strings.Join(s.cautions, "; ") }),
	float("misfit", "", "root mean square of (model − observed)/error over all observations", "the scenario has no observation", func(s *runRow) float64 { return s.Misfit }),
	whole("steps", "accepted steps", func(s *runRow) int64 { return int64(s.Stats.Steps) }),
	whole("rejected_steps", "steps repeated because their error was too large", func(s *runRow) int64 { return int64(s.Stats.Rejected) }),
	whole("newton_failures", "steps repeated because Newton's iteration did not converge", func(s *runRow) int64 { return int64(s.Stats.NewtonFailures) }),
	whole("evaluations", "evaluations of the right-hand side", func(s *runRow) int64 { return int64(s.Stats.Derivs) }),
	whole("jacobians", "evaluations of the Jacobian", func(s *runRow) int64 { return int64(s.Stats.Jacobians) }),
	whole("decompositions", "LU decompositions", func(s *runRow) int64 { return int64(s.Stats.Decompositions) }),
	list("end_state", "", "state of the integration at the end, SI, to continue from", "", func(s *runRow) []float64 { return s.endState }),
	list("end_ledger", "", "quadratures at the end, SI, to continue from", "", func(s *runRow) []float64 { return s.endLedger }),
	list("end_librations", "", "librations at the end, SI, to continue from: of each chain the first least squared frequency and two marks, of each mode frequency, half the logarithm of the action and a mark", "", func(s *runRow) []float64 { return s.endLibrations }),
	list("end_still", "", "of an auto history that follows its librations: the state about which they were at the last look, to continue from; else empty", "", func(s *runRow) []float64 { return s.endStill }),
	list("end_observed", "", "observations met so far, to continue from: their places in the scenario and the values of the model, in pairs", "", func(s *runRow) []float64 { return s.endObserved }),
	list("end_changes", "", "places in the scenario of the changes already made, in their order", "", func(s *runRow) []float64 { return s.endChanges }),
)

var rechecksTable = newTable("rechecks", "one row a table, subject and column: its greatest difference from the same history at a smaller tolerance; none without a recheck", []string{"run_id", "table_name", "subject", "column_name"},
	text("run_id", "identity of the history", "", func(s *Difference) string { return s.runID }),
	text("table_name", "table of the dataset", "", func(s *Difference) string { return s.Table }),
	text("subject", "the body, the resonance as INNER-OUTER, or the event", "the whole system", func(s *Difference) string { return s.Subject }),
	text("column_name", "column of that table", "", func(s *Difference) string { return s.Column }),
	float("difference", "", "greatest difference, relative to the value or to a thousandth of the greatest there is", "", func(s *Difference) float64 { return s.Relative }),
	rough("time_Myr", "Myr", "where it is", "", func(s *Difference) float64 { return s.Time }),
	float("recorded", "", "the value there, in the column's unit", "", func(s *Difference) float64 { return s.Value }),
	float("rechecked", "", "the value at the smaller tolerance, in the column's unit", "", func(s *Difference) float64 { return s.Rechecked }),
)

var attemptsTable = newTable("attempts", "one row an attempt: what may differ between two runs of the same case", []string{"run_id", "started_at"},
	text("run_id", "identity of the history", "", func(s *Attempt) string { return s.runID }),
	text("started_at", "when the attempt began, UTC", "", func(s *Attempt) string { return s.Started }),
	float("wall_time_s", "s", "duration of the integration", "", func(s *Attempt) float64 { return s.Wall.Seconds() }),
	text("host", "name of the machine", "unknown", func(s *Attempt) string { return s.Host }),
	text("go_version", "version of the compiler", "", func(s *Attempt) string { return s.Go }),
)

// Tables returns every table of a dataset, in the order they are written;
// runs/ comes last, so what has a row there is whole.
func Tables() []*record.Table {
	return []*record.Table{
		&bodiesTable.Table, &resonancesTable.Table, &librationsTable.Table, &systemTable.Table, &eventsTable.Table,
		&outcomesTable.Table, &rechecksTable.Table, &attemptsTable.Table, &runsTable.Table,
	}
}
