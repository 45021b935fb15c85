package scenarios

import (
	"sort"
	"strings"

	"tidekiln/scenarios/key"
)

var changeKeys = []key.Key{
	{Name: "at", Kind: key.Quantity, Unit: "Myr", Optional: true, Range: key.AtLeast(0), Fixed: true,
		Meaning: "time of the change since the start; this or when"},
	{Name: "when", Kind: key.Special, Optional: true, Fixed: true,
		Meaning: `event that brings the change about, { event = "NAME", body = "NAME", other = "NAME" }; this or at`},
	{Name: "set", Kind: key.Special, Fixed: true,
		Meaning: "paths with their new values, { central.tide.k2_over_Q = 4e-5 }; start values and the structure of the system cannot change"},
}

// setting is one path of a change with the value the document gives it.
type setting struct {
	path  path
	value *node
}

// changes reads [[change]] and tries each on the scenario: timed ones after
// those before them, the others on the start.
func (r *reader) changes(n *node, top *scope) []Change {
	if n.form != listForm {
		r.report(path{"change"}, "is "+n.form.String()+", not a list", "write [[change]] in double brackets")
		return nil
	}
	if len(n.items) == 0 {
		return nil
	}
	base := r.root.clone()
	base.drop("change")
	base.drop("observed")
	all := make([]Change, len(n.items))
	sets := make([][]setting, len(n.items))
	var timed []int
	for i, item := range n.items {
		at := path{"change"}.item(i)
		if item.form != tableForm {
			r.report(at, "is "+item.form.String()+", not a table", "write [[change]] in double brackets")
			continue
		}
		v, _ := r.values(item, &scope{at: at, keys: changeKeys, outer: top})
		_, hasTime := v.Map["at"].(float64)
		when, hasEvent := v.Map["when"].(*node)
		switch {
		case item.table["at"] != nil && hasEvent:
			r.report(at.with("when"), "at and when are both given", "remove one")
		case hasEvent:
			if t, ok := r.trigger(when, at.with("when")); ok {
				all[i].When = &t
			}
		case hasTime:
			all[i].At = v.Float("at")
			timed = append(timed, i)
		case item.table["at"] == nil:
			r.report(at, "has neither at nor when", `add at = "1 Gyr", or when = { event = "NAME" }`)
		}
		set, ok := v.Map["set"].(*node)
		switch {
		case !ok:
		case set.form != tableForm || len(set.names) == 0:
			r.report(at.with("set"), "holds no paths with values", "write set = { central.tide.k2_over_Q = 4e-5 }")
		default:
			sets[i] = settings(set, nil)
		}
		if all[i].When != nil {
			all[i].Set, _ = r.try(base, sets[i], at)
		}
	}
	sort.SliceStable(timed, func(a, b int) bool { return all[timed[a]].At < all[timed[b]].At })
	for _, i := range timed {
		all[i].Set, base = r.try(base, sets[i], path{"change"}.item(i))
	}
	return all
}

// settings flattens the dotted keys of a set table: each table that is written
// out is a value.
func settings(n *node, at path) []setting {
	var all []setting
	for _, name := range n.names {
		c, p := n.table[name], at.with(name)
		if c.form == tableForm && (c.origin == dotted || c.origin == implied) {
			all = append(all, settings(c, p)...)
		} else {
			all = append(all, setting{p, c})
		}
	}
	return all
}

// try reads the scenario with a change's settings and reports what they break.
// It returns the settings in canonical form and the changed document, the old
// one if they break something.
func (r *reader) try(base *node, set []setting, at path) ([]Setting, *node) {
	at = at.with("set")
	trial := &reader{file: r.file, root: base.clone()}
	known := map[[3]string]bool{}
	for _, p := range r.problems {
		known[[3]string{p.Key, p.What, p.Hint}] = true
	}
	for _, s := range set {
		value := s.value.clone()
		if value.line > 0 {
			value.mark(at.String())
		}
		trial.set(base, setting{s.path, value})
	}
	s := trial.scenario()
	broken := false
	for _, p := range trial.problems {
		switch {
		case strings.HasPrefix(p.Key, at.String()+".") || strings.HasPrefix(p.File, "--"):
		case known[[3]string{p.Key, p.What, p.Hint}]:
			broken = true
			continue
		default: // something else no longer fits
			n, _ := r.root.find(at)
			p = Problem{File: r.file, Line: n.line, Key: at.String(), What: "leaves " + p.Key + " wrong: " + p.What, Hint: p.Hint}
		}
		broken = true
		r.problems = append(r.problems, p)
	}
	if broken {
		return nil, base
	}
	return s.canonical(set), trial.root
}

// mark makes a node and all below it speak as part of a change.
func (n *node) mark(place string) {
	n.place = place
	for _, c := range n.table {
		c.mark(place)
	}
	for _, c := range n.items {
		c.mark(place)
	}
}

