package scenarios

import (
	"strings"

	"tidekiln/scenarios/key"
)

// ObservedColumns are the columns of bodies that an observation may name. A test
// of the tables keeps the list theirs.
var ObservedColumns = []string{
	"semimajor_axis_km",
	"eccentricity",
	"mean_motion_deg_per_day",
	"spin_deg_per_day",
	"temperature_K",
	"melt_fraction",
	"viscosity_Pa_s",
	"rigidity_Pa",
	"re_k2",
	"im_k2",
	"tidal_heat_W",
	"surface_loss_W",
	"convective_loss_W",
	"melt_loss_W",
	"radiogenic_heat_W",
	"surface_heat_flux_W_m2",
}

var observedKeys = []key.Key{
	{Name: "body", Kind: key.Text, Fixed: true, Meaning: "orbiter that was observed"},
	{Name: "column", Kind: key.Choice, Choices: ObservedColumns, Fixed: true, Meaning: "column of bodies that the value compares with"},
	{Name: "value", Kind: key.Special, Fixed: true, Meaning: "observed value: a number in the column's unit, or a string with a unit"},
	{Name: "error", Kind: key.Special, Fixed: true, Meaning: "its standard error, above 0, in the same way"},
	{Name: "at", Kind: key.Quantity, Unit: "Myr", Optional: true, Range: key.AtLeast(0), Fixed: true,
		Meaning: "time of the observation since the start; without it the end of the run"},
}

// atEnd is Observed.At for the end of the run.
const atEnd = -1

func (r *reader) observed(n *node, top *scope) []Observed {
	if n.form != listForm {
		r.report(path{"observed"}, "is "+n.form.String()+", not a list", "write [[observed]] in double brackets")
		return nil
	}
	var all []Observed
	for i, item := range n.items {
		at := path{"observed"}.item(i)
		if item.form != tableForm {
			r.report(at, "is "+item.form.String()+", not a table", "write [[observed]] in double brackets")
			continue
		}
		v, _ := r.values(item, &scope{at: at, keys: observedKeys, outer: top})
		o := Observed{At: atEnd}
		o.Body, _ = v.Map["body"].(string)
		if v.Map["body"] != nil {
			r.orbiterNamed(o.Body, at.with("body"))
		}
		if x, ok := v.Map["at"].(float64); ok {
			o.At = x
		}
		if o.Column, _ = v.Map["column"].(string); o.Column == "" {
			continue
		}
		o.Value = r.inColumn(v.Map["value"], at.with("value"), o.Column, key.Range{})
		o.Error = r.inColumn(v.Map["error"], at.with("error"), o.Column, key.Positive())
		all = append(all, o)
	}
	return all
}

// inColumn reads a value in the unit of a column.
func (r *reader) inColumn(x any, at path, column string, limit key.Range) float64 {
	n, ok := x.(*node)
	if !ok {
		return 0
	}
	k := key.Key{Name: at[len(at)-1], Kind: key.Number, Range: limit}
	if n.form != textForm {
		f, _ := r.number(n, at, k).(float64)
		return f
	}
	u := columnUnit(column)
	if u == "" {
		r.report(at, "is "+quote(n.text)+", but the column "+quote(column)+" has no unit", "write a plain number")
		return 0
	}
	exact, _, p := readQuantity(n.text, u, r.local)
	if p != nil {
		r.report(at, p.What, p.Hint)
		return 0
	}
	scale, _ := parseUnit(u, nil)
	f, _ := exact.Quo(exact, scale.scale).Float64()
	if !limit.Contains(f) {
		k.Kind, k.Unit = key.Quantity, u
		r.report(at, quote(n.text)+" is out of range", "it must be "+rangeText(k))
	}
	return f
}

// columnUnit is the unit a column's name ends in, "W/m2" of heat_flux_W_per_m2,
// "" for a dimensionless column. At least one word stands before the unit.
func columnUnit(column string) string {
	words := strings.Split(column, "_")
	for i := 1; i < len(words); i++ {
		name := strings.TrimSpace(strings.ReplaceAll(" "+strings.Join(words[i:], " "), " per ", "/"))
		if _, p := parseUnit(name, nil); p == nil {
			return name
		}
	}
	return ""
}

func (o Observed) declared() key.Values {
	v := map[string]any{
		"body": o.Body, "column": o.Column,
		"value": literal(formatNumber(o.Value)), "error": literal(formatNumber(o.Error)),
	}
	if o.At >= 0 {
		v["at"] = o.At
	}
	return key.Values{Map: v}
}
