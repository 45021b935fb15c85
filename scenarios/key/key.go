// Package key is the vocabulary in which laws and bodies declare the keys a
// scenario may give them: name, dimension, range, default, meaning, source.
//
// A law of orbit or thermal lists its keys here as data, in its own file; the
// strict reader, the reference of keys and the shell completion are generated
// from those lists and hold no law's name. The package imports nothing of the
// project and knows no physics beyond dimensions.
package key

import "fmt"

// Kind says what a key's value is in a scenario file.
type Kind int

const (
	Quantity Kind = iota // a string with a unit, "1790 km"
	Number               // a bare, dimensionless number
	Integer              // a bare whole number
	Text                 // a free string
	Choice               // one of Key.Choices
	Bool                 // true or false
	Table                // a table that names a law of Key.Family
	Special              // a list or a choice of forms that the reader knows by itself; not for laws
)

// String names the kind as the reference of keys shows it.
func (k Kind) String() string {
	return [...]string{"quantity", "number", "integer", "text", "choice", "boolean", "table", "special"}[k]
}

// Key declares one key of a table.
type Key struct {
	Name string
	Kind Kind
	// Unit is the unit the key is shown in; it fixes the dimension a value
	// must have. Empty unless Kind is Quantity.
	Unit string
	// Default is used where the key is missing: a float64 in SI, int64, string
	// or bool. With a nil Default a key is required unless Optional.
	Default  any
	Optional bool
	// Range limits a Quantity (in SI), Number or Integer; the zero Range
	// admits every finite number.
	Range   Range
	Choices []string
	Family  *Family
	// Fixed marks a start value or a part of the system's structure: a change
	// during the history may not set it. A fixed Table keeps its law, while each
	// key inside decides for itself.
	Fixed   bool
	Meaning string
	Source  string // where the default or the definition comes from
}

// Range is an interval of finite numbers. Set tells a Range from the zero one.
type Range struct {
	Set              bool
	Min, Max         float64 // in SI; ±Inf for no bound
	MinOpen, MaxOpen bool
}

// Law is one model a table can choose by name, with the keys it then takes.
type Law struct {
	Name    string
	Meaning string
	Source  string
	Keys    []Key
	// Check looks at relations between keys after each has passed its own
	// range. It may be nil.
	Check func(Values) []Problem
}

// Family is a set of laws of which a table names one through its selector
// key: { law = "arrhenius", … } or { model = "andrade", … }. A family with an
// empty Selector has one law, its table names none, and Values.Law is that
// law's name.
type Family struct {
	Name     string // "viscosity law", for messages
	Selector string // "law" or "model"
	Laws     []*Law
}

// Find returns the law of that name, or nil.
func (f *Family) Find(name string) *Law {
	for _, l := range f.Laws {
		if l.Name == name {
			return l
		}
	}
	return nil
}

// Problem is one thing wrong with a table: the key it hangs on ("" for the
// table as a whole), what is wrong, and what to try.
type Problem struct {
	Key, What, Hint string
}

// Values are the checked values of one table, in SI, defaults filled in:
// float64 for Quantity and Number, int64, string, bool, and Values for a
// nested table. Law is the name of the law the table chose.
type Values struct {
	Law string
	Map map[string]any
}

// Has reports whether the key has a value.
func (v Values) Has(name string) bool { _, ok := v.Map[name]; return ok }

// Float returns a Quantity, in SI, or a Number. It panics on a key that the
// reader cannot have let through: asking for one is a mistake in a law's code.
func (v Values) Float(name string) float64 { return get[float64](v, name) }

// Int returns an Integer.
func (v Values) Int(name string) int64 { return get[int64](v, name) }

// Text returns a Text or Choice.
func (v Values) Text(name string) string { return get[string](v, name) }

// Bool returns a Bool.
func (v Values) Bool(name string) bool { return get[bool](v, name) }

// Table returns the values of a nested table.
func (v Values) Table(name string) Values { return get[Values](v, name) }

func get[T any](v Values, name string) T {
	x, ok := v.Map[name].(T)
	if !ok {
		panic(fmt.Sprintf("key: law %q asks for %q, which its keys do not declare as %T", v.Law, name, x))
	}
	return x
}
