package record

import (
	"errors"
	"fmt"
	"os"
	"path/filepath"
	"runtime"
	"syscall"
)

// writeFile makes dir/name appear whole and durable, or not at all: hidden
// name, sync, rename. The directory's own entry is synced by syncDir.
func writeFile(dir, name string, fill func(*os.File) error) (err error) {
	temp := filepath.Join(dir, "."+name+".tmp")
	f, err := os.OpenFile(temp, os.O_WRONLY|os.O_CREATE|os.O_EXCL, 0o666)
	if err != nil {
		return err
	}
	defer func() {
		if err != nil {
			err = errors.Join(err, os.Remove(temp))
		}
	}()
	if err := errors.Join(fill(f), f.Sync()); err != nil {
		return errors.Join(err, f.Close())
	}
	if err := f.Close(); err != nil {
		return err
	}
	return os.Rename(temp, filepath.Join(dir, name))
}

// syncDir makes the names in dir durable.
func syncDir(dir string) error {
	if runtime.GOOS == "windows" {
		return nil // has no sync of a directory
	}
	f, err := os.Open(dir)
	if err != nil {
		return err
	}
	err = f.Sync()
	if errors.Is(err, syscall.EINVAL) || errors.Is(err, errors.ErrUnsupported) {
		err = nil // some network filesystems have none either
	}
	return errors.Join(err, f.Close())
}

// publish renames staging to dir. An old dataset at dir is first renamed to
// aside; it is put back if the second rename fails.
func publish(staging, dir, aside string, replace bool) error {
	parent := filepath.Dir(dir)
	switch found, err := inventory(dir); {
	case errors.Is(err, os.ErrNotExist):
		replace = false
	case err != nil:
		return err
	case found.empty():
		replace = false
		// Rename does not take over even an empty directory.
		if err := os.Remove(dir); err != nil {
			return writeError("making room for "+dir, err)
		}
	case found.foreign != "":
		return foreignError(dir, found)
	case !replace:
		return existsError(dir)
	}
	if !replace {
		if err := os.Rename(staging, dir); err != nil {
			if errors.Is(err, os.ErrExist) {
				return existsError(dir)
			}
			return writeError("moving the dataset to "+dir, err)
		}
		return writeSync(parent)
	}
	if err := os.Rename(dir, aside); err != nil {
		return writeError("moving the old dataset aside", err)
	}
	if err := os.Rename(staging, dir); err != nil {
		return errors.Join(writeError("moving the dataset to "+dir, err), os.Rename(aside, dir))
	}
	if err := writeSync(parent); err != nil {
		return err
	}
	if err := discard(aside, dir); err != nil {
		return fmt.Errorf("record: the new dataset is in place, but the old one could not be removed: %w: delete %s", err, aside)
	}
	return nil
}

// discard removes an old dataset. It is renamed first: half removed and still
// under its old name, tidy could take it for whole and put it back.
func discard(aside, dir string) error {
	scrap := siblingPath(dir, partial)
	if err := os.Rename(aside, scrap); err != nil {
		return err
	}
	return os.RemoveAll(scrap)
}

func writeSync(dir string) error {
	if err := syncDir(dir); err != nil {
		return writeError("syncing "+dir, err)
	}
	return nil
}
