package record

import (
	"errors"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"testing"
)

// mountSmall mounts an empty filesystem in memory at dir until the test ends.
func mountSmall(t *testing.T, dir, option string) {
	t.Helper()
	if os.Geteuid() != 0 {
		t.Skip("needs root to mount a small filesystem")
	}
	if out, err := exec.Command("mount", "-t", "tmpfs", "-o", option, "tmpfs", dir).CombinedOutput(); err != nil {
		t.Skipf("mount does not work here: %v: %s", err, out)
	}
	t.Cleanup(func() {
		if out, err := exec.Command("umount", dir).CombinedOutput(); err != nil {
			t.Errorf("umount: %v: %s", err, out)
		}
	})
}

func TestDiskFull(t *testing.T) {
	parent := t.TempDir()
	mountSmall(t, parent, "size=128k")
	dir := filepath.Join(parent, "out")
	must(t, writeSample(dir, 1, 10, CreateOptions{}))
	// 40,000 rows of a smooth column take some 300 kB.
	err := writeSample(dir, 2, 20000, CreateOptions{Replace: true})
	if !errors.Is(err, ErrFull) {
		t.Fatalf("error %v, want ErrFull", err)
	}
	for _, want := range []string{"bodies/part-00000.parquet", "free some space"} {
		if !strings.Contains(err.Error(), want) {
			t.Errorf("error %q does not say %q", err, want)
		}
	}
	if names := beside(t, parent); len(names) != 1 {
		t.Errorf("left %v", names)
	}
	if run, err := checkSample(dir, 10); run != 1 || err != nil {
		t.Errorf("the old dataset: run %d, %v", run, err)
	}

	// The writer itself can go on after space was made.
	ballast := filepath.Join(parent, "ballast")
	tables := sampleTables()
	w, err := Create(filepath.Join(parent, "next"), tables, CreateOptions{})
	must(t, err)
	rows := sampleRows(tables, 3, 300)
	os.WriteFile(ballast, make([]byte, 1<<20), 0o644) // fails, having filled the rest
	if err := w.Write(rows[1], nil); !errors.Is(err, ErrFull) {
		t.Errorf("with a full disk: %v", err)
	}
	if names := beside(t, filepath.Join(w.staging, "bodies")); len(names) != 0 {
		t.Errorf("left %v", names)
	}
	must(t, os.Remove(ballast))
	for _, r := range rows {
		must(t, w.Write(r, sampleMeta))
	}
	must(t, w.Commit())
	if run, err := checkSample(filepath.Join(parent, "next"), 300); run != 3 || err != nil {
		t.Errorf("run %d, %v", run, err)
	}
}
