package scenarios

import (
	"fmt"
	"math"
	"sort"

	"tidekiln/orbit"
)

// place is where an orbiter starts.
type place struct {
	period, axis, eccentricity float64
}

// layout starts every orbit, orders the orbiters outward and reports orbits
// that cannot be: a chain without a forced equilibrium, bodies inside the
// Roche limit, orbits that cross, chains whose members are no neighbours.
func (r *reader) layout(s *Scenario) {
	primary := orbit.Primary{Mass: s.Central.Mass, Radius: s.Central.Radius, J2: s.Central.J2}
	places := map[string]place{}
	byName := map[string]Orbiter{}
	for _, o := range s.Orbiters {
		byName[o.Name] = o
	}
	for _, c := range s.Chains {
		r.startChain(c, primary, byName, places)
	}
	for _, o := range s.Orbiters {
		if _, ok := places[o.Name]; ok || chainOf(s.Chains, o.Name) >= 0 {
			continue
		}
		p := place{period: o.Period, axis: o.SemimajorAxis, eccentricity: o.Eccentricity}
		if p.axis == 0 {
			p.axis = orbit.KeplerAxis(primary.Mass, o.Mass, p.period)
		} else {
			p.period = 2 * math.Pi * math.Sqrt(p.axis/(orbit.G*(primary.Mass+o.Mass))) * p.axis
		}
		places[o.Name] = p
	}
	if len(places) < len(s.Orbiters) {
		return // a chain has no start
	}
	sort.SliceStable(s.Orbiters, func(i, j int) bool {
		a, b := s.Orbiters[i], s.Orbiters[j]
		if p, q := places[a.Name].period, places[b.Name].period; p != q {
			return p < q
		}
		return a.Name < b.Name
	})
	order := map[string]int{}
	for i, o := range s.Orbiters {
		order[o.Name] = i
		r.nearness(o, places[o.Name], primary)
		if i > 0 {
			r.crossing(s.Orbiters[i-1].Name, o.Name, places)
		}
	}
	sort.SliceStable(s.Chains, func(i, j int) bool { return order[s.Chains[i].Members[0]] < order[s.Chains[j].Members[0]] })
	for _, c := range s.Chains {
		for k := 1; k < len(c.Members); k++ {
			if order[c.Members[k]] != order[c.Members[k-1]]+1 {
				r.report(path{"chain", c.Name, "members"}, fmt.Sprintf("%s and %s are not neighbours", c.Members[k-1], c.Members[k]),
					"list members from the innermost outward, without another orbit between them")
			}
		}
	}
}

// startChain places the members of a chain where it starts.
func (r *reader) startChain(c Chain, primary orbit.Primary, byName map[string]Orbiter, places map[string]place) {
	var members []Orbiter
	for _, m := range c.Members {
		members = append(members, byName[m])
	}
	chain, y, err := c.Start(primary, members)
	switch {
	case err != nil && c.Free:
		r.report(path{"chain", c.Name, "members"}, "the chain has no start: "+err.Error(), "check the elements of its members")
		return
	case err != nil:
		r.report(path{"chain", c.Name, "offset"}, "the chain has no locked start: "+err.Error(),
			"move the offset away from 0, as a rule to the negative side, or check masses and ratios")
		return
	}
	rates := chain.NewRates()
	chain.Flow(y, make([]float64, chain.Dim()), rates)
	for k, m := range c.Members {
		e := chain.Elements(k, y, rates)
		places[m] = place{period: 2 * math.Pi / e.MeanMotion, axis: e.SemimajorAxis, eccentricity: e.Eccentricity}
	}
}

// Start returns the chain and its state as the members, innermost first, start
// it: on the forced equilibrium, or from their elements if it is free.
func (c Chain) Start(primary orbit.Primary, members []Orbiter) (*orbit.Chain, []float64, error) {
	if c.Free {
		s := orbit.FreeStart{Primary: primary, Ratios: c.Ratios}
		for _, o := range members {
			s.Members = append(s.Members, orbit.FreeMember{
				Mass: o.Mass, Period: o.Period, SemimajorAxis: o.SemimajorAxis,
				Eccentricity: o.Eccentricity, Pericentre: o.Pericentre, MeanLongitude: o.MeanLongitude,
			})
		}
		return orbit.Free(s)
	}
	s := orbit.LockedStart{Primary: primary, Ratios: c.Ratios, Offset: c.Offset}
	for k, o := range members {
		s.Masses = append(s.Masses, o.Mass)
		if k == 0 {
			s.Period, s.SemimajorAxis = o.Period, o.SemimajorAxis
		}
	}
	return orbit.Lock(s)
}

func (r *reader) nearness(o Orbiter, p place, primary orbit.Primary) {
	at := r.orbitKey(o.Name)
	pericentre := p.axis * (1 - p.eccentricity)
	switch limit := primary.RocheLimit(o.Mass, o.Radius); {
	case !(pericentre > primary.Radius):
		r.report(at, fmt.Sprintf("its pericentre, %.6g km, lies inside the central body, %.6g km", pericentre/1e3, primary.Radius/1e3), "check the period, and the mass and radius of the central body")
	case pericentre < limit:
		r.report(at, fmt.Sprintf("its pericentre, %.6g km, lies inside the Roche limit, %.6g km", pericentre/1e3, limit/1e3), "check the period, and masses and radii of both bodies")
	}
}

func (r *reader) crossing(inner, outer string, places map[string]place) {
	p, q := places[inner], places[outer]
	far, near := p.axis*(1+p.eccentricity), q.axis*(1-q.eccentricity)
	if !(far < near) {
		r.report(r.orbitKey(outer), fmt.Sprintf("its orbit crosses that of %s: pericentre %.6g km, apocentre of %s %.6g km", inner, near/1e3, inner, far/1e3), "move the two apart or lower an eccentricity")
	}
}

// orbitKey is the key that places an orbiter.
func (r *reader) orbitKey(name string) path {
	at := path{"orbiter", name}
	for _, k := range [2]string{"period", "semimajor_axis"} {
		if _, whole := r.root.find(at.with(k)); whole {
			return at.with(k)
		}
	}
	return at
}

// chainOf returns the index of the chain an orbiter is a member of, or −1.
func chainOf(chains []Chain, orbiter string) int {
	for i, c := range chains {
		if contains(c.Members, orbiter) {
			return i
		}
	}
	return -1
}
