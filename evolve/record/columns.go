package record

import "fmt"

// columnsName is the table that describes all tables of a dataset.
const columnsName = "columns"

// columnsTable declares columns/. The words table, column and null are reserved
// in SQL, hence the longer names.
func columnsTable() *Table {
	return &Table{
		Name:    columnsName,
		Meaning: "The reference of all columns of this dataset, one row for each column of each table, in order.",
		Columns: []Column{
			{Name: "table_name", Kind: Text, Meaning: "Table, which is the name of its directory."},
			{Name: "table_meaning", Kind: Text, Meaning: "What a row of the table stands for."},
			{Name: "column_name", Kind: Text, Meaning: "Column of the table."},
			{Name: "kind", Kind: Text, Meaning: "Type of the values: float, int, text, bool or floats (a list)."},
			{Name: "unit", Kind: Text, Meaning: "Unit of the values.", Null: "the values have no unit"},
			{Name: "meaning", Kind: Text, Meaning: "What the values are."},
			{Name: "null_when", Kind: Text, Meaning: "When a value is null.", Null: "the column is never null"},
			{Name: "key_position", Kind: Int, Meaning: "Place of the column, from 1, among those that together identify a row.", Null: "the column is not among them"},
		},
		Key: []string{"table_name", "column_name"},
	}
}

// columnsRows describes tables, columns/ itself included, as rows of columns/.
func columnsRows(tables []*Table) *Rows {
	own := columnsTable()
	rows := NewRows(own)
	for _, t := range append([]*Table{own}, tables...) {
		position := make(map[string]int, len(t.Key))
		for i, k := range t.Key {
			position[k] = i + 1
		}
		for _, c := range t.Columns {
			row := rows.Append()
			row.Text("table_name", t.Name)
			row.Text("table_meaning", t.Meaning)
			row.Text("column_name", c.Name)
			row.Text("kind", c.Kind.String())
			row.Text("meaning", c.Meaning)
			if c.Unit != "" {
				row.Text("unit", c.Unit)
			}
			if c.Null != "" {
				row.Text("null_when", c.Null)
			}
			if p := position[c.Name]; p > 0 {
				row.Int("key_position", int64(p))
			}
		}
	}
	return rows
}

// tablesOf is the inverse of columnsRows, with columns/ itself first.
func tablesOf(r *Rows) ([]*Table, error) {
	text := func(name string) values { return r.columns[r.index[name]] }
	table, about, column, kind := text("table_name"), text("table_meaning"), text("column_name"), text("kind")
	unit, meaning, null, key := text("unit"), text("meaning"), text("null_when"), text("key_position")
	kinds := make(map[string]Kind, len(kindNames))
	for k, name := range kindNames {
		kinds[name] = Kind(k)
	}
	var tables []*Table
	byName := map[string]*Table{}
	keys := map[*Table]map[int64]string{}
	for i := range r.n {
		t := byName[table.texts[i]]
		if t == nil {
			t = &Table{Name: table.texts[i], Meaning: about.texts[i]}
			byName[t.Name], keys[t] = t, map[int64]string{}
			tables = append(tables, t)
		}
		k, ok := kinds[kind.texts[i]]
		if !ok {
			return nil, fmt.Errorf("row %d of columns: unknown kind %q", i, kind.texts[i])
		}
		t.Columns = append(t.Columns, Column{column.texts[i], k, unit.texts[i], meaning.texts[i], null.texts[i]})
		if key.valid[i] {
			keys[t][key.ints[i]] = column.texts[i]
		}
	}
	for _, t := range tables {
		for p := int64(1); p <= int64(len(keys[t])); p++ {
			t.Key = append(t.Key, keys[t][p])
		}
		if err := t.validate(); err != nil {
			return nil, err
		}
	}
	return tables, nil
}