// set puts one setting into the document, unless the key is fixed.
func (r *reader) set(base *node, s setting) {
	fail := func(what, hint string) *Problem {
		p := Problem{File: r.file, Line: s.value.line, Key: s.path.String(), What: what, Hint: hint}
		if s.value.line == 0 {
			p.File = s.value.place
		} else {
			p.Key = s.value.place + "." + p.Key
		}
		return &p
	}
	const hint = "a change may set keys of central.tide and of interiors, but not the model itself"
	var p *Problem
	orbiters, whole := base.find(s.path[:min(len(s.path), 2)])
	switch {
	case len(s.path) > 1 && s.path[0] == "orbiter" && !whole:
		p = fail("there is no orbiter "+quote(s.path[1]), choose(s.path[1], orbiters.names))
	case fixed(base, s.path):
		p = fail("cannot be changed during the history", hint)
	default:
		p = put(r.root, s.path, s.value, s.value.place, fail)
	}
	if p != nil {
		r.problems = append(r.problems, *p)
	}
}

// fixed reports whether a path leads to a fixed key. Unknown keys are not
// fixed: the reader reports them.
func fixed(root *node, p path) bool {
	var keys []key.Key
	rest := p
	switch {
	case p[0] == "central" && len(p) > 1:
		keys, rest = centralKeys, p[1:]
	case p[0] == "orbiter" && len(p) > 2:
		keys, rest = orbiterKeys, p[2:]
	default:
		return contains(names(topKeys), p[0])
	}
	n, _ := root.find(p[:len(p)-len(rest)])
	for i, name := range rest {
		k := keyNamed(keys, name)
		if i == len(rest)-1 {
			return k.Fixed
		}
		if k.Kind != key.Table {
			return false
		}
		n = n.child(name)
		if n == nil {
			return k.Fixed
		}
		law := k.Family.Laws[0]
		if k.Family.Selector != "" {
			chosen := n.child(k.Family.Selector)
			if chosen == nil || k.Family.Find(chosen.text) == nil {
				return false
			}
			law = k.Family.Find(chosen.text)
		}
		keys = lawKeys(k, law)
	}
	return false
}

// canonical writes the values of settings as the changed scenario has them.
func (s *Scenario) canonical(set []setting) []Setting {
	all := make([]Setting, len(set))
	for i, x := range set {
		all[i] = Setting{x.path.String(), s.textAt(x.path)}
	}
	sort.Slice(all, func(a, b int) bool { return all[a].Path < all[b].Path })
	return all
}

// textAt returns the value at a path of the central body or an orbiter.
func (s *Scenario) textAt(p path) string {
	keys, v := centralKeys, s.Central.declared()
	rest := p[1:]
	if p[0] == "orbiter" {
		rest = p[2:]
		for _, o := range s.Orbiters {
			if o.Name == p[1] {
				keys, v = orbiterKeys, o.declared(nil)
			}
		}
	}
	for {
		k := keyNamed(keys, rest[0])
		if len(rest) == 1 {
			return valueTOML(k, v.Map[rest[0]])
		}
		keys, v = withSelector(k, v.Table(rest[0]))
		rest = rest[1:]
	}
}

func (c Change) declared() key.Values {
	v := map[string]any{"set": literal("{ " + strings.TrimSuffix(strings.TrimPrefix(joined(c.Set, func(s Setting) string {
		return s.Path + " = " + s.Value
	}), "["), "]") + " }")}
	if c.When != nil {
		v["when"] = literal(c.When.toml())
	} else {
		v["at"] = c.At
	}
	return key.Values{Map: v}
}

// With returns the scenario with a change's settings made. The error is Errors
// and names each setting that is wrong, fixed, or leaves the scenario so.
func (s *Scenario) With(set []Setting) (*Scenario, error) {
	changed, _, err := s.with(set)
	return changed, err
}

// Schedule returns the scenario with one more change, at a time in s. Errors are
// those of With.
func (s *Scenario) Schedule(at float64, set []Setting) (*Scenario, error) {
	_, canonical, err := s.with(set)
	if err != nil {
		return nil, err
	}
	later := *s
	later.Changes = append(append([]Change(nil), s.Changes...), Change{At: at, Set: canonical})
	return &later, nil
}

// with makes settings and returns them in canonical form too.
func (s *Scenario) with(set []Setting) (*Scenario, []Setting, error) {
	root, problems := parse("scenario", []byte(s.TOML()))
	if len(problems) > 0 {
		return nil, nil, problems
	}
	root.drop("change")
	r := &reader{file: "scenario", root: root}
	base := root.clone()
	var made []setting
	for _, x := range set {
		e := Edit{Path: x.Path, Value: x.Value}
		p, value := e.parse()
		if p == nil {
			r.problems = append(r.problems, Problem{File: "set " + x.Path, Key: x.Path, What: "is not a path of keys"})
			continue
		}
		value.relocate("set " + x.Path)
		made = append(made, setting{p, value})
		r.set(base, made[len(made)-1])
	}
	changed := r.scenario()
	if len(r.problems) > 0 {
		return nil, nil, r.problems.sorted()
	}
	changed.Changes = s.Changes
	return changed, changed.canonical(made), nil
}
