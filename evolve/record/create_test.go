package record

import (
	"errors"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

func TestCreateRefuses(t *testing.T) {
	parent := t.TempDir()
	at := func(name string) string { return filepath.Join(parent, name) }
	must(t, os.WriteFile(at("file"), []byte("x"), 0o644))
	must(t, os.MkdirAll(at("thesis/chapter"), 0o755))
	must(t, os.WriteFile(at("thesis/notes.txt"), []byte("x"), 0o644))
	must(t, os.Symlink(at("nowhere"), at("dangling")))
	must(t, writeSample(at("there"), 1, 5, CreateOptions{}))
	must(t, writeSample(at("annotated"), 1, 5, CreateOptions{}))
	must(t, os.WriteFile(at("annotated/look.ipynb"), []byte("{}"), 0o644))
	before := beside(t, parent)
	for _, c := range []struct {
		dir     string
		replace bool
		kind    error
		want    string
	}{
		{"", false, ErrForeign, "give a directory"},
		{at("file"), true, ErrForeign, "is a file"},
		{at("file/out"), false, ErrNotWritable, "is a file"},
		{at("thesis"), true, ErrForeign, "notes.txt"},
		{at("dangling"), true, ErrForeign, "dangling link"},
		{at("missing/out"), false, ErrNotWritable, "create it first"},
		{at("there"), false, ErrExists, "replace it or choose another name"},
		{at("annotated"), true, ErrForeign, "look.ipynb"},
	} {
		w, err := Create(c.dir, sampleTables(), CreateOptions{Replace: c.replace})
		if w != nil || !errors.Is(err, c.kind) || !strings.Contains(err.Error(), c.want) {
			t.Errorf("%q, replace %v: %v, want %v with %q", c.dir, c.replace, err, c.kind, c.want)
		}
	}
	if _, err := Create(at("new"), nil, CreateOptions{}); !errors.Is(err, ErrDeclaration) {
		t.Errorf("without tables: %v", err)
	}
	if after := beside(t, parent); strings.Join(after, " ") != strings.Join(before, " ") {
		t.Errorf("left %v, before %v", after, before)
	}
	t.Chdir(at("there"))
	if _, err := Create(".", sampleTables(), CreateOptions{Replace: true}); !errors.Is(err, ErrForeign) || !strings.Contains(err.Error(), "current directory") {
		t.Errorf("current directory: %v", err)
	}
}

func TestNotWritable(t *testing.T) {
	parent := t.TempDir()
	if os.Geteuid() == 0 {
		// Permissions do not bind root, a read-only mount does.
		mountSmall(t, parent, "ro")
	} else {
		must(t, os.Chmod(parent, 0o555))
		defer os.Chmod(parent, 0o755)
	}
	_, err := Create(filepath.Join(parent, "out"), sampleTables(), CreateOptions{})
	if !errors.Is(err, ErrNotWritable) || !strings.Contains(err.Error(), "may write to") {
		t.Errorf("error %v", err)
	}
}

func TestNothingVisibleBeforeCommit(t *testing.T) {
	parent := t.TempDir()
	dir := filepath.Join(parent, "out")
	must(t, os.Mkdir(dir, 0o755)) // an empty directory is taken over
	tables := sampleTables()
	w, err := Create(dir, tables, CreateOptions{})
	must(t, err)
	for _, rows := range sampleRows(tables, 1, 10) {
		must(t, w.Write(rows, sampleMeta))
		if names := beside(t, dir); len(names) != 0 {
			t.Fatalf("visible before Commit: %v", names)
		}
	}
	must(t, w.Commit())
	if _, err := checkSample(dir, 10); err != nil {
		t.Error(err)
	}
	must(t, w.Abort())
	if _, err := checkSample(dir, 10); err != nil {
		t.Errorf("after Abort: %v", err)
	}
	if err := w.Commit(); !errors.Is(err, ErrClosed) {
		t.Errorf("second Commit: %v", err)
	}
	if err := w.Write(NewRows(tables[0]), nil); !errors.Is(err, ErrClosed) {
		t.Errorf("Write after Commit: %v", err)
	}
	if names := beside(t, parent); len(names) != 1 {
		t.Errorf("left beside: %v", names)
	}
}

// TestFirstCommitWins: two writers of one name, neither may replace.
func TestFirstCommitWins(t *testing.T) {
	dir := filepath.Join(t.TempDir(), "out")
	tables := sampleTables()
	w, err := Create(dir, tables, CreateOptions{})
	must(t, err)
	for _, rows := range sampleRows(tables, 2, 10) {
		must(t, w.Write(rows, sampleMeta))
	}
	must(t, writeSample(dir, 1, 10, CreateOptions{}))
	if err := w.Commit(); !errors.Is(err, ErrExists) {
		t.Errorf("second commit: %v", err)
	}
	must(t, w.Abort())
	if run, err := checkSample(dir, 10); run != 1 || err != nil {
		t.Errorf("run %d, %v", run, err)
	}
}

func TestReplace(t *testing.T) {
	parent := t.TempDir()
	real, link := filepath.Join(parent, "scratch"), filepath.Join(parent, "link")
	must(t, os.Mkdir(real, 0o755))
	must(t, os.Symlink(filepath.Join(real, "out"), link))
	must(t, writeSample(filepath.Join(real, "out"), 1, 10, CreateOptions{}))
	must(t, writeSample(link, 2, 12, CreateOptions{Replace: true}))
	if run, err := checkSample(link, 12); run != 2 || err != nil {
		t.Errorf("run %d, %v", run, err)
	}
	if names := beside(t, real); len(names) != 1 {
		t.Errorf("left beside: %v", names)
	}
	if info, err := os.Lstat(link); err != nil || info.Mode()&os.ModeSymlink == 0 {
		t.Errorf("the link became %v, %v", info.Mode(), err)
	}
	// A damaged dataset can be replaced too: that is when one wants to.
	must(t, os.Truncate(firstPart(link, "bodies"), 100))
	must(t, writeSample(link, 3, 9, CreateOptions{Replace: true}))
	if run, err := checkSample(link, 9); run != 3 || err != nil {
		t.Errorf("run %d, %v", run, err)
	}
}
