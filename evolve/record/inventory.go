package record

import (
	"fmt"
	"os"
	"path/filepath"
	"sort"
	"strings"
)

// partSuffix ends the name of every file of a dataset.
const partSuffix = ".parquet"

// contents is what a directory holds, by name only.
type contents struct {
	parts   map[string][]string // table directory -> files, sorted
	foreign string              // the first entry that no dataset has
}

func (c contents) empty() bool { return len(c.parts) == 0 && c.foreign == "" }

// dataset reports whether the names are those of a dataset and nothing else.
func (c contents) dataset() bool { return c.foreign == "" && len(c.parts[columnsName]) > 0 }

// inventory lists a directory; files are not opened.
func inventory(dir string) (contents, error) {
	found := contents{parts: map[string][]string{}}
	entries, err := os.ReadDir(dir)
	if err != nil {
		return found, err
	}
	note := func(path ...string) {
		if found.foreign == "" {
			found.foreign = filepath.Join(path...)
		}
	}
	for _, e := range entries {
		if !e.IsDir() {
			note(e.Name())
			continue
		}
		files, err := os.ReadDir(filepath.Join(dir, e.Name()))
		if err != nil {
			return found, err
		}
		parts := []string{}
		for _, f := range files {
			if !f.Type().IsRegular() || !strings.HasSuffix(f.Name(), partSuffix) || strings.HasPrefix(f.Name(), ".") {
				note(e.Name(), f.Name())
				continue
			}
			parts = append(parts, f.Name())
		}
		sort.Strings(parts)
		found.parts[e.Name()] = parts
	}
	if found.foreign == "" && len(found.parts) > 0 && len(found.parts[columnsName]) == 0 {
		found.foreign = entries[0].Name()
	}
	return found, nil
}

func existsError(dir string) error {
	return fmt.Errorf("record: %s: %w: replace it or choose another name", dir, ErrExists)
}

func foreignError(dir string, found contents) error {
	return fmt.Errorf("record: %s: %w (%s), which is never overwritten: choose another name, or move that away",
		dir, ErrForeign, found.foreign)
}
