package record

import (
	"fmt"
	"math"
	"os"
	"path/filepath"
	"testing"
)

// sampleTables are a small dataset with every kind, units, nulls and a table
// that may stay empty.
func sampleTables() []*Table {
	return []*Table{
		{
			Name: "runs", Meaning: "One history.", Key: []string{"run"},
			Columns: []Column{
				{Name: "run", Kind: Int, Meaning: "Number in the plan, from 0."},
				{Name: "outcome", Kind: Text, Meaning: "Word for how it ended.", Null: "the run failed"},
				{Name: "end_time_Myr", Kind: Float, Unit: "Myr", Meaning: "Time of the last row."},
				{Name: "end_state", Kind: Floats, Unit: "SI", Meaning: "State vector at the end.", Null: "the run failed"},
			},
		},
		{
			Name: "bodies", Meaning: "One time and body.", Key: []string{"run", "time_Myr", "body"},
			Columns: []Column{
				{Name: "run", Kind: Int, Meaning: "Number in the plan, from 0."},
				{Name: "time_Myr", Kind: Float, Unit: "Myr", Meaning: "Time since the start."},
				{Name: "body", Kind: Text, Meaning: "Name of the body."},
				{Name: "temperature_K", Kind: Float, Unit: "K", Meaning: "Mean temperature of the mantle.", Null: "the body has no interior"},
				{Name: "melt_fraction", Kind: Float, Meaning: "Volume fraction of melt.", Null: "the body has no interior"},
				{Name: "on_grid", Kind: Bool, Meaning: "Whether the row lies on the cadence.", Null: "the cadence is by change"},
			},
		},
		{
			Name: "events", Meaning: "One event.", Key: []string{"run", "time_Myr"},
			Columns: []Column{
				{Name: "run", Kind: Int, Meaning: "Number in the plan, from 0."},
				{Name: "time_Myr", Kind: Float, Unit: "Myr", Meaning: "Time of the event."},
				{Name: "event", Kind: Text, Meaning: "Word for what happened."},
			},
		},
	}
}

// sampleRows fills the tables with times rows a body; events stay empty.
// Everything follows from run and times, so a reader can check every value.
func sampleRows(tables []*Table, run, times int) []*Rows {
	runs, bodies, events := NewRows(tables[0]), NewRows(tables[1]), NewRows(tables[2])
	row := runs.Append()
	row.Int("run", int64(run))
	row.Text("outcome", "steady")
	row.Float("end_time_Myr", float64(times-1))
	row.Floats("end_state", []float64{sampleTemperature(run, times-1), 0.5})
	for i := range times {
		for _, body := range []string{"Cinder", "Brine"} {
			row := bodies.Append()
			row.Int("run", int64(run))
			row.Float("time_Myr", float64(i))
			row.Text("body", body)
			row.Bool("on_grid", i%3 != 0)
			if body == "Cinder" { // Brine has no interior
				row.Float("temperature_K", sampleTemperature(run, i))
				row.Float("melt_fraction", 0)
			}
		}
	}
	return []*Rows{runs, bodies, events}
}

func sampleTemperature(run, i int) float64 {
	return 1600 + float64(run) + 40*math.Sin(float64(i)/50)
}

var sampleMeta = map[string]string{"version": "0.0.0", "physics": "1", "scenario": "title = \"Ombra\"\n"}

// writeSample makes a whole dataset.
func writeSample(dir string, run, times int, opt CreateOptions) error {
	tables := sampleTables()
	w, err := Create(dir, tables, opt)
	if err != nil {
		return err
	}
	defer w.Abort()
	for _, rows := range sampleRows(tables, run, times) {
		if err := w.Write(rows, sampleMeta); err != nil {
			return err
		}
	}
	return w.Commit()
}

// checkSample reads a dataset of writeSample back and returns its run.
func checkSample(dir string, times int) (run int, err error) {
	info, err := Inspect(dir)
	if err != nil {
		return 0, err
	}
	if len(info.Tables) != 4 || info.Meta["physics"] != "1" {
		return 0, fmt.Errorf("info %+v", info)
	}
	d, err := Open(dir)
	if err != nil {
		return 0, err
	}
	runs, err := d.Read("runs")
	if err != nil {
		return 0, err
	}
	number, _, err := runs.Ints("run")
	if err != nil || len(number) != 1 {
		return 0, fmt.Errorf("runs %v, %v", number, err)
	}
	run = int(number[0])
	bodies, err := d.Read("bodies")
	if err != nil {
		return 0, err
	}
	temperature, valid, err := bodies.Floats("temperature_K")
	if err != nil || len(temperature) != 2*times {
		return 0, fmt.Errorf("%d temperatures, want %d; %v", len(temperature), 2*times, err)
	}
	for i, x := range temperature {
		cinder := i%2 == 0
		if valid[i] != cinder || cinder && x != sampleTemperature(run, i/2) {
			return 0, fmt.Errorf("row %d of run %d: temperature %v, valid %v", i, run, x, valid[i])
		}
	}
	return run, nil
}

// beside lists the names in a directory.
func beside(t *testing.T, dir string) []string {
	t.Helper()
	entries, err := os.ReadDir(dir)
	if err != nil {
		t.Fatal(err)
	}
	names := []string{}
	for _, e := range entries {
		names = append(names, e.Name())
	}
	return names
}

func must(t *testing.T, err error) {
	t.Helper()
	if err != nil {
		t.Fatal(err)
	}
}

func firstPart(dir, table string) string { return filepath.Join(dir, table, "part-00000.parquet") }
