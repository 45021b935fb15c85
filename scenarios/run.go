package scenarios

import (
	"fmt"
	"math"

	"tidekiln/scenarios/key"
)

// A span is at least a year, and at most as long as the longest-lived stars.
const oneYear, longest = 31557600, 1e13 * 31557600

var runKeys = []key.Key{
	{Name: "span", Kind: key.Quantity, Unit: "Myr", Range: key.Between(oneYear, longest), Fixed: true,
		Meaning: "length of the history"},
	{Name: "start", Kind: key.Quantity, Unit: "Myr", Default: 0.0, Range: key.Between(0, longest), Fixed: true,
		Meaning: "age of the system when the history begins, for laws that depend on it; none of this version does"},
	{Name: "regime", Kind: key.Choice, Choices: []string{"adiabatic", "resolved", "auto"}, Default: "adiabatic", Fixed: true,
		Meaning: "how librations are treated: adiabatic steps over them, for gigayears; resolved follows each at some ten steps a year, for 1e4 to 1e8 years; auto is adiabatic, and resolved from where a libration grows beyond 10 deg or a fold is near until all are within 3 deg"},
	{Name: "method", Kind: key.Choice, Choices: []string{"radau", "rosenbrock", "splitting", "dop853"}, Optional: true, Fixed: true,
		Meaning: "integrator. Adiabatic: radau, the default, at any tolerance; rosenbrock, cheaper at 1e-3 and for many runs of moderate accuracy. Resolved: splitting, the exact linear flow about the libration centre and small remainders, the default where every chain starts locked; dop853, for everything, the default elsewhere and in the regime auto"},
	{Name: "tolerance", Kind: key.Number, Default: 1e-7, Range: key.Between(1e-12, 1e-3), Fixed: true,
		Meaning: "relative error allowed in a step"},
	{Name: "record", Kind: key.Special, Optional: true, Fixed: true,
		Meaning: `rows to write: a cadence, "1 Myr"; { change = 1e-3 }, rows between which straight lines reproduce every column to that relative bound; or { every = "1 Myr", change = 1e-3 }; without it the greatest 1, 2 or 5 times a power of ten Myr that gives at least 500 rows`},
	{Name: "seed", Kind: key.Integer, Default: int64(1), Fixed: true,
		Meaning: "seed of random phases; nothing of this version is random"},
	{Name: "judge", Kind: key.Text, Optional: true, Fixed: true,
		Meaning: "orbiter whose outcome is the run's; without it the innermost with a thermal state"},
	{Name: "max_steps", Kind: key.Integer, Optional: true, Range: key.AtLeast(1), Fixed: true,
		Meaning: "steps after which the run ends unfinished; without it 1e6, in the regimes resolved and auto 1e9"},
	{Name: "stop", Kind: key.Special, Optional: true, Fixed: true,
		Meaning: `events that end the run, a list: [{ event = "NAME", body = "NAME", other = "NAME" }], bodies optional`},
}

// Regimes of a run.
const (
	Adiabatic = "adiabatic"
	Resolved  = "resolved"
	Auto      = "auto"
)

// Methods of the adiabatic and of the resolved regime.
const (
	Radau      = "radau"
	Rosenbrock = "rosenbrock"
	Splitting  = "splitting"
	DOP853     = "dop853"
)

var triggerKeys = []key.Key{
	{Name: "event", Kind: key.Choice, Choices: eventNames, Fixed: true, Meaning: "name of the event"},
	{Name: "body", Kind: key.Text, Default: "", Fixed: true, Meaning: "orbiter it must concern, any if empty"},
	{Name: "other", Kind: key.Text, Default: "", Fixed: true, Meaning: "second orbiter it must concern, any if empty"},
}

