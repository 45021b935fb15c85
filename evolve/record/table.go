package record

import (
	"fmt"
	"strings"
	"unicode/utf8"
)

// Kind is the type of a column's values.
type Kind int

// The kinds of columns, with the Parquet type each is stored as.
const (
	Float  Kind = iota // float64, DOUBLE
	Int                // int64, INT64
	Text               // string in UTF-8, BYTE_ARRAY with a dictionary
	Bool               // bool, BOOLEAN
	Floats             // list of float64, LIST of DOUBLE
)

var kindNames = [...]string{Float: "float", Int: "int", Text: "text", Bool: "bool", Floats: "floats"}

// String gives the word used for the kind in columns/.
func (k Kind) String() string {
	if k < 0 || int(k) >= len(kindNames) {
		return fmt.Sprintf("Kind(%d)", int(k))
	}
	return kindNames[k]
}

// Column declares one column.
//
// Name is ASCII letters, digits and "_", beginning with a letter, no reserved
// SQL word, and ends in the unit where there is one (semimajor_axis_km).
// Unit is "" for a number without dimension or no number at all. Meaning is one
// sentence. Null says when the value is null; with "" it never is, and a row
// that leaves it unset is refused.
type Column struct {
	Name    string
	Kind    Kind
	Unit    string
	Meaning string
	Null    string
}

// Table declares one table: a directory of the dataset. Key names the columns
// that together identify a row. A table must not change while in use.
type Table struct {
	Name    string
	Meaning string
	Columns []Column
	Key     []string
}

// validate checks a declaration by itself.
func (t *Table) validate() error {
	if t == nil {
		return fmt.Errorf("record: table is nil: %w", ErrDeclaration)
	}
	bad := func(format string, a ...any) error {
		return fmt.Errorf("record: table %q: %s: %w", t.Name, fmt.Sprintf(format, a...), ErrDeclaration)
	}
	if !isName(t.Name) || t.Name != strings.ToLower(t.Name) {
		return bad("name must be lower-case letters, digits and _, starting with a letter")
	}
	if len(t.Columns) == 0 {
		return bad("has no column")
	}
	if t.Meaning == "" || !utf8.ValidString(t.Meaning) {
		return bad("needs a meaning, in UTF-8")
	}
	seen := make(map[string]string, len(t.Columns))
	for _, c := range t.Columns {
		lower := strings.ToLower(c.Name)
		switch first, dup := seen[lower]; {
		case !isName(c.Name):
			return bad("column %q: name must be ASCII letters, digits and _, starting with a letter", c.Name)
		case sqlReserved(lower):
			return bad("column %q: reserved word of SQL: add a word or a unit", c.Name)
		case dup:
			return bad("columns %q and %q differ at most in case, which SQL does not see", first, c.Name)
		case c.Kind < 0 || int(c.Kind) >= len(kindNames):
			return bad("column %q: unknown kind %d", c.Name, int(c.Kind))
		case c.Meaning == "":
			return bad("column %q: needs a meaning", c.Name)
		case !utf8.ValidString(c.Unit + c.Meaning + c.Null):
			return bad("column %q: unit, meaning and null must be UTF-8", c.Name)
		}
		seen[lower] = c.Name
	}
	inKey := make(map[string]bool, len(t.Key))
	for _, k := range t.Key {
		if seen[strings.ToLower(k)] != k {
			return bad("key column %q is not declared", k)
		}
		if inKey[k] {
			return bad("key column %q is named twice", k)
		}
		inKey[k] = true
	}
	return nil
}

// validateAll checks the tables of one dataset, which besides get columns/.
func validateAll(tables []*Table) error {
	if len(tables) == 0 {
		return fmt.Errorf("record: no tables: %w", ErrDeclaration)
	}
	seen := map[string]bool{columnsName: true}
	for _, t := range tables {
		if err := t.validate(); err != nil {
			return err
		}
		if seen[t.Name] {
			return fmt.Errorf("record: table %q: name is taken: %w", t.Name, ErrDeclaration)
		}
		seen[t.Name] = true
	}
	return nil
}

func isName(s string) bool {
	for i := range len(s) {
		c := s[i]
		letter := 'a' <= c && c <= 'z' || 'A' <= c && c <= 'Z'
		if !letter && (i == 0 || c != '_' && (c < '0' || c > '9')) {
			return false
		}
	}
	return s != ""
}
