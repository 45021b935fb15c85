package record

import (
	"fmt"
	"io"
	"unicode/utf8"

	"github.com/parquet-go/parquet-go"
	"github.com/parquet-go/parquet-go/compress/zstd"
)

const (
	// layoutVersion counts changes of the files' layout; the program's version
	// is the caller's to put into the footer.
	layoutVersion = "1"
	// groupRows is the length of a row group: long enough to compress well and
	// short enough to keep a writer below some 50 MB.
	groupRows = 128 << 10
	// batchRows is how many rows of a column are handed over at a time.
	batchRows = 1 << 10
)

// encode writes rows as one Parquet file. Its bytes depend on the table, the
// rows and meta only; the library sorts the footer's keys.
func encode(w io.Writer, rows *Rows, meta map[string]string) error {
	schema, err := arrowSchema(rows.table)
	if err != nil {
		return err
	}
	options := []parquet.WriterOption{
		parquetSchema(rows.table),
		parquet.Compression(&zstd.Codec{Level: zstd.SpeedDefault}),
		// The library's default is its own version, which would change the bytes.
		parquet.CreatedBy("tidekiln", layoutVersion, ""),
		parquet.DataPageStatistics(true),
		parquet.KeyValueMetadata(arrowKey, schema),
	}
	for k, v := range meta {
		options = append(options, parquet.KeyValueMetadata(k, v))
	}
	pw := parquet.NewWriter(w, options...)
	for from := 0; from < rows.n; from += groupRows {
		to := min(from+groupRows, rows.n)
		for j, column := range pw.ColumnWriters() {
			if err := encodeColumn(column, j, rows.table.Columns[j].Kind, &rows.columns[j], from, to); err != nil {
				return err
			}
		}
		if err := pw.Flush(); err != nil {
			return err
		}
	}
	return pw.Close()
}

func encodeColumn(w *parquet.ColumnWriter, j int, k Kind, v *values, from, to int) error {
	batch := make([]parquet.Value, 0, batchRows)
	for from < to {
		end := min(from+batchRows, to)
		batch = batch[:0]
		for i := from; i < end; i++ {
			batch = appendLevels(batch, j, k, v, i)
		}
		if _, err := w.WriteRowValues(batch); err != nil {
			return err
		}
		from = end
	}
	return nil
}

// appendLevels adds the value at row i with its repetition and definition
// level: 0 is null, 1 a value or an empty list, 2 an element of a list.
func appendLevels(batch []parquet.Value, j int, k Kind, v *values, i int) []parquet.Value {
	if !v.valid[i] {
		return append(batch, parquet.NullValue().Level(0, 0, j))
	}
	var x parquet.Value
	switch k {
	case Float:
		x = parquet.DoubleValue(v.floats[i])
	case Int:
		x = parquet.Int64Value(v.ints[i])
	case Text:
		x = parquet.ByteArrayValue([]byte(v.texts[i]))
	case Bool:
		x = parquet.BooleanValue(v.bools[i])
	case Floats:
		if len(v.lists[i]) == 0 {
			return append(batch, parquet.NullValue().Level(0, 1, j))
		}
		for n, e := range v.lists[i] {
			batch = append(batch, parquet.DoubleValue(e).Level(min(n, 1), 2, j))
		}
		return batch
	}
	return append(batch, x.Level(0, 1, j))
}

// checkMeta refuses footer pairs that readers could not get back.
func checkMeta(meta map[string]string) error {
	for k, v := range meta {
		switch {
		case k == "", k == arrowKey:
			return fmt.Errorf("record: footer key %q is reserved: %w", k, ErrRows)
		case !utf8.ValidString(k) || !utf8.ValidString(v):
			return fmt.Errorf("record: footer key %q: key and value must be UTF-8: %w", k, ErrRows)
		}
	}
	return nil
}
