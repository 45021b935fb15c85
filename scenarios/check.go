package scenarios

import (
	"fmt"
	"strings"
)

// structure reports what is wrong between tables, each by itself sound or not:
// names, membership, and orbits given twice or not at all.
func (r *reader) structure(s *Scenario) {
	seen := map[string]path{}
	once := func(name string, at path) {
		lower := strings.ToLower(name)
		if other, ok := seen[lower]; ok && name != "" {
			r.report(at, fmt.Sprintf("the name %q is taken by %v", name, other), "names of bodies differ by more than upper and lower case")
			return
		}
		seen[lower] = at
	}
	once(s.Central.Name, path{"central", "name"})
	for _, o := range s.Orbiters {
		once(o.Name, path{"orbiter", o.Name})
	}
	clear(seen)
	for _, c := range s.Chains {
		once(c.Name, path{"chain", c.Name})
	}
	member := map[string]string{}
	for _, c := range s.Chains {
		for i, m := range c.Members {
			at := path{"orbiter", m}
			if _, exists := r.root.find(at); !exists {
				continue
			}
			if other, ok := member[m]; ok {
				r.report(path{"chain", c.Name, "members"}, fmt.Sprintf("%s is already a member of chain %s", m, other), "join the two chains, or leave it out of one")
				continue
			}
			member[m] = c.Name
			if c.Free {
				r.freeMember(c, at)
				continue
			}
			for _, k := range phases {
				if _, given := r.root.find(at.with(k)); given {
					r.report(at.with(k), fmt.Sprintf("is already fixed by chain %s", c.Name), "remove it: a locked chain starts on its libration centre, which has no phase")
				}
			}
			if i > 0 {
				for _, k := range [2]string{"period", "semimajor_axis"} {
					if _, given := r.root.find(at.with(k)); given {
						r.report(at.with(k), fmt.Sprintf("is already fixed by chain %s", c.Name), "remove it: ratios and offset place every member but the innermost")
					}
				}
			} else if !r.hasOrbit(at) {
				r.report(at.with("period"), "is missing", fmt.Sprintf(`add period = "NUMBER d" or semimajor_axis = "NUMBER km": %s is the innermost of chain %s`, m, c.Name))
			}
			if _, given := r.root.find(at.with("eccentricity")); given {
				r.report(at.with("eccentricity"), fmt.Sprintf("is already fixed by chain %s", c.Name), "remove it: a locked chain starts with its forced eccentricities")
			}
		}
	}
	if s.Run.Regime != Resolved {
		for _, c := range s.Chains {
			if c.Free {
				r.report(path{"chain", c.Name, "state"}, "is free, and the adiabatic regime follows no angle that may circulate", `write regime = "resolved", or state = "locked" with an offset`)
			}
		}
	}
	for _, o := range s.Orbiters {
		at := path{"orbiter", o.Name}
		_, linked := member[o.Name]
		for _, k := range phases {
			if _, given := r.root.find(at.with(k)); given && !linked && !r.membersUnsure {
				r.report(at.with(k), "has no effect outside a chain", "remove it: without a resonance the phases do not matter")
			}
		}
		if !linked && !r.hasOrbit(at) && !r.membersUnsure {
			r.report(at.with("period"), "is missing", `add period = "NUMBER d" or semimajor_axis = "NUMBER km", or make it a member of a chain`)
		}
		if o.Eccentricity >= mostEccentric && withTide(s.Central, o) {
			r.report(at.with("eccentricity"), fmt.Sprintf("%g is too high for tides", o.Eccentricity), fmt.Sprintf("it must be below %g where a tide acts", mostEccentric))
		}
		if o.Mass > 0 && s.Central.Mass > 0 && o.Mass >= s.Central.Mass {
			r.report(at.with("mass"), fmt.Sprintf("%s kg is not below that of the central body, %s kg", formatNumber(o.Mass), formatNumber(s.Central.Mass)), "check both masses")
		}
	}
	r.judged(s)
}

// phases are the angles that members of a free chain give.
var phases = [2]string{"pericentre", "mean_longitude"}

// freeMember reports what an orbiter in a free chain lacks.
func (r *reader) freeMember(c Chain, at path) {
	if !r.hasOrbit(at) {
		r.report(at.with("period"), "is missing", fmt.Sprintf(`add period = "NUMBER d" or semimajor_axis = "NUMBER km": chain %s is free`, c.Name))
	}
	for _, name := range [3]string{"eccentricity", phases[0], phases[1]} {
		if _, given := r.root.find(at.with(name)); !given {
			k := keyNamed(orbiterKeys, name)
			r.report(at.with(name), "is missing", fmt.Sprintf("add %s: chain %s is free", sample(k), c.Name))
		}
	}
}

func (r *reader) hasOrbit(at path) bool {
	_, period := r.root.find(at.with("period"))
	_, axis := r.root.find(at.with("semimajor_axis"))
	return period || axis
}

func (r *reader) judged(s *Scenario) {
	at := path{"run", "judge"}
	if s.Run.Judge == "" {
		if _, given := r.root.find(at); given {
			r.report(at, "names no orbiter", "leave it out for the innermost with a thermal state")
		}
		return
	}
	if r.orbiterNamed(s.Run.Judge, at) {
		if _, given := r.root.find(path{"orbiter", s.Run.Judge, "interior"}); !given {
			r.report(at, s.Run.Judge+" has no interior to judge", "name an orbiter with an interior")
		}
	}
}
