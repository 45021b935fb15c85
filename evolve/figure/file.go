package figure

import (
	"fmt"
	"os"
	"path/filepath"
)

// writeFile replaces path by data in one step: what is there stays whole until
// the new file is complete, and a failure leaves no new file.
func writeFile(path string, data []byte) (err error) {
	dir := filepath.Dir(path)
	f, err := os.CreateTemp(dir, ".figure.tmp-*")
	if err != nil {
		return fmt.Errorf("figure: %s: %w: see that its directory exists and can be written", path, err)
	}
	defer func() {
		if err != nil {
			f.Close()
			os.Remove(f.Name())
			err = fmt.Errorf("figure: %s: %w", path, err)
		}
	}()
	if _, err = f.Write(data); err != nil {
		return err
	}
	if err = f.Chmod(0o644); err != nil {
		return err
	}
	if err = f.Sync(); err != nil {
		return err
	}
	if err = f.Close(); err != nil {
		return err
	}
	return os.Rename(f.Name(), path)
}
