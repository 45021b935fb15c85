package scenarios

import (
	"fmt"
	"math"
	"strconv"
	"strings"

	"tidekiln/scenarios/key"
)

// reader turns a document into a scenario and collects all that is wrong.
type reader struct {
	file          string
	root          *node
	local         map[string]unit // M_central and R_central, once they are known
	membersUnsure bool            // a chain's members are in doubt, so nobody is known to be outside one
	problems      Errors
}

// report hangs a problem on a path; its place is that of the deepest part the
// document has.
func (r *reader) report(p path, what, hint string) {
	n, _ := r.root.find(p)
	problem := Problem{File: r.file, Line: n.line, Key: p.String(), What: what, Hint: hint}
	switch {
	case n.place != "" && n.line == 0:
		problem.File = n.place
	case n.place != "":
		problem.Key = n.place + "." + problem.Key // a change's setting
	}
	r.problems = append(r.problems, problem)
}

// scope is a table being read: the keys it may hold, those of later versions,
// and the table around it.
type scope struct {
	at    path
	keys  []key.Key
	later []string
	hint  func(name string) string // more to say about an unknown key; may be nil
	outer *scope
}

func names(keys []key.Key) []string {
	all := make([]string, len(keys))
	for i, k := range keys {
		all[i] = k.Name
	}
	return all
}

func contains(all []string, name string) bool {
	for _, s := range all {
		if s == name {
			return true
		}
	}
	return false
}

// values reads a table by its keys' declarations: unknown keys, missing keys,
// kinds, units and ranges are reported, defaults filled in. ok tells whether
// the table is sound.
func (r *reader) values(n *node, s *scope) (v key.Values, ok bool) {
	before := len(r.problems)
	v.Map = map[string]any{}
	known := names(s.keys)
	meant := map[string]bool{} // keys that an unknown one was likely to be
	for _, name := range n.names {
		if !contains(known, name) {
			meant[r.unknown(name, s)] = true
		}
	}
	for _, k := range s.keys {
		at := s.at.with(k.Name)
		switch child := n.table[k.Name]; {
		case child != nil:
			if x := r.value(child, at, k, s); x != nil {
				v.Map[k.Name] = x
			}
		case k.Default != nil:
			v.Map[k.Name] = k.Default
		case !k.Optional && !meant[k.Name]:
			r.report(at, "is missing", "add "+sample(k)+": "+k.Meaning)
		}
	}
	return v, len(r.problems) == before
}

// unknown reports a key that a table does not have, and returns the one of its
// keys that was likely meant, or "".
func (r *reader) unknown(name string, s *scope) (near string) {
	at := s.at.with(name)
	if contains(s.later, name) {
		r.report(at, "is not available in this version", "remove it")
		return ""
	}
	hint := ""
	for o := s.outer; o != nil && hint == ""; o = o.outer {
		if contains(names(o.keys), name) {
			hint = fmt.Sprintf("%s is a key of [%v]; move it there", name, o.at)
			if len(o.at) == 0 {
				hint = name + " is a key of the top of the file; move it above the first table"
			}
		}
	}
	if hint == "" && s.hint != nil {
		hint = s.hint(name)
	}
	if hint == "" {
		if near = nearest(name, names(s.keys)); near != "" {
			hint = "did you mean " + near + "?"
		} else {
			hint = "known here: " + strings.Join(names(s.keys), ", ")
		}
	}
	r.report(at, "is not a known key", hint)
	return near
}

// value reads one value, nil if it is wrong. A Special stays a node.
func (r *reader) value(n *node, at path, k key.Key, s *scope) any {
	switch k.Kind {
	case key.Quantity:
		return r.quantity(n, at, k)
	case key.Number:
		return r.number(n, at, k)
	case key.Integer:
		return r.integer(n, at, k)
	case key.Text, key.Choice:
		return r.text(n, at, k)
	case key.Bool:
		if n.form == boolForm {
			return n.text == "true"
		}
		r.report(at, "is "+n.form.String()+", not true or false", "write "+k.Name+" = true, without quotes")
		return nil
	case key.Table:
		if v, ok := r.law(n, at, k, s); ok {
			return v
		}
		return nil
	default:
		return n
	}
}

