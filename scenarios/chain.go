package scenarios

import (
	"fmt"
	"math"
	"regexp"
	"strconv"

	"tidekiln/scenarios/key"
)

var chainKeys = []key.Key{
	{Name: "members", Kind: key.Special, Fixed: true,
		Meaning: `two to ten neighbouring orbiters, innermost first: ["NAME", "NAME"]`},
	{Name: "ratios", Kind: key.Special, Fixed: true,
		Meaning: `first-order resonance of each pair of neighbours, one fewer than members: ["2:1", "3:2"]`},
	{Name: "state", Kind: key.Choice, Choices: []string{"locked", "free"}, Default: "locked", Fixed: true,
		Meaning: "start: locked, on the forced equilibrium; free, from the period, eccentricity, pericentre and mean_longitude of each member, for the resolved regime"},
	{Name: "libration", Kind: key.Quantity, Unit: "deg", Default: 0.01 * math.Pi / 180, Range: key.From(0, math.Pi/2), Fixed: true,
		Meaning: "half-width at the start of each libration in the angle it shows in most; what tides and migration make of it is carried along"},
	{Name: "offset", Kind: key.Quantity, Unit: "deg/day", Optional: true, Fixed: true,
		Meaning: "(j+1) n_outer − j n_inner, common to a locked chain, which must give it, not 0; it fixes the outer orbits and the forced eccentricities"},
}

// longestChain bounds the members: a chain of N has 2^(N−2) candidate centres.
const longestChain = 10

func (r *reader) chains(n *node, top *scope) []Chain {
	var all []Chain
	for _, name := range n.names {
		at, child := path{"chain", name}, n.table[name]
		if child.form != tableForm {
			r.report(at, "is "+child.form.String()+", not a chain", "each chain is a table of its own: [chain.NAME]")
			continue
		}
		r.bodyName(name, at)
		v, _ := r.values(child, &scope{at: at, keys: chainKeys, outer: top})
		c := Chain{Name: name}
		c.Free = v.Map["state"] == "free"
		r.offset(c, child, at)
		c.Offset, _ = v.Map["offset"].(float64)
		c.Libration, _ = v.Map["libration"].(float64)
		if v.Map["offset"] != nil && c.Offset == 0 {
			r.report(at.with("offset"), "is 0", "at exact commensurability the forced eccentricities diverge; give a negative offset, such as \"-0.5 deg/day\"")
		}
		before := len(r.problems)
		if members, ok := v.Map["members"].(*node); ok {
			c.Members = r.members(members, at.with("members"))
		}
		if c.Members == nil || len(r.problems) > before {
			r.membersUnsure = true
		}
		if ratios, ok := v.Map["ratios"].(*node); ok {
			c.Ratios = r.ratios(ratios, at.with("ratios"))
			if members := child.table["members"]; members != nil && members.form == listForm && ratios.form == listForm && len(members.items) >= 2 && len(ratios.items) != len(members.items)-1 {
				r.report(at.with("ratios"), fmt.Sprintf("gives %d ratios for %d members", len(ratios.items), len(members.items)),
					fmt.Sprintf("give %d, one for each pair of neighbours", len(members.items)-1))
			}
		}
		all = append(all, c)
	}
	return all
}

// offset reports an offset that a locked chain lacks or a free one has.
func (r *reader) offset(c Chain, n *node, at path) {
	given := n.table["offset"] != nil
	switch {
	case c.Free && given:
		r.report(at.with("offset"), "is already fixed by the elements of the members", `remove it, or write state = "locked"`)
	case !c.Free && !given:
		for _, name := range n.names {
			if !contains(names(chainKeys), name) && nearest(name, names(chainKeys)) == "offset" {
				return // reported as that
			}
		}
		k := keyNamed(chainKeys, "offset")
		r.report(at.with("offset"), "is missing", "add "+sample(k)+": "+k.Meaning)
	}
}

func (r *reader) members(n *node, at path) []string {
	if n.form != listForm {
		r.report(at, "is "+n.form.String()+", not a list of orbiters", `write members = ["INNER", "OUTER"]`)
		return nil
	}
	if len(n.items) < 2 || len(n.items) > longestChain {
		r.report(at, fmt.Sprintf("has %d, not 2 to %d orbiters", len(n.items), longestChain), "an orbiter in no resonance is in no chain")
		return nil
	}
	var members []string
	for i, item := range n.items {
		switch {
		case item.form != textForm:
			r.report(at.item(i), "is "+item.form.String()+", not the name of an orbiter", "")
		case contains(members, item.text):
			r.report(at.item(i), item.text+" is named twice", "")
		default:
			r.orbiterNamed(item.text, at.item(i))
			members = append(members, item.text)
		}
	}
	return members
}

var ratioPattern = regexp.MustCompile(`^\s*([0-9]{1,4})\s*:\s*([0-9]{1,4})\s*$`)

func (r *reader) ratios(n *node, at path) []int {
	if n.form != listForm {
		r.report(at, "is "+n.form.String()+", not a list of ratios", `write ratios = ["2:1"]`)
		return nil
	}
	var all []int
	for i, item := range n.items {
		if j, what, hint := ratioOf(item); what != "" {
			r.report(at.item(i), what, hint)
		} else {
			all = append(all, j)
		}
	}
	return all
}

// highestRatio bounds j of (j+1):j: neighbours nearer than 30:29 overlap with
// the next resonance at any mass a moon has (Wisdom 1980, AJ 85, 1122).
const highestRatio = 29

// ratioOf returns j of "(j+1):j", or what is wrong with it.
func ratioOf(n *node) (j int, what, try string) {
	m := ratioPattern.FindStringSubmatch(n.text)
	const hint = `write "2:1", the inner orbit's revolutions first`
	if n.form != textForm {
		return 0, "is " + n.form.String() + ", not a ratio", hint
	}
	if m == nil {
		return 0, quote(n.text) + " is not a ratio", hint
	}
	p, _ := strconv.Atoi(m[1])
	q, _ := strconv.Atoi(m[2])
	a, b := p, q
	for b != 0 {
		a, b = b, a%b
	}
	switch {
	case q == 0 || p == 0 || p == q:
		return 0, quote(n.text) + " is not a resonance", hint
	case p-q == 1 && q <= highestRatio:
		return q, "", ""
	case q-p == 1:
		return 0, quote(n.text) + " has the outer orbit first", fmt.Sprintf(`write "%d:%d", the inner orbit's revolutions first`, q, p)
	case p-q == 1:
		return 0, quote(n.text) + " is too close a resonance", fmt.Sprintf("resonances beyond %d:%d overlap", highestRatio+1, highestRatio)
	case p/a-q/a == 1:
		return 0, quote(n.text) + " is not in lowest terms", fmt.Sprintf(`did you mean "%d:%d"?`, p/a, q/a)
	}
	return 0, quote(n.text) + " is not first order", "only (j+1):j resonances can lock a chain: 2:1, 3:2, 4:3, …"
}

func (c Chain) declared() key.Values {
	v := map[string]any{
		"members": literal(joined(c.Members, quoteTOML)),
		"ratios":  literal(joined(c.Ratios, func(j int) string { return quoteTOML(fmt.Sprintf("%d:%d", j+1, j)) })),
	}
	if c.Free {
		v["state"] = "free"
	} else {
		v["state"], v["offset"], v["libration"] = "locked", c.Offset, c.Libration
	}
	return key.Values{Map: v}
}
