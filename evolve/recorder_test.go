package evolve

import (
	"fmt"
	"math"
	"strings"
	"testing"

	"tidekiln/evolve/record"
)

func TestRecordingByChange(t *testing.T) {
	const bound = 1e-2
	dense := written(t, run1(t, shipped(t, "volcanic-cycle", set("run.span", "300 Myr"), set("run.record", "0.1 Myr"))))
	sparse := written(t, run1(t, shipped(t, "volcanic-cycle", set("run.span", "300 Myr"), set("run.record", "{ change = 1e-2 }"))))
	for _, table := range []string{"bodies", "resonances", "system"} {
		a, err := dense.Read(table)
		if err != nil {
			t.Fatal(err)
		}
		b, err := sparse.Read(table)
		if err != nil {
			t.Fatal(err)
		}
		if b.Len() > a.Len()/4 {
			t.Errorf("%s: %d rows by change, %d in full: hardly fewer", table, b.Len(), a.Len())
		}
		for _, c := range a.Table().Columns {
			if c.Kind != record.Float || strings.HasSuffix(c.Name, "closure") || c.Name == "argument_deg" || c.Name == "time_Myr" || c.Name == "step_Myr" {
				continue
			}
			compareByLines(t, table, c.Name, a, b, bound)
		}
	}
}

func compareByLines(t *testing.T, table, column string, dense, sparse *record.Frame, bound float64) {
	t.Helper()
	type series struct{ t, v []float64 }
	split := func(f *record.Frame) map[string]series {
		out := map[string]series{}
		times, _, err := f.Floats("time_Myr")
		if err != nil {
			t.Fatal(err)
		}
		values, valid, err := f.Floats(column)
		if err != nil {
			t.Fatal(err)
		}
		key := make([]string, f.Len())
		for _, name := range []string{"body", "inner_body"} {
			if texts, _, err := f.Texts(name); err == nil {
				key = texts
			}
		}
		for i := range times {
			if valid[i] {
				s := out[key[i]]
				s.t, s.v = append(s.t, times[i]), append(s.v, values[i])
				out[key[i]] = s
			}
		}
		return out
	}
	lines := split(sparse)
	for key, d := range split(dense) {
		l, j := lines[key], 0
		peak := 0.0
		for i := range d.t {
			peak = math.Max(peak, math.Abs(d.v[i]))
		}
		for i := range d.t {
			for j+2 < len(l.t) && l.t[j+1] < d.t[i] {
				j++
			}
			w := (d.t[i] - l.t[j]) / (l.t[j+1] - l.t[j])
			got := l.v[j] + w*(l.v[j+1]-l.v[j])
			if e := math.Abs(got - d.v[i]); e > bound*math.Max(math.Abs(d.v[i]), floorShare*peak) {
				t.Errorf("%s.%s %s at %g Myr: a line gives %g, the history %g", table, column, key, d.t[i], got, d.v[i])
				return
			}
		}
	}
}

func TestCadenceIsExact(t *testing.T) {
	f := bodiesOf(t, run1(t, shipped(t, "quiet-chain", set("run.span", "7 Myr"), set("run.record", "0.1 Myr"))))
	times, _, err := f.Floats("time_Myr")
	if err != nil {
		t.Fatal(err)
	}
	grid, _, err := f.Bools("on_grid")
	if err != nil {
		t.Fatal(err)
	}
	if len(times) != 3*71 {
		t.Fatalf("%d rows, want 71 times of three bodies", len(times))
	}
	for i := range times {
		var want float64
		if _, err := fmt.Sscan(fmt.Sprintf("%d.%d", i/30, i/3%10), &want); err != nil {
			t.Fatal(err)
		}
		if times[i] != want || !grid[i] {
			t.Fatalf("row %d is at %v (on grid: %v), want %v", i, times[i], grid[i], want)
		}
	}
}

// A line does not lead from 359° to 1° by way of 180°, nor over a value that is
// null at one end.
func TestLinesNeverCrossATurnOrAGap(t *testing.T) {
	r := &recorder{turning: []bool{true, false}, peak: []float64{360, 1}}
	nan := math.NaN()
	at := func(t, angle, other float64) *candidate { return &candidate{t: t, values: []float64{angle, other}} }
	for _, c := range []struct {
		name    string
		a, b, m *candidate
		want    bool
	}{
		{"straight", at(0, 10, 1), at(2, 12, 1), at(1, 11, 1), true},
		{"over a turn", at(0, 359, 1), at(2, 1, 1), at(1, 180, 1), false},
		{"into a null", at(0, 10, 1), at(2, 12, nan), at(1, 11, 1), false},
		{"all null", at(0, 10, nan), at(2, 12, nan), at(1, 11, nan), true},
		{"off by more", at(0, 10, 1), at(2, 12, 1), at(1, 11, 1.02), false},
		{"off by less", at(0, 10, 1), at(2, 12, 1), at(1, 11, 1.009), true},
	} {
		if got := r.straight(c.a, c.b, c.m, 0.01); got != c.want {
			t.Errorf("%s: %v, want %v", c.name, got, c.want)
		}
	}
}

// Extremes between the ends of steps are seen: the hottest the mantle gets, as a
// recording far denser than the steps has it, to what a quarter of a step of such
// a peak leaves.
func TestExtremesBetweenSteps(t *testing.T) {
	h := run1(t, shipped(t, "volcanic-cycle", set("run.span", "20 Myr"), set("run.record", "0.002 Myr")))
	T, _, err := bodiesOf(t, h).Floats("temperature_K")
	if err != nil {
		t.Fatal(err)
	}
	most := 0.0
	for _, v := range T {
		most = math.Max(most, v)
	}
	if d := most - h.Bodies[0].Temperature.Max; d > 0.1 || d < -0.1 {
		t.Errorf("hottest %g K in the outcome, %g K in dense rows", h.Bodies[0].Temperature.Max, most)
	}
}
