package record

import (
	"errors"
	"fmt"
	"os"
	"path/filepath"
)

// Dataset is a dataset on disk, opened for reading. It holds no open file.
type Dataset struct {
	dir    string
	tables []*Table
	parts  map[string][]string
}

// Open reads columns/ of a dataset and lists its files. Directories that
// columns/ does not name are left alone.
//
// Errors: ErrNotExist, ErrDamaged (also for a directory that is no dataset).
func Open(dir string) (*Dataset, error) {
	found, err := inventory(dir)
	if errors.Is(err, os.ErrNotExist) {
		return nil, missing(dir)
	}
	if err != nil {
		return nil, damaged(err)
	}
	d := &Dataset{dir: dir, parts: found.parts}
	if len(d.parts[columnsName]) == 0 {
		return nil, damaged(fmt.Errorf("%s has no %s/", dir, columnsName))
	}
	own := columnsTable()
	rows, _, err := d.read(own)
	if err != nil {
		return nil, err
	}
	if d.tables, err = tablesOf(rows); err != nil {
		return nil, damaged(fmt.Errorf("%s: %w", dir, err))
	}
	for _, t := range d.tables {
		if len(d.parts[t.Name]) == 0 {
			return nil, damaged(fmt.Errorf("%s: table %s has no file", dir, t.Name))
		}
	}
	return d, nil
}

// missing says that there is no dataset, and where an interrupted replacement
// left one.
func missing(dir string) error {
	abs, err := filepath.Abs(dir)
	if err != nil {
		return fmt.Errorf("record: %s: %w", dir, ErrNotExist)
	}
	left, _ := siblings(abs) // without a parent there is nothing to point at
	for _, s := range left {
		if s.role == replaced {
			return fmt.Errorf("record: %s: %w: its replacement was interrupted and the old one is whole: mv %s %s", dir, ErrNotExist, s.path, abs)
		}
	}
	return fmt.Errorf("record: %s: %w: check the name", dir, ErrNotExist)
}

// Tables lists the declarations of all tables, columns/ first. They must not be
// changed.
func (d *Dataset) Tables() []*Table { return append([]*Table{}, d.tables...) }

// Read reads a whole table into memory, its files in order of their names.
//
// Errors: ErrNotExist for a table that the dataset lacks, ErrDamaged.
func (d *Dataset) Read(table string) (*Frame, error) {
	for _, t := range d.tables {
		if t.Name == table {
			rows, meta, err := d.read(t)
			if err != nil {
				return nil, err
			}
			return &Frame{Meta: meta, rows: rows}, nil
		}
	}
	return nil, fmt.Errorf("record: %s has no table %q: %w: see %s/ for those it has", d.dir, table, ErrNotExist, columnsName)
}

func (d *Dataset) read(t *Table) (rows *Rows, meta map[string]string, err error) {
	rows = NewRows(t)
	for i, name := range d.parts[t.Name] {
		p, err := openPart(filepath.Join(d.dir, t.Name, name), t)
		if err != nil {
			return nil, nil, damaged(err)
		}
		if i == 0 {
			meta = p.meta()
		}
		if err := errors.Join(p.appendTo(rows), p.file.Close()); err != nil {
			return nil, nil, damaged(err)
		}
	}
	return rows, meta, nil
}
