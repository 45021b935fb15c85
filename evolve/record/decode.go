package record

import (
	"errors"
	"fmt"
	"io"
	"os"

	"github.com/parquet-go/parquet-go"
)

// part is an open file of a table.
type part struct {
	*parquet.File
	file *os.File
}

// openPart reads the footer of a file and checks that it holds the columns of
// the table, in order.
func openPart(path string, t *Table) (p *part, err error) {
	f, err := os.Open(path)
	if err != nil {
		return nil, err
	}
	defer func() {
		if err != nil {
			err = fmt.Errorf("%s: %w", path, errors.Join(err, f.Close()))
		}
	}()
	defer catch(&err)
	info, err := f.Stat()
	if err != nil {
		return nil, err
	}
	pf, err := parquet.OpenFile(f, info.Size(), parquet.SkipPageIndex(true), parquet.SkipBloomFilters(true))
	if err != nil {
		return nil, err
	}
	fields := pf.Schema().Fields()
	if len(fields) != len(t.Columns) {
		return nil, fmt.Errorf("holds %d columns, %s/ says %d", len(fields), columnsName, len(t.Columns))
	}
	for j, c := range t.Columns {
		if k, ok := kindOf(fields[j]); fields[j].Name() != c.Name || !ok || k != c.Kind {
			return nil, fmt.Errorf("column %d is %q, %s/ says %q of kind %v", j, fields[j].Name(), columnsName, c.Name, c.Kind)
		}
	}
	return &part{pf, f}, nil
}

// catch turns a panic of the Parquet library, which a file altered at the
// wrong place can cause, into an error.
func catch(err *error) {
	if p := recover(); p != nil {
		*err = fmt.Errorf("unreadable: %v", p)
	}
}

// meta gives the caller's pairs of the footer.
func (p *part) meta() map[string]string {
	pairs := map[string]string{}
	for _, kv := range p.Metadata().KeyValueMetadata {
		if kv.Key != arrowKey {
			pairs[kv.Key] = kv.Value
		}
	}
	return pairs
}

// appendTo decodes all rows of the file, whose pages are checked by their CRC.
func (p *part) appendTo(rows *Rows) (err error) {
	defer func() {
		if err != nil {
			err = fmt.Errorf("%s: %w", p.file.Name(), err)
		}
	}()
	defer catch(&err)
	want := rows.n + int(p.NumRows())
	for _, group := range p.RowGroups() {
		for j, chunk := range group.ColumnChunks() {
			if err := decodeColumn(chunk, rows.table.Columns[j].Kind, &rows.columns[j]); err != nil {
				return fmt.Errorf("column %s: %w", rows.table.Columns[j].Name, err)
			}
		}
	}
	for j, c := range rows.table.Columns {
		if n := len(rows.columns[j].valid); n != want {
			return fmt.Errorf("column %s: %d values for %d rows", c.Name, n, want)
		}
	}
	rows.n = want
	return nil
}

func decodeColumn(chunk parquet.ColumnChunk, k Kind, v *values) (err error) {
	pages := chunk.Pages()
	defer func() { err = errors.Join(err, pages.Close()) }()
	buf := make([]parquet.Value, batchRows)
	for {
		page, err := pages.ReadPage()
		if err == io.EOF {
			return nil
		}
		if err != nil {
			return err
		}
		for reader := page.Values(); ; {
			n, err := reader.ReadValues(buf)
			for _, x := range buf[:n] {
				v.take(k, x)
			}
			if err == io.EOF {
				break
			}
			if err != nil {
				return err
			}
		}
		parquet.Release(page)
	}
}

// take appends a value as it comes from a file; see appendLevels.
func (v *values) take(k Kind, x parquet.Value) {
	if x.RepetitionLevel() == 0 {
		v.grow(k)
	}
	i := len(v.valid) - 1
	if x.DefinitionLevel() == 0 {
		return
	}
	v.valid[i] = true
	switch k {
	case Float:
		v.floats[i] = x.Double()
	case Int:
		v.ints[i] = x.Int64()
	case Text:
		v.texts[i] = string(x.ByteArray())
	case Bool:
		v.bools[i] = x.Boolean()
	case Floats:
		if v.lists[i] == nil {
			v.lists[i] = []float64{}
		}
		if x.DefinitionLevel() == 2 {
			v.lists[i] = append(v.lists[i], x.Double())
		}
	}
}
