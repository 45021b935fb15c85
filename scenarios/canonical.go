package scenarios

import (
	"crypto/sha256"
	"fmt"
	"strings"

	"tidekiln/scenarios/key"
)

// literal is the TOML text of a Special.
type literal string

// section is one table of a resolved scenario.
type section struct {
	head string // "[run]", "[[change]]"
	keys []key.Key
	v    key.Values
}

// sections lists the tables of the scenario in canonical order, every default
// filled in.
func (s *Scenario) sections() []section {
	all := []section{
		{"[run]", runKeys, s.Run.declared()},
		{"[central]", centralKeys, s.Central.declared()},
	}
	chain := map[string]*Chain{}
	for i := range s.Chains {
		for _, m := range s.Chains[i].Members {
			chain[m] = &s.Chains[i]
		}
	}
	for _, o := range s.Orbiters {
		v := o.declared(chain[o.Name])
		delete(v.Map, "interior")
		all = append(all, section{"[orbiter." + o.Name + "]", orbiterKeys, v})
		if k := keyNamed(orbiterKeys, "interior"); o.Interior.Law != "" {
			keys, v := withSelector(k, o.Interior)
			all = append(all, section{"[orbiter." + o.Name + ".interior]", keys, v})
		}
	}
	for _, c := range s.Chains {
		all = append(all, section{"[chain." + c.Name + "]", chainKeys, c.declared()})
	}
	for _, c := range s.Changes {
		all = append(all, section{"[[change]]", changeKeys, c.declared()})
	}
	for _, o := range s.Observed {
		all = append(all, section{"[[observed]]", observedKeys, o.declared()})
	}
	return all
}

// TOML writes the scenario with every default filled in, units on every value
// and keys in canonical order. Reading it gives an equal scenario, to the bit.
func (s *Scenario) TOML() string {
	var b strings.Builder
	if s.Title != "" {
		fmt.Fprintf(&b, "title = %s\n", quoteTOML(s.Title))
	}
	for _, t := range s.sections() {
		fmt.Fprintf(&b, "\n%s\n", t.head)
		for _, k := range t.keys {
			if x, ok := t.v.Map[k.Name]; ok {
				fmt.Fprintf(&b, "%s = %s\n", k.Name, valueTOML(k, x))
			}
		}
	}
	return strings.TrimPrefix(b.String(), "\n")
}

// ID is the fingerprint of the resolved case: 16 hex digits of the SHA-256 of
// its tables, numbers as hexadecimal SI values. Comments, the order of keys,
// the choice of units and the title do not enter, and neither does the version
// of the program.
func (s *Scenario) ID() string {
	h := sha256.New()
	for _, t := range s.sections() {
		fmt.Fprintln(h, t.head)
		for _, k := range t.keys {
			if x, ok := t.v.Map[k.Name]; ok {
				fmt.Fprintf(h, "%s = %s\n", k.Name, fingerprint(k, x))
			}
		}
	}
	return fmt.Sprintf("%x", h.Sum(nil)[:8])
}

func fingerprint(k key.Key, x any) string {
	switch x := x.(type) {
	case float64:
		return fmt.Sprintf("%x", x)
	case key.Values:
		keys, v := withSelector(k, x)
		var b strings.Builder
		for _, k := range keys {
			if x, ok := v.Map[k.Name]; ok {
				fmt.Fprintf(&b, "%s = %s, ", k.Name, fingerprint(k, x))
			}
		}
		return "{ " + b.String() + "}"
	}
	return valueTOML(k, x)
}

// withSelector puts the name of the law back among the values.
func withSelector(k key.Key, v key.Values) ([]key.Key, key.Values) {
	law := k.Family.Find(v.Law)
	all := map[string]any{}
	for name, x := range v.Map {
		all[name] = x
	}
	if k.Family.Selector != "" {
		all[k.Family.Selector] = v.Law
	}
	return lawKeys(k, law), key.Values{Law: v.Law, Map: all}
}

func keyNamed(keys []key.Key, name string) key.Key {
	for _, k := range keys {
		if k.Name == name {
			return k
		}
	}
	return key.Key{}
}

// valueTOML writes one value as its key declares it.
func valueTOML(k key.Key, x any) string {
	switch x := x.(type) {
	case float64:
		if k.Kind == key.Quantity {
			return quoteTOML(formatQuantity(x, k.Unit))
		}
		return formatNumber(x)
	case string:
		return quoteTOML(x)
	case key.Values:
		return inline(withSelector(k, x))
	}
	return fmt.Sprint(x)
}

// inline writes values as an inline table of TOML 1.0, on one line.
func inline(keys []key.Key, v key.Values) string {
	var parts []string
	for _, k := range keys {
		if x, ok := v.Map[k.Name]; ok {
			parts = append(parts, k.Name+" = "+valueTOML(k, x))
		}
	}
	return "{ " + strings.Join(parts, ", ") + " }"
}

func joined[T any](all []T, text func(T) string) string {
	parts := make([]string, len(all))
	for i, x := range all {
		parts[i] = text(x)
	}
	return "[" + strings.Join(parts, ", ") + "]"
}

// quoteTOML writes a basic string of TOML.
func quoteTOML(s string) string {
	var b strings.Builder
	b.WriteByte('"')
	for _, c := range s {
		switch {
		case c == '"' || c == '\\':
			b.WriteByte('\\')
			b.WriteRune(c)
		case c < ' ' || c == 0x7f:
			fmt.Fprintf(&b, `\u%04X`, c)
		default:
			b.WriteRune(c)
		}
	}
	b.WriteByte('"')
	return b.String()
}