func (r *reader) quantity(n *node, at path, k key.Key) any {
	switch n.form {
	case textForm:
	case integerForm, floatForm:
		if text := strings.ReplaceAll(n.text, "_", ""); numberPattern.FindString(text) == text {
			r.report(at, "needs a unit", fmt.Sprintf(`write %s = "%s %s"`, k.Name, text, k.Unit))
			return nil
		}
		r.report(at, n.text+" is not a number with a unit", "write "+sample(k))
		return nil
	default:
		r.report(at, "is "+n.form.String()+", not a number with a unit", "write "+sample(k))
		return nil
	}
	_, si, p := readQuantity(n.text, k.Unit, r.local)
	if p != nil {
		r.report(at, p.What, p.Hint)
		return nil
	}
	if !k.Range.Contains(si) {
		r.report(at, quote(n.text)+" is out of range", "it must be "+rangeText(k))
		return nil
	}
	return si + 0 // −0 becomes 0, which reads back the same
}

func (r *reader) number(n *node, at path, k key.Key) any {
	if n.form != integerForm && n.form != floatForm {
		r.report(at, "is "+n.form.String()+", not a plain number", "write "+sample(k)+", without quotes or unit")
		return nil
	}
	x, err := strconv.ParseFloat(strings.ReplaceAll(n.text, "_", ""), 64)
	if i, e := strconv.ParseInt(strings.ReplaceAll(n.text, "_", ""), 0, 64); e == nil && n.form == integerForm {
		x, err = float64(i), nil
	}
	if err != nil || math.IsNaN(x) || math.IsInf(x, 0) {
		r.report(at, n.text+" is not finite", "give a finite number")
		return nil
	}
	if !k.Range.Contains(x) {
		r.report(at, n.text+" is out of range", "it must be "+rangeText(k))
		return nil
	}
	return x + 0
}

func (r *reader) integer(n *node, at path, k key.Key) any {
	text := strings.ReplaceAll(n.text, "_", "")
	i, err := strconv.ParseInt(text, 0, 64)
	if n.form == floatForm { // 1e6 is a whole number too
		var x float64
		if x, err = strconv.ParseFloat(text, 64); err == nil && (x != math.Trunc(x) || math.Abs(x) > 1<<53) {
			err = strconv.ErrRange
		}
		i = int64(x)
	} else if n.form != integerForm {
		err = strconv.ErrSyntax
	}
	if err != nil {
		what := n.text + " is not a whole number"
		if n.form != integerForm && n.form != floatForm {
			what = "is " + n.form.String() + ", not a whole number"
		}
		r.report(at, what, "write "+sample(k)+", without quotes or unit")
		return nil
	}
	if !k.Range.Contains(float64(i)) {
		r.report(at, n.text+" is out of range", "it must be "+rangeText(k))
		return nil
	}
	return i
}

func (r *reader) text(n *node, at path, k key.Key) any {
	if n.form != textForm {
		r.report(at, "is "+n.form.String()+", not a string", "write "+sample(k)+", in quotes")
		return nil
	}
	if k.Kind == key.Choice && !contains(k.Choices, n.text) {
		r.report(at, quote(n.text)+" is not one of its choices", choose(n.text, k.Choices))
		return nil
	}
	return n.text
}

func choose(name string, choices []string) string {
	if near := nearest(name, choices); near != "" {
		return "did you mean " + quote(near) + "?"
	}
	return "choose one of " + strings.Join(choices, ", ")
}

