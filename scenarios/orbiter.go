package scenarios

import (
	"fmt"

	"tidekiln/orbit"
	"tidekiln/scenarios/key"
	"tidekiln/thermal"
)

var orbiterKeys = []key.Key{
	{Name: "mass", Kind: key.Quantity, Unit: "kg", Range: key.Positive(), Fixed: true,
		Meaning: "mass"},
	{Name: "radius", Kind: key.Quantity, Unit: "km", Range: key.Positive(), Fixed: true,
		Meaning: "mean radius"},
	{Name: "period", Kind: key.Quantity, Unit: "d", Range: key.Positive(), Optional: true, Fixed: true,
		Meaning: "mean orbital period 2π/(dλ/dt) at the start; this or semimajor_axis, of an orbiter outside a chain, the innermost of a locked one and every member of a free one"},
	{Name: "semimajor_axis", Kind: key.Quantity, Unit: "km", Range: key.Positive(), Optional: true, Fixed: true,
		Meaning: "semi-major axis at the start, in place of period"},
	{Name: "eccentricity", Kind: key.Number, Range: key.From(0, 1), Optional: true, Fixed: true,
		Meaning: "eccentricity at the start, 0 if not given, below 0.95 with a tide; a member of a locked chain has its forced one and gives none"},
	{Name: "pericentre", Kind: key.Quantity, Unit: "deg", Optional: true, Fixed: true,
		Meaning: "longitude of pericentre at the start, of a member of a free chain"},
	{Name: "mean_longitude", Kind: key.Quantity, Unit: "deg", Optional: true, Fixed: true,
		Meaning: "mean longitude at the start, of a member of a free chain"},
	{Name: "interior", Kind: key.Table, Family: thermal.Interiors, Optional: true, Fixed: true,
		Meaning: "interior model; without it the body raises no tide in itself"},
}

var orbiterLater = []string{"spin", "obliquity", "moment_of_inertia_factor"}

// orbiters reads the [orbiter.NAME] tables.
func (r *reader) orbiters(n *node, top *scope) []Orbiter {
	var all []Orbiter
	for _, name := range n.names {
		at, child := path{"orbiter", name}, n.table[name]
		if child.form != tableForm {
			hint := "each orbiter is a table of its own: [orbiter.NAME]"
			if contains(names(orbiterKeys), name) {
				hint = fmt.Sprintf("%s stands in the table of one orbiter: [orbiter.NAME]", name)
			}
			r.report(at, "is "+child.form.String()+", not an orbiter", hint)
			continue
		}
		r.bodyName(name, at)
		v, _ := r.values(child, &scope{at: at, keys: orbiterKeys, later: orbiterLater, outer: top})
		o := Orbiter{Name: name}
		o.Mass, _ = v.Map["mass"].(float64)
		o.Radius, _ = v.Map["radius"].(float64)
		o.Period, _ = v.Map["period"].(float64)
		o.SemimajorAxis, _ = v.Map["semimajor_axis"].(float64)
		o.Eccentricity, _ = v.Map["eccentricity"].(float64)
		o.Pericentre, _ = v.Map["pericentre"].(float64)
		o.MeanLongitude, _ = v.Map["mean_longitude"].(float64)
		o.Interior, _ = v.Map["interior"].(key.Values)
		if child.table["period"] != nil && child.table["semimajor_axis"] != nil {
			r.report(at.with("semimajor_axis"), "period and semimajor_axis are both given", "remove one: each fixes the other")
		}
		all = append(all, o)
	}
	return all
}

// declared gives the values back as the keys declare them; chain is the one the
// orbiter is a member of, or nil.
func (o Orbiter) declared(chain *Chain) key.Values {
	v := map[string]any{"mass": o.Mass, "radius": o.Radius}
	if o.Period > 0 {
		v["period"] = o.Period
	}
	if o.SemimajorAxis > 0 {
		v["semimajor_axis"] = o.SemimajorAxis
	}
	if chain == nil || chain.Free {
		v["eccentricity"] = o.Eccentricity
	}
	if chain != nil && chain.Free {
		v["pericentre"], v["mean_longitude"] = o.Pericentre, o.MeanLongitude
	}
	if o.Interior.Law != "" {
		v["interior"] = o.Interior
	}
	return key.Values{Map: v}
}

// bodyName reports a name that cannot stand in paths and columns.
func (r *reader) bodyName(name string, at path) bool {
	if isBare(name) && len(name) <= 64 {
		return true
	}
	r.report(at, quote(name)+" is not a name", "names have 1 to 64 letters, digits, - and _")
	return false
}

// withTide reports whether eccentricity functions are needed for an orbiter.
func withTide(c Central, o Orbiter) bool { return c.Tide.Law != "" || o.Interior.Law != "" }

// mostEccentric is where the eccentricity functions end.
const mostEccentric = orbit.MaxEccentricity
