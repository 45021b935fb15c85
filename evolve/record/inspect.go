package record

import (
	"fmt"
	"path/filepath"
)

// runsName is the table with one row a history, whose footer speaks for the
// dataset.
const runsName = "runs"

// Info is what the footers of a dataset say.
type Info struct {
	Tables []TableInfo       // in the order of columns/, which comes first
	Meta   map[string]string // footer pairs of the first file of runs/; nil without that table
}

// TableInfo counts one table.
type TableInfo struct {
	Name  string
	Rows  int64
	Files int
}

// Inspect reads the footers of all files of a dataset, not the rows, and checks
// that columns/ and the files agree.
//
// Errors: ErrNotExist, ErrDamaged (also for a directory that is no dataset).
func Inspect(dir string) (Info, error) {
	d, err := Open(dir)
	if err != nil {
		return Info{}, err
	}
	var info Info
	for _, t := range d.tables {
		count := TableInfo{Name: t.Name, Files: len(d.parts[t.Name])}
		for i, name := range d.parts[t.Name] {
			p, err := openPart(filepath.Join(d.dir, t.Name, name), t)
			if err != nil {
				return Info{}, damaged(err)
			}
			count.Rows += p.NumRows()
			if t.Name == runsName && i == 0 {
				info.Meta = p.meta()
			}
			if err := p.file.Close(); err != nil {
				return Info{}, damaged(err)
			}
		}
		info.Tables = append(info.Tables, count)
	}
	return info, nil
}

func damaged(err error) error {
	return fmt.Errorf("record: %w: %w: compute it again or restore it from a copy", ErrDamaged, err)
}
