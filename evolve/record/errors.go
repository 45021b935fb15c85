package record

import (
	"errors"
	"fmt"
	"io/fs"
	"syscall"
)

// Kinds of failure, for errors.Is. The error that wraps one names the place and
// says what to try.
var (
	// ErrExists: a dataset is already there and Replace was not asked for.
	ErrExists = errors.New("dataset already exists")
	// ErrNotExist: no dataset of that name. Errors with it also are fs.ErrNotExist.
	ErrNotExist = fmt.Errorf("dataset does not exist: %w", fs.ErrNotExist)
	// ErrForeign: the place holds something this package did not write.
	ErrForeign = errors.New("place holds something else")
	// ErrNotWritable: the parent directory is missing or refuses new entries.
	ErrNotWritable = errors.New("cannot write here")
	// ErrFull: the disk or the quota is used up.
	ErrFull = errors.New("no space left")
	// ErrDamaged: files are missing, cut short, altered, or do not fit columns/.
	ErrDamaged = errors.New("dataset is not whole")
	// ErrDeclaration: a table or column is declared against the rules.
	ErrDeclaration = errors.New("bad table declaration")
	// ErrRows: values do not fit their column.
	ErrRows = errors.New("bad rows")
	// ErrClosed: the writer was committed or aborted.
	ErrClosed = errors.New("writer is closed")
)

// writeError explains a failed write or rename: it marks exhausted space with
// ErrFull and a refusal with ErrNotWritable.
func writeError(doing string, err error) error {
	switch {
	case errors.Is(err, syscall.ENOSPC), errors.Is(err, syscall.EDQUOT):
		return fmt.Errorf("record: %s: %w: %w: free some space or quota, or write to another disk", doing, ErrFull, err)
	case errors.Is(err, fs.ErrPermission), errors.Is(err, syscall.EROFS):
		return fmt.Errorf("record: %s: %w: %w: choose a directory you may write to", doing, ErrNotWritable, err)
	}
	return fmt.Errorf("record: %s: %w", doing, err)
}
