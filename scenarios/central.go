package scenarios

import (
	"math/big"

	"tidekiln/orbit"
	"tidekiln/scenarios/key"
)

var centralKeys = []key.Key{
	{Name: "name", Kind: key.Text, Fixed: true,
		Meaning: "name of the central body"},
	{Name: "mass", Kind: key.Quantity, Unit: "kg", Range: key.Positive(), Fixed: true,
		Meaning: "mass of the central body"},
	{Name: "radius", Kind: key.Quantity, Unit: "km", Range: key.Positive(), Fixed: true,
		Meaning: "equatorial radius of the central body"},
	{Name: "J2", Kind: key.Number, Default: 0.0, Range: key.Between(0, 0.5), Fixed: true,
		Meaning: "oblateness: the second zonal coefficient of the gravity field"},
	{Name: "tide", Kind: key.Table, Family: orbit.CentralLaws, Optional: true,
		Meaning: "tidal response of the central body; without it the orbiters raise no tide in it"},
}

var centralLater = []string{"spin", "moment_of_inertia_factor", "J4"}

// central reads [central] and makes M_central and R_central known.
func (r *reader) central(n *node, top *scope) Central {
	at := path{"central"}
	v, _ := r.values(n, &scope{at: at, keys: centralKeys, later: centralLater, outer: top})
	c := Central{}
	c.Name, _ = v.Map["name"].(string)
	c.Mass, _ = v.Map["mass"].(float64)
	c.Radius, _ = v.Map["radius"].(float64)
	c.J2, _ = v.Map["J2"].(float64)
	c.Tide, _ = v.Map["tide"].(key.Values)
	if v.Map["name"] != nil {
		r.bodyName(c.Name, at.with("name"))
	}
	if c.Mass > 0 && c.Radius > 0 {
		r.local = map[string]unit{
			"M_central": {new(big.Rat).SetFloat64(c.Mass), dimension{mass: 1}},
			"R_central": {new(big.Rat).SetFloat64(c.Radius), dimension{length: 1}},
		}
	}
	return c
}

func (c Central) declared() key.Values {
	v := map[string]any{"name": c.Name, "mass": c.Mass, "radius": c.Radius, "J2": c.J2}
	if c.Tide.Law != "" {
		v["tide"] = c.Tide
	}
	return key.Values{Map: v}
}
