package evolve

import (
	"math"

	"tidekiln/evolve/record"
)

// column is one column of a table whose rows are made of an S, with the way to
// its value; exactly one of the four is set. NaN, "" and an absent list become
// null.
type column[S any] struct {
	record.Column
	float  func(*S) float64
	whole  func(*S) int64
	text   func(*S) string
	truth  func(*S) bool
	list   func(*S) []float64
	rough  bool // a diagnostic, which recording by change need not reproduce
	around bool // an angle in degrees, 360 is 0
}

// table is a table of the dataset with the way from S to a row.
type table[S any] struct {
	record.Table
	columns []column[S]
}

func newTable[S any](name, meaning string, keys []string, columns ...column[S]) *table[S] {
	t := &table[S]{Table: record.Table{Name: name, Meaning: meaning, Key: keys}, columns: columns}
	for _, c := range columns {
		t.Table.Columns = append(t.Table.Columns, c.Column)
	}
	return t
}

// add appends s to rows.
func (t *table[S]) add(rows *record.Rows, s *S) {
	row := rows.Append()
	for i := range t.columns {
		c := &t.columns[i]
		switch {
		case c.float != nil:
			if x := c.float(s); !math.IsNaN(x) {
				row.Float(c.Name, x)
			}
		case c.text != nil:
			if x := c.text(s); x != "" {
				row.Text(c.Name, x)
			}
		case c.whole != nil:
			row.Int(c.Name, c.whole(s))
		case c.truth != nil:
			row.Bool(c.Name, c.truth(s))
		case c.list != nil:
			if x := c.list(s); x != nil {
				row.Floats(c.Name, x)
			}
		}
	}
}

// smooth appends to out the values that straight lines between rows are to
// reproduce, NaN where null.
func (t *table[S]) smooth(out []float64, s *S) []float64 {
	for i := range t.columns {
		if c := &t.columns[i]; c.float != nil && !c.rough {
			out = append(out, c.float(s))
		}
	}
	return out
}

// turning tells for each value of smooth whether it is an angle.
func (t *table[S]) turning() []bool {
	var out []bool
	for i := range t.columns {
		if c := &t.columns[i]; c.float != nil && !c.rough {
			out = append(out, c.around)
		}
	}
	return out
}

func float[S any](name, unit, meaning, null string, f func(*S) float64) column[S] {
	return column[S]{Column: record.Column{Name: name, Kind: record.Float, Unit: unit, Meaning: meaning, Null: null}, float: f}
}

// rough is a float column that recording by change leaves out.
func rough[S any](name, unit, meaning, null string, f func(*S) float64) column[S] {
	c := float(name, unit, meaning, null, f)
	c.rough = true
	return c
}

// turn is a float column that holds an angle in degrees.
func turn[S any](name, meaning, null string, f func(*S) float64) column[S] {
	c := float(name, "deg", meaning, null, f)
	c.around = true
	return c
}

func text[S any](name, meaning, null string, f func(*S) string) column[S] {
	return column[S]{Column: record.Column{Name: name, Kind: record.Text, Meaning: meaning, Null: null}, text: f}
}

func whole[S any](name, meaning string, f func(*S) int64) column[S] {
	return column[S]{Column: record.Column{Name: name, Kind: record.Int, Meaning: meaning}, whole: f}
}

func truth[S any](name, meaning string, f func(*S) bool) column[S] {
	return column[S]{Column: record.Column{Name: name, Kind: record.Bool, Meaning: meaning}, truth: f}
}

func list[S any](name, unit, meaning, null string, f func(*S) []float64) column[S] {
	return column[S]{Column: record.Column{Name: name, Kind: record.Floats, Unit: unit, Meaning: meaning, Null: null}, list: f}
}