func (r *reader) run(n *node, top *scope) Run {
	at := path{"run"}
	v, _ := r.values(n, &scope{at: at, keys: runKeys, outer: top})
	run := Run{}
	run.Span, _ = v.Map["span"].(float64)
	run.Start, _ = v.Map["start"].(float64)
	run.Regime, _ = v.Map["regime"].(string)
	run.Tolerance, _ = v.Map["tolerance"].(float64)
	run.Seed, _ = v.Map["seed"].(int64)
	run.Judge, _ = v.Map["judge"].(string)
	run.MaxSteps, _ = v.Map["max_steps"].(int64)
	if run.MaxSteps == 0 && n.table["max_steps"] == nil {
		run.MaxSteps = 1e6
		if run.Regime != Adiabatic {
			run.MaxSteps = 1e9
		}
	}
	if run.Method, _ = v.Map["method"].(string); run.Method == Radau && run.Regime == Adiabatic {
		run.Method = "" // the default, and the same case
	}
	if stepsOver := run.Method == Radau || run.Method == Rosenbrock; run.Method != "" && stepsOver != (run.Regime == Adiabatic) {
		other := map[bool]string{true: "splitting or dop853", false: "radau or rosenbrock"}[stepsOver]
		r.report(at.with("method"), quote(run.Method)+" is no integrator of the "+run.Regime+" regime", "remove it, or write "+other)
	}
	if record, ok := v.Map["record"].(*node); ok {
		run.Record = r.record(record, at.with("record"), run.Span)
	} else if run.Span > 0 {
		run.Record.EveryMyr = niceCadence(run.Span)
	}
	if stop, ok := v.Map["stop"].(*node); ok {
		if stop.form != listForm {
			r.report(at.with("stop"), "is "+stop.form.String()+", not a list of events", `write stop = [{ event = "NAME" }]`)
			return run
		}
		for i, item := range stop.items {
			if t, ok := r.trigger(item, at.with("stop").item(i)); ok {
				run.Stop = append(run.Stop, t)
			}
		}
	}
	return run
}

// trigger reads { event, body, other }.
func (r *reader) trigger(n *node, at path) (Trigger, bool) {
	if n.form != tableForm {
		r.report(at, "is "+n.form.String()+", not an event", `write { event = "NAME" }`)
		return Trigger{}, false
	}
	v, ok := r.values(n, &scope{at: at, keys: triggerKeys})
	if !ok {
		return Trigger{}, false
	}
	t := Trigger{Event: v.Text("event"), Body: v.Text("body"), Other: v.Text("other")}
	for _, b := range [2][2]string{{"body", t.Body}, {"other", t.Other}} {
		if b[1] != "" {
			r.orbiterNamed(b[1], at.with(b[0]))
		}
	}
	return t, true
}

// orbiterNamed reports a name that no orbiter has.
func (r *reader) orbiterNamed(name string, at path) bool {
	orbiters := r.root.table["orbiter"]
	if orbiters == nil || orbiters.form != tableForm {
		return false
	}
	if orbiters.table[name] == nil {
		r.report(at, fmt.Sprintf("there is no orbiter %q", name), choose(name, orbiters.names))
		return false
	}
	return true
}

// declared gives the values back as the keys declare them.
func (run Run) declared() key.Values {
	v := map[string]any{
		"span": run.Span, "start": run.Start, "regime": run.Regime, "tolerance": run.Tolerance,
		"record": literal(run.Record.toml()), "seed": run.Seed, "max_steps": run.MaxSteps,
	}
	if run.Method != "" {
		v["method"] = run.Method
	}
	if run.Judge != "" {
		v["judge"] = run.Judge
	}
	if len(run.Stop) > 0 {
		v["stop"] = literal(joined(run.Stop, Trigger.toml))
	}
	return key.Values{Map: v}
}

func (t Trigger) toml() string {
	return inline(triggerKeys, key.Values{Map: map[string]any{"event": t.Event, "body": t.Body, "other": t.Other}})
}

// mostRows bounds the rows of the cadence: a table of a million rows a body is
// a mistyped unit.
const mostRows = 1e6

func tooManyRows(span, every float64) bool {
	return every > 0 && span/every > mostRows*(1+1e-12) || math.IsInf(span/every, 0)
}
