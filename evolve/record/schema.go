package record

import (
	"bytes"
	"encoding/base64"
	"fmt"

	"github.com/apache/arrow-go/v18/arrow"
	"github.com/apache/arrow-go/v18/arrow/ipc"
	"github.com/parquet-go/parquet-go"
)

// arrowKey is the footer key under which Arrow readers look for the schema
// (Arrow, "Reading and writing Apache Parquet", stored schema).
const arrowKey = "ARROW:schema"

// inOrder is a group whose fields keep the declared order; the library's own
// sorts them by name.
type inOrder struct {
	parquet.Group
	columns []Column
}

var _ parquet.Node = inOrder{}

// Fields lists the columns as declared.
func (g inOrder) Fields() []parquet.Field {
	byName := make(map[string]parquet.Field, len(g.columns))
	for _, f := range g.Group.Fields() {
		byName[f.Name()] = f
	}
	fields := make([]parquet.Field, len(g.columns))
	for i, c := range g.columns {
		fields[i] = byName[c.Name]
	}
	return fields
}

// parquetSchema is the schema of a table's files: one leaf a column, all
// optional, so that null is really null.
func parquetSchema(t *Table) *parquet.Schema {
	group := inOrder{make(parquet.Group, len(t.Columns)), t.Columns}
	for _, c := range t.Columns {
		group.Group[c.Name] = parquet.Optional(leaf(c.Kind))
	}
	return parquet.NewSchema(t.Name, group)
}

func leaf(k Kind) parquet.Node {
	switch k {
	case Int:
		return parquet.Encoded(parquet.Int(64), &parquet.DeltaBinaryPacked)
	case Text:
		return parquet.Encoded(parquet.String(), &parquet.RLEDictionary)
	case Bool:
		return parquet.Leaf(parquet.BooleanType)
	case Floats:
		return parquet.List(leaf(Float))
	}
	return parquet.Encoded(parquet.Leaf(parquet.DoubleType), &parquet.ByteStreamSplit)
}

// kindOf recognises a column of parquetSchema in a file.
func kindOf(f parquet.Field) (Kind, bool) {
	if !f.Optional() {
		return 0, false
	}
	if !f.Leaf() {
		inner := f.Fields()
		if len(inner) != 1 || !inner[0].Repeated() || inner[0].Leaf() {
			return 0, false
		}
		element := inner[0].Fields()
		return Floats, len(element) == 1 && element[0].Required() && element[0].Leaf() &&
			element[0].Type().Kind() == parquet.Double
	}
	switch f.Type().Kind() {
	case parquet.Double:
		return Float, true
	case parquet.Int64:
		return Int, true
	case parquet.ByteArray:
		return Text, true
	case parquet.Boolean:
		return Bool, true
	}
	return 0, false
}

// arrowSchema is the value of ARROW:schema: the Arrow IPC schema message in
// base64, with the description of the table and, on every field, "unit",
// "description" and "null" where the column has them.
func arrowSchema(t *Table) (string, error) {
	fields := make([]arrow.Field, len(t.Columns))
	for i, c := range t.Columns {
		keys, vals := []string{"description"}, []string{c.Meaning}
		if c.Unit != "" {
			keys, vals = append(keys, "unit"), append(vals, c.Unit)
		}
		if c.Null != "" {
			keys, vals = append(keys, "null"), append(vals, c.Null)
		}
		fields[i] = arrow.Field{Name: c.Name, Type: arrowType(c.Kind), Nullable: true, Metadata: arrow.NewMetadata(keys, vals)}
	}
	about := arrow.NewMetadata([]string{"description"}, []string{t.Meaning})
	var buf bytes.Buffer
	if err := ipc.NewWriter(&buf, ipc.WithSchema(arrow.NewSchema(fields, &about))).Close(); err != nil {
		return "", fmt.Errorf("record: table %s: schema: %w", t.Name, err)
	}
	// The stream ends in an 8-byte end mark that does not belong to the message.
	return base64.StdEncoding.EncodeToString(buf.Bytes()[:buf.Len()-8]), nil
}

func arrowType(k Kind) arrow.DataType {
	switch k {
	case Int:
		return arrow.PrimitiveTypes.Int64
	case Text:
		return arrow.BinaryTypes.String
	case Bool:
		return arrow.FixedWidthTypes.Boolean
	case Floats:
		return arrow.ListOfField(arrow.Field{Name: "element", Type: arrow.PrimitiveTypes.Float64})
	}
	return arrow.PrimitiveTypes.Float64
}
