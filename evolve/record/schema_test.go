package record

import (
	"bytes"
	"encoding/base64"
	"errors"
	"path/filepath"
	"strings"
	"testing"

	"github.com/apache/arrow-go/v18/arrow"
	"github.com/apache/arrow-go/v18/arrow/ipc"
	"github.com/parquet-go/parquet-go/format"
)

// TestArrowSchema decodes ARROW:schema with arrow-go's own reader.
func TestArrowSchema(t *testing.T) {
	dir := filepath.Join(t.TempDir(), "out")
	must(t, writeSample(dir, 0, 10, CreateOptions{}))
	for _, table := range append(sampleTables(), columnsTable()) {
		p, err := openPart(firstPart(dir, table.Name), table)
		must(t, err)
		defer p.file.Close()
		encoded, ok := p.Lookup(arrowKey)
		if !ok {
			t.Fatalf("%s: no %s", table.Name, arrowKey)
		}
		message, err := base64.StdEncoding.DecodeString(encoded)
		must(t, err)
		r, err := ipc.NewReader(bytes.NewReader(message))
		must(t, err)
		schema := r.Schema()
		metadata := schema.Metadata()
		if got, _ := metadata.GetValue("description"); got != table.Meaning {
			t.Errorf("%s: description %q", table.Name, got)
		}
		if schema.NumFields() != len(table.Columns) {
			t.Fatalf("%s: %d fields", table.Name, schema.NumFields())
		}
		types := map[Kind]arrow.Type{Float: arrow.FLOAT64, Int: arrow.INT64, Text: arrow.STRING, Bool: arrow.BOOL, Floats: arrow.LIST}
		for i, c := range table.Columns {
			f := schema.Field(i)
			if f.Name != c.Name || f.Type.ID() != types[c.Kind] || !f.Nullable {
				t.Errorf("%s: field %v for column %+v", table.Name, f, c)
			}
			for key, want := range map[string]string{"unit": c.Unit, "description": c.Meaning, "null": c.Null} {
				if got, has := f.Metadata.GetValue(key); got != want || has != (want != "") {
					t.Errorf("%s, %s: %s %q (%v), want %q", table.Name, c.Name, key, got, has, want)
				}
			}
		}
	}
}

// TestEncodings looks for what the package comment promises, in the footer.
func TestEncodings(t *testing.T) {
	dir := filepath.Join(t.TempDir(), "out")
	must(t, writeSample(dir, 0, 1000, CreateOptions{}))
	p, err := openPart(firstPart(dir, "bodies"), sampleTables()[1])
	must(t, err)
	defer p.file.Close()
	want := map[string]format.Encoding{"time_Myr": format.ByteStreamSplit, "body": format.RLEDictionary, "run": format.DeltaBinaryPacked}
	for _, chunk := range p.Metadata().RowGroups[0].Columns {
		m := chunk.MetaData
		if m.Codec != format.Zstd {
			t.Errorf("%v: codec %v", m.PathInSchema, m.Codec)
		}
		e, ok := want[m.PathInSchema[0]]
		if !ok {
			continue
		}
		delete(want, m.PathInSchema[0])
		found := false
		for _, have := range m.Encoding {
			found = found || have == e
		}
		if !found {
			t.Errorf("%v: encodings %v, want %v", m.PathInSchema, m.Encoding, e)
		}
	}
	if len(want) != 0 {
		t.Errorf("columns missing: %v", want)
	}
}

func TestDeclarations(t *testing.T) {
	column := func(name string) *Table {
		return &Table{Name: "t", Meaning: "m", Columns: []Column{{Name: name, Meaning: "m"}}}
	}
	good := column("k2_over_Q")
	two := column("a_km")
	two.Columns = append(two.Columns, Column{Name: "A_km", Meaning: "m"})
	key := column("a_km")
	key.Key = []string{"b"}
	twice := column("a_km")
	twice.Key = []string{"a_km", "a_km"}
	kind := column("a_km")
	kind.Columns[0].Kind = Floats + 1
	dumb := column("a_km")
	dumb.Columns[0].Meaning = ""
	for name, c := range map[string]struct {
		tables []*Table
		want   string // "" if good
	}{
		"good":           {[]*Table{good}, ""},
		"dot":            {[]*Table{column("a.km")}, "must be ASCII letters"},
		"space":          {[]*Table{column("a km")}, "must be ASCII letters"},
		"digit first":    {[]*Table{column("2a")}, "must be ASCII letters"},
		"not ASCII":      {[]*Table{column("λ_deg")}, "must be ASCII letters"},
		"no name":        {[]*Table{column("")}, "must be ASCII letters"},
		"reserved":       {[]*Table{column("end")}, "reserved word of SQL"},
		"reserved, case": {[]*Table{column("Offset")}, "reserved word of SQL"},
		"case only":      {[]*Table{two}, `columns "a_km" and "A_km" differ`},
		"key":            {[]*Table{key}, `key column "b" is not declared`},
		"key twice":      {[]*Table{twice}, `key column "a_km" is named twice`},
		"kind":           {[]*Table{kind}, "unknown kind 5"},
		"no meaning":     {[]*Table{dumb}, "needs a meaning"},
		"no column":      {[]*Table{{Name: "t", Meaning: "m"}}, "has no column"},
		"same table":     {[]*Table{good, good}, "name is taken"},
		"columns":        {[]*Table{{Name: "columns", Meaning: "m", Columns: good.Columns}}, "name is taken"},
		"path":           {[]*Table{{Name: "../t", Meaning: "m", Columns: good.Columns}}, "must be lower-case"},
		"nil":            {[]*Table{nil}, "nil"},
		"none":           {nil, "no tables"},
	} {
		err := validateAll(c.tables)
		if c.want == "" && err != nil || c.want != "" && (!errors.Is(err, ErrDeclaration) || !strings.Contains(err.Error(), c.want)) {
			t.Errorf("%s: %v, want %q", name, err, c.want)
		}
	}
	must(t, columnsTable().validate())
	// The words that made DuckDB fail as bare column names when tried: case,
	// end, offset, order, group, from, to; run, period, status, regime did not.
	for _, w := range []string{"case", "end", "offset", "order", "group", "from", "to", "all", "with"} {
		if !sqlReserved(w) {
			t.Errorf("%s is not taken as reserved", w)
		}
	}
	for _, w := range []string{"run", "period", "status", "regime", "e", "ord"} {
		if sqlReserved(w) {
			t.Errorf("%s is taken as reserved", w)
		}
	}
}
