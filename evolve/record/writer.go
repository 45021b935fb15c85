package record

import (
	"errors"
	"fmt"
	"os"
	"path/filepath"
)

// CreateOptions are the choices of Create; the zero value replaces nothing.
type CreateOptions struct {
	Replace bool // let Commit replace a dataset that is already there
}

// Writer builds one dataset out of sight. It is not safe for use by several
// goroutines at once.
type Writer struct {
	dir     string
	staging string
	tables  []*Table
	parts   map[string]int // table -> files written
	replace bool
	closed  bool
}

// Create begins a dataset at dir and makes at once the checks that could spoil
// the work at its end. The parent of dir must exist. What dead writers of the
// same dataset left on this host is put right first.
//
// Errors: ErrDeclaration for the tables, ErrExists, ErrForeign (a file, other
// content, the current directory), ErrNotWritable, ErrFull.
func Create(dir string, tables []*Table, opt CreateOptions) (*Writer, error) {
	if err := validateAll(tables); err != nil {
		return nil, err
	}
	dir, err := resolve(dir)
	if err != nil {
		return nil, err
	}
	if err := checkParent(filepath.Dir(dir)); err != nil {
		return nil, err
	}
	if err := tidy(dir); err != nil {
		return nil, err
	}
	if err := checkPlace(dir, opt.Replace); err != nil {
		return nil, err
	}
	w := &Writer{dir: dir, staging: siblingPath(dir, partial), tables: tables, parts: map[string]int{}, replace: opt.Replace}
	if err := os.Mkdir(w.staging, 0o777); err != nil {
		return nil, writeError("creating a directory beside "+dir, err)
	}
	for _, t := range append([]*Table{columnsTable()}, tables...) {
		if err := os.Mkdir(filepath.Join(w.staging, t.Name), 0o777); err != nil {
			return nil, errors.Join(writeError("creating table "+t.Name, err), w.Abort())
		}
	}
	return w, nil
}

// resolve makes dir absolute and follows a symbolic link, so that the dataset
// is built and renamed on the disk where it will lie.
func resolve(dir string) (string, error) {
	if dir == "" {
		return "", fmt.Errorf("record: no name for the dataset: %w: give a directory", ErrForeign)
	}
	abs, err := filepath.Abs(dir)
	if err != nil {
		return "", fmt.Errorf("record: %s: %w", dir, err)
	}
	if _, err := os.Lstat(abs); err == nil {
		if abs, err = filepath.EvalSymlinks(abs); err != nil {
			return "", fmt.Errorf("record: %s: %w: %w: remove the dangling link", dir, ErrForeign, err)
		}
	}
	return abs, nil
}

func checkParent(parent string) error {
	switch info, err := os.Stat(parent); {
	case errors.Is(err, os.ErrNotExist):
		return fmt.Errorf("record: directory %s is missing: %w: create it first", parent, ErrNotWritable)
	case err != nil:
		return writeError("looking at "+parent, err)
	case !info.IsDir():
		return fmt.Errorf("record: %s is a file, not a directory: %w: choose another place", parent, ErrNotWritable)
	}
	return nil
}

func checkPlace(dir string, replace bool) error {
	info, err := os.Stat(dir)
	if errors.Is(err, os.ErrNotExist) {
		return nil
	}
	if err != nil {
		return fmt.Errorf("record: %w", err)
	}
	if !info.IsDir() {
		return fmt.Errorf("record: %s is a file: %w: a dataset is a directory, choose another name", dir, ErrForeign)
	}
	found, err := inventory(dir)
	switch {
	case err != nil:
		return fmt.Errorf("record: %w", err)
	case found.foreign != "":
		return foreignError(dir, found)
	case !found.empty() && !replace:
		return existsError(dir)
	}
	// The directory is exchanged for another, and a shell standing in it would
	// go on looking at the old one.
	if here, err := os.Stat("."); err == nil && os.SameFile(here, info) {
		return fmt.Errorf("record: %s is the current directory: %w: name a new directory in it, or call from outside", dir, ErrForeign)
	}
	return nil
}

// Write adds rows as one file to their table, which must be one of those given
// to Create. The footer carries meta. After an error nothing of the file is
// left, and the writer may be used on or aborted.
//
// Errors: ErrRows names the table, column and row (from 0) of a NaN, of a null
// where there is none by declaration, of text that is not UTF-8 and of a setter
// that did not fit; ErrFull, ErrNotWritable, ErrClosed.
func (w *Writer) Write(rows *Rows, meta map[string]string) error {
	if w.closed {
		return fmt.Errorf("record: %s: %w", w.dir, ErrClosed)
	}
	if rows == nil || !w.has(rows.table) {
		return fmt.Errorf("record: %s: rows of a table that Create was not given: %w", w.dir, ErrRows)
	}
	return w.write(rows, meta)
}

func (w *Writer) has(t *Table) bool {
	for _, own := range w.tables {
		if own == t {
			return true
		}
	}
	return false
}

func (w *Writer) write(rows *Rows, meta map[string]string) error {
	if err := errors.Join(rows.check(), checkMeta(meta)); err != nil {
		return err
	}
	table := rows.table.Name
	name := fmt.Sprintf("part-%05d%s", w.parts[table], partSuffix)
	err := writeFile(filepath.Join(w.staging, table), name, func(f *os.File) error { return encode(f, rows, meta) })
	if err != nil {
		return writeError(fmt.Sprintf("writing %s/%s of %s", table, name, w.dir), err)
	}
	w.parts[table]++
	return nil
}

// Commit adds columns/ and lets the dataset appear at its place by one rename,
// or two if an old one is replaced (see the package comment). It refuses if a
// table was never written. After an error the place is as it was, unless the error
// says that the new dataset is in place; Abort removes the rest.
//
// Errors: ErrRows for a missing table, ErrExists and ErrForeign if something
// came to the place since Create, ErrFull, ErrNotWritable, ErrClosed.
func (w *Writer) Commit() error {
	if w.closed {
		return fmt.Errorf("record: %s: %w", w.dir, ErrClosed)
	}
	for _, t := range w.tables {
		if w.parts[t.Name] == 0 {
			return fmt.Errorf("record: %s: table %s was not written: %w: write it, even without a row", w.dir, t.Name, ErrRows)
		}
	}
	if w.parts[columnsName] == 0 { // else left by a Commit that failed later
		if err := w.write(columnsRows(w.tables), nil); err != nil {
			return err
		}
	}
	for table := range w.parts {
		if err := writeSync(filepath.Join(w.staging, table)); err != nil {
			return err
		}
	}
	if err := writeSync(w.staging); err != nil {
		return err
	}
	if err := publish(w.staging, w.dir, siblingPath(w.dir, replaced), w.replace); err != nil {
		return err
	}
	w.closed = true
	return nil
}

// Abort removes everything written so far. It does nothing after Commit or a
// second time, so it can be deferred.
func (w *Writer) Abort() error {
	if w.closed {
		return nil
	}
	w.closed = true
	if err := os.RemoveAll(w.staging); err != nil {
		return writeError("removing "+w.staging, err)
	}
	return nil
}
