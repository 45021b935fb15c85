//go:build readers

package record

import (
	"errors"
	"os"
	"os/exec"
	"path/filepath"
	"regexp"
	"strconv"
	"strings"
	"testing"
)

// TestReaders lets pandas, polars, pyarrow and DuckDB read a sample:
//
//	python3 -m venv VENV && VENV/bin/pip install -r testdata/readers/requirements.txt
//	TIDEKILN_PYTHON=VENV/bin/python go test -tags readers -run Readers ./evolve/record
func TestReaders(t *testing.T) {
	python := os.Getenv("TIDEKILN_PYTHON")
	if python == "" {
		t.Skip("TIDEKILN_PYTHON names no Python with testdata/readers/requirements.txt installed")
	}
	script, err := filepath.Abs("../../testdata/readers/check.py")
	must(t, err)
	dir := filepath.Join(t.TempDir(), "out")
	tables := append(sampleTables(), oneOfEach())
	w, err := Create(dir, tables, CreateOptions{})
	must(t, err)
	// Two files a table; the runs differ so that keys stay unique.
	for run, times := range []int{400, 3} {
		for _, rows := range sampleRows(tables, run, times) {
			must(t, w.Write(rows, sampleMeta))
		}
	}
	each := NewRows(tables[3])
	each.Append() // all null
	row := each.Append()
	row.Text("word", "")
	row.Floats("list_s", nil)
	must(t, w.Write(each, nil))
	must(t, w.Commit())

	out, err := exec.Command(python, script, dir).CombinedOutput()
	if err != nil {
		t.Fatalf("%v\n%s", err, out)
	}
	// 26 columns of five tables, columns/ among them, each with at least 8 checks.
	m := regexp.MustCompile(`^(\d+) checks passed\n$`).FindSubmatch(out)
	if m == nil {
		t.Fatalf("output %q", out)
	}
	if n, err := strconv.Atoi(string(m[1])); err != nil || n < 8*26 {
		t.Errorf("only %s checks", m[1])
	}
	t.Logf("%s", out)

	// The check itself must be able to fail: let columns/ claim other things.
	tables[1].Columns[3].Unit = "°C"
	tables[0].Columns[1].Null = ""
	f, err := os.Create(firstPart(dir, columnsName))
	must(t, err)
	must(t, errors.Join(encode(f, columnsRows(tables), nil), f.Close()))
	out, err = exec.Command(python, script, dir).CombinedOutput()
	for _, want := range []string{"FAILED bodies.temperature_K: unit: 'K', expected '°C'\n", "FAILED runs.outcome: null: 'the run failed', expected None\n"} {
		if err == nil || !strings.Contains(string(out), want) {
			t.Errorf("%v, output %q lacks %q", err, out, want)
		}
	}
}
