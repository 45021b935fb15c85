package record

import (
	"fmt"
	"math"
	"unicode/utf8"
)

// Rows is a growing buffer of rows of one table, kept by column. It is not safe
// for use by several goroutines at once.
type Rows struct {
	table   *Table
	index   map[string]int
	columns []values
	n       int
	err     error // the first misuse of a setter, reported by Writer.Write
}

// values holds one column; only the slice of its kind is in use.
type values struct {
	floats []float64
	ints   []int64
	texts  []string
	bools  []bool
	lists  [][]float64
	valid  []bool
}

// Row is one row of a Rows. It stays good while more rows are appended.
type Row struct {
	rows *Rows
	i    int
}

// NewRows returns an empty buffer for a table.
func NewRows(t *Table) *Rows {
	r := &Rows{table: t, index: make(map[string]int, len(t.Columns)), columns: make([]values, len(t.Columns))}
	for j, c := range t.Columns {
		r.index[c.Name] = j
	}
	return r
}

// Len is the number of rows.
func (r *Rows) Len() int { return r.n }

// Append adds a row of nulls and returns it to be filled.
func (r *Rows) Append() Row {
	for j := range r.columns {
		r.columns[j].grow(r.table.Columns[j].Kind)
	}
	r.n++
	return Row{r, r.n - 1}
}

func (v *values) grow(k Kind) {
	switch k {
	case Float:
		v.floats = append(v.floats, 0)
	case Int:
		v.ints = append(v.ints, 0)
	case Text:
		v.texts = append(v.texts, "")
	case Bool:
		v.bools = append(v.bools, false)
	case Floats:
		v.lists = append(v.lists, nil)
	}
	v.valid = append(v.valid, false)
}

// length is the number of values of a column of kind k.
func (v *values) length(k Kind) int {
	switch k {
	case Float:
		return len(v.floats)
	case Int:
		return len(v.ints)
	case Text:
		return len(v.texts)
	case Bool:
		return len(v.bools)
	case Floats:
		return len(v.lists)
	}
	return 0
}

// Float sets a column of kind Float, in the column's unit. A NaN is kept and
// refused by Writer.Write: what does not apply is left unset.
func (r Row) Float(column string, x float64) {
	if v := r.cell(column, Float); v != nil {
		v.floats[r.i] = x
	}
}

// Int sets a column of kind Int.
func (r Row) Int(column string, x int64) {
	if v := r.cell(column, Int); v != nil {
		v.ints[r.i] = x
	}
}

// Text sets a column of kind Text. The empty string is a value, not null.
func (r Row) Text(column, x string) {
	if v := r.cell(column, Text); v != nil {
		v.texts[r.i] = x
	}
}

// Bool sets a column of kind Bool.
func (r Row) Bool(column string, x bool) {
	if v := r.cell(column, Bool); v != nil {
		v.bools[r.i] = x
	}
}

// Floats sets a column of kind Floats to a copy of x, in the column's unit. An
// empty list is a value, not null.
func (r Row) Floats(column string, x []float64) {
	if v := r.cell(column, Floats); v != nil {
		v.lists[r.i] = append([]float64{}, x...)
	}
}

// cell finds the column and marks the row's value as set. A name or kind that
// does not fit is remembered: setters are too frequent to return errors.
func (r Row) cell(column string, k Kind) *values {
	j, ok := r.rows.index[column]
	if !ok {
		r.rows.misuse(r.i, column, "no such column")
		return nil
	}
	if have := r.rows.table.Columns[j].Kind; have != k {
		r.rows.misuse(r.i, column, fmt.Sprintf("column is %v, not %v", have, k))
		return nil
	}
	v := &r.rows.columns[j]
	v.valid[r.i] = true
	return v
}

func (r *Rows) misuse(row int, column, what string) {
	if r.err == nil {
		r.err = fmt.Errorf("record: table %s, column %q, row %d: %s: %w", r.table.Name, column, row, what, ErrRows)
	}
}

// check finds the first value that must not be written.
func (r *Rows) check() error {
	for j, c := range r.table.Columns {
		v := &r.columns[j]
		// The Parquet writer does not notice columns of different lengths.
		if n := v.length(c.Kind); n != r.n || len(v.valid) != r.n {
			r.misuse(n, c.Name, fmt.Sprintf("holds %d values for %d rows", n, r.n))
			break
		}
		for i, valid := range v.valid {
			if what := v.fault(c, i, valid); what != "" {
				r.misuse(i, c.Name, what)
				break
			}
		}
	}
	return r.err
}

// fault says what is wrong with the value at row i, "" if nothing is.
func (v *values) fault(c Column, i int, valid bool) string {
	if !valid {
		if c.Null == "" {
			return "left unset, but declared never null"
		}
		return ""
	}
	switch c.Kind {
	case Float:
		if math.IsNaN(v.floats[i]) {
			return "NaN: leave it unset if it does not apply"
		}
	case Text:
		if !utf8.ValidString(v.texts[i]) {
			return "text is not UTF-8"
		}
	case Floats:
		for k, x := range v.lists[i] {
			if math.IsNaN(x) {
				return fmt.Sprintf("NaN at place %d of the list", k)
			}
		}
	}
	return ""
}
