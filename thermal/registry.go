package thermal

import (
	"fmt"
	"strings"

	"tidekiln/scenarios/key"
)

// model pairs the keys of a law with the code that builds it from them.
type model[T any] struct {
	law   *key.Law
	build func(key.Values) T
}

// registry lists the laws of one kind in the order they are shown.
type registry[T any] []model[T]

// family declares the registry's laws to the reader of scenarios. A family
// with an empty selector holds one law: its table is fixed and names no law.
func (r registry[T]) family(name, selector string) *key.Family {
	f := &key.Family{Name: name, Selector: selector}
	for _, m := range r {
		f.Laws = append(f.Laws, m.law)
	}
	return f
}

// build makes the law the values chose.
func (r registry[T]) build(kind string, v key.Values) (T, error) {
	var known []string
	for _, m := range r {
		if m.law.Name == v.Law {
			return m.build(v), nil
		}
		known = append(known, m.law.Name)
	}
	var none T
	return none, fmt.Errorf("unknown %s %q: choose one of %s", kind, v.Law, strings.Join(known, ", "))
}