// law reads a table whose selector names a law, by that law's keys.
func (r *reader) law(n *node, at path, k key.Key, outer *scope) (key.Values, bool) {
	f := k.Family
	if n.form != tableForm {
		r.report(at, "is "+n.form.String()+", not a table", "write "+sample(k))
		return key.Values{}, false
	}
	var choices []string
	for _, l := range f.Laws {
		choices = append(choices, l.Name)
	}
	law := f.Laws[0]
	if f.Selector != "" {
		selector := n.table[f.Selector]
		switch {
		case selector == nil:
			r.report(at, "names no "+f.Selector, fmt.Sprintf("add %s = %q, or another of %s", f.Selector, choices[0], strings.Join(choices, ", ")))
			return key.Values{}, false
		case selector.form != textForm:
			r.report(at.with(f.Selector), "is "+selector.form.String()+", not a name", "choose one of "+strings.Join(choices, ", "))
			return key.Values{}, false
		}
		if law = f.Find(selector.text); law == nil {
			r.report(at.with(f.Selector), fmt.Sprintf("there is no %s %q", f.Name, selector.text), choose(selector.text, choices))
			return key.Values{}, false
		}
	}
	v, ok := r.values(n, &scope{at: at, keys: lawKeys(k, law), outer: outer, hint: func(name string) string {
		for _, l := range f.Laws {
			if contains(names(l.Keys), name) {
				return fmt.Sprintf("%s is a key of %s = %q", name, f.Selector, l.Name)
			}
		}
		return ""
	}})
	if v.Law = law.Name; f.Selector != "" {
		delete(v.Map, f.Selector)
	}
	if ok && law.Check != nil {
		for _, p := range law.Check(v) {
			ok = false
			hang := at
			if p.Key != "" {
				hang = append(hang[:len(hang):len(hang)], strings.Split(p.Key, ".")...)
			}
			r.report(hang, p.What, p.Hint)
		}
	}
	return v, ok
}

// lawKeys are the keys of a table that has chosen a law: the selector, if the
// family has one, and the law's own.
func lawKeys(k key.Key, law *key.Law) []key.Key {
	f := k.Family
	if f.Selector == "" {
		return law.Keys
	}
	selector := key.Key{Name: f.Selector, Kind: key.Choice, Fixed: k.Fixed, Meaning: f.Name}
	for _, l := range f.Laws {
		selector.Choices = append(selector.Choices, l.Name)
	}
	return append([]key.Key{selector}, law.Keys...)
}

// sample shows how a key is written.
func sample(k key.Key) string {
	switch k.Kind {
	case key.Quantity:
		return fmt.Sprintf(`%s = "NUMBER %s"`, k.Name, k.Unit)
	case key.Number, key.Integer:
		return k.Name + " = NUMBER"
	case key.Choice:
		return fmt.Sprintf("%s = %q", k.Name, k.Choices[0])
	case key.Bool:
		return k.Name + " = true"
	case key.Table:
		if k.Family.Selector != "" {
			return fmt.Sprintf("%s = { %s = %q, … }", k.Name, k.Family.Selector, k.Family.Laws[0].Name)
		}
		return k.Name + " = { … }"
	case key.Text:
		return k.Name + ` = "…"`
	default:
		return k.Name
	}
}

// rangeText says which values a key admits, in its unit.
func rangeText(k key.Key) string {
	shown := func(x float64) string {
		if k.Kind == key.Quantity {
			return formatQuantity(x, k.Unit)
		}
		return formatNumber(x)
	}
	low, high := "at least ", "at most "
	if k.Range.MinOpen {
		low = "above "
	}
	if k.Range.MaxOpen {
		high = "below "
	}
	var parts []string
	if !k.Range.Set {
		return "finite"
	}
	if k.Range.Min == k.Range.Max {
		return shown(k.Range.Min)
	}
	if !math.IsInf(k.Range.Min, -1) {
		parts = append(parts, low+shown(k.Range.Min))
	}
	if !math.IsInf(k.Range.Max, 1) {
		parts = append(parts, high+shown(k.Range.Max))
	}
	return strings.Join(parts, " and ")
}
