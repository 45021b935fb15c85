package record

import "fmt"

// Frame is a table in memory. The slices it gives are its own: do not change
// them. Where valid is false the value is null and the slice holds zero.
type Frame struct {
	Meta map[string]string // footer pairs of the table's first file
	rows *Rows
}

// Frame gives the rows as a table in memory, without footer pairs. It shares
// their storage: append no more rows while it is in use.
func (r *Rows) Frame() *Frame { return &Frame{rows: r} }

// Len is the number of rows.
func (f *Frame) Len() int { return f.rows.n }

// Table is the declaration of the table, with its columns in order.
func (f *Frame) Table() *Table { return f.rows.table }

// Unit is the unit of a column, "" without one or without such a column.
func (f *Frame) Unit(column string) string {
	if j, ok := f.rows.index[column]; ok {
		return f.rows.table.Columns[j].Unit
	}
	return ""
}

// Floats gives a column of kind Float, in its unit. This and the four below
// fail with ErrRows if the table has no such column of that kind.
func (f *Frame) Floats(column string) (x []float64, valid []bool, err error) {
	v, err := f.column(column, Float)
	return v.floats, v.valid, err
}

// Ints gives a column of kind Int.
func (f *Frame) Ints(column string) (x []int64, valid []bool, err error) {
	v, err := f.column(column, Int)
	return v.ints, v.valid, err
}

// Texts gives a column of kind Text.
func (f *Frame) Texts(column string) (x []string, valid []bool, err error) {
	v, err := f.column(column, Text)
	return v.texts, v.valid, err
}

// Bools gives a column of kind Bool.
func (f *Frame) Bools(column string) (x []bool, valid []bool, err error) {
	v, err := f.column(column, Bool)
	return v.bools, v.valid, err
}

// Lists gives a column of kind Floats, in its unit.
func (f *Frame) Lists(column string) (x [][]float64, valid []bool, err error) {
	v, err := f.column(column, Floats)
	return v.lists, v.valid, err
}

func (f *Frame) column(name string, k Kind) (values, error) {
	t := f.rows.table
	j, ok := f.rows.index[name]
	if !ok {
		return values{}, fmt.Errorf("record: table %s has no column %q: %w", t.Name, name, ErrRows)
	}
	if have := t.Columns[j].Kind; have != k {
		return values{}, fmt.Errorf("record: table %s: column %q is %v, not %v: %w", t.Name, name, have, k, ErrRows)
	}
	return f.rows.columns[j], nil
}
